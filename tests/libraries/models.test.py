"""Every library model against the real library.

For each rules/libraries/*.json a C++ program is written from the model and its
"check" section, compiled with the library's own header, and run. It tries what
the model claims on random proper rotations, general matrices and vectors
(reference.h), and looks into the compiled call for the qualified name that the
model gives, so that a right formula under a wrong name fails too.

"check" of a model:
  package    the Debian package of the headers
  include    headers; code: C++ lines that give Make<T>::from(Thing) and read(T)
  flags, link  for the compiler, for the linker
  tolerance  1e-9 unless the library computes in single precision
  samples    name -> [C++ type, kind of random operand]; a shape or a name of its own
  objects    class -> sample that stands for its objects
  concrete   class template -> the type that its constructors are called on
  calls      entry -> C++ with operands as {argument:sample}; several in a list.
             An entry without a line here gets its call from its name and `given`.
  interpolates  entries of kind sum whose result lies between the operands
  unnamed    entries that leave no call behind (defaulted, built in), and why
  unchecked  entries that are not called, and why; NAME* for all that begin so
  conjugate  true where a quaternion object stands for the map q* v q
  inline namespaces  left out of the model's names
An entry is its name, then its `given` in brackets where it has one.

Usage: models.test.py BUILD_FOLDER [LIBRARY...]
"""

import json
import pathlib
import re
import subprocess
import sys
from concurrent.futures import ThreadPoolExecutor

HERE = pathlib.Path(__file__).resolve().parent
MODELS = HERE.parent.parent / "rules" / "libraries"
COMPILER, DEMANGLER = "clang++-19", "llvm-cxxfilt-19"
SILENT = {"opaque": "has no algebraic meaning"}
PLACE = re.compile(r"\{(\d+)(?::(\w+))?\}")
GENERAL = {"product", "transpose", "inverse", "sum", "difference", "column", "row", "part", "element", "transform"}


def truth(value):
    return "true" if value else "false"


def key(name, entry):
    text = name
    if entry.get("given"):
        text += "(" + ", ".join(entry["given"]) + ")"
    if entry.get("object"):
        text += " of " + entry["object"]
    return text


def entries(model):
    for entry in model["functions"]:
        names = entry["name"] if isinstance(entry["name"], list) else [entry["name"]]
        for name in names:
            yield key(name, entry), name, entry


def split(name):
    return name.rsplit("::", 1) if "::" in name else ("", name)


def is_member(name, check):
    return split(name)[0] in check.get("objects", {})


def is_constructor(name):
    owner, last = split(name)
    return split(owner)[1] == last and owner != ""


def default_call(name, entry, check):
    """The call that name and `given` describe, or None."""
    owner, last = split(name)
    given = [f"{{{i}:{shape}}}" for i, shape in enumerate(entry.get("given", []), 1)]
    if is_constructor(name):
        return f"{check.get('concrete', {}).get(owner, owner)}({', '.join(given)})" if given else None
    if not is_member(name, check):
        if not given:
            return None
        operator = last[len("operator"):] if last.startswith("operator") else ""
        if operator and len(given) == 2:
            return f"{given[0]} {operator} {given[1]}"
        if operator:
            return f"{operator}{given[0]}"
        return f"{name}({', '.join(given)})"
    this = f"{{0:{entry.get('object') or check['objects'][owner]}}}"
    if last in ("operator()", "operator[]"):
        return f"{this}{last[8]}{', '.join(given)}{last[9]}"
    if last.startswith("operator") and not last[8].isalnum():
        if len(given) == 1:
            return f"{this} {last[8:]} {given[0]}"
        return f"{last[8:]}{this}" if entry["is"] in ("copy", "inverse") else None
    return f"{this}.{last}({', '.join(given)})"


