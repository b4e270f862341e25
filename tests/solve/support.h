// Small functions written by hand, as gather would give them.
//
//     Sketch f("to_ned", {"C_bn", "v"});
//     ValueId C = f.parameter(0, Shape::matrix, passive("ned", "body"));
//     ValueId v = f.parameter(1, Shape::vector, in("body"));
//     f.returns(f.product(C, v), in("ned"));
//     Solution solution = solved({f});
//
// Each operation stands on a line of its own, so a span tells which it is. The
// text of an operand is that of its value.
#pragma once

#include <algorithm>
#include <string>
#include <utility>
#include <vector>

#include "core/algebra.h"
#include "solve/solve.h"

namespace dextral::solve {

// A phrase: its quantity and its words.
struct Said {
  Quantity quantity;
  std::string words;
};

inline Frame named(const std::string& name, const std::string& tag = "") { return {name, tag, false, false, ""}; }
inline Frame variable(const std::string& name) { return {name, "", false, true, ""}; }
inline Frame own(const std::string& name, const std::string& owner) { return {name, "", true, false, owner}; }

inline Said in(const Frame& frame) {
  Quantity q;
  q.kind = Kind::vector;
  q.in = frame;
  return {q, "in " + text(frame)};
}
inline Said in(const std::string& name) { return in(named(name)); }

inline Said map(Kind kind, const std::string& word, const Frame& from, const Frame& to) {
  Quantity q;
  q.kind = kind;
  q.first = from;
  q.second = to;
  return {q, word + " " + text(from) + " to " + text(to)};
}
inline Said passive(const Frame& from, const Frame& to) { return map(Kind::passive, "passive", from, to); }
inline Said passive(const std::string& from, const std::string& to) { return passive(named(from), named(to)); }
inline Said linear(const std::string& from, const std::string& to) {
  return map(Kind::linear, "linear", named(from), named(to));
}

inline Said tensor(const std::string& frame) {
  Quantity q;
  q.kind = Kind::tensor;
  q.in = named(frame);
  return {q, "tensor in " + frame};
}

inline Said from_to(const std::string& from, const std::string& to, const std::string& frame) {
  Quantity q;
  q.kind = Kind::position;
  q.in = named(frame);
  q.from_point = from;
  q.to_point = to;
  return {q, "from " + from + " to " + to + " in " + frame};
}

// One function in the making.
class Sketch {
 public:
  explicit Sketch(const std::string& name, std::vector<std::string> parameters = {}, std::uint32_t first_line = 100)
      : line_(first_line) {
    function_.key = function_.name = name;
    function_.span = next_line();
    function_.body = true;
    function_.parameter_names = std::move(parameters);
  }

  // Of type matrix, inverted as C.transpose() where the shape allows.
  ValueId value(Shape shape, const std::string& text) {
    const bool map = shape == Shape::matrix || shape == Shape::rotation || shape == Shape::quaternion;
    function_.values.push_back({shape, shape == Shape::rotation, text, map ? "{}.transpose()" : "", next_line()});
    return ValueId(function_.values.size() - 1);
  }
  ValueId variable(Shape shape, const std::string& name) {
    const ValueId id = value(shape, name);
    function_.declarations.push_back({id, name, function_.values.back().span, shape == Shape::rotation});
    return id;
  }
  ValueId variable(Shape shape, const std::string& name, const Said& said, Source source = Source::declared) {
    const ValueId id = variable(shape, name);
    hold(id, said, source);
    return id;
  }
  ValueId parameter(std::size_t index, Shape shape) {
    const ValueId id = variable(shape, function_.parameter_names.at(index));
    const std::string formal = "p" + std::to_string(index);
    function_.readings.push_back({formal, 0, id});
    set_exit(formal, id);
    return id;
  }
  ValueId parameter(std::size_t index, Shape shape, const Said& said, Source source = Source::declared) {
    const ValueId id = parameter(index, shape);
    hold(id, said, source, true);
    return id;
  }

  std::uint32_t hold(ValueId id, const Said& said, Source source = Source::declared, bool contract = false) {
    Hold hold;
    hold.quantity = said.quantity;
    hold.source = source;
    hold.said = said.words;
    hold.subject = text(id);
    hold.contract = contract;
    Operation& op = operation(OperationKind::hold, ValueId::none, {id}, text(id));
    hold.phrase = op.span;
    op.item = std::uint32_t(function_.holds.size());
    function_.holds.push_back(std::move(hold));
    return std::uint32_t(function_.operations.size() - 1);
  }

