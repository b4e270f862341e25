// The facts of a function for people: `dextral facts`, and tests.
//
//     nav::to_body(C_bn, v)  nav.cpp:12:1
//       v0: matrix, a rotation "C_bn"  at 12:30
//       v1: vector "v"  at 12:45
//       v2: vector "C_bn * v"  at 13:10
//       hold v1: in ned, declared, contract, said of v  at 12:45
//       v2 = product v0 "C_bn", v1 "v"  at 13:10
//       at the end return: v2
#include "core/algebra.h"
#include "core/facts.h"

namespace dextral {

namespace {

const char* word(Shape shape) {
  switch (shape) {
    case Shape::unknown:
      return "unknown";
    case Shape::number:
      return "number";
    case Shape::vector:
      return "vector";
    case Shape::row:
      return "row";
    case Shape::matrix:
      return "matrix";
    case Shape::rotation:
      return "rotation";
    case Shape::quaternion:
      return "quaternion";
    case Shape::pose:
      return "pose";
    case Shape::object:
      return "object";
    case Shape::container:
      return "container";
  }
  return "unknown";
}

std::string name(ValueId id) { return id == ValueId::none ? "-" : "v" + std::to_string(std::uint32_t(id)); }

std::string quoted(const std::string& text) { return text.empty() ? "" : " \"" + text + "\""; }

std::string place(const Span& span) {
  if (!span.valid()) return "";
  return "  at " + std::to_string(span.begin.line) + ":" + std::to_string(span.begin.column);
}

template <class List, class Print>
std::string listed(const List& list, Print print, const char* between = ", ") {
  std::string line;
  for (const auto& item : list) line += (line.empty() ? "" : between) + print(item);
  return line;
}

std::string print(const Snapshot& snapshot);

std::string print(const std::variant<ValueId, Snapshot>& thing) {
  if (auto* id = std::get_if<ValueId>(&thing)) return name(*id);
  return print(std::get<Snapshot>(thing));
}

std::string print(const Part& part) {
  if (auto* id = std::get_if<ValueId>(&part.is)) return part.path + ": " + name(*id);
  const auto& snapshot = std::get<std::shared_ptr<const Snapshot>>(part.is);
  return part.path + ": " + (snapshot ? print(*snapshot) : "-");
}

std::string print(const Snapshot& snapshot) {
  std::string line = (snapshot.path.empty() ? "?" : snapshot.path) + "#" + std::to_string(snapshot.epoch);
  if (snapshot.parts.empty()) return line;
  return line + "{" + listed(snapshot.parts, [](const Part& p) { return print(p); }) + "}";
}

bool unset(const std::variant<ValueId, Snapshot>& thing) {
  auto* id = std::get_if<ValueId>(&thing);
  return id && *id == ValueId::none;
}

std::string print(const Binding& binding) {
  std::string line = binding.formal + " = " + print(binding.before) + quoted(binding.text);
  return unset(binding.after) ? line : line + " then " + print(binding.after);
}

std::string print(const Call& call) {
  std::string line = call.name + (call.dispatched ? ", dispatched" : "");
  return line + "(" + listed(call.bindings, [](const Binding& b) { return print(b); }) + ")";
}

std::string print(const Hold& hold) {
  std::string line = hold.said + ", " + text(hold.source);
  if (hold.contract) line += ", contract";
  if (!hold.formal.empty()) line += ", of argument " + hold.formal;
  return hold.subject.empty() ? line : line + ", said of " + hold.subject;
}

std::string print(const Value& value) {
  return std::string(word(value.shape)) + (value.rotation ? ", a rotation" : "") + quoted(value.text);
}

std::string print(const Operation& operation, const Function& function) {
  auto operand = [](const Operand& o) { return name(o.value) + quoted(o.text); };
  std::string operands = listed(operation.operands, operand);
  std::string line = "  ";
  if (operation.result != ValueId::none) line += name(operation.result) + " = ";
  line += text(operation.kind);
  if (operation.kind == OperationKind::call && operation.item < function.calls.size())
    return line + " " + print(function.calls[operation.item]) + place(operation.span) + "\n";
  if (!operands.empty()) line += " " + operands;
  if (operation.kind == OperationKind::hold && operation.item < function.holds.size())
    line += ": " + print(function.holds[operation.item]);
  if (!operation.numbers.empty())
    line += " [" + listed(operation.numbers, [](int n) { return std::to_string(n); }, " ") + "]";
  if (!operation.target.empty()) line += " to " + operation.target;
  return line + place(operation.span) + "\n";
}

std::string head(const Function& function, const FileTable& files) {
  std::string line =
      function.name + "(" + listed(function.parameter_names, [](const std::string& n) { return n; }) + ")";
  if (function.template_instance) line += ", from a template";
  if (!function.body) line += ", declared only";
  if (!function.span.valid()) return line + "\n";
  const Position& begin = function.span.begin;
  return line + "  " + files.name(function.span.file) + ":" + std::to_string(begin.line) + ":" +
         std::to_string(begin.column) + "\n";
}

}  // namespace

std::string print(const Function& function, const FileTable& files) {
  std::string lines = head(function, files);
  for (std::size_t i = 0; i < function.values.size(); ++i)
    lines += "  " + name(ValueId(i)) + ": " + print(function.values[i]) + place(function.values[i].span) + "\n";
  for (const Operation& operation : function.operations) lines += print(operation, function);
  for (const Reading& reading : function.readings)
    lines += "  " + reading.path + "#" + std::to_string(reading.epoch) + " reads as " + name(reading.value) + "\n";
  for (const auto& [formal, thing] : function.exits) lines += "  at the end " + formal + ": " + print(thing) + "\n";
  return lines;
}

}  // namespace dextral
