#!/usr/bin/env python3
"""The folders of the pipeline include only what the design allows them.

The table is the one of docs/architecture.md. A step takes and gives data; what
it may include says which data. System headers are not looked at, except that
Clang and LLVM stay in the folders that speak with them."""
import pathlib
import re
import sys

ROOT = pathlib.Path(__file__).resolve().parents[2]

ALLOWED = {
    "tool/core": set(),
    "tool/phrase": {"core"},
    "tool/project": {"core", "phrase"},
    "tool/gather": {"core", "phrase", "project"},
    "tool/probe": {"core", "project", "gather"},
    "tool/solve": {"core"},
    "rules": {"core", "solve"},
    "tool/tell": {"core", "solve", "rules"},
    "tool/run": {"core", "phrase", "project", "gather", "probe", "solve", "rules", "tell"},
    "tool/serve": {"core", "phrase", "project", "gather", "probe", "solve", "rules", "tell", "run"},
}
CLANG = {"tool/gather", "tool/probe"}
FOLDERS = {"core", "phrase", "project", "gather", "probe", "solve", "rules", "tell", "run", "serve"}
INCLUDE = re.compile(r'^\s*#\s*include\s*([<"])([^>"]+)[>"]')


def wrong_includes(folder, text):
    """(line, header, why) of each include that `folder` may not have."""
    own = folder.split("/")[-1]
    for number, line in enumerate(text.splitlines(), 1):
        match = INCLUDE.match(line)
        if not match:
            continue
        bracket, header = match.groups()
        first = header.split("/")[0]
        if first in ("clang", "llvm", "clang-c", "llvm-c"):
            if folder not in CLANG:
                yield number, header, "Clang and LLVM belong to gather and probe"
        elif bracket == '"' and "/" not in header:
            yield number, header, "our headers are included from the root: \"%s/%s\"" % (own, header)
        elif bracket == '"' and first not in FOLDERS:
            yield number, header, "no folder of the pipeline"
        elif bracket == '"' and first != own and first not in ALLOWED[folder]:
            yield number, header, "%s may include only %s" % (own, ", ".join(sorted(ALLOWED[folder])) or "itself")


def check_tree():
    wrong = []
    for folder in ALLOWED:
        for path in sorted((ROOT / folder).glob("*")):
            if path.suffix not in (".h", ".cpp"):
                continue
            for number, header, why in wrong_includes(folder, path.read_text(encoding="utf-8")):
                wrong.append("%s:%d: %s: %s" % (path.relative_to(ROOT), number, header, why))
    known = set(ALLOWED)
    for path in sorted((ROOT / "tool").glob("*/")):
        if any(path.glob("*.cpp")) and "tool/" + path.name not in known:
            wrong.append("tool/%s: not in the table of this test" % path.name)
    return wrong


def check_itself():
    sample = '#include <map>\n#include "solve/solve.h"\n#include "core/span.h"\n#include <clang/AST/Decl.h>\n#include "span.h"\n'
    assert [n for n, _, _ in wrong_includes("tool/core", sample)] == [2, 4, 5]
    assert [n for n, _, _ in wrong_includes("tool/gather", sample)] == [2, 5]
    assert [n for n, _, _ in wrong_includes("rules", sample)] == [4, 5]


def main():
    check_itself()
    wrong = check_tree()
    for line in wrong:
        print(line)
    print("%d includes against the table" % len(wrong))
    return 1 if wrong else 0


if __name__ == "__main__":
    sys.exit(main())
