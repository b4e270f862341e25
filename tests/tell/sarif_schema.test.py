"""SARIF reports against the published JSON schema of SARIF 2.1.0.

Source: OASIS, "Static Analysis Results Interchange Format (SARIF) Version
2.1.0", sarif-schema-2.1.0.json, as the npm package @microsoft/jest-sarif
carries it (lib/schemas/sarif-2.1.0-rtm.5.json, fetched once into the build
folder and held to its digest).

Usage: sarif_schema.test.py BUILD_FOLDER
"""

import base64
import hashlib
import io
import json
import pathlib
import subprocess
import sys
import tarfile
import tempfile
import urllib.request

import jsonschema

ROOT = pathlib.Path(__file__).resolve().parents[2]
PACKAGE = "https://registry.npmjs.org/@microsoft/jest-sarif/-/jest-sarif-1.0.0-beta.0.tgz"
DIGEST = "A1fOhPd6Ic5iDk4F9YPw1qNB4XF+7+IviR7xl8r2F6QzQkx5cpY9LsGk2rExiFIEcBbjpVnSmwWGBukASkiQ9A=="
SCHEMA = "package/lib/schemas/sarif-2.1.0-rtm.5.json"


def schema(build):
    kept = build / "sarif-schema-2.1.0.json"
    if not kept.exists():
        package = urllib.request.urlopen(PACKAGE, timeout=120).read()
        if base64.b64encode(hashlib.sha512(package).digest()).decode() != DIGEST:
            sys.exit(PACKAGE + " is not what it was")
        kept.write_bytes(tarfile.open(fileobj=io.BytesIO(package)).extractfile(SCHEMA).read())
    return json.loads(kept.read_text())


def report(build, folder, arguments):
    run = subprocess.run([build / "dextral", "lint", "--format", "sarif", *arguments], cwd=folder,
                         capture_output=True, text=True)
    if run.returncode not in (0, 1, 3):
        sys.exit(run.stderr)
    return json.loads(run.stdout)


def broken(folder):
    """A file that cannot be read whole, with a name that is no URI as it stands."""
    (folder / "über %41 b.cpp").write_text('#include "not there.h"\nvoid f(double* v /*| in bodyy ned */);\n')
    return folder


def main():
    build = pathlib.Path(sys.argv[1]).resolve()
    checker = jsonschema.Draft7Validator(schema(build), format_checker=jsonschema.FormatChecker())
    problems, results = [], 0
    with tempfile.TemporaryDirectory() as scratch:
        odd = broken(pathlib.Path(scratch))
        fixtures = ROOT / "fixtures"
        sources = [str(p) for p in sorted(fixtures.rglob("*.c*")) if p.relative_to(fixtures).parts[0] != "turnstone"]
        for folder, arguments in [(odd, ["."]), (fixtures, sources), (fixtures / "turnstone", ["."])]:
            log = report(build, folder, arguments)
            results += len(log["runs"][0]["results"])
            for error in checker.iter_errors(log):
                problems.append("%s: %s: %s" % (folder.name, "/".join(map(str, error.path)), error.message[:300]))
    print("%d results in the reports, %d problems" % (results, len(problems)))
    print("\n".join(problems))
    sys.exit(1 if problems or not results else 0)


main()
