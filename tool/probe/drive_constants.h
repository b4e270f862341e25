// Globals that are const but made by code: `const Vector3d down(0, 0, 1);`.
//
// The machine lets no run write to a global. So each initialiser is run once,
// in a machine of its own, on an object that stands for its global; where that
// works and what it makes is all numbers, the global becomes a constant of the
// module. The others stay as they are: without a known value.
#pragma once

#include "probe/emit.h"

namespace dextral::probe {

void fix_constants(Kit&);

}  // namespace dextral::probe
