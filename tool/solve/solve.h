// Solve: unification of frames over the whole program, with proofs.
//
// In: the joined facts. Out: the frames of each value and the clashes, each
// with both proofs and the repairs that remove it. Method and limits: see
// solve.cpp and docs/architecture.md.
#pragma once

#include "core/facts.h"
#include "core/frame.h"
#include "solve/solution.h"

namespace dextral::solve {

Solution solve(const Facts&, const FrameCatalogue&);

}  // namespace dextral::solve
