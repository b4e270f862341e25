// Chains of positions: which points a vector joins, and what is told where they
// do not meet. `from P to Q` is Q - P.
#include <gtest/gtest.h>

#include "tests/solve/support.h"

namespace dextral::solve {
namespace {

ValueId position(Sketch& f, const std::string& name, const std::string& from, const std::string& to,
                 Source source = Source::declared) {
  return f.variable(Shape::vector, name, from_to(from, to, "ned"), source);
}

Clash only(const Solution& s) {
  EXPECT_EQ(s.clashes.size(), 1u);
  return s.clashes.empty() ? Clash{} : s.clashes[0];
}

// NAME = a, said to go FROM to TO.
void keep(Sketch& f, ValueId a, const std::string& from, const std::string& to) {
  f.hold(f.assign("kept", a), from_to(from, to, "ned"));
}

TEST(Points, ASumGoesOnWhereTheOtherEnds) {
  Sketch f("f");
  const ValueId a = position(f, "a", "earth", "hull"), b = position(f, "b", "hull", "mast");
  keep(f, f.sum(a, b), "earth", "mast");
  keep(f, f.sum(b, a), "earth", "mast");
  EXPECT_TRUE(solved({f}).clashes.empty());
}

TEST(Points, ADifferenceOfTwoFromOnePointJoinsTheirEnds) {
  Sketch f("f");
  const ValueId a = position(f, "a", "earth", "hull"), b = position(f, "b", "earth", "mast");
  keep(f, f.difference(b, a), "hull", "mast");
  EXPECT_TRUE(solved({f}).clashes.empty());
}

TEST(Points, ADifferenceTheWrongWayRoundIsExchanged) {
  Sketch f("f");
  const ValueId a = position(f, "a", "earth", "hull"), b = position(f, "b", "earth", "mast");
  keep(f, f.difference(a, b), "hull", "mast");
  const Clash clash = only(solved({f}));
  EXPECT_EQ(clash.kind, ClashKind::points);
  EXPECT_EQ(clash.left_points, "from mast to hull");
  EXPECT_EQ(clash.right_points, "from hull to mast");
  ASSERT_FALSE(clash.repairs.empty());
  EXPECT_EQ(clash.repairs[0].kind, RepairKind::swap);
  EXPECT_EQ(clash.repairs[0].edits.size(), 2u);
}

TEST(Points, ASumForADifferenceAndBack) {
  Sketch f("f");
  const ValueId a = position(f, "a", "earth", "hull"), b = position(f, "b", "earth", "mast"),
                c = position(f, "c", "hull", "mast");
  keep(f, f.sum(b, a), "hull", "mast");
  Clash clash = only(solved({f}));
  EXPECT_EQ(clash.left_points, "from earth twice to hull and mast");
  ASSERT_FALSE(clash.repairs.empty());
  EXPECT_EQ(clash.repairs[0].kind, RepairKind::subtract);
  EXPECT_EQ(clash.repairs[0].edits.at(0).text, "b - a");
  Sketch g("g");
  const ValueId d = position(g, "a", "earth", "hull"), e = position(g, "c", "hull", "mast");
  (void)c;
  keep(g, g.difference(d, e), "earth", "mast");
  clash = only(solved({g}));
  ASSERT_FALSE(clash.repairs.empty());
  EXPECT_EQ(clash.repairs[0].kind, RepairKind::add);
  EXPECT_EQ(clash.repairs[0].edits.at(0).text, "a + c");
}

TEST(Points, AMapTurnsAndLeavesThePointsAlone) {
  Sketch f("f");
  const ValueId C = f.variable(Shape::rotation, "C", passive("ned", "body"));
  const ValueId a = position(f, "a", "hull", "mast");
  f.hold(f.product(C, a), from_to("hull", "mast", "body"));
  EXPECT_TRUE(solved({f}).clashes.empty());
  Sketch g("g");
  const ValueId D = g.variable(Shape::rotation, "C", passive("ned", "body"));
  g.hold(g.product(D, position(g, "a", "hull", "mast")), from_to("mast", "hull", "body"));
  EXPECT_EQ(only(solved({g})).kind, ClashKind::points);
}

TEST(Points, ANegationTurnsTheChainRound) {
  for (auto [sign, clashes] : {std::pair{-1, 0u}, std::pair{1, 1u}}) {
    Sketch f("f");
    const ValueId a = position(f, "a", "hull", "mast");
    const ValueId n = f.apply(OperationKind::copy, {a}, Shape::vector, "-a");
    f.last().numbers = {sign};
    f.hold(n, from_to("mast", "hull", "ned"));
    EXPECT_EQ(solved({f}).clashes.size(), clashes);
  }
}

TEST(Points, AScaledOrUnknownTermSaysNothing) {
  Sketch f("f");
  const ValueId a = position(f, "a", "hull", "mast");
  f.hold(f.apply(OperationKind::copy, {a}, Shape::vector, "2 * a"), from_to("mast", "hull", "ned"));
  f.hold(f.sum(a, f.variable(Shape::vector, "x")), from_to("earth", "hull", "ned"));
  EXPECT_TRUE(solved({f}).clashes.empty());
}

TEST(Points, BranchesThatAgreeGoOn) {
  for (auto [to, clashes] : {std::pair{"mast", 1u}, std::pair{"lidar", 0u}}) {
    Sketch f("f");
    const ValueId j = f.join({position(f, "a", "hull", "mast"), position(f, "b", "hull", to)}, "j");
    f.hold(j, from_to("mast", "hull", "ned"));
    EXPECT_EQ(solved({f}).clashes.size(), clashes) << to;
  }
}

TEST(Points, CertaintyIsThatOfTheWeakestPhrase) {
  Sketch f("f");
  const ValueId a = position(f, "a", "earth", "hull", Source::named), b = position(f, "b", "hull", "mast");
  keep(f, f.sum(a, b), "mast", "earth");
  EXPECT_EQ(only(solved({f})).certainty, Certainty::likely);
}

TEST(Points, AFunctionTellsItsCallersWhatItGives) {
  Sketch g("arm", {}, 10);
  g.returns(position(g, "r", "hull", "mast"), from_to("hull", "mast", "ned"));
  Sketch f("f");
  keep(f, f.sum(position(f, "a", "earth", "hull"), f.call("arm", {}, Shape::vector)), "earth", "mast");
  EXPECT_TRUE(solved({g, f}).clashes.empty());
  Sketch wrong("wrong");
  keep(wrong, wrong.call("arm", {}, Shape::vector), "mast", "hull");
  const Clash clash = only(solved({g, wrong}));
  ASSERT_FALSE(clash.left_proof.empty());
  EXPECT_EQ(clash.left_proof[0].kind, ReasonKind::called);
}

TEST(Points, AParameterAsksThemOfItsCallers) {
  Sketch g("use", {"arm"}, 10);
  g.parameter(0, Shape::vector, from_to("hull", "mast", "ned"));
  Sketch f("f");
  f.call("use", {position(f, "back", "mast", "hull")}, Shape::vector);
  const Clash clash = only(solved({g, f}));
  EXPECT_EQ(clash.kind, ClashKind::points);
  EXPECT_EQ(clash.subject, "back");
  EXPECT_EQ(clash.left_points, "from mast to hull");
}

TEST(Points, VariablesAndEmptyChainsSayNothing) {
  Sketch f("f");
  const ValueId a = position(f, "a", "?P", "mast"), b = position(f, "b", "hull", "hull");
  f.hold(a, from_to("hull", "mast", "ned"));
  f.hold(b, from_to("hull", "mast", "ned"));
  EXPECT_TRUE(solved({f}).clashes.empty());
}

TEST(Points, AChainThatComesBackIsTold) {
  Sketch f("f");
  const ValueId a = position(f, "a", "hull", "mast");
  keep(f, f.difference(a, a), "hull", "mast");
  EXPECT_EQ(only(solved({f})).left_points, "from a point to itself");
}

}  // namespace
}  // namespace dextral::solve