class Call:
    """One call of one entry, as C++."""

    def __init__(self, number, label, name, entry, code, check):
        self.number, self.label, self.name, self.entry, self.check = number, label, name, entry, check
        self.code, self.samples = code, {}
        for index, sample in PLACE.findall(code):
            if sample:
                self.samples[int(index)] = sample

    def sample(self, name):
        if name in ("number", "index"):
            return ["double" if name == "number" else "int", "number"]
        return self.check["samples"][name]

    def kinds(self):
        kinds = [""] * (max(self.samples, default=-1) + 1)
        for index, name in self.samples.items():
            kinds[index] = self.sample(name)[1]
        maps = {k for k in kinds if k in ("matrix", "rotation", "pose")}
        if maps or self.entry["is"] not in GENERAL:
            kinds = ["matrix" if k == "general" else k for k in kinds]
        return kinds

    def of(self):
        if "of" in self.entry:
            return self.entry["of"]
        if self.entry["is"] in ("build", "elements", "stream", "literal", "fill"):
            return []
        first = 0 if is_member(self.name, self.check) and not is_constructor(self.name) else 1
        skipped = {"column", "row", "element"} & {self.entry["is"]}
        return [first] if skipped else [k for k in sorted(self.samples) if k >= first]

    def function(self):
        lines = [f'extern "C" Thing call_{self.number}(const Things& a) {{']
        for index, name in sorted(self.samples.items()):
            type_name = self.sample(name)[0]
            lines.append(f"  auto h{index} = Make<{type_name}>::from(a.at({index}));")
            lines.append(f"  auto&& a{index} = open(h{index});")
        code = PLACE.sub(lambda m: f"a{m.group(1)}", self.code)
        into = self.entry.get("into", -1)
        if self.entry["is"] == "extract" and self.entry.get("angles"):
            read = "numbers({" + ", ".join(f"double(a{k})" for k in self.entry["angles"]) + "})"
            lines += [f"  {code};", f"  return {read};"]
        elif into < 0:
            lines.append(f"  return read({code});")
        elif self.entry.get("also returned"):
            lines += [f"  const Thing returned = read({code});", f"  const Thing written = read(a{into});",
                      "  return reference::distance(returned, written) < 1e-6 ? written : Thing{};"]
        else:
            lines += [f"  {code};", f"  return read(a{into});"]
        return "\n".join(lines + ["}"])

    def claim(self, tolerance, interpolates):
        e = self.entry
        ints = lambda values: "{" + ", ".join(map(str, values)) + "}"
        text = lambda name: json.dumps(str(e.get(name, "")))
        return (f"{{.call = {json.dumps(self.label)}, .is = {text('is')}, .of = {ints(self.of())}, "
                f".turned = {ints(e.get('transposed', []))}, .kinds = {ints(map(json.dumps, self.kinds()))}, "
                f".order = {text('order')}, .sequence = {text('sequence')}, .sense = {text('sense')}, "
                f".turning = {text('turning')}, .unit = {text('unit')}, .base = {e.get('base', 0)}, "
                f".index = {e.get('index', -1)}, .factor = {e.get('factor', 0)}, .angles = {ints(e.get('angles', []))}, "
                f".interpolates = {truth(interpolates)}, .conjugate = {truth(self.check.get('conjugate'))}, "
                f".tolerance = {tolerance}}}")


def is_listed(label, patterns):
    return any(label == p or (p.endswith("*") and label.startswith(p[:-1])) for p in patterns)


def collect(model, problems):
    """The calls of a model, and how many entries are left out with a reason."""
    check, calls, left, seen, used = model["check"], [], 0, set(), set()
    for label, name, entry in entries(model):
        if label in seen:
            problems.append(f"{label}: stands twice")
        seen.add(label)
        code = check.get("calls", {}).get(label)
        if code is None and (is_listed(label, check.get("unchecked", {})) or entry["is"] in SILENT):
            left += 1
            continue
        code = code or default_call(name, entry, check)
        if code is None:
            problems.append(f"{label}: neither called nor listed as unchecked")
            continue
        for one in code if isinstance(code, list) else [code]:
            calls.append(Call(len(calls), label, name, entry, one, check))
    for section in ("calls", "unchecked", "unnamed", "interpolates"):
        for label in check.get(section, {}):
            if not label.endswith("*") and label not in seen:
                problems.append(f"check.{section} speaks of {label}, which the model does not have")
    return calls, left


PROLOGUE = """#include "reference.h"
#include <utility>
using namespace reference;
template <class T> struct Make;
template <> struct Make<double> { static double from(const Thing& t) { return t.numbers.at(0); } };
template <> struct Make<int> { static int from(const Thing& t) { return int(std::lround(t.numbers.at(0))); } };
inline Thing read(double n) { return number(n); }
template <class T> T& open(T& t) { return t; }"""


