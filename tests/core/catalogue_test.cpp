// The catalogue of frames: directions, axes, hands, maps between all pairs, and
// what it says of names that it does not take.
#include <gtest/gtest.h>

#include <cmath>
#include <eigen3/Eigen/Dense>
#include <optional>

#include "core/frame.h"

namespace dextral {
namespace {

using Eigen::Matrix3d;
using Eigen::Vector3d;

Frame named(const std::string& name, const std::string& tag = "") { return {name, tag, false, false, ""}; }

FrameFacts facts(const std::string& name, std::array<Direction, 3> axes) {
  FrameFacts f;
  f.name = name;
  f.axes = axes;
  return f;
}

// A direction as a vector in one of three families: north east down, forward
// right below (SAE and ISO 1151 order, from memory), meridian quarter pole.
struct InFamily {
  int family;
  Vector3d vector;
};

InFamily vector_of(Direction d) {
  using enum Direction;
  const Vector3d x = Vector3d::UnitX(), y = Vector3d::UnitY(), z = Vector3d::UnitZ();
  switch (d) {
    case north:
      return {0, x};
    case south:
      return {0, -x};
    case east:
      return {0, y};
    case west:
      return {0, -y};
    case down:
      return {0, z};
    case up:
      return {0, -z};
    case forward:
      return {1, x};
    case aft:
      return {1, -x};
    case right:
      return {1, y};
    case left:
      return {1, -y};
    case below:
      return {1, z};
    case above:
      return {1, -z};
    case meridian:
      return {2, x};
    case antimeridian:
      return {2, -x};
    case quarter:
      return {2, y};
    case antiquarter:
      return {2, -y};
    case pole:
      return {2, z};
    case antipole:
      return {2, -z};
  }
  return {3, x};
}

// Columns are the axes.
Matrix3d axes_of(const FrameFacts& f) {
  Matrix3d m;
  for (int i = 0; i < 3; ++i) m.col(i) = vector_of((*f.axes)[std::size_t(i)]).vector;
  return m;
}

Matrix3d matrix_of(const SignedPermutation& map) {
  Matrix3d m = Matrix3d::Zero();
  for (std::size_t i = 0; i < 3; ++i) m(int(i), map.source[i]) = map.sign[i];
  return m;
}

std::vector<const FrameFacts*> with_axes(const FrameCatalogue& frames) {
  std::vector<const FrameFacts*> list;
  for (const std::string& name : frames.names())
    if (frames.find(name)->axes) list.push_back(frames.find(name));
  return list;
}

TEST(Directions, WordsAndDirectionsAreOneToOne) {
  for (int i = 0; i < 18; ++i) {
    const Direction d = Direction(i);
    EXPECT_EQ(direction(text(d)), d);
    EXPECT_EQ(opposite(opposite(d)), d);
    EXPECT_EQ(vector_of(opposite(d)).vector, -vector_of(d).vector) << text(d);
  }
  EXPECT_EQ(direction("sideways"), std::nullopt);
}

TEST(Directions, SynonymsAreReadAndNeverPrinted) {
  EXPECT_EQ(direction("backward"), Direction::aft);
  EXPECT_EQ(direction("starboard"), Direction::right);
  EXPECT_EQ(direction("port"), Direction::left);
  EXPECT_EQ(text(Direction::aft), "aft");
  EXPECT_EQ(text(Direction::left), "left");
}

TEST(Catalogue, BuiltInNamesAreThoseOfThePage) {
  EXPECT_EQ(FrameCatalogue::builtin().names(),
            (std::vector<std::string>{"body", "camera", "ecef", "eci", "enu", "flu", "frd", "imu", "lidar", "map",
                                      "ned", "neu", "nwu", "sensor", "sez", "world"}));
  const FrameCatalogue frames = FrameCatalogue::builtin();
  for (const std::string& name : frames.names()) EXPECT_TRUE(frames.find(name)->builtin) << name;
}

// components in `to` = A_to^T A_from components in `from`.
TEST(Catalogue, EveryMapIsThatOfTheAxes) {
  const FrameCatalogue frames = FrameCatalogue::builtin();
  int pairs = 0;
  for (const FrameFacts* to : with_axes(frames))
    for (const FrameFacts* from : with_axes(frames)) {
      const std::optional<SignedPermutation> map = frames.map(named(to->name), named(from->name));
      const bool one_family = vector_of((*to->axes)[0]).family == vector_of((*from->axes)[0]).family;
      ASSERT_EQ(map.has_value(), one_family) << to->name << " from " << from->name;
      if (!map) continue;
      ++pairs;
      EXPECT_EQ(matrix_of(*map), Matrix3d(axes_of(*to).transpose() * axes_of(*from)))
          << to->name << " from " << from->name;
      EXPECT_EQ(map->determinant(), int(std::lround(matrix_of(*map).determinant())));
    }
  EXPECT_EQ(pairs, 5 * 5 + 3 * 3 + 1);
}

TEST(Catalogue, TheHandIsTheSignOfTheDeterminant) {
  const FrameCatalogue frames = FrameCatalogue::builtin();
  for (const FrameFacts* f : with_axes(frames))
    EXPECT_EQ(frames.hand(named(f->name)), axes_of(*f).determinant() > 0 ? Hand::right : Hand::left) << f->name;
  EXPECT_EQ(frames.hand(named("world")), std::nullopt);
  EXPECT_EQ(frames.hand(named("nowhere")), std::nullopt);
}

// All 48 ways to name three axes of a vehicle.
TEST(Catalogue, TheHandOfEveryNamingOfAxes) {
  int right = 0, left = 0;
  for (int code = 0; code < 216; ++code) {
    const std::array<Direction, 3> axes = {Direction(6 + code % 6), Direction(6 + code / 6 % 6),
                                           Direction(6 + code / 36)};
    FrameCatalogue frames = FrameCatalogue::builtin();
    const FrameFacts f = facts("probe", axes);
    const double determinant = axes_of(f).determinant();
    const bool refused = frames.declare(f).has_value();
    EXPECT_EQ(refused, determinant == 0);
    if (refused) continue;
    EXPECT_EQ(frames.hand(named("probe")), determinant > 0 ? Hand::right : Hand::left);
    ++(determinant > 0 ? right : left);
  }
  EXPECT_EQ(right, 24);
  EXPECT_EQ(left, 24);
}

TEST(Catalogue, DownBesideForwardIsTheVehiclesOwn) {
  using enum Direction;
  FrameCatalogue frames = FrameCatalogue::builtin();
  EXPECT_FALSE(frames.declare(facts("hull", {forward, right, down})));
  EXPECT_EQ(frames.map(named("hull"), named("frd")), SignedPermutation{});
  EXPECT_FALSE(frames.declare(facts("deck", {right, forward, up})));
  EXPECT_EQ(frames.map(named("deck"), named("frd")), (SignedPermutation{{1, 0, 2}, {1, 1, -1}}));
}

TEST(Catalogue, SaysWhatIsWrongWithADeclaration) {
  using enum Direction;
  FrameCatalogue frames = FrameCatalogue::builtin();
  EXPECT_EQ(frames.declare(FrameFacts{}), "a frame needs a name");
  EXPECT_EQ(frames.declare(facts("flat", {north, south, down})), "two axes lie along the same line");
  FrameFacts sonar = facts("sonar", {north, east, up});
  sonar.hand = Hand::right;
  EXPECT_EQ(frames.declare(sonar), "its axes are left-handed, its hand says otherwise");
  sonar.hand = Hand::left;
  EXPECT_EQ(frames.declare(sonar), std::nullopt);
  FrameFacts self;
  self.name = self.parallel_to = "gimbal";
  EXPECT_EQ(frames.declare(self), "a frame cannot be parallel to itself");
  EXPECT_EQ(frames.find("flat"), nullptr);
}

TEST(Catalogue, AliasesMayNotGoRound) {
  FrameCatalogue frames = FrameCatalogue::builtin();
  EXPECT_EQ(frames.alias("ned", "ned"), "a frame cannot be an alias of itself");
  EXPECT_EQ(frames.alias("local", "ned"), std::nullopt);
  EXPECT_EQ(frames.alias("level", "local"), std::nullopt);
  EXPECT_EQ(frames.alias("ned", "level"), "the aliases go round in a circle");
  EXPECT_EQ(frames.canonical(named("level", "k")), named("ned", "k"));
  EXPECT_EQ(frames.find("level"), frames.find("ned"));
  EXPECT_FALSE(frames.declare(facts("level", {Direction::east, Direction::north, Direction::up})));
  EXPECT_EQ(frames.canonical(named("level")), named("level"));
}

TEST(Catalogue, ParallelFramesHaveTheAxesOfTheOther) {
  FrameCatalogue frames = FrameCatalogue::builtin();
  FrameFacts deck;
  deck.name = "deck";
  deck.parallel_to = "frd";
  ASSERT_FALSE(frames.declare(deck));
  EXPECT_EQ(frames.orientation(named("deck", "k")), named("frd", "k"));
  EXPECT_EQ(frames.hand(named("deck")), Hand::right);
  EXPECT_EQ(frames.map(named("flu"), named("deck")), frames.map(named("flu"), named("frd")));
}

TEST(Catalogue, NoMapBetweenMomentsOrObjects) {
  const FrameCatalogue frames = FrameCatalogue::builtin();
  EXPECT_FALSE(frames.map(named("frd", "k"), named("flu")));
  EXPECT_TRUE(frames.map(named("frd", "k"), named("flu", "k")));
  Frame own = named("frd");
  own.own = true;
  EXPECT_FALSE(frames.map(own, named("flu")));
  EXPECT_FALSE(frames.map(named("nowhere"), named("flu")));
}

TEST(Catalogue, ASlipIsALetterMoreOrLessOrAnotherOneInALongName) {
  FrameCatalogue frames = FrameCatalogue::builtin();
  EXPECT_EQ(frames.nearest("nedd"), "ned");
  EXPECT_EQ(frames.nearest("bdy"), "body");
  EXPECT_EQ(frames.nearest("camrea"), "camera");
  EXPECT_EQ(frames.nearest("sensot"), "sensor");
  EXPECT_EQ(frames.nearest("nad"), std::nullopt);
  EXPECT_EQ(frames.nearest("body2"), std::nullopt);
  EXPECT_EQ(frames.nearest("en"), std::nullopt);
  EXPECT_EQ(frames.nearest("gimbal"), std::nullopt);
}

TEST(NearestWord, IsWithinTwoEditsOrNone) {
  const std::vector<std::string> words = {"passive", "active", "position"};
  EXPECT_EQ(nearest_word("pasive", words), "passive");
  EXPECT_EQ(nearest_word("acitve", words), "active");
  EXPECT_EQ(nearest_word("activ", words), "active");
  EXPECT_EQ(nearest_word("xyz", words), std::nullopt);
  EXPECT_EQ(nearest_word("ab", {"cd"}), std::nullopt);
  EXPECT_EQ(nearest_word("in", {}), std::nullopt);
}

TEST(FrameText, SaysTagOwnAndVariable) {
  EXPECT_EQ(text(named("body", "k")), "body@k");
  EXPECT_EQ(text(Frame{"body", "", true, false, "this"}), "own body");
  EXPECT_EQ(text(Frame{"A", "", false, true, ""}), "?A");
  EXPECT_EQ(text(Frame{}), "");
  EXPECT_FALSE(Frame{}.known());
}

}  // namespace
}  // namespace dextral
