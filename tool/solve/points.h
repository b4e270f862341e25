// Chains of positions: which point a vector starts from and which it reaches.
//
// `from P to Q` is the formal difference Q - P. Sums and differences of
// positions add and subtract these; a map turns the components and leaves the
// points alone; a scaled vector has no points. Where a value meets a phrase
// that names points, its difference must be the phrase's. So (P to Q) + (Q to R)
// is P to R in either order, and a term too many shows as points left over.
//
// A parameter without a phrase is a term of its own: what a helper makes of its
// arguments is put together anew in each call.
//
// Limits: forward only (an unknown term is not inferred from the others); poses
// applied to points are not followed; points named ?P are variables, and say
// nothing here.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "core/facts.h"
#include "solve/solution.h"

namespace dextral::solve {

// A formal sum of points, with where it was said.
struct Reach {
  std::map<std::string, int> ends;  // none with coefficient zero
  Certainty certainty = Certainty::certain;
  std::vector<Reason> proof;
};

// What a function gives, whatever it is given: by formal ("return", "p2").
using Reached = std::map<std::string, Reach>;
using ReachedBy = std::map<std::string, Reached>;  // by Function::key

// The clashes of one body; what callers can count on is added to `known`.
std::vector<Clash> point_clashes(const Function&, ReachedBy& known);

}  // namespace dextral::solve
