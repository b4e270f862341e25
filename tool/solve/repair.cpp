#include "solve/repair.h"

#include <algorithm>
#include <functional>
#include <tuple>

#include "solve/edits.h"

namespace dextral::solve {

namespace {

struct Candidate {
  Alteration alteration;
  Repair repair;
  std::uint32_t operation = 0;
  int preference = 0;
};

bool maps(Shape shape) {
  return shape == Shape::matrix || shape == Shape::rotation || shape == Shape::quaternion || shape == Shape::pose ||
         shape == Shape::unknown;
}

class Search {
 public:
  Search(const Function& function, const Setting& setting, const std::set<std::uint32_t>& removed,
         const Sheeted& sheeted)
      : function_(function), setting_(setting), removed_(removed), sheeted_(sheeted) {
    for (std::uint32_t i = 0; i < function.operations.size(); ++i)
      if (function.operations[i].result != ValueId::none) maker_[function.operations[i].result] = i;
    for (const Conflict& conflict : sheeted.conflicts) conflicting_.insert(conflict.operation);
  }

  Culprit run() {
    if (is_of_phrases(function_, sheeted_, sheeted_.conflicts.front())) return {sheeted_.conflicts.front().operation, {}, {}};
    for (std::uint32_t op : operations_on_proofs()) propose(op);
    struct Success {
      std::size_t left;
      int preference;
      std::size_t order;
    };
    std::vector<Success> found;
    for (std::size_t i = 0; i < candidates_.size() && i < kMost; ++i)
      if (auto left = conflicts_left(candidates_[i].alteration)) found.push_back({*left, candidates_[i].preference, i});
    Culprit culprit{sheeted_.conflicts.front().operation, {}, {}};
    if (found.empty()) return culprit;
    std::sort(found.begin(), found.end(), [](const Success& a, const Success& b) {
      return std::tie(a.left, a.preference, a.order) < std::tie(b.left, b.preference, b.order);
    });
    culprit.operation = candidates_[found.front().order].operation;
    for (const auto& [altered, edit] : candidates_[found.front().order].alteration)
      if (conflicting_.contains(altered)) culprit.cleared.insert(altered);
    for (const Success& success : found) {
      if (success.left != found.front().left || culprit.repairs.size() == 3) break;
      const Repair& repair = candidates_[success.order].repair;
      bool told = std::any_of(culprit.repairs.begin(), culprit.repairs.end(), [&](const Repair& r) {
        return r.kind == repair.kind && r.subject == repair.subject && r.other == repair.other;
      });
      if (!told) culprit.repairs.push_back(repair);
    }
    return culprit;
  }

 private:
  static constexpr std::size_t kMost = 160;

  const Operation& op(std::uint32_t index) const { return function_.operations.at(index); }
  const Value& value(ValueId id) const { return function_.values.at(std::size_t(id)); }
  Shape shape(const Operand& operand) const {
    return operand.value == ValueId::none ? Shape::number : value(operand.value).shape;
  }

  std::vector<std::uint32_t> operations_on_proofs() const {
    const Conflict& conflict = sheeted_.conflicts.front();
    std::vector<std::uint32_t> list{conflict.operation};
    for (NodeId side : {conflict.left, conflict.right})
      for (const Edge& edge : sheeted_.sheet.path(side, sheeted_.sheet.constant_of(side)))
        if (list.size() < 24 && std::find(list.begin(), list.end(), edge.operation) == list.end())
          list.push_back(edge.operation);
    return list;
  }

  // How many conflicts an altered body has, if they are fewer and none is new.
  std::optional<std::size_t> conflicts_left(const Alteration& alteration) const {
    Sheeted altered = sheet_of(function_, setting_, removed_, &alteration);
    if (altered.conflicts.size() >= sheeted_.conflicts.size()) return std::nullopt;
    for (const Conflict& conflict : altered.conflicts)
      if (!conflicting_.contains(conflict.operation)) return std::nullopt;
    return altered.conflicts.size();
  }

  void add(std::uint32_t index, int preference, Alteration alteration, Repair repair) {
    repair.span = op(index).span;
    candidates_.push_back({std::move(alteration), std::move(repair), index, preference});
  }

