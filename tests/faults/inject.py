#!/usr/bin/env python3
"""Makes single faults in code that others wrote and asks what dextral finds.

Problem. Fixtures are written by those who write the analyser. Code bases that
nobody here wrote show what is found in practice, and what is a false alarm.

Terms. A *list* is a text file about one package. It holds sparse phrases, as
a user would write them, and *faults*: edits of one line that break the frames
under a careful reading of that code. The *baseline* is the package with its
phrases and without a fault.

Method. The package is laid out again with hard links; only files that get a
phrase or a fault are written anew. For each fault the affected units are
linted and compared with their baseline: a finding that is new and stands in
the faulty function (or has the faulty line on its chain) has found the fault;
any other new finding is an alarm elsewhere. A repair is right when its kind
is the expected one or its edits give the old line back.

The list, one item a line; `##` separates the parts:
  inverse ~{}            how the code inverts; several lines: per file, last wins
  with PATH ...          units linted with every unit (bodies of callees)
  file PATH [UNIT ...]   the file spoken of, and the units to lint for its faults
  say LINE ## PHRASE     a phrase on that line
  at LINE                the line that the following faults change
  swap A ## B            factors in the wrong order
  args A ## B            arguments exchanged
  drop A                 the inverse of A dropped
  invert A               an inverse too many
  use A ## B             B where A belongs
  twin A ## B            the function B where A belongs
  change A ## B ## RULES ## REPAIRS    anything else
LINE is a piece of the line, found once in the file, or `START >> PIECE`: the
first line with PIECE from the first line with START on. A last part [d2 call]
tags a fault: operations between the fault and the nearest phrase, and whether
a call lies between. `LIST` with the suffix .json, if there, becomes the
package's dextral.json, and the model files that it names are copied beside it.

Limits. Lines are edited as text. A fault is real under the reading in the
list; whether the phrases decide it is that reader's judgement.
"""
import argparse
import collections
import concurrent.futures
import dataclasses
import json
import os
import pathlib
import queue
import re
import shlex
import shutil
import subprocess
import sys
import time

RULES = {
    "swap": ({"wrong-order"}, {"swap"}),
    "args": ({"wrong-order", "frame-clash"}, {"swap_arguments", "swap"}),
    "drop": ({"missing-inverse"}, {"transpose"}),
    "invert": ({"needless-inverse"}, {"drop_inverse"}),
    "use": ({"frame-clash"}, {"other_variable"}),
    "twin": ({"missing-inverse", "needless-inverse"}, {"twin_function", "transpose", "drop_inverse"}),
}
FORMS = ["~{}", "{}.transpose()", "{}.Inverse()", "{}.inverse()", "{}.conjugate()", "{}.invert()", "{}.t()"]
FAMILIES = {"missing-inverse", "needless-inverse", "wrong-order", "frame-clash", "one-sided-tensor"}


class Wrong(Exception):
    """Something in a list or a call is wrong; the text says where."""


class Unread(Exception):
    """A unit was not read: nothing can be said about its faults."""


@dataclasses.dataclass
class Fault:
    id: str
    file: str
    line: int
    kind: str
    before: str
    after: str
    rules: list
    repairs: list
    units: list
    tags: list


@dataclasses.dataclass
class Package:
    name: str
    phrases: list  # (file, line, phrase)
    faults: list


# ---- the list


def find_line(lines, piece, where):
    start = 0
    if " >> " in piece:
        anchor, piece = [p.strip() for p in piece.split(" >> ", 1)]
        start = next((i for i, line in enumerate(lines) if anchor in line), None)
        if start is None:
            raise Wrong(f"{where}: no line has `{anchor}`")
        hits = [i for i in range(start, len(lines)) if piece in lines[i]][:1]
    else:
        hits = [i for i, line in enumerate(lines) if piece in line]
    if len(hits) != 1:
        raise Wrong(f"{where}: {len(hits)} lines have `{piece}`")
    return hits[0]


def word(text):
    """A pattern for `text` that does not begin or end inside a name."""
    left = r"(?<![\w.>])" if re.match(r"\w", text) else ""
    right = r"(?!\w)" if re.search(r"\w$", text) else ""
    return re.compile(left + re.escape(text) + right)


def place_of(line, text, where):
    hit = word(text).search(line)
    if not hit:
        raise Wrong(f"{where}: `{text}` is not on the line `{line.strip()}`")
    return hit.span()


