// How far off a result is at an ordinary attitude, computed from definitions.
//
// The attitude is yaw 30, pitch 20, roll 10 deg, 3-2-1, as in the worked
// examples of docs/algebra.md. The angle between two rotations A and B is that
// of A^T B.
#pragma once

namespace dextral {

// Rotation used where its inverse belongs: the angle of R^2, in degrees.
double degrees_of_missing_inverse();
// R1 R2 where R2 R1 belongs, with R1 at yaw 30, pitch 20, roll 10 deg and R2 at
// yaw -40, pitch 15, roll 25 deg.
double degrees_of_wrong_order();
// A vector left in the wrong one of two frames: the angle of R.
double degrees_of_wrong_frame();

}  // namespace dextral
