// Constant maps between frames with named axes, and the witness of findings.
#include <gtest/gtest.h>

#include "core/frame.h"
#include "core/witness.h"

namespace dextral {
namespace {

SignedPermutation map(const char* to, const char* from) {
  auto found = FrameCatalogue::builtin().map({to, "", false, false, ""}, {from, "", false, false, ""});
  EXPECT_TRUE(found.has_value()) << to << " from " << from;
  return found.value_or(SignedPermutation{});
}

// Axes by ROS REP-103 (ned, enu, flu, camera) and common aerospace practice (frd);
// the maps follow from them.
TEST(Frames, MapsFollowFromTheAxes) {
  EXPECT_EQ(map("enu", "ned"), (SignedPermutation{{1, 0, 2}, {1, 1, -1}}));
  EXPECT_EQ(map("ned", "enu"), (SignedPermutation{{1, 0, 2}, {1, 1, -1}}));
  EXPECT_EQ(map("frd", "flu"), (SignedPermutation{{0, 1, 2}, {1, -1, -1}}));
  EXPECT_EQ(map("camera", "flu"), (SignedPermutation{{1, 2, 0}, {-1, -1, 1}}));
  EXPECT_EQ(map("flu", "camera"), (SignedPermutation{{2, 0, 1}, {1, -1, -1}}));
  EXPECT_EQ(map("camera", "frd"), (SignedPermutation{{1, 2, 0}, {1, 1, 1}}));
}

// A map between frames of one hand has determinant +1; from ned to the
// left-handed north-east-up it is -1 (from the definition of the determinant).
TEST(Frames, DeterminantsTellTheHand) {
  EXPECT_EQ(map("enu", "ned").determinant(), 1);
  EXPECT_EQ(map("camera", "flu").determinant(), 1);
  EXPECT_EQ(map("neu", "ned").determinant(), -1);
  EXPECT_EQ(map("neu", "enu").determinant(), -1);
  FrameCatalogue frames = FrameCatalogue::builtin();
  EXPECT_EQ(frames.hand({"neu", "", false, false, ""}), Hand::left);
  EXPECT_EQ(frames.hand({"ned", "", false, false, ""}), Hand::right);
  EXPECT_EQ(frames.hand({"body", "", false, false, ""}), std::nullopt);
}

TEST(Frames, FramesOfDifferentThingsHaveNoMap) {
  FrameCatalogue frames = FrameCatalogue::builtin();
  EXPECT_FALSE(frames.map({"ned", "", false, false, ""}, {"frd", "", false, false, ""}));
  EXPECT_FALSE(frames.map({"ned", "", false, false, ""}, {"body", "", false, false, ""}));
}

TEST(Frames, AliasesAndParallelFramesShareAnOrientation) {
  FrameCatalogue frames = FrameCatalogue::builtin();
  FrameFacts imu;
  imu.name = "imu";
  imu.parallel_to = "body";
  EXPECT_FALSE(frames.declare(imu));
  EXPECT_FALSE(frames.alias("chart", "enu"));
  EXPECT_TRUE(frames.alias("enu", "chart"));
  EXPECT_EQ(frames.orientation({"imu", "k", false, false, ""}), (Frame{"body", "k", false, false, ""}));
  EXPECT_EQ(frames.canonical({"chart", "", false, false, ""}).name, "enu");
  EXPECT_EQ(frames.nearest("nedd"), "ned");
}

// The angle of the 3-2-1 matrix at yaw 30, pitch 20, roll 10 deg is twice the
// arccosine of the scalar part of its quaternion, 0.951548524644 (computed with
// SciPy): 35.82 deg; its square turns by twice that.
TEST(Witness, IsTheAngleOfTheRotation) {
  EXPECT_NEAR(degrees_of_wrong_frame(), 35.816, 2e-3);
  EXPECT_NEAR(degrees_of_missing_inverse(), 2 * degrees_of_wrong_frame(), 1e-9);
  EXPECT_GT(degrees_of_wrong_order(), 1.0);
}

}  // namespace
}  // namespace dextral