def exchange(line, a, b, where):
    first, second = place_of(line, a, where), place_of(line, b, where)
    if first > second:
        first, second, a, b = second, first, b, a
    if first[1] > second[0]:
        raise Wrong(f"{where}: `{a}` and `{b}` overlap")
    return line[: first[0]] + b + line[first[1] : second[0]] + a + line[second[1] :]


def replace(line, a, b, where):
    begin, end = place_of(line, a, where)
    return line[:begin] + b + line[end:]


def drop(line, a, where):
    for form in FORMS:
        text = form.format(a)
        if text in line:
            return line.replace(text, a, 1)
    raise Wrong(f"{where}: `{a}` is not inverted on the line `{line.strip()}`")


def edit(line, kind, parts, inverse, where):
    if kind in ("swap", "args"):
        return exchange(line, parts[0], parts[1], where)
    if kind in ("use", "twin", "change"):
        return replace(line, parts[0], parts[1], where)
    if kind == "drop":
        return drop(line, parts[0], where)
    return replace(line, parts[0], inverse.format(parts[0]), where)


def expectation(kind, parts, where):
    if kind != "change":
        return RULES[kind]
    if len(parts) < 3:
        raise Wrong(f"{where}: change A ## B ## RULES [## REPAIRS]")
    repairs = parts[3].split() if len(parts) > 3 else []
    return set(parts[2].split()), set(repairs)


def split_parts(text):
    parts = [p.strip() for p in text.split(" ## ")]
    tags = []
    if parts and re.fullmatch(r"\[[\w ]*\]", parts[-1]):
        tags = parts.pop()[1:-1].split()
    return parts, tags


class Reader:
    def __init__(self, root, path):
        self.root, self.path = pathlib.Path(root), pathlib.Path(path)
        self.package = Package(self.path.stem, [], [])
        self.inverse, self.shared, self.file, self.units = "~{}", [], None, []
        self.lines, self.at = [], None

    def read(self):
        wrong = []
        for number, line in enumerate(self.path.read_text().splitlines(), 1):
            if line.strip() and not line.lstrip().startswith("#"):
                key, _, rest = line.strip().partition(" ")
                try:
                    self.item(key, rest.strip(), f"{self.path.name}:{number}")
                except Wrong as problem:
                    wrong.append(str(problem))
        if wrong:
            raise Wrong("\n".join(wrong))
        return self.package

    def item(self, key, rest, where):
        if key == "inverse":
            self.inverse = rest
        elif key == "with":
            self.shared = rest.split()
        elif key == "file":
            self.file, *units = rest.split()
            self.units = units or [self.file]
            self.lines = (self.root / self.file).read_text(errors="surrogateescape").splitlines()
        elif key == "say":
            piece, phrase = [p.strip() for p in rest.split(" ## ", 1)]
            self.package.phrases.append((self.file, find_line(self.lines, piece, where), phrase))
        elif key == "at":
            self.at = find_line(self.lines, rest, where)
        elif key in RULES or key == "change":
            self.fault(key, rest, where)
        else:
            raise Wrong(f"{where}: `{key}` is no item of a list")

    def fault(self, kind, rest, where):
        parts, tags = split_parts(rest)
        rules, repairs = expectation(kind, parts, where)
        before = self.lines[self.at]
        after = edit(before, kind, parts, self.inverse, where)
        if after == before:
            raise Wrong(f"{where}: the fault changes nothing")
        count = len(self.package.faults) + 1
        self.package.faults.append(
            Fault(f"{self.package.name}-{count:03}", self.file, self.at + 1, kind, before, after, sorted(rules),
                  sorted(repairs), list(dict.fromkeys(self.units + self.shared)), tags))


# ---- the overlay


def with_phrase(line, phrase):
    comment = re.search(r"//|/\*", line)
    if comment:
        return line[: comment.start()] + f"/*| {phrase} */ " + line[comment.start() :]
    return f"{line}  //| {phrase}"


