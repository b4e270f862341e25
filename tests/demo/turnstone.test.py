"""The demo: no finding in the clean copy, and each planted fault found with its rule on its line.

Usage: turnstone.test.py BUILD
"""
import json
import os
import re
import subprocess
import sys
import tempfile
from concurrent.futures import ThreadPoolExecutor

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
sys.path.insert(0, os.path.join(ROOT, "fixtures", "turnstone"))
import faulty  # noqa: E402


def includes(folder, name):
    """The files that NAME reaches by its includes, itself among them."""
    reached, open_ones = set(), [name]
    while open_ones:
        file = open_ones.pop()
        if file not in reached and os.path.exists(os.path.join(folder, file)):
            reached.add(file)
            with open(os.path.join(folder, file), encoding="utf-8") as text:
                open_ones += re.findall(r'#include "(\w+\.h)"', text.read())
    return reached


def units_of(folder, changed):
    """The units that read the changed file, those that can call what it defines, and those that it can call; the
    numeric checks left out."""
    def header(file):
        return file.rsplit(".", 1)[0] + ".h"
    units = [u for u in sorted(os.listdir(folder)) if u.endswith((".c", ".cpp")) and not re.match("checks|main", u)]
    readers = [u for u in units if {changed, header(changed)} & includes(folder, u)]
    called = set().union(*(includes(folder, u) for u in readers))
    return [os.path.join(folder, u) for u in units if u in readers or header(u) in called]


def findings(program, folder, paths=None):
    run = subprocess.run([program, "lint", "--format", "json", "-j1"] + (paths or [folder]),
                         capture_output=True, text=True, cwd=folder)
    if run.returncode not in (0, 1):
        sys.exit("lint of %s ended with %d:\n%s" % (folder, run.returncode, run.stderr))
    return json.loads(run.stdout)["findings"]


def lint_all(program, work, faults):
    """The findings of a copy for each fault, several copies at a time."""
    def one(fault):
        folder = os.path.join(work, fault["id"])
        faulty.write(folder, fault["id"])
        return findings(program, folder, units_of(folder, fault["file"]))
    with ThreadPoolExecutor(os.cpu_count()) as pool:
        return list(pool.map(one, faults))


def line_of(folder, finding):
    with open(os.path.join(folder, finding["file"]), encoding="utf-8") as file:
        return file.read().split("\n")[finding["line"] - 1]


def main():
    program = os.path.join(os.path.abspath(sys.argv[1]), "dextral")
    problems, found, known, cascades = [], 0, 0, 0
    with open(os.path.join(ROOT, "tool", "dextral.h")) as ours, open(os.path.join(faulty.HERE, "dextral.h")) as copy:
        if ours.read() != copy.read():
            problems.append("fixtures/turnstone/dextral.h is no copy of tool/dextral.h")
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
