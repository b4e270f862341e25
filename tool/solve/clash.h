// A conflict made into a clash: told at its culprit, in the names of the code,
// with both proofs and the certainty of the weakest fact on them.
#pragma once

#include "solve/body.h"
#include "solve/repair.h"
#include "solve/solution.h"

namespace dextral::solve {

// `sheeted` has the culprit inserted last; its first conflict there is told.
Clash clash_of(const Function&, Sheeted& sheeted, const Conflict&, const Culprit&);

// Values that are rotations by their type, their making or a phrase.
std::vector<bool> rotations(const Function&);

}  // namespace dextral::solve