class Overlay:
    """The package once more; only what changes is written."""

    def __init__(self, root, folder, package, project):
        self.root, self.folder = pathlib.Path(root).resolve(), pathlib.Path(folder).resolve()
        shutil.rmtree(self.folder, ignore_errors=True)
        shutil.copytree(self.root, self.folder, copy_function=os.link, symlinks=True,
                        ignore=shutil.ignore_patterns(".git", "*.o", "dextral.json", "compile_commands.json"))
        commands = (self.root / "compile_commands.json").read_text().replace(str(self.root), str(self.folder))
        (self.folder / "compile_commands.json").write_text(commands)
        self.commands = {os.path.normpath(os.path.join(c["directory"], c["file"])): c for c in json.loads(commands)}
        if project.exists():
            (self.folder / "dextral.json").write_text(project.read_text())
            for model in json.loads(project.read_text()).get("models", []):
                shutil.copy(project.parent / model, self.folder / model)
        self.files = {}
        self.add_phrases(package)

    def lines(self, file):
        if file not in self.files:
            self.files[file] = (self.folder / file).read_text(errors="surrogateescape").splitlines()
        return self.files[file]

    def write(self, file, lines):
        path = self.folder / file
        path.unlink()
        path.write_text("\n".join(lines) + "\n", errors="surrogateescape")

    def add_phrases(self, package):
        for file, line, phrase in package.phrases:
            self.lines(file)[line] = with_phrase(self.lines(file)[line], phrase)
        for file in {file for file, _, _ in package.phrases}:
            self.write(file, self.files[file])

    def inject(self, fault):
        lines = list(self.lines(fault.file))
        said = lines[fault.line - 1]
        tail = re.search(r"\s*(//\||/\*\|).*", said)
        lines[fault.line - 1] = fault.after + (tail.group(0) if tail else "")
        self.write(fault.file, lines)

    def restore(self, fault):
        self.write(fault.file, self.lines(fault.file))


# ---- the runs


def compile_errors(overlay, units):
    errors = []
    for unit in units:
        entry = overlay.commands.get(str(overlay.folder / unit))
        if not entry:
            errors.append(f"{unit}: not in compile_commands.json")
            continue
        arguments = entry.get("arguments") or shlex.split(entry["command"])
        kept = [a for i, a in enumerate(arguments[1:], 1) if a not in ("-c", "-o") and arguments[i - 1] != "-o"]
        run = subprocess.run(["flock", "/tmp/dextral-build.lock", "nice", arguments[0], "-fsyntax-only", "-w", *kept],
                             cwd=entry["directory"], capture_output=True, text=True)
        if run.returncode:
            errors.append(f"{unit}: {run.stderr.strip().splitlines()[0] if run.stderr.strip() else run.returncode}")
    return errors


def lint(dextral, overlay, units, extra):
    began = time.monotonic()
    paths = [str(overlay.folder / unit) for unit in units]
    run = subprocess.run([dextral, "lint", "--format", "json", "--allow-unread", *extra, *paths], cwd=overlay.folder,
                         capture_output=True, text=True)
    if run.returncode not in (0, 1):
        raise Wrong(f"{dextral} ended with {run.returncode}: {run.stderr.strip()[:400]}")
    report = json.loads(run.stdout)
    if report.get("not read"):
        raise Unread(run.stderr.strip().splitlines()[-1] if run.stderr.strip() else "a unit was not read")
    return findings(report, overlay.folder), time.monotonic() - began


def first_place(thing):
    """The file and line that a part of a report names first."""
    if isinstance(thing, dict):
        file = thing.get("file") or thing.get("path")
        line = thing.get("line") or (thing.get("begin") or {}).get("line")
        if isinstance(file, str) and isinstance(line, int):
            return file, line
    children = thing.values() if isinstance(thing, dict) else thing if isinstance(thing, list) else []
    return next((p for p in map(first_place, children) if p), None)


def all_places(thing):
    place = first_place(thing) if isinstance(thing, dict) else None
    children = thing.values() if isinstance(thing, dict) else thing if isinstance(thing, list) else []
    return ({place} if place else set()).union(*map(all_places, children))


def findings(report, folder):
    """(file, line, rule) of each finding, with the whole finding. Files relative to the package."""
    items = report if isinstance(report, list) else report.get("findings", [])
    told = []
    for item in items:
        place = first_place(item)
        if place and "rule" in item:
            told.append(((relative(place[0], folder), place[1], item["rule"]), item))
    return told


def relative(file, folder):
    return os.path.relpath(os.path.join(folder, file), folder)


# ---- the judgement


