#include "core/algebra.h"

namespace dextral {

namespace {

constexpr SlotOf rows(int operand) { return {operand, Slot::rows}; }
constexpr SlotOf columns(int operand) { return {operand, Slot::columns}; }

// All operands and, if asked, the result have the same frames.
std::vector<Agreement> all_alike(std::size_t operands, bool with_result) {
  std::vector<Agreement> table;
  for (int i = 1; i < int(operands); ++i) {
    table.push_back({rows(0), rows(i)});
    table.push_back({columns(0), columns(i)});
  }
  if (with_result) {
    table.push_back({rows(kResult), rows(0)});
    table.push_back({columns(kResult), columns(0)});
  }
  return table;
}

}  // namespace

// Operand agreements stand first: where they fail, the result stays unknown.
std::vector<Agreement> law(OperationKind kind, std::size_t operands) {
  switch (kind) {
    case OperationKind::product:
      return {{columns(0), rows(1)}, {rows(kResult), rows(0)}, {columns(kResult), columns(1)}};
    case OperationKind::transpose:
    case OperationKind::inverse:
      return {{rows(kResult), columns(0)}, {columns(kResult), rows(0)}};
    case OperationKind::copy:
    case OperationKind::sum:
    case OperationKind::difference:
    case OperationKind::cross:
      return all_alike(operands, true);
    case OperationKind::dot:
      return all_alike(operands, false);
    case OperationKind::skew:
      return {{rows(kResult), rows(0)}, {columns(kResult), rows(0)}};
    case OperationKind::unskew:
      return {{rows(0), columns(0)}, {rows(kResult), rows(0)}};
    case OperationKind::translation:
    case OperationKind::column:
      return {{rows(kResult), rows(0)}};
    case OperationKind::row:
      return {{rows(kResult), columns(0)}};
    case OperationKind::pose:
      return {{rows(0), rows(1)}, {rows(kResult), rows(0)}, {columns(kResult), columns(0)}};
    case OperationKind::transform:
      return {{columns(0), rows(1)}, {columns(0), columns(1)}, {rows(kResult), rows(0)}, {columns(kResult), rows(0)}};
    case OperationKind::shuffle:
    case OperationKind::join:
    case OperationKind::hold:
    case OperationKind::call:
      return {};
  }
  return {};
}

}  // namespace dextral
