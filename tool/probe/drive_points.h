// Points at which a candidate is first run, to see what it touches.
#pragma once

#include "probe/drive_evaluate.h"

namespace dextral::probe {

inline constexpr std::size_t kTouchingPoints = 6;

// Everything is set: integers as given, numbers at random, or where their count
// allows as a rotation, a unit quaternion, a unit vector, a small angle.
Setting touching_point(const Candidate&, const Setting& integers, std::size_t index);

}  // namespace dextral::probe