def function_around(lines, line):
    """First and last line of the function that holds a line, by its braces."""
    text = "\n".join(lines)
    text = re.sub(r'//[^\n]*|/\*.*?\*/|"(?:\\.|[^"\\\n])*"|^[ \t]*#[^\n]*',
                  lambda m: re.sub(r"[^\n]", " ", m.group(0)), text, flags=re.S | re.M)
    stack, head, head_line, number, best = [], "", 1, 1, None
    for c in text:
        if c == "\n":
            number += 1
        if c == "{":
            scope = re.match(r"\s*(?:template\s*<.*>\s*)?(?:namespace|extern|class|struct|union|enum)\b(?![^{]*\)\s*(?:const)?\s*$)",
                             head, re.S)
            stack.append((head_line, ")" in head and not scope))
        if c == "}" and stack:
            begin, is_function = stack.pop()
            if is_function and begin <= line <= number and not any(f for _, f in stack):
                best = best or (begin, number)
        if c in "{};":
            head, head_line = "", number
        else:
            if not head.strip():
                head_line = number
            head += c
    return best or (line, line)


def repair_kinds(finding):
    return {str(r.get("kind", "")).replace("-", "_").replace(" ", "_") for r in finding.get("repairs", [])}


def squeeze(text):
    return re.sub(r"\s", "", re.sub(r"//\|.*|/\*\|.*?\*/", "", text))


def mends(finding, fault, line):
    """Do the edits of one repair give the old line back?"""
    for repair in finding.get("repairs", []):
        text, edits = line, [(span_of(e), e.get("text", "")) for e in repair.get("edits", [])]
        if not edits or any(s is None or s[0] != fault.line for s, _ in edits):
            continue
        raw = text.encode(errors="surrogateescape")
        for (_, begin, end), new in sorted(edits, reverse=True):
            raw = raw[: begin - 1] + new.encode() + raw[end - 1 :]
        if squeeze(raw.decode(errors="surrogateescape")) == squeeze(fault.before):
            return True
    return False


def span_of(item):
    item = item.get("span") or item.get("place") or item
    if "line" not in item or "column" not in item or item.get("end line") != item["line"]:
        return None
    return item["line"], item["column"], item["end column"]


def classify(fault, overlay, base, faulty, seconds):
    counts = collections.Counter(key for key, _ in base)
    new = []
    for key, item in faulty:
        if counts[key]:
            counts[key] -= 1
        else:
            new.append((key, item))
    begin, end = function_around(overlay.lines(fault.file), fault.line)
    hits = {"line": [], "function": [], "chain": []}
    elsewhere = []
    for key, item in new:
        chain = {(relative(f, overlay.folder), n) for f, n in all_places(item)}
        if key[0] == fault.file and key[1] == fault.line:
            hits["line"].append(item)
        elif key[0] == fault.file and begin <= key[1] <= end:
            hits["function"].append(item)
        elif (fault.file, fault.line) in chain:
            hits["chain"].append(item)
        else:
            elsewhere.append(key)
    found = next((name for name in ("line", "function", "chain") if hits[name]), "miss")
    told = hits["line"] + hits["function"] + hits["chain"]
    written = fault.after
    return {
        **dataclasses.asdict(fault), "found": found, "told": sorted({item["rule"] for item in told}),
        "right_rule": any(item["rule"] in fault.rules for item in told),
        "right_repair": any(repair_kinds(i) & set(fault.repairs) or mends(i, fault, written) for i in told),
        "mended": any(mends(i, fault, written) for i in told),
        "alarms": elsewhere, "lost": sorted(k for k, n in counts.items() if n), "seconds": round(seconds, 2),
    }


def not_judged(fault, why):
    return {**dataclasses.asdict(fault), "found": "unread", "told": [], "right_rule": False, "right_repair": False,
            "mended": False, "alarms": [], "lost": [], "seconds": 0, "why": why}


# ---- the whole


def run_all(options, package, overlays):
    free = queue.SimpleQueue()
    for overlay in overlays:
        free.put(overlay)
    bases = {}

    def base_of(units):
        key = tuple(units)
        if key not in bases:
            overlay = free.get()
            try:
                bases[key] = lint(options.dextral, overlay, units, options.extra)[0]
            except Unread as unread:
                bases[key] = str(unread)
            free.put(overlay)
        return bases[key]

    def one(fault):
        overlay = free.get()
        try:
            overlay.inject(fault)
            if options.check:
                return {**dataclasses.asdict(fault), "errors": compile_errors(overlay, fault.units)}
            base = bases[tuple(fault.units)]
            if isinstance(base, str):
                return not_judged(fault, base)
            try:
                told, seconds = lint(options.dextral, overlay, fault.units, options.extra)
            except Unread as unread:
                return not_judged(fault, str(unread))
            return classify(fault, overlay, base, told, seconds)
        finally:
            overlay.restore(fault)
            free.put(overlay)

    if not options.check:
        for fault in package.faults:
            base_of(fault.units)
    with concurrent.futures.ThreadPoolExecutor(len(overlays)) as pool:
        results = list(pool.map(one, package.faults))
    unit_bases = {" ".join(k): v if isinstance(v, str) else sorted(key for key, _ in v) for k, v in bases.items()}
    return results, unit_bases