  void propose(std::uint32_t index) {
    const Operation& operation = op(index);
    if (operation.kind == OperationKind::product) {
      swap(index);
      swap_across(index);
      two_sided(index);
      other_sides(index);
      for (std::uint32_t i = index + 1; i < function_.operations.size(); ++i)
        if (op(i).kind == OperationKind::product && takes(op(i), operation.result)) other_sides(i);
    }
    if (operation.kind == OperationKind::transpose || operation.kind == OperationKind::inverse) return drop(index);
    if (operation.kind == OperationKind::call) return propose_call(index);
    if (operation.kind == OperationKind::skew || operation.kind == OperationKind::unskew) return;
    for (std::size_t i = 0; i < operation.operands.size(); ++i) {
      transpose(index, int(i));
      drop_operand(index, int(i));
      other_variable(index, int(i));
    }
  }

  static void exchange_text(Repair& repair, const Operand& a, const Operand& b) {
    repair.subject = a.text;
    repair.other = b.text;
    if (a.span.valid() && b.span.valid()) repair.edits = {{a.span, b.text}, {b.span, a.text}};
  }

  void swap(std::uint32_t index) {
    Operation edited = op(index);
    if (!maps(shape(edited.operands[0])) || !maps(shape(edited.operands[1]))) return;
    Repair repair;
    repair.kind = RepairKind::swap;
    exchange_text(repair, edited.operands[0], edited.operands[1]);
    std::swap(edited.operands[0], edited.operands[1]);
    add(index, 0, {{index, {edited, {}, {-1, -1}, ""}}}, repair);
  }

  // (A * B) * C -> (A * C) * B, and A * (B * c) -> B * (A * c).
  void swap_across(std::uint32_t index) {
    for (int side : {0, 1}) {
      Operation outer = op(index);
      auto maker = maker_.find(outer.operands[std::size_t(side)].value);
      if (maker == maker_.end() || op(maker->second).kind != OperationKind::product) continue;
      Operation inner = op(maker->second);
      Operand& a = outer.operands[std::size_t(1 - side)];
      Operand& b = inner.operands[std::size_t(1 - side)];
      if (!maps(shape(a)) || !maps(shape(b))) continue;
      Repair repair;
      repair.kind = RepairKind::swap;
      exchange_text(repair, side == 0 ? b : a, side == 0 ? a : b);
      std::swap(a, b);
      add(index, 0, {{index, {outer, {}, {-1, -1}, ""}}, {maker->second, {inner, {}, {-1, -1}, ""}}}, repair);
    }
  }

  void two_sided(std::uint32_t index) {
    const Operand &map = op(index).operands[0], &tensor = op(index).operands[1];
    if (!maps(shape(map)) || shape(tensor) != Shape::matrix) return;
    NodeId rows = sheeted_.values.at(std::size_t(tensor.value));
    if (!sheeted_.sheet.same(rows, NodeId(std::uint32_t(rows) + 1))) return;
    Operation edited = op(index);
    edited.kind = OperationKind::transform;
    Repair repair;
    repair.kind = RepairKind::two_sided;
    repair.subject = map.text;
    std::string right = inverted(value(map.value).inverse_form, map.text);
    if (!right.empty() && tensor.span.valid()) repair.edits = {{tensor.span, tensor.text + " * " + right}};
    repair.other = right;
    add(index, -1, {{index, {edited, {}, {-1, -1}, ""}}}, repair);
  }

  static bool takes(const Operation& operation, ValueId id) {
    return std::any_of(operation.operands.begin(), operation.operands.end(), [&](const Operand& o) { return o.value == id; });
  }

  // (C^T * J) * C -> (C * J) * C^T: the inverse stands on the wrong side.
  void other_sides(std::uint32_t index) {
    const Operation& outer = op(index);
    for (int side : {0, 1}) {
      auto maker = maker_.find(outer.operands[std::size_t(side)].value);
      if (maker == maker_.end() || op(maker->second).kind != OperationKind::product) continue;
      const Operand& far = outer.operands[std::size_t(1 - side)];
      const Operand& near = op(maker->second).operands[std::size_t(side)];
      if (!plain_of(far, near)) continue;
      Repair repair;
      repair.kind = RepairKind::swap;
      exchange_text(repair, side == 0 ? near : far, side == 0 ? far : near);
      add(index, -1, {{index, {outer, {1 - side}, {-1, -1}, ""}}, {maker->second, {op(maker->second), {side}, {-1, -1}, ""}}},
          repair);
    }
  }

