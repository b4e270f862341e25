"""Prints which share of the lines of each folder the unit tests have run.

    table.py SOURCE BUILD [--missed] FOLDER...

BUILD was compiled with --coverage and its tests have run. Each object file
tells its lines through `llvm-cov-19 gcov`; a line is run if it was in any of
them. Lines of a closing brace alone are not counted: Clang puts there what runs
only under an exception. --missed lists the lines that were not.
"""
import collections
import os
import subprocess
import sys


def read(text, source, build, lines):
    file = None
    for row in text.splitlines():
        fields = row.split(":", 2)
        if len(fields) < 3 or not fields[1].strip().isdigit():
            continue
        count, number, rest = fields[0].strip().rstrip("*"), int(fields[1]), fields[2]
        if number == 0:
            if rest.startswith("Source:"):
                file = os.path.relpath(os.path.join(build, rest[len("Source:"):].strip()), source)
        elif file and count != "-" and rest.strip() not in ("}", "};"):
            run = not count.startswith(("#", "="))
            lines[file][number] = lines[file].get(number, False) or run


def measured(source, build):
    lines = collections.defaultdict(dict)
    notes = [os.path.join(at, f) for at, _, files in os.walk(build) for f in files if f.endswith(".gcno")]
    for note in sorted(notes):
        told = subprocess.run(["llvm-cov-19", "gcov", "-t", note], cwd=build, check=False, text=True, errors="replace",
                              stdout=subprocess.PIPE, stderr=subprocess.DEVNULL)
        read(told.stdout, source, build, lines)
    return lines


def main():
    words = [word for word in sys.argv[1:] if word != "--missed"]
    source, build, folders = os.path.abspath(words[0]), os.path.abspath(words[1]), words[2:]
    lines = measured(source, build)
    for folder in folders:
        inside = {file: rows for file, rows in sorted(lines.items()) if file.startswith(folder + "/")}
        total = sum(len(rows) for rows in inside.values())
        run = sum(sum(rows.values()) for rows in inside.values())
        print(f"{folder:14} {run:5} of {total:5} lines  {100 * run / max(total, 1):5.1f} %")
        if "--missed" in sys.argv:
            for file, rows in inside.items():
                missed = [str(n) for n, was in sorted(rows.items()) if not was]
                if missed:
                    print(f"  {file}: {' '.join(missed)}")


if __name__ == "__main__":
    main()
