"""The demo: no finding in the clean copy, and each planted fault found with its rule on its line.

Usage: turnstone.test.py BUILD
"""
import json
import os
import subprocess
import sys
import tempfile
from concurrent.futures import ThreadPoolExecutor

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
sys.path.insert(0, os.path.join(ROOT, "fixtures", "turnstone"))
import faulty  # noqa: E402


def findings(program, folder):
    run = subprocess.run([program, "lint", "--format", "json", "-j1", folder], capture_output=True, text=True, cwd=folder)
    if run.returncode not in (0, 1):
        sys.exit("lint of %s ended with %d:\n%s" % (folder, run.returncode, run.stderr))
    return json.loads(run.stdout)["findings"]


def lint_all(program, work, faults):
    """The findings of a copy for each fault, several copies at a time."""
    def one(fault):
        folder = os.path.join(work, fault["id"])
        faulty.write(folder, fault["id"])
        return findings(program, folder)
    with ThreadPoolExecutor(os.cpu_count()) as pool:
        return list(pool.map(one, faults))


def line_of(folder, finding):
    with open(os.path.join(folder, finding["file"]), encoding="utf-8") as file:
        return file.read().split("\n")[finding["line"] - 1]


def main():
    program = os.path.join(os.path.abspath(sys.argv[1]), "dextral")
    problems, found, known, cascades = [], 0, 0, 0
    with tempfile.TemporaryDirectory() as work:
        faults = faulty.write(os.path.join(work, "clean"), "none")
        for f in findings(program, os.path.join(work, "clean")):
            problems.append("clean copy: %s:%d: %s: %s" % (f["file"], f["line"], f["rule"], f["sentence"]))
        for fault, told in zip(faults, lint_all(program, work, faults)):
            folder = os.path.join(work, fault["id"])
            right = [f for f in told if f["rule"] == fault["rule"] and fault["line"] in line_of(folder, f)]
            found += bool(right)
            if "known miss" in fault:
                known += 1
                if right:
                    problems.append("%s: the known miss is found now; take the mark away" % fault["id"])
            elif not right:
                problems.append("%s: %s is missing; told: %s" %
                                (fault["id"], fault["rule"], [(f["rule"], f["file"], f["line"], f["sentence"]) for f in told]))
            else:
                surplus = [f for f in told if f not in right and f["rule"] not in fault.get("also", [])]
                marked = fault.get("known surplus", {"rules": []})["rules"]
                if sorted(f["rule"] for f in surplus) != sorted(marked):
                    problems.append("%s: surplus: %s, marked as known: %s" %
                                    (fault["id"], [(f["rule"], f["line"]) for f in surplus], marked))
                cascades += bool(marked)
    print("%d of %d planted faults found, %d known misses, %d with known surplus" % (found, len(faults), known, cascades))
    for problem in problems:
        print(problem)
    sys.exit(1 if problems else 0)


if __name__ == "__main__":
    main()
