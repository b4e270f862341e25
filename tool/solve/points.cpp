#include "solve/points.h"

#include <algorithm>
#include <cstdlib>
#include <optional>

#include "solve/edits.h"

namespace dextral::solve {

namespace {

using Ends = std::map<std::string, int>;

void add(Ends& ends, const Ends& more, int sign) {
  for (const auto& [point, count] : more)
    if ((ends[point] += sign * count) == 0) ends.erase(point);
}

// "from hull to mast"; of what is no single chain, "from hull twice to mast and lidar".
std::string text(const Ends& ends) {
  if (ends.empty()) return "from a point to itself";
  std::string from, to;
  for (const auto& [point, count] : ends) {
    std::string& list = count > 0 ? to : from;
    const int times = std::abs(count);
    list += (list.empty() ? "" : " and ") + point;
    if (times > 1) list += times == 2 ? " twice" : " " + std::to_string(times) + " times";
  }
  return "from " + from + " to " + to;
}

std::optional<Ends> said(const Quantity& quantity) {
  if (quantity.kind != Kind::position || quantity.from_point == quantity.to_point) return std::nullopt;
  if (quantity.from_point.starts_with('?') || quantity.to_point.starts_with('?')) return std::nullopt;
  return Ends{{quantity.from_point, -1}, {quantity.to_point, 1}};
}

class Chains {
 public:
  Chains(const Function& function, const ReachedBy& known) : function_(function), known_(known) {
    reached_.resize(function.values.size());
    maker_.resize(function.values.size(), -1);
  }

  std::vector<Clash> run() {
    for (const Reading& reading : function_.readings)
      if (reading.epoch == 0 && is_formal(reading.path)) reached_[std::size_t(reading.value)] = Reach{{{taken(reading.path), 1}}, Certainty::certain, {}};
    for (std::size_t i = 0; i < function_.operations.size(); ++i) {
      const Operation& op = function_.operations[i];
      if (op.result != ValueId::none) maker_[std::size_t(op.result)] = int(i);
      if (op.kind == OperationKind::hold) hold(op);
      else if (op.kind == OperationKind::call) call(op);
      else if (op.result != ValueId::none) reached_[std::size_t(op.result)] = derived(op, kNone);
    }
    return std::move(clashes_);
  }

  Reached exits() const {
    Reached reached;
    for (const auto& [formal, thing] : function_.exits) {
      const auto* value = std::get_if<ValueId>(&thing);
      const auto* snapshot = std::get_if<Snapshot>(&thing);
      if (snapshot && snapshot->parts.size() == 1 && snapshot->parts[0].path.empty()) value = std::get_if<ValueId>(&snapshot->parts[0].is);
      if (value && of(*value)) reached[formal] = *of(*value);
    }
    for (const Operation& op : function_.operations)
      if (op.kind == OperationKind::hold) add_taken(op, reached);
    return reached;
  }

 private:
  static std::string taken(const std::string& formal) { return "<" + formal; }
  static bool is_formal(const std::string& path) { return path.find_first_of(".[") == std::string::npos && path.starts_with('p'); }
  static bool is_open(const Ends& ends) { return !ends.empty() && ends.begin()->first.starts_with('<'); }

  // What the phrase of a parameter asks of the callers.
  void add_taken(const Operation& op, Reached& reached) const {
    const Hold& hold = function_.holds.at(op.item);
    const std::optional<Ends> ends = said(hold.quantity);
    if (!hold.contract || !ends) return;
    for (const Reading& reading : function_.readings)
      if (reading.value == op.operands[0].value && reading.epoch == 0 && reading.path.find_first_of(".[") == std::string::npos)
        reached[taken(reading.path)] = {*ends, certainty(hold.source), {reason(hold)}};
  }

  const std::optional<Reach>& of(ValueId id) const {
    static const std::optional<Reach> nothing;
    return id == ValueId::none ? nothing : reached_[std::size_t(id)];
  }

  static int sign_of(const Operation& op, std::size_t operand) {
    if (op.kind == OperationKind::difference) return operand == 0 ? 1 : -1;
    if (operand < op.numbers.size()) return op.numbers[operand];
    const bool exact = op.kind == OperationKind::sum || op.kind == OperationKind::join || op.how != ReasonKind::operation;
    return exact ? 1 : 0;
  }

