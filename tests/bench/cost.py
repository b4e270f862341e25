#!/usr/bin/env python3
"""What linting costs, against a plain syntax check of the same files.

Both are run in turn, several times, on the same machine in the same minutes:
`dextral lint -j1` over all files, and `clang++-19 -fsyntax-only` once for each.
Told are the ratio of processor time (user + sys, the best of the runs: the rest
is noise of the machine) and the ratio of peak memory (the largest process).
The start of a process is part of both; there are more of the plain check.

Usage: cost.py BUILD [--runs N] [--limit RATIO] [--project FOLDER | FILE... [-- FLAGS]]
Without files: the samples that come with the project. FOLDER holds a
compile_commands.json, whose files are all taken with their own flags."""
import argparse
import json
import os
import pathlib
import shlex
import shutil
import sys
import tempfile

ROOT = pathlib.Path(__file__).resolve().parents[2]


def spend(command, directory):
    """(status, seconds of user + sys, peak megabytes) of a command and its children."""
    process = os.fork()
    if process == 0:
        os.chdir(directory)
        nowhere = os.open(os.devnull, os.O_RDWR)
        for stream in (0, 1, 2):
            os.dup2(nowhere, stream)
        os.execvp(command[0], command)
    _, status, usage = os.wait4(process, 0)
    return os.waitstatus_to_exitcode(status), usage.ru_utime + usage.ru_stime, usage.ru_maxrss / 1024


def samples():
    found = []
    for folder in ("fixtures/turnstone", "fixtures/eigen"):
        found += sorted(str(p) for p in (ROOT / folder).rglob("*") if p.suffix in (".c", ".cpp"))
    return found


def sample_flags():
    flags = ["-I/usr/include/eigen3", "-I" + str(ROOT / "tool")]
    for folder in ("fixtures", "fixtures/turnstone", "fixtures/turnstone/include"):
        if (ROOT / folder).is_dir():
            flags.append("-I" + str(ROOT / folder))
    return flags


def write_commands(folder, files, flags):
    commands = [{"directory": str(ROOT), "file": f, "arguments": compiler(f) + flags + ["-c", f]} for f in files]
    (pathlib.Path(folder) / "compile_commands.json").write_text(json.dumps(commands))


def compiler(file):
    return ["clang-19", "-std=c11"] if file.endswith(".c") else ["clang++-19", "-std=c++17"]


def lint_cost(program, folder, files, report):
    command = [program, "lint", "-j1", "--fail-on", "never", "--allow-unread", "--compile-commands", folder,
               "--output", os.path.join(report, "report"), *files]
    status, seconds, megabytes = spend(command, folder)
    if status != 0:
        sys.exit("cost: exit status %d of %s" % (status, shlex.join(command)))
    return seconds, megabytes


def project_checks(folder):
    """(folder, command) of each plain syntax check of a compile database."""
    checks = []
    for entry in json.loads((pathlib.Path(folder) / "compile_commands.json").read_text()):
        words = entry.get("arguments") or shlex.split(entry["command"])
        kept = [w for i, w in enumerate(words[1:]) if w not in ("-c", "-o") and words[i] != "-o"]
        checks.append((entry["directory"], [compiler(entry["file"])[0], "-fsyntax-only", "-w", *kept]))
    return checks


def check_cost(checks):
    seconds = megabytes = 0.0
    for directory, command in checks:
        status, time, memory = spend(command, directory)
        if status != 0:
            print("cost: does not compile, counted all the same: " + shlex.join(command), file=sys.stderr)
        seconds += time
        megabytes = max(megabytes, memory)
    return seconds, megabytes


def main():
    arguments = sys.argv[1:]
    flags = sample_flags()
    if "--" in arguments:
        line = arguments.index("--")
        arguments, flags = arguments[:line], arguments[line + 1:]
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("build")
    parser.add_argument("files", nargs="*")
    parser.add_argument("--runs", type=int, default=3)
    parser.add_argument("--project")
    parser.add_argument("--limit", type=float, help="exit status 1 where the ratio of processor time is above")
    asked = parser.parse_args(arguments)
    program = shutil.which("dextral", path=os.path.abspath(asked.build))
    files = [os.path.abspath(f) for f in asked.files] or samples()
    if not program or not files:
        sys.exit("cost: no dextral in %s" % asked.build if not program else "cost: no files")
    with tempfile.TemporaryDirectory() as scratch:
        if asked.project:
            folder, files, commands = os.path.abspath(asked.project), [], project_checks(asked.project)
        else:
            write_commands(scratch, files, flags)
            folder, commands = scratch, [(ROOT, compiler(f) + flags + ["-fsyntax-only", "-w", f]) for f in files]
        lints, checks = [], []
        for _ in range(asked.runs):
            checks.append(check_cost(commands))
            lints.append(lint_cost(program, folder, files, scratch))
    lint = [min(column) for column in zip(*lints)]
    check = [min(column) for column in zip(*checks)]
    print("%d files, best of %d runs" % (len(commands), asked.runs))
    print("               lint -j1    syntax check    ratio")
    print("user + sys  %8.2f s    %10.2f s    %5.2f" % (lint[0], check[0], lint[0] / check[0]))
    print("peak memory %7.0f MB    %9.0f MB    %5.2f" % (lint[1], check[1], lint[1] / check[1]))
    return 1 if asked.limit and lint[0] > asked.limit * check[0] else 0


if __name__ == "__main__":
    sys.exit(main())
