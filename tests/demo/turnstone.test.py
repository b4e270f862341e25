"""The demo: no finding in the clean copy, and each planted fault found with its rule on its line.

Usage: turnstone.test.py BUILD

Each copy holds one fault for each part of the demo (a header and its source), so that a copy has many faults which
do not touch each other, and is linted whole but for the numeric checks, which call everything. What is told and
belongs to no fault of the copy is surplus of the fault in the same part, or of none.
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


def part(file):
    return file.rsplit(".", 1)[0]


def rounds(faults):
    """The faults in lists with at most one of each part."""
    out = []
    for fault in faults:
        free = [r for r in out if part(fault["file"]) not in {part(f["file"]) for f in r}]
        if not free:
            out.append(free_one := [])
            free = [free_one]
        free[0].append(fault)
    return out


def units(folder):
    return sorted(u for u in os.listdir(folder) if re.search(r"\.c(pp)?$", u) and not re.match("checks|main", u))


def findings(program, folder, paths):
    run = subprocess.run([program, "lint", "--format", "json", "-j1"] + paths, capture_output=True, text=True, cwd=folder)
    if run.returncode not in (0, 1):
        sys.exit("lint of %s ended with %d:\n%s" % (folder, run.returncode, run.stderr))
    return json.loads(run.stdout)["findings"]


def line_of(folder, finding):
    with open(os.path.join(folder, finding["file"]), encoding="utf-8") as file:
        return file.read().split("\n")[finding["line"] - 1]


def told(finding):
    return "%s:%d: %s: %s" % (finding["file"], finding["line"], finding["rule"], finding["sentence"])


def judge(fault, folder, all_told):
    """What is right about this fault, and what else is told in its part."""
    near = [f for f in all_told if part(f["file"]) == part(fault["file"])]
    right = [f for f in near if f["rule"] == fault["rule"] and fault["line"] in line_of(folder, f)]
    surplus = [f for f in near if f not in right and f["rule"] not in fault.get("also", [])]
    return right, surplus


def problems_of(fault, right, surplus):
    if "known miss" in fault:
        return ["%s: the known miss is found now; take the mark away" % fault["id"]] if right else []
    if not right:
        return ["%s: %s is missing; told: %s" % (fault["id"], fault["rule"], [told(f) for f in surplus])]
    marked = fault.get("known surplus", {"rules": []})["rules"]
    if sorted(f["rule"] for f in surplus) == sorted(marked):
        return []
    return ["%s: surplus: %s, marked as known: %s" % (fault["id"], [told(f) for f in surplus], marked)]


def main():
    program = os.path.join(os.path.abspath(sys.argv[1]), "dextral")
    problems, found = [], 0
    with open(os.path.join(ROOT, "tool", "dextral.h")) as ours, open(os.path.join(faulty.HERE, "dextral.h")) as copy:
        if ours.read() != copy.read():
            problems.append("fixtures/turnstone/dextral.h is no copy of tool/dextral.h")
    with tempfile.TemporaryDirectory() as work:
        faults = faulty.write(os.path.join(work, "clean"), ())
        copies = [(os.path.join(work, "clean"), [])]
        for number, chosen in enumerate(rounds(faults)):
            copies.append((os.path.join(work, str(number)), chosen))
            faulty.write(copies[-1][0], [f["id"] for f in chosen])
        with ThreadPoolExecutor(os.cpu_count()) as pool:
            results = list(pool.map(lambda copy: findings(program, copy[0], units(copy[0]) if copy[1] else ["."]), copies))
        for (folder, chosen), all_told in zip(copies, results):
            parts = {part(f["file"]) for f in chosen}
            problems += ["without a fault: " + told(f) for f in all_told if part(f["file"]) not in parts]
            for fault in chosen:
                right, surplus = judge(fault, folder, all_told)
                found += bool(right)
                problems += problems_of(fault, right, surplus)
    print("%d of %d planted faults found in %d copies, %d known misses, %d with known surplus" %
          (found, len(faults), len(copies) - 1, sum("known miss" in f for f in faults),
           sum("known surplus" in f for f in faults)))
    for problem in problems:
        print(problem)
    sys.exit(1 if problems else 0)


if __name__ == "__main__":
    main()