  // What an operation gives; `flipped` is taken with the other sign.
  std::optional<Reach> derived(const Operation& op, int flipped) const {
    switch (op.kind) {
      case OperationKind::product:
        return turned(op);
      case OperationKind::copy:
      case OperationKind::sum:
      case OperationKind::difference:
        return combined(op, flipped);
      case OperationKind::join:
        return joined(op);
      default:
        return std::nullopt;
    }
  }

  std::optional<Reach> turned(const Operation& op) const {
    const ValueId map = op.operands[0].value, vector = op.operands[1].value;
    if (map == ValueId::none || vector == ValueId::none) return std::nullopt;
    const Shape shape = function_.values[std::size_t(map)].shape;
    if (shape != Shape::matrix && shape != Shape::rotation && shape != Shape::quaternion) return std::nullopt;
    return of(vector);
  }

  std::optional<Reach> combined(const Operation& op, int flipped) const {
    Reach result;
    for (std::size_t i = 0; i < op.operands.size(); ++i) {
      const std::optional<Reach>& operand = of(op.operands[i].value);
      const int sign = sign_of(op, i);
      if (!operand || !sign) return std::nullopt;
      add(result.ends, operand->ends, int(i) == flipped ? -sign : sign);
      result.certainty = weaker(result.certainty, operand->certainty);
      result.proof.insert(result.proof.end(), operand->proof.begin(), operand->proof.end());
    }
    if (result.proof.size() > kMostReasons) return std::nullopt;
    return result;
  }

  std::optional<Reach> joined(const Operation& op) const {
    std::optional<Reach> first;
    for (const Operand& operand : op.operands) {
      const std::optional<Reach>& reach = of(operand.value);
      if (!reach || (first && first->ends != reach->ends)) return std::nullopt;
      if (!first) first = reach;
    }
    return first;
  }

  void call(const Operation& op) {
    const Call& call = function_.calls.at(op.item);
    auto known = known_.find(call.callee);
    if (call.dispatched || known == known_.end()) return;
    for (const Binding& binding : call.bindings) {
      take(op, call, binding, known->second);
      auto* id = std::get_if<ValueId>(&binding.after);
      auto reach = known->second.find(binding.formal);
      if (!id || *id == ValueId::none || reach == known->second.end()) continue;
      std::optional<Reach> put = put_in(reach->second, call);
      if (!put) continue;
      Reach given = std::move(*put);
      given.proof.insert(given.proof.begin(), {ReasonKind::called, Source::modelled, op.span, op.text, call.name});
      reached_[std::size_t(*id)] = std::move(given);
    }
  }

  // What the callee says of its arguments, said of those of this call.
  std::optional<Reach> put_in(const Reach& callee, const Call& call) const {
    Reach given;
    given.certainty = callee.certainty;
    given.proof = callee.proof;
    for (const auto& [point, count] : callee.ends) {
      if (!point.starts_with('<')) {
        add(given.ends, {{point, 1}}, count);
        continue;
      }
      auto binding = std::find_if(call.bindings.begin(), call.bindings.end(), [&](const Binding& b) { return taken(b.formal) == point; });
      auto* id = binding == call.bindings.end() ? nullptr : std::get_if<ValueId>(&binding->before);
      if (!id || !of(*id)) return std::nullopt;
      for (const auto& [end, times] : of(*id)->ends) add(given.ends, {{end, 1}}, count * times);
      given.certainty = weaker(given.certainty, of(*id)->certainty);
      given.proof.insert(given.proof.end(), of(*id)->proof.begin(), of(*id)->proof.end());
    }
    return given;
  }

  void take(const Operation& op, const Call& call, const Binding& binding, const Reached& known) {
    auto* id = std::get_if<ValueId>(&binding.before);
    auto wanted = known.find(taken(binding.formal));
    if (!id || !of(*id) || wanted == known.end() || of(*id)->ends == wanted->second.ends || is_open(of(*id)->ends)) return;
    Clash clash = contradiction(*of(*id), wanted->second);
    clash.span = binding.span.valid() ? binding.span : op.span;
    clash.expression = op.text;
    clash.subject = binding.text;
    clash.object = wanted->second.proof.empty() ? call.name : wanted->second.proof[0].subject;
    clash.right_proof.insert(clash.right_proof.begin(), {ReasonKind::called, Source::modelled, op.span, op.text, call.name});
    clashes_.push_back(std::move(clash));
  }

