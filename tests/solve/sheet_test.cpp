// The sheet of frame unknowns: unions, refusals, and the chains that explain.
#include "solve/sheet.h"

#include <gtest/gtest.h>

namespace dextral::solve {
namespace {

Frame named(const char* name) { return {name, "", false, false, ""}; }

Edge edge(NodeId a, NodeId b, std::uint32_t operation, Certainty certainty = Certainty::certain) {
  return {a, b, operation, certainty, nullptr};
}

std::vector<std::uint32_t> operations(const std::vector<Edge>& chain) {
  std::vector<std::uint32_t> list;
  for (const Edge& e : chain) list.push_back(e.operation);
  return list;
}

TEST(Sheet, UnitedNodesAreOneFrame) {
  Sheet sheet;
  const NodeId a = sheet.add(), b = sheet.add(), c = sheet.add();
  EXPECT_FALSE(sheet.same(a, b));
  EXPECT_TRUE(sheet.unite(edge(a, b, 1)));
  EXPECT_TRUE(sheet.unite(edge(b, c, 2)));
  EXPECT_TRUE(sheet.same(a, c));
  EXPECT_EQ(sheet.frame(a), nullptr);
  EXPECT_EQ(sheet.constant_of(a), NodeId::none);
}

TEST(Sheet, AFrameIsOneNodeAndNamesItsClass) {
  Sheet sheet;
  const NodeId ned = sheet.constant(named("ned")), a = sheet.add(), b = sheet.add();
  EXPECT_EQ(sheet.constant(named("ned")), ned);
  EXPECT_NE(sheet.constant(named("body")), ned);
  sheet.unite(edge(a, b, 1));
  sheet.unite(edge(b, ned, 2));
  ASSERT_NE(sheet.frame(a), nullptr);
  EXPECT_EQ(text(*sheet.frame(a)), "ned");
  EXPECT_EQ(sheet.constant_of(a), ned);
}

TEST(Sheet, TagsAndOwnersAreOtherFrames) {
  Sheet sheet;
  Frame later = named("body"), own = named("body");
  later.tag = "k";
  own.own = true;
  own.owner = "this";
  EXPECT_NE(sheet.constant(named("body")), sheet.constant(later));
  EXPECT_NE(sheet.constant(named("body")), sheet.constant(own));
}

TEST(Sheet, AUnionOfTwoConstantsIsRefusedAndChangesNothing) {
  Sheet sheet;
  const NodeId ned = sheet.constant(named("ned")), body = sheet.constant(named("body"));
  const NodeId a = sheet.add(), b = sheet.add();
  sheet.unite(edge(a, ned, 1));
  sheet.unite(edge(b, body, 2));
  EXPECT_FALSE(sheet.unite(edge(a, b, 3)));
  EXPECT_FALSE(sheet.same(a, b));
  EXPECT_EQ(text(*sheet.frame(a)), "ned");
  EXPECT_EQ(text(*sheet.frame(b)), "body");
  EXPECT_TRUE(sheet.path(a, b).empty());
  EXPECT_EQ(operations(sheet.path(a, ned)), std::vector<std::uint32_t>{1});
}

TEST(Sheet, TheChainIsTheShortest) {
  Sheet sheet;
  const NodeId a = sheet.add(), b = sheet.add(), c = sheet.add(), d = sheet.add();
  sheet.unite(edge(a, b, 1));
  sheet.unite(edge(b, c, 2));
  sheet.unite(edge(c, d, 3));
  sheet.unite(edge(a, d, 4));
  EXPECT_EQ(operations(sheet.path(a, d)), std::vector<std::uint32_t>{4});
  EXPECT_EQ(operations(sheet.path(b, a)), std::vector<std::uint32_t>{1});
  EXPECT_EQ(sheet.path(d, b).size(), 2u);
  EXPECT_TRUE(sheet.path(a, a).empty());
}

TEST(Sheet, AMoreCertainChainGoesBeforeAShorterOne) {
  Sheet sheet;
  const NodeId a = sheet.add(), b = sheet.add(), c = sheet.add(), d = sheet.add();
  sheet.unite(edge(a, d, 1, Certainty::likely));
  sheet.unite(edge(a, b, 2));
  sheet.unite(edge(b, c, 3));
  sheet.unite(edge(c, d, 4));
  EXPECT_EQ(operations(sheet.path(a, d)), (std::vector<std::uint32_t>{2, 3, 4}));
}

TEST(Sheet, OfEqualChainsTheFirstFoundStays) {
  Sheet sheet;
  const NodeId a = sheet.add(), b = sheet.add();
  sheet.unite(edge(a, b, 7));
  sheet.unite(edge(b, a, 8));
  EXPECT_EQ(operations(sheet.path(a, b)), std::vector<std::uint32_t>{7});
  EXPECT_EQ(operations(sheet.path(b, a)), std::vector<std::uint32_t>{7});
}

TEST(Sheet, NoProofRunsThroughAConstant) {
  Sheet sheet;
  const NodeId ned = sheet.constant(named("ned")), a = sheet.add(), b = sheet.add();
  sheet.unite(edge(a, ned, 1));
  sheet.unite(edge(b, ned, 2));
  EXPECT_TRUE(sheet.same(a, b));
  EXPECT_TRUE(sheet.path(a, b).empty());
}

TEST(Sheet, AnEdgeToItselfSaysNothing) {
  Sheet sheet;
  const NodeId a = sheet.add();
  EXPECT_TRUE(sheet.unite(edge(a, a, 1)));
  EXPECT_TRUE(sheet.path(a, a).empty());
}

// A long chain: each node knows its frame, with a proof as long as the way.
TEST(Sheet, ManyUnionsStayExplained) {
  Sheet sheet;
  const NodeId ned = sheet.constant(named("ned"));
  std::vector<NodeId> nodes{ned};
  for (std::uint32_t i = 1; i <= 500; ++i) {
    nodes.push_back(sheet.add());
    ASSERT_TRUE(sheet.unite(edge(nodes[i], nodes[i - 1], i)));
  }
  EXPECT_EQ(sheet.size(), 501u);
  EXPECT_EQ(text(*sheet.frame(nodes[500])), "ned");
  EXPECT_EQ(sheet.path(nodes[500], ned).size(), 500u);
  EXPECT_EQ(sheet.path(nodes[17], ned).front().operation, 17u);
}

}  // namespace
}  // namespace dextral::solve
