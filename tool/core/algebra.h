// The table of the algebra: which frames of an operation must agree.
//
// Each law is a set of equalities between slots of the operands and of the
// result. `docs/algebra.md` derives each row and names its published source.
#pragma once

#include <vector>

#include "core/facts.h"

namespace dextral {

enum class Slot { rows, columns };
inline Slot other(Slot s) { return s == Slot::rows ? Slot::columns : Slot::rows; }

inline constexpr int kResult = -1;

struct SlotOf {
  int operand = kResult;  // index of an operand, or kResult
  Slot slot = Slot::rows;
};

struct Agreement {
  SlotOf left, right;
};

// What must agree in an operation of this kind with `operands` operands.
// Nothing for kinds that need more than a table: hold, call, join, shuffle.
std::vector<Agreement> law(OperationKind, std::size_t operands);

// "product", "transpose" ...
const char* text(OperationKind);

}  // namespace dextral