def program(model, calls):
    check = model["check"]
    lines = [f"#include <{header}>" for header in check["include"]] + [PROLOGUE]
    lines += check["code"]
    lines += [call.function() for call in calls]
    lines.append("int main() {\n  int wrong = 0;\n  const auto tell = [&](bool ok, const char* what) {\n"
                 '    if (!ok) std::printf("%s\\n", what), ++wrong;\n  };')
    for call in calls:
        interpolates = call.label in check.get("interpolates", [])
        claim = call.claim(check.get("tolerance", 1e-9), interpolates)
        what = json.dumps(f"{call.label} is no {call.entry['is']} of {call.of()}: {call.code}")
        lines.append(f"  tell(reference::holds({claim}, call_{call.number}), {what});")
    lines.append("  return wrong != 0;\n}")
    return "\n".join(lines) + "\n"


def callees(ir):
    """Mangled names called in each call_N."""
    found, current = {}, None
    for line in ir.splitlines():
        head = re.match(r"define .*@call_(\d+)\(", line)
        if head:
            current = found.setdefault(int(head.group(1)), set())
        elif line == "}":
            current = None
        elif current is not None and ("call " in line or "invoke " in line):
            current.update(re.findall(r'@"?([\w.$]+)"?\(', line))
    return found


def without_template_arguments(text):
    text = re.sub(r"operator(<<=|>>=|<=>|<<|>>|<=|>=|->\*|->|<|>)",
                  lambda m: "operator" + m.group(1).replace("<", "\1").replace(">", "\2"), text)
    out, depth = [], 0
    for c in text:
        depth += c == "<"
        if depth == 0:
            out.append(c)
        depth -= c == ">"
    return "".join(out).replace("\1", "<").replace("\2", ">")


def misnamed(calls, ir, check):
    found = callees(ir)
    mangled = sorted(set().union(*found.values())) if found else []
    plain = subprocess.run([DEMANGLER], input="\n".join(mangled), capture_output=True, text=True, check=True).stdout
    names = {m: without_template_arguments(p) for m, p in zip(mangled, plain.splitlines())}
    for space in check.get("inline namespaces", []):
        names = {m: n.replace(f"::{space}::", "::") for m, n in names.items()}
    for call in calls:
        if call.label in check.get("unnamed", {}):
            continue
        wanted = re.compile(r"(^|[ &*])" + re.escape(call.name) + r"(\[abi:\w+\])?(\(|$)")
        if not any(wanted.search(names[m]) for m in found.get(call.number, ())):
            seen = sorted({names[m].split("(")[0] for m in found.get(call.number, ())})
            yield f"{call.label}: the call is not to that name: {call.code}; called are {', '.join(seen)}"


def compile_and_run(model, calls, folder, problems):
    check, stem = model["check"], re.sub(r"\W+", "-", model["library"].lower())
    source, ir, binary = folder / f"{stem}.cpp", folder / f"{stem}.ll", folder / stem
    source.write_text(program(model, calls))
    flags = ["-std=c++20", "-O0", "-w", f"-I{HERE}", *check.get("flags", [])]
    build = [COMPILER, *flags, "-S", "-emit-llvm", "-Xclang", "-disable-llvm-passes", str(source), "-o", str(ir)]
    link = [COMPILER, "-O0", "-w", str(ir), "-o", str(binary), *check.get("link", [])]
    for command in (build, link):
        done = subprocess.run(command, capture_output=True, text=True)
        if done.returncode:
            first = "\n".join(done.stderr.splitlines()[:60])
            problems.append(f"{source.name} does not build (its headers are in {check['package']}):\n{first}")
            return
    problems.extend(misnamed(calls, ir.read_text(), check))
    done = subprocess.run([str(binary)], capture_output=True, text=True, timeout=120)
    problems.extend(done.stdout.splitlines())
    if done.returncode not in (0, 1):
        problems.append(f"{stem} ended with status {done.returncode}: {done.stderr[:500]}")


def judge(path, folder):
    model, problems = json.loads(path.read_text()), []
    calls, left = collect(model, problems)
    compile_and_run(model, calls, folder, problems)
    total = sum(1 for _ in entries(model))
    summary = f"{model['library']}: {total} entries, {len(calls)} calls of {total - left} entries, {left} not called"
    return summary, problems


def main():
    folder = pathlib.Path(sys.argv[1]) / "models"
    folder.mkdir(parents=True, exist_ok=True)
    paths = sorted(p for p in MODELS.glob("*.json") if not sys.argv[2:] or p.stem in sys.argv[2:])
    with ThreadPoolExecutor(2) as pool:
        results = list(pool.map(lambda path: judge(path, folder), paths))
    for summary, problems in results:
        print(summary)
        for problem in problems:
            print("  " + problem)
    return 1 if any(problems for _, problems in results) or not results else 0


if __name__ == "__main__":
    sys.exit(main())
