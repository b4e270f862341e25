// The angles that findings tell, against quaternions: another way of reckoning
// than the matrices of the source.
//
// The quaternion of the sequence 3-2-1 in half angles is the closed form of
// Diebel, "Representing Attitude" (2006), from memory; the first test checks it
// against Eigen. The angle of a rotation is twice the arccosine of its scalar part.
#include "core/witness.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <eigen3/Eigen/Geometry>

namespace dextral {
namespace {

constexpr double kDegree = 3.14159265358979323846 / 180;

Eigen::Quaterniond yaw_pitch_roll(double yaw, double pitch, double roll) {
  const double cy = std::cos(yaw / 2 * kDegree), sy = std::sin(yaw / 2 * kDegree);
  const double cp = std::cos(pitch / 2 * kDegree), sp = std::sin(pitch / 2 * kDegree);
  const double cr = std::cos(roll / 2 * kDegree), sr = std::sin(roll / 2 * kDegree);
  return {cr * cp * cy + sr * sp * sy, sr * cp * cy - cr * sp * sy, cr * sp * cy + sr * cp * sy,
          cr * cp * sy - sr * sp * cy};
}

double angle(const Eigen::Quaterniond& q) { return 2 * std::acos(std::min(1.0, std::abs(q.w()))) / kDegree; }

TEST(Witness, TheClosedFormIsThatOfEigensElementaryTurns) {
  using Eigen::AngleAxisd, Eigen::Vector3d;
  const Eigen::Quaterniond q = Eigen::Quaterniond(AngleAxisd(30 * kDegree, Vector3d::UnitZ())) *
                               AngleAxisd(20 * kDegree, Vector3d::UnitY()) *
                               AngleAxisd(10 * kDegree, Vector3d::UnitX());
  EXPECT_NEAR(q.angularDistance(yaw_pitch_roll(30, 20, 10)), 0, 1e-7);
}

TEST(Witness, AFrameLeftOutIsOffByTheAngleBetweenTheFrames) {
  EXPECT_NEAR(degrees_of_wrong_frame(), angle(yaw_pitch_roll(30, 20, 10)), 1e-9);
}

// Used the wrong way round, C C instead of C^T C: off by the angle of C C.
TEST(Witness, AMissingInverseIsOffByTheSquare) {
  const Eigen::Quaterniond q = yaw_pitch_roll(30, 20, 10);
  EXPECT_NEAR(degrees_of_missing_inverse(), angle(q * q), 1e-9);
}

TEST(Witness, TheWrongOrderIsOffByTheAngleBetweenTheTwoProducts) {
  const Eigen::Quaterniond a = yaw_pitch_roll(30, 20, 10), b = yaw_pitch_roll(-40, 15, 25);
  EXPECT_NEAR(degrees_of_wrong_order(), angle((a * b).conjugate() * (b * a)), 1e-9);
  EXPECT_NEAR(degrees_of_wrong_order(), (a * b).angularDistance(b * a) / kDegree, 1e-6);
}

}  // namespace
}  // namespace dextral
