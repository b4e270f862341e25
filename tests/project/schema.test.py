#!/usr/bin/env python3
"""The published schema of dextral.json agrees with the program's own checks.

Each file in examples/ is read by both: examples_test.cpp holds the program to the
`// expect LINE:COLUMN: ...` lines of the file; here the schema must accept what has
none and refuse what has some. `// schema passes` marks what no schema can see
(phrases, known frames, files), `// no JSON` what never reaches one."""
import json
import pathlib
import re
import sys

import jsonschema

HERE = pathlib.Path(__file__).resolve().parent
ROOT = HERE.parent.parent
SCHEMA = ROOT / "tool" / "project" / "dextral.schema.json"
TOKEN = re.compile(r'"(?:\\.|[^"\\])*"|//[^\n]*|/\*.*?\*/', re.DOTALL)


def without_comments(text):
    return TOKEN.sub(lambda match: match.group() if match.group()[0] == '"' else " ", text)


def check(path, validator):
    text = path.read_text(encoding="utf-8")
    if "// no JSON" in text:
        try:
            json.loads(without_comments(text), object_pairs_hook=once)
        except ValueError:
            return None
        return "is JSON, though marked as none"
    errors = [error.message for error in validator.iter_errors(json.loads(without_comments(text)))]
    refused = "// expect " in text and "// schema passes" not in text
    if errors and not refused:
        return "the schema refuses it: " + errors[0]
    if refused and not errors:
        return "the schema accepts it"
    return None


def once(pairs):
    keys = [key for key, value in pairs]
    if len(set(keys)) != len(keys):
        raise ValueError("a key stands twice")
    return dict(pairs)


def keys_of_the_program():
    source = (ROOT / "tool" / "project" / "project_file.cpp").read_text(encoding="utf-8")
    listed = re.search(r"check_\.keys\(\s*root,\s*\{(.*?)\}", source, re.DOTALL).group(1)
    return set(re.findall(r'"([^"]+)"', listed))


def main():
    schema = json.loads(SCHEMA.read_text(encoding="utf-8"))
    jsonschema.Draft202012Validator.check_schema(schema)
    validator = jsonschema.Draft202012Validator(schema)
    paths = sorted((HERE / "examples").glob("right-*.json")) + sorted((HERE / "examples").glob("wrong-*.json"))
    paths.append(ROOT / "fixtures" / "dextral.json")
    wrong = ["%s: %s" % (path.name, why) for path in paths for why in [check(path, validator)] if why]
    if keys_of_the_program() != set(schema["properties"]):
        wrong.append("the keys of the schema and of project_file.cpp differ: %s" % sorted(keys_of_the_program() ^ set(schema["properties"])))
    page = (ROOT / "docs" / "project-file.md").read_text(encoding="utf-8")
    wrong += ["docs/project-file.md does not explain \"%s\"" % key for key in schema["properties"] if '`%s`' % key not in page]
    print("\n".join(wrong) or "%d examples" % len(paths))
    return 1 if wrong or len(paths) < 10 else 0


sys.exit(main())