  // Of two operands, the one of which the other is the inverse; or none.
  const Operand* plain_of(const Operand& a, const Operand& b) const {
    for (const auto& [x, y] : {std::pair{&a, &b}, std::pair{&b, &a}}) {
      auto maker = maker_.find(y->value);
      if (maker == maker_.end()) continue;
      const Operation& inverse = op(maker->second);
      const bool inverts = inverse.kind == OperationKind::transpose || inverse.kind == OperationKind::inverse;
      if (inverts && inverse.operands[0].value == x->value) return x;
    }
    return nullptr;
  }

  bool rotates(ValueId id) const { return value(id).rotation || value(id).shape == Shape::quaternion; }

  // A transpose inverts rotations only: of a `linear` map no edit is offered.
  bool is_linear(ValueId id) const {
    return std::any_of(function_.operations.begin(), function_.operations.end(), [&](const Operation& operation) {
      return operation.kind == OperationKind::hold && operation.operands[0].value == id &&
             function_.holds.at(operation.item).quantity.kind == Kind::linear;
    });
  }

  Repair transposed(const Operand& operand) const {
    Repair repair;
    repair.kind = RepairKind::transpose;
    repair.subject = operand.text;
    repair.rotation = rotates(operand.value);
    if (!is_linear(operand.value)) repair.other = inverted(value(operand.value).inverse_form, operand.text);
    if (!repair.other.empty() && operand.span.valid()) repair.edits = {{operand.span, repair.other}};
    return repair;
  }

  void transpose(std::uint32_t index, int i) {
    const Operation& operation = op(index);
    const Operand& operand = operation.operands[std::size_t(i)];
    if (!maps(shape(operand)) || shape(operand) == Shape::unknown) return;
    auto maker = maker_.find(operand.value);
    if (maker != maker_.end() && (op(maker->second).kind == OperationKind::transpose || op(maker->second).kind == OperationKind::inverse)) return;
    if (operation.kind == OperationKind::hold && function_.holds.at(operation.item).contract) return;
    bool joined = operation.kind == OperationKind::hold || operation.kind == OperationKind::join;
    add(index, joined ? 4 : 2, {{index, {operation, {i}, {-1, -1}, ""}}}, by_twin(operation, i, transposed(operand)));
  }

  // A function that does the same with this operand inverted is the repair.
  static Repair by_twin(const Operation& operation, int operand, Repair repair) {
    for (const Twin& twin : operation.twins) {
      if (twin.operand != operand) continue;
      repair.call = twin.name;
      repair.edits.clear();
      if (operation.callee.valid()) repair.edits = {{operation.callee, twin.name}};
      return repair;
    }
    return repair;
  }

  Repair dropped(const Operation& inverse) const {
    const Operand& operand = inverse.operands[0];
    Repair repair;
    repair.kind = RepairKind::drop_inverse;
    repair.subject = operand.text;
    repair.other = inverse.text == operand.text ? "" : inverse.text;
    repair.rotation = rotates(operand.value);
    if (operand.span.valid() && inverse.span.valid() && !repair.other.empty()) repair.edits = {{inverse.span, operand.text}};
    return by_twin(inverse, 0, std::move(repair));
  }

  void drop(std::uint32_t index) {
    Operation edited = op(index);
    edited.kind = OperationKind::copy;
    add(index, 1, {{index, {edited, {}, {-1, -1}, ""}}}, dropped(op(index)));
  }

  void drop_operand(std::uint32_t index, int i) {
    Operation edited = op(index);
    auto maker = maker_.find(edited.operands[std::size_t(i)].value);
    if (maker == maker_.end()) return;
    const Operation& inverse = op(maker->second);
    if (inverse.kind != OperationKind::transpose && inverse.kind != OperationKind::inverse) return;
    edited.operands[std::size_t(i)] = inverse.operands[0];
    add(index, 1, {{index, {edited, {}, {-1, -1}, ""}}}, dropped(inverse));
  }