  void hold(const Operation& op) {
    const Hold& hold = function_.holds.at(op.item);
    const std::optional<Ends> wanted = said(hold.quantity);
    const ValueId id = op.operands[0].value;
    if (!wanted || id == ValueId::none) return;
    std::optional<Reach>& reach = reached_[std::size_t(id)];
    if (reach && !is_open(reach->ends) && reach->ends != *wanted) tell(op, hold, *wanted, *reach);
    reach = Reach{*wanted, certainty(hold.source), {reason(hold)}};
  }

  static Reason reason(const Hold& hold) {
    const ReasonKind kind = hold.source == Source::named ? ReasonKind::named : ReasonKind::declared;
    return {kind, hold.source, hold.phrase, hold.subject, hold.said};
  }

  void tell(const Operation& op, const Hold& hold, const Ends& wanted, const Reach& reach) {
    Clash clash = contradiction(reach, {wanted, certainty(hold.source), {reason(hold)}});
    clash.span = op.span.valid() ? op.span : hold.phrase;
    clash.expression = op.text;
    clash.subject = op.operands[0].text;
    clash.object = hold.subject;
    if (const Operation* made = making(op.operands[0].value)) {
      clash.span = made->span.valid() ? made->span : clash.span;
      clash.subject = made->text;
      repair(*made, wanted, clash);
    }
    clashes_.push_back(std::move(clash));
  }

  Clash contradiction(const Reach& found, const Reach& wanted) const {
    Clash clash;
    clash.kind = ClashKind::points;
    clash.function = function_.name;
    clash.left_points = text(found.ends);
    clash.right_points = text(wanted.ends);
    clash.left_proof = found.proof;
    clash.right_proof = wanted.proof;
    clash.certainty = weaker(found.certainty, wanted.certainty);
    return clash;
  }

  // The sum, difference or negation that a value was copied from.
  const Operation* making(ValueId id) const {
    for (int steps = 0; steps < 64 && id != ValueId::none && maker_[std::size_t(id)] >= 0; ++steps) {
      const Operation& op = function_.operations[std::size_t(maker_[std::size_t(id)])];
      const bool plain = op.operands.size() == 1 && sign_of(op, 0) == 1;
      if (op.kind == OperationKind::copy && plain) id = op.operands[0].value;
      else if (op.kind == OperationKind::product) id = op.operands[1].value;
      else return op.kind == OperationKind::join || op.kind == OperationKind::call ? nullptr : &op;
    }
    return nullptr;
  }

  void repair(const Operation& op, const Ends& wanted, Clash& clash) const {
    const bool pair = op.operands.size() == 2 && (op.kind == OperationKind::sum || op.kind == OperationKind::difference);
    if (!pair) return;
    const Operand &a = op.operands[0], &b = op.operands[1];
    const std::optional<Reach> flipped = derived(op, 1);
    if (flipped && flipped->ends == wanted)
      clash.repairs.push_back(other_sign(op, a, b));
    Ends opposite;
    if (const std::optional<Reach> whole = derived(op, kNone)) add(opposite, whole->ends, -1);
    if (op.kind == OperationKind::difference && opposite == wanted) clash.repairs.push_back(exchanged(op, a, b));
  }

  static Repair other_sign(const Operation& op, const Operand& a, const Operand& b) {
    const bool adds = sign_of(op, 1) < 0;
    Repair repair;
    repair.kind = adds ? RepairKind::add : RepairKind::subtract;
    repair.span = op.span;
    repair.subject = b.text;
    repair.other = a.text;
    if (op.span.valid() && a.span.valid() && b.span.valid())
      repair.edits = {{op.span, a.text + (adds ? " + " : " - ") + in_brackets(b.text)}};
    return repair;
  }

  static Repair exchanged(const Operation& op, const Operand& a, const Operand& b) {
    Repair repair;
    repair.kind = RepairKind::swap;
    repair.span = op.span;
    repair.subject = a.text;
    repair.other = b.text;
    if (a.span.valid() && b.span.valid()) repair.edits = {{a.span, b.text}, {b.span, in_brackets(a.text)}};
    return repair;
  }

  static constexpr std::size_t kMostReasons = 64;
  static constexpr int kNone = -1;

  const Function& function_;
  const ReachedBy& known_;
  std::vector<std::optional<Reach>> reached_;
  std::vector<int> maker_;
  std::vector<Clash> clashes_;
};

}  // namespace

std::vector<Clash> point_clashes(const Function& function, ReachedBy& known) {
  Chains chains(function, known);
  std::vector<Clash> clashes = chains.run();
  if (Reached reached = chains.exits(); !reached.empty()) known[function.key] = std::move(reached);
  return clashes;
}

}  // namespace dextral::solve
