#include "solve/turns.h"

#include <algorithm>
#include <set>
#include <utility>

namespace dextral::solve {

struct Turns::Terms {
  std::set<ValueId> values;                        // of no known making
  std::set<std::pair<ValueId, ValueId>> crosses;   // k x v
};

Turns::Turns(const Function& function) : function_(function) {
  for (const Operation& op : function.operations)
    if (op.result != ValueId::none) makers_.emplace(op.result, &op);
}

const Operation* Turns::maker(ValueId id) const {
  auto found = makers_.find(id);
  return found == makers_.end() ? nullptr : found->second;
}

ValueId Turns::plain(ValueId id) const {
  for (int steps = 0; steps < 64; ++steps) {
    const Operation* op = maker(id);
    if (!op || op->kind != OperationKind::copy || op->operands.size() != 1) break;
    id = op->operands[0].value;
  }
  return id;
}

void Turns::collect(ValueId id, Terms& terms, int depth) const {
  id = plain(id);
  terms.values.insert(id);
  const Operation* op = maker(id);
  if (!op || depth > 8) return;
  if (op->kind == OperationKind::sum || op->kind == OperationKind::difference)
    for (const Operand& operand : op->operands) collect(operand.value, terms, depth + 1);
  if (op->kind == OperationKind::cross) terms.crosses.emplace(plain(op->operands[0].value), plain(op->operands[1].value));
}

bool Turns::is_turn(const Operation& op) const {
  if (!keeps_kind(op.kind)) return false;
  for (const Operand& operand : op.operands)
    if (operand.value != ValueId::none && function_.values[std::size_t(operand.value)].of_rotation) return true;
  if (op.kind != OperationKind::sum && op.kind != OperationKind::difference) return false;
  Terms terms;
  for (const Operand& operand : op.operands) collect(operand.value, terms, 0);
  return std::any_of(terms.crosses.begin(), terms.crosses.end(), [&](const auto& cross) {
    const auto& [a, b] = cross;
    for (const auto& [k, v] : {std::pair(a, b), std::pair(b, a)}) {
      if (!terms.values.contains(v)) continue;
      if (terms.values.contains(k)) return true;
      for (const auto& [x, y] : terms.crosses) {  // k x (k x v)
        const Operation* inner = maker(x == k ? y : x);
        if ((x != k && y != k) || !inner || inner->kind != OperationKind::cross) continue;
        const ValueId p = plain(inner->operands[0].value), q = plain(inner->operands[1].value);
        if ((p == k && q == v) || (p == v && q == k)) return true;
      }
    }
    return false;
  });
}

}  // namespace dextral::solve
