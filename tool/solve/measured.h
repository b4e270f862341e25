// What was measured, as a contract that solving understands.
//
// A meaning of a function is a generic contract: `a` is M[?A, ?B], `b` is
// M[?B, ?C], the result M[?A, ?C]. It becomes a function without a body whose
// parameters and results hold those phrases. A measurement speaks only where it
// has one meaning, whatever the selectors are set to.
#pragma once

#include <optional>
#include <vector>

#include "core/facts.h"

namespace dextral::solve {

// Nothing where the measurements of one function leave its meaning open.
std::optional<Function> as_contract(const Function& measured, const std::vector<const Measurement*>&);

}  // namespace dextral::solve