def table(rows):
    widths = [max(len(str(row[i])) for row in rows) for i in range(len(rows[0]))]
    return "\n".join("  ".join(str(c).ljust(w) if i < 2 else str(c).rjust(w)
                               for i, (c, w) in enumerate(zip(row, widths))).rstrip() for row in rows)


def summary(name, results):
    rows = [["package", "kind", "faults", "line", "function", "chain", "miss", "unread", "rule", "repair", "mended", "alarms"]]
    groups = collections.defaultdict(list)
    for r in results:
        groups[r["kind"]].append(r)
    for kind, items in [*sorted(groups.items()), ("all", results)]:
        found = collections.Counter(r["found"] for r in items)
        rows.append([name, kind, len(items), found["line"], found["function"], found["chain"], found["miss"], found["unread"],
                     sum(r["right_rule"] for r in items), sum(r["right_repair"] for r in items),
                     sum(r["mended"] for r in items), sum(len(r["alarms"]) for r in items)])
    return table(rows)


def by_tag(name, results):
    rows = [["package", "tag", "faults", "found", "rule"]]
    for tag in sorted({t for r in results for t in r["tags"]}):
        items = [r for r in results if tag in r["tags"]]
        rows.append([name, tag, len(items), sum(r["found"] not in ("miss", "unread") for r in items),
                     sum(r["right_rule"] for r in items)])
    return table(rows)


def options_of(arguments):
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("package", help="folder with the sources and compile_commands.json")
    parser.add_argument("list", help="phrases and faults; see the head of this file")
    parser.add_argument("--dextral", default=".build/dextral", help="the program")
    parser.add_argument("--check", action="store_true", help="only see that every faulty unit still compiles")
    parser.add_argument("--only", action="append", default=[], help="faults whose id has this text")
    parser.add_argument("--jobs", type=int, default=1)
    parser.add_argument("--work", default="/tmp/dextral-faults", help="folder for the overlays")
    parser.add_argument("--json", help="write all results here")
    parser.add_argument("--show", action="store_true", help="print each fault with what was told")
    parser.add_argument("--extra", action="append", default=[], help="one more argument for dextral lint")
    return parser.parse_args(arguments)


def show(results):
    for r in results:
        print(f"{r['id']} {r['file']}:{r['line']} {r['kind']} {r['found']} told {','.join(r['told']) or 'nothing'}"
              f" wanted {','.join(r['rules'])}{' MENDED' if r['mended'] else ''}")
        print(f"    {r['after'].strip()}")
        for alarm in r["alarms"]:
            print(f"    alarm {alarm[0]}:{alarm[1]} {alarm[2]}")


def check_report(name, results):
    broken = [r for r in results if r["errors"]]
    for r in broken:
        print(f"{r['id']} {r['file']}:{r['line']} {r['after'].strip()}\n    {r['errors'][0]}")
    print(f"{name}: {len(results)} faults, {len(broken)} do not compile")
    return 1 if broken else 0


def main(arguments):
    options = options_of(arguments)
    options.dextral = os.path.abspath(options.dextral)
    try:
        package = Reader(options.package, options.list).read()
        if options.only:
            package.faults = [f for f in package.faults if any(o in f.id for o in options.only)]
        project = pathlib.Path(options.list).with_suffix(".json")
        overlays = [Overlay(options.package, f"{options.work}/{package.name}-{i}", package, project)
                    for i in range(max(1, options.jobs))]
        results, bases = run_all(options, package, overlays)
    except (Wrong, OSError, json.JSONDecodeError) as wrong:
        print(f"inject.py: {wrong}", file=sys.stderr)
        return 2
    if options.json:
        pathlib.Path(options.json).write_text(json.dumps({"package": package.name, "phrases": len(package.phrases),
                                                          "baseline": bases, "faults": results}, indent=1) + "\n")
    if options.check:
        return check_report(package.name, results)
    if options.show:
        show(results)
    print(summary(package.name, results))
    print(by_tag(package.name, results))
    print(f"phrases: {len(package.phrases)}; findings in the baseline: {sum(len(b) for b in bases.values() if not isinstance(b, str))}")
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
