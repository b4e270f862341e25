// Component groups: n numbers that together are one vector or matrix, read as
// one operation of the algebra.
//
// The numbers are polynomials in the components of other values. They are
// split by the values and the opaque factors that occur in each term; every
// class must be a known pattern (a copy, a signed shuffle, R_ij v_j, A_ik B_kj
// with transposes, a cross product, a skew matrix, an outer product), and the
// group is their sum. One class that is no pattern makes the whole opaque.
#pragma once

#include <optional>
#include <vector>

#include "gather/polynomial.h"
#include "gather/recorder.h"

namespace dextral::gather {

struct Group {
  std::vector<Polynomial> elements;  // 2, 3, 4, 9 or 16 of them; matrices row by row
  Value like;                        // shape, text and span of the result
  Span span;
  std::string text;
};

// Writes the operations that make the group and gives its value. An opaque
// group is a value without an operation.
ValueId assemble(Recorder&, const Group&);

// True when every element is a plain number.
bool is_literal(const std::vector<Polynomial>&);

// If the number is a full dot product of two vectors, the two.
std::optional<std::pair<ValueId, ValueId>> as_dot(const Recorder&, const Polynomial&);

}  // namespace dextral::gather
