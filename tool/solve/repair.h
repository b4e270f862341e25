// The repair search: which single edit, of those that a person would try,
// removes a contradiction and makes no new one.
//
// Tried, for every operation on the two proofs: swap two factors, drop an
// inverse, transpose a factor, exchange two arguments, add the missing right
// factor of a tensor, take another variable. Each candidate body is solved
// again. What the search finds names the rule.
#pragma once

#include <set>
#include <vector>

#include "solve/body.h"
#include "solve/solution.h"

namespace dextral::solve {

struct Culprit {
  std::uint32_t operation = 0;
  std::set<std::uint32_t> cleared;  // other operations whose conflicts the first repair removes
  std::vector<Repair> repairs;  // best first
};

// `conflicts` are those of the unaltered body with `removed` taken out; the
// culprit of the first of them is looked for.
Culprit find_culprit(const Function&, const Setting&, const std::set<std::uint32_t>& removed, const Sheeted&);

}  // namespace dextral::solve