  // What each variable holds before an operation, newest version first.
  std::vector<std::pair<std::string, ValueId>> variables(std::uint32_t index) const {
    std::vector<std::pair<std::string, ValueId>> list;
    auto add = [&](const std::string& name, ValueId id) {
      const bool known = std::any_of(list.begin(), list.end(), [&](const auto& entry) { return entry.first == name; });
      if (!name.empty() && is_primary(name) && id != ValueId::none && !known) list.emplace_back(name, id);
    };
    for (std::uint32_t i = index; i-- > 0;) {
      if (op(i).kind == OperationKind::copy) add(op(i).target, op(i).result);
      if (op(i).kind != OperationKind::call) continue;
      for (const Binding& binding : function_.calls.at(op(i).item).bindings)
        if (auto* id = std::get_if<ValueId>(&binding.after)) add(binding.formal == "return" ? "" : binding.text, *id);
    }
    for (const Declaration& declaration : function_.declarations)
      if (!(declaration.span > op(index).span)) add(declaration.name, declaration.value);
    return list;
  }

  // Another variable of the same shape where this one stands.
  void other_variable(std::uint32_t index, int i) {
    const Operand& operand = op(index).operands[std::size_t(i)];
    if (operand.value == ValueId::none || !is_primary(operand.text)) return;
    int tried = 0;
    for (const auto& [name, id] : variables(index)) {
      if (id == operand.value || name == operand.text || value(id).shape != shape(operand)) continue;
      if (++tried > 8) return;
      Operation edited = op(index);
      edited.operands[std::size_t(i)].value = id;
      Repair repair;
      repair.kind = RepairKind::other_variable;
      repair.subject = operand.text;
      repair.other = name;
      if (operand.span.valid()) repair.edits = {{operand.span, name}};
      add(index, 5, {{index, {edited, {}, {-1, -1}, ""}}}, repair);
    }
  }

  static Operand operand(const Binding& binding) {
    auto* id = std::get_if<ValueId>(&binding.before);
    return {id ? *id : ValueId::none, binding.span, binding.text};
  }

  void propose_call(std::uint32_t index) {
    const Call& call = function_.calls.at(op(index).item);
    for (std::size_t i = 0; i < call.bindings.size(); ++i) {
      Operand argument = operand(call.bindings[i]);
      if (argument.value == ValueId::none || call.bindings[i].formal == "return") continue;
      if (maps(shape(argument)) && shape(argument) != Shape::unknown) {
        add(index, 2, {{index, {op(index), {int(i)}, {-1, -1}, ""}}}, transposed(argument));
        drop_argument(index, argument, int(i));
      }
      for (std::size_t j = i + 1; j < call.bindings.size(); ++j) exchange(index, call, int(i), int(j));
    }
    twin(index, call);
  }

  void drop_argument(std::uint32_t index, const Operand& argument, int i) {
    auto maker = maker_.find(argument.value);
    if (maker == maker_.end()) return;
    const Operation& inverse = op(maker->second);
    if (inverse.kind != OperationKind::transpose && inverse.kind != OperationKind::inverse) return;
    add(index, 1, {{index, {op(index), {i}, {-1, -1}, ""}}}, dropped(inverse));
  }

  void exchange(std::uint32_t index, const Call& call, int i, int j) {
    Operand a = operand(call.bindings[std::size_t(i)]), b = operand(call.bindings[std::size_t(j)]);
    if (b.value == ValueId::none || call.bindings[std::size_t(j)].formal == "return" || shape(a) != shape(b)) return;
    Repair repair;
    bool factors = maps(shape(a)) && shape(a) != Shape::unknown;
    repair.kind = factors ? RepairKind::swap : RepairKind::swap_arguments;
    exchange_text(repair, a, b);
    add(index, factors ? 0 : 4, {{index, {op(index), {}, {i, j}, ""}}}, repair);
  }

  void twin(std::uint32_t index, const Call& call) {
    auto twins = setting_.twins.find(call.callee);
    if (twins == setting_.twins.end()) return;
    for (const auto& [key, name] : twins->second) {
      Repair repair;
      repair.kind = RepairKind::twin_function;
      repair.subject = call.name;
      repair.other = name;
      add(index, 3, {{index, {op(index), {}, {-1, -1}, key}}}, repair);
    }
  }

  const Function& function_;
  const Setting& setting_;
  const std::set<std::uint32_t>& removed_;
  const Sheeted& sheeted_;
  std::map<ValueId, std::uint32_t> maker_;
  std::set<std::uint32_t> conflicting_;
  std::vector<Candidate> candidates_;
};

}  // namespace

Culprit find_culprit(const Function& function, const Setting& setting, const std::set<std::uint32_t>& removed,
                     const Sheeted& sheeted) {
  return Search(function, setting, removed, sheeted).run();
}

}  // namespace dextral::solve