  ValueId apply(OperationKind kind, const std::vector<ValueId>& operands, Shape shape, const std::string& text) {
    const ValueId result = value(shape, text);
    operation(kind, result, operands, text);
    return result;
  }
  ValueId product(ValueId a, ValueId b) {
    const Shape shape = of(b).shape;
    return apply(OperationKind::product, {a, b}, shape, text(a) + " * " + text(b));
  }
  ValueId transpose(ValueId a) { return apply(OperationKind::transpose, {a}, of(a).shape, text(a) + ".transpose()"); }
  ValueId sum(ValueId a, ValueId b) {
    return apply(OperationKind::sum, {a, b}, of(a).shape, text(a) + " + " + text(b));
  }
  ValueId difference(ValueId a, ValueId b) {
    return apply(OperationKind::difference, {a, b}, of(a).shape, text(a) + " - " + text(b));
  }
  ValueId join(const std::vector<ValueId>& ways, const std::string& name) {
    return apply(OperationKind::join, ways, of(ways.at(0)).shape, name);
  }
  // NAME = a: a new version of a variable.
  ValueId assign(const std::string& name, ValueId a) { return copied(a, ReasonKind::assigned, name); }

  void returns(ValueId a) { set_exit("return", copied(a, ReasonKind::returned, function_.name)); }
  void returns(ValueId a, const Said& said) {
    const ValueId given = copied(a, ReasonKind::returned, function_.name);
    hold(given, said, Source::declared, true);
    set_exit("return", given);
  }
  void set_exit(const std::string& formal, std::variant<ValueId, Snapshot> thing) {
    for (auto& [name, is] : function_.exits)
      if (name == formal) return void(is = std::move(thing));
    function_.exits.emplace_back(formal, std::move(thing));
  }

  // callee(arguments), which gives a value.
  ValueId call(const std::string& callee, const std::vector<ValueId>& arguments, Shape shape, bool dispatched = false) {
    Call made{callee, callee, dispatched, {}};
    std::string words;
    for (std::size_t i = 0; i < arguments.size(); ++i) {
      made.bindings.push_back(
          {"p" + std::to_string(i), arguments[i], ValueId::none, argument_span(i), text(arguments[i])});
      words += (i ? ", " : "") + text(arguments[i]);
    }
    const ValueId result = value(shape, callee + "(" + words + ")");
    made.bindings.push_back({"return", ValueId::none, result, {}, text(result)});
    add_call(std::move(made), text(result));
    return result;
  }
  // callee(argument), which may change the argument in place.
  ValueId call_in_place(const std::string& callee, ValueId argument) {
    const ValueId after = value(of(argument).shape, text(argument));
    add_call({callee, callee, false, {{"p0", argument, after, argument_span(0), text(argument)}}},
             callee + "(" + text(argument) + ")");
    return after;
  }
  void add_call(Call made, const std::string& text) {
    Operation& op = operation(OperationKind::call, ValueId::none, {}, text);
    op.item = std::uint32_t(function_.calls.size());
    function_.calls.push_back(std::move(made));
  }

  const std::string& text(ValueId id) const { return of(id).text; }
  Operation& last() { return function_.operations.back(); }
  Function& function() { return function_; }
  const Value& of(ValueId id) const { return function_.values.at(std::size_t(id)); }

 private:
  Span next_line() {
    ++line_;
    return {FileId(0), {line_, 1}, {line_, 80}};
  }
  Span argument_span(std::size_t i) const {
    const std::uint32_t column = 5 + 10 * std::uint32_t(i);
    return {FileId(0), {line_ + 2, column}, {line_ + 2, column + 5}};
  }
  Operation& operation(OperationKind kind, ValueId result, const std::vector<ValueId>& operands,
                       const std::string& words) {
    Operation op;
    op.kind = kind;
    op.result = result;
    op.span = next_line();
    op.text = words;
    std::uint32_t column = 5;
    for (ValueId id : operands) {
      op.operands.push_back({id, {FileId(0), {line_, column}, {line_, column + 5}}, text(id)});
      column += 10;
    }
    function_.operations.push_back(std::move(op));
    return function_.operations.back();
  }
  ValueId copied(ValueId a, ReasonKind how, const std::string& target) {
    const ValueId result = apply(OperationKind::copy, {a}, of(a).shape, target);
    last().how = how;
    last().target = target;
    last().text = text(a);
    return result;
  }

  Function function_;
  std::uint32_t line_;
};

inline Facts facts_of(std::vector<Sketch> sketches) {
  Facts facts;
  facts.unit = "/p/nav.cpp";
  facts.read = true;
  facts.files.add("/p/nav.cpp");
  for (Sketch& sketch : sketches) facts.functions.push_back(std::move(sketch.function()));
  return facts;
}

inline Solution solved(std::vector<Sketch> sketches, const FrameCatalogue& frames = FrameCatalogue::builtin()) {
  return solve(facts_of(std::move(sketches)), frames);
}

// "ned<-body"; an unknown slot is "?".
inline std::string frames_of(const Solution& solution, std::size_t function, ValueId id) {
  const KnownFrames& known = solution.values.at(function).at(std::size_t(id));
  auto word = [](const Frame& f) { return f.known() ? text(f) : "?"; };
  return word(known.rows) + "<-" + word(known.columns);
}

}  // namespace dextral::solve
