"""What a run leaves behind: the ledger of known findings, repairs, reports.

Usage: deliver.test.py BUILD
"""
import json
import os
import subprocess
import sys
import tempfile

PROGRAM = os.path.join(os.path.abspath(sys.argv[1]), "dextral")
CODE = """\
//| C: passive ned to body; v: in body; out: in ned
void down(const double C[3][3], const double v[3], double out[3]) {
  for (int i = 0; i < 3; ++i) out[i] = C[i][0] * v[0] + C[i][1] * v[1] + C[i][2] * v[2];
}
struct state {
  double r[3];  //| in ned
  double v[3];  //| in body
  double w[3];  //| in body
};
void coast(struct state* s) {
  for (int i = 0; i < 3; ++i) s->r[i] += s->v[i] * 0.1;
}
"""
problems = []


def run(folder, *arguments):
    return subprocess.run([PROGRAM, "lint", *arguments], cwd=folder, capture_output=True, text=True)


def expect(what, good, detail=""):
    if not good:
        problems.append("%s: %s" % (what, detail))


def write(folder, name, text):
    with open(os.path.join(folder, name), "w", encoding="utf-8") as file:
        file.write(text)


def ledger(folder):
    write(folder, "a.c", CODE)
    first = run(folder, "--update-known", "known.json", "a.c")
    expect("what is listed is known", first.returncode == 0 and "2 known" in first.stdout, first.stdout)
    again = run(folder, "--known", "known.json", "a.c")
    expect("known findings do not fail", again.returncode == 0 and "0 findings, 2 known" in again.stdout, again.stdout)
    write(folder, "a.c", "\n\n/* a line more */\n" + CODE)
    shifted = run(folder, "--known", "known.json", "a.c")
    expect("lines may shift", shifted.returncode == 0 and "2 known" in shifted.stdout, shifted.stdout)
    write(folder, "a.c", CODE + "void more(struct state* s) { for (int i = 0; i < 3; ++i) s->r[i] = s->w[i]; }\n")
    fresh = run(folder, "--known", "known.json", "a.c")
    expect("a new finding fails", fresh.returncode == 1 and "1 finding, 2 known" in fresh.stdout, fresh.stdout)
    write(folder, "a.c", CODE.replace("s->v[i] * 0.1", "s->r[i] * 0.1"))
    gone = run(folder, "--known", "known.json", "a.c")
    expect("what is gone is told", gone.returncode == 0 and "1 known finding is gone" in gone.stdout, gone.stdout)
    run(folder, "--update-known", "known.json", "a.c")
    with open(os.path.join(folder, "known.json"), encoding="utf-8") as file:
        expect("... and taken out", len(json.load(file)["known findings"]) == 1)


def wrong_ledger(folder):
    write(folder, "bad.json", '{"version": 1, "known findings": [\n')
    bad = run(folder, "--known", "bad.json", "a.c")
    expect("a broken ledger ends the run", bad.returncode == 2 and bad.stderr.splitlines()[-1].startswith("bad.json:"), bad.stderr)
    missing = run(folder, "--known", "nowhere.json", "a.c")
    expect("so does a missing one", missing.returncode == 2 and "nowhere.json cannot be read" in missing.stderr, missing.stderr)
    for option in ("--update-known", "--output"):
        closed = run(folder, option, "no/such/folder/file", "a.c")
        expect(option + " into nowhere", closed.returncode == 2 and "cannot be written" in closed.stderr, closed.stderr)


def repairs(folder):
    text = CODE.replace("s->v[i] * 0.1", "s->r[i] * 0.1") + (
        "double turn(const double a[3], const double b[3]);\n"
        "//| a: in ned; b: in body\n"
        "double turn(const double a[3], const double b[3]) { return a[0] + b[1]; }\n"
        "double use(const struct state* s) { return turn(s->v, s->r); }\n")
    write(folder, "a.c", text)
    shown = run(folder, "--dry-run", "a.c")
    expect("a dry run shows a diff", "-double use" in shown.stdout and "turn(s->r, s->v)" in shown.stdout, shown.stdout)
    with open(os.path.join(folder, "a.c"), encoding="utf-8") as file:
        expect("... and writes nothing", file.read() == text)
    run(folder, "--write-repairs", "a.c")
    with open(os.path.join(folder, "a.c"), encoding="utf-8") as file:
        expect("repairs are written", "turn(s->r, s->v)" in file.read())
    both = run(folder, "--write-repairs", "--dry-run", "a.c")
    expect("not both", both.returncode == 2, both.stderr)


with tempfile.TemporaryDirectory() as scratch:
    ledger(scratch)
    wrong_ledger(scratch)
    repairs(scratch)
print("%d problems" % len(problems))
print("\n".join(problems))
sys.exit(1 if problems else 0)
