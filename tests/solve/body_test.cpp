// Frames within one function: what follows, what stays unknown, and which
// contradictions are told, how often, how surely and in which order.
#include <gtest/gtest.h>

#include "tests/solve/support.h"

namespace dextral::solve {
namespace {

TEST(Body, AProductTakesTheOuterFrames) {
  Sketch f("f");
  const ValueId a = f.variable(Shape::rotation, "C_mb", passive("body", "mast"));
  const ValueId b = f.variable(Shape::rotation, "C_bn", passive("ned", "body"));
  const ValueId c = f.product(a, b);
  const Solution s = solved({f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 0, c), "mast<-ned");
}

TEST(Body, KnowledgeRunsAgainstTheOrderOfTheText) {
  Sketch f("f");
  const ValueId C = f.variable(Shape::rotation, "C", passive("ned", "body"));
  const ValueId v = f.variable(Shape::vector, "v");
  const ValueId w = f.product(f.transpose(C), v);
  const Solution s = solved({f});
  EXPECT_EQ(frames_of(s, 0, v), "body<-?");
  EXPECT_EQ(frames_of(s, 0, w), "ned<-?");
}

TEST(Body, WhatNothingSaysStaysUnknown) {
  Sketch f("f");
  const ValueId v = f.variable(Shape::vector, "v"), w = f.variable(Shape::vector, "w");
  const ValueId u = f.sum(v, w);
  const Solution s = solved({f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 0, u), "?<-?");
}

TEST(Body, EachOperationIsHeldToItsLaw) {
  using enum OperationKind;
  struct Row {
    OperationKind kind;
    Said left, right;
    bool agrees;
  };
  const std::vector<Row> rows = {
      {sum, in("ned"), in("ned"), true},
      {sum, in("ned"), in("body"), false},
      {difference, in("ned"), in("body"), false},
      {cross, in("body"), in("body"), true},
      {cross, in("ned"), in("body"), false},
      {dot, in("ned"), in("body"), false},
      {pose, passive("body", "ned"), in("ned"), true},
      {pose, passive("body", "ned"), in("body"), false},
      {transform, passive("body", "ned"), tensor("body"), true},
      {transform, passive("body", "ned"), tensor("ned"), false},
  };
  for (const Row& row : rows) {
    Sketch f("f");
    const bool map = frames(row.left.quantity).columns.known(), two = frames(row.right.quantity).columns.known();
    const ValueId a = f.variable(map ? Shape::matrix : Shape::vector, "a", row.left);
    const ValueId b = f.variable(two ? Shape::matrix : Shape::vector, "b", row.right);
    f.apply(row.kind, {a, b}, f.of(two ? b : a).shape, "r");
    EXPECT_EQ(solved({f}).clashes.empty(), row.agrees)
        << text(row.kind) << ": " << row.left.words << ", " << row.right.words;
  }
}

TEST(Body, PartsOfAMapHaveTheFramesOfItsSides) {
  Sketch f("f");
  const ValueId T = f.variable(Shape::pose, "T", passive("body", "ned"));
  const ValueId t = f.apply(OperationKind::translation, {T}, Shape::vector, "T.translation()");
  const ValueId c = f.apply(OperationKind::column, {T}, Shape::vector, "T.col(0)");
  const ValueId r = f.apply(OperationKind::row, {T}, Shape::vector, "T.row(0)");
  const ValueId w = f.variable(Shape::vector, "w", in("body"));
  const ValueId W = f.apply(OperationKind::skew, {w}, Shape::matrix, "skew(w)");
  const ValueId u = f.apply(OperationKind::unskew, {W}, Shape::vector, "unskew(W)");
  const Solution s = solved({f});
  EXPECT_EQ(frames_of(s, 0, t), "ned<-?");
  EXPECT_EQ(frames_of(s, 0, c), "ned<-?");
  EXPECT_EQ(frames_of(s, 0, r), "body<-?");
  EXPECT_EQ(frames_of(s, 0, W), "body<-body");
  EXPECT_EQ(frames_of(s, 0, u), "body<-?");
}

TEST(Body, AliasesAndParallelFramesAreOneFrame) {
  FrameCatalogue frames = FrameCatalogue::builtin();
  frames.alias("local", "ned");
  Sketch f("f");
  f.sum(f.variable(Shape::vector, "a", in("ned")), f.variable(Shape::vector, "b", in("local")));
  EXPECT_TRUE(solved({f}, frames).clashes.empty());
}

TEST(Join, BranchesThatAgreeAreKnown) {
  Sketch f("f");
  const ValueId a = f.variable(Shape::vector, "a", in("ned")), b = f.variable(Shape::vector, "b", in("ned"));
  const ValueId j = f.join({a, b}, "v");
  EXPECT_EQ(frames_of(solved({f}), 0, j), "ned<-?");
}

TEST(Join, BranchesThatDisagreeAreUnknownAndNoFault) {
  Sketch f("f");
  const ValueId a = f.variable(Shape::vector, "a", in("ned")), b = f.variable(Shape::vector, "b", in("body"));
  const ValueId j = f.join({a, b}, "v");
  f.sum(j, f.variable(Shape::vector, "c", in("mast")));
  const Solution s = solved({f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 0, a), "ned<-?");
  EXPECT_EQ(frames_of(s, 0, b), "body<-?");
}

TEST(Join, AnUnknownBranchMakesItUnknown) {
  Sketch f("f");
  const ValueId a = f.variable(Shape::vector, "a", in("ned")), b = f.variable(Shape::vector, "b");
  const ValueId j = f.join({a, b}, "v");
  const Solution s = solved({f});
  EXPECT_EQ(frames_of(s, 0, j), "?<-?");
  EXPECT_EQ(frames_of(s, 0, b), "?<-?");
}

// for (...) v = R * v; with R a turn within ned: the loop's join meets itself.
TEST(Join, ALoopThatKeepsTheFrameIsKnown) {
  Sketch f("f");
  Said turn = map(Kind::active, "active", named("ned"), named("ned"));
  const ValueId R = f.variable(Shape::rotation, "R", turn), start = f.variable(Shape::vector, "v", in("ned"));
  const ValueId head = f.value(Shape::vector, "v");
  const ValueId next = f.product(R, head);
  f.join({start, next}, "v");
  f.last().result = head;
  const Solution s = solved({f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 0, head), "ned<-?");
}

Clash only(const Solution& s) {
  EXPECT_EQ(s.clashes.size(), 1u);
  return s.clashes.empty() ? Clash{} : s.clashes[0];
}

TEST(Certainty, OfPhrasesIsCertainAndOfANameLikely) {
  for (auto [source, expected] :
       {std::pair{Source::declared, Certainty::certain}, std::pair{Source::modelled, Certainty::certain},
        std::pair{Source::named, Certainty::likely}, std::pair{Source::remarked, Certainty::likely},
        std::pair{Source::mined, Certainty::suspect}}) {
    Sketch f("f");
    f.sum(f.variable(Shape::vector, "a", in("ned")), f.variable(Shape::vector, "b", in("body"), source));
    EXPECT_EQ(only(solved({f})).certainty, expected) << text(source);
  }
}

TEST(Certainty, IsThatOfTheWeakestFactOnTheChain) {
  Sketch f("f");
  const ValueId C = f.variable(Shape::rotation, "C", passive("ned", "body"), Source::mined);
  const ValueId v = f.variable(Shape::vector, "v", in("ned"), Source::named);
  f.sum(f.product(C, v), f.variable(Shape::vector, "w", in("mast")));
  EXPECT_EQ(only(solved({f})).certainty, Certainty::suspect);
}

// A phrase and a name that contradict each other: the clash is as weak as the
// name. Known wrong: the name takes the phrase away, v should still be in body.
TEST(Certainty, APhraseAgainstANameIsLikely) {
  Sketch f("f");
  const ValueId v = f.variable(Shape::vector, "v_ned");
  f.hold(v, in("ned"), Source::named);
  f.hold(v, in("body"), Source::declared);
  const Solution s = solved({f});
  EXPECT_EQ(only(s).certainty, Certainty::likely);
}

// Nothing says that K is a rotation: it may be a gain that belongs to no frame.
TEST(Certainty, AMatrixUsedTwiceThatMayBeAGainWeakensTheProof) {
  for (auto [name, expected] : {std::pair{"gain", Certainty::suspect}, std::pair{"rot", Certainty::likely},
                                std::pair{"C_bn", Certainty::likely}}) {
    Sketch f("f");
    const ValueId K = f.variable(Shape::matrix, name);
    const ValueId a = f.product(K, f.variable(Shape::vector, "v", in("ned")));
    const ValueId b = f.product(K, f.variable(Shape::vector, "w", in("body")));
    (void)a, (void)b;
    EXPECT_EQ(only(solved({f})).certainty, expected) << name;
  }
}

TEST(Certainty, ARotationUsedTwiceIsCertain) {
  Sketch f("f");
  const ValueId R = f.variable(Shape::rotation, "x");
  f.product(R, f.variable(Shape::vector, "v", in("ned")));
  f.product(R, f.variable(Shape::vector, "w", in("body")));
  EXPECT_EQ(only(solved({f})).certainty, Certainty::certain);
}

TEST(Findings, OneFaultIsToldOnce) {
  Sketch f("f");
  const ValueId C = f.variable(Shape::rotation, "C", passive("ned", "body"));
  const ValueId v = f.variable(Shape::vector, "v", in("body"));
  const ValueId w = f.assign("w", f.product(C, v));
  f.hold(w, in("ned"));
  for (int i = 0; i < 5; ++i) f.sum(w, f.variable(Shape::vector, "u" + std::to_string(i), in("ned")));
  const Solution s = solved({f});
  ASSERT_EQ(s.clashes.size(), 1u);
  ASSERT_FALSE(s.clashes[0].repairs.empty());
  EXPECT_EQ(s.clashes[0].repairs[0].kind, RepairKind::transpose);
}

TEST(Findings, TwoFaultsAreTwo) {
  Sketch f("f");
  const ValueId n = f.variable(Shape::vector, "n", in("ned")), b = f.variable(Shape::vector, "b", in("body"));
  f.sum(n, b);
  f.apply(OperationKind::cross, {n, b}, Shape::vector, "n.cross(b)");
  EXPECT_EQ(solved({f}).clashes.size(), 2u);
}

TEST(Findings, NameBothSidesWithTheirProofs) {
  Sketch f("f");
  const ValueId C = f.variable(Shape::rotation, "C", passive("ned", "body"));
  const ValueId moved = f.product(C, f.variable(Shape::vector, "v", in("ned")));
  f.sum(moved, f.variable(Shape::vector, "w", in("mast")));
  const Clash clash = only(solved({f}));
  EXPECT_EQ(clash.kind, ClashKind::frames);
  EXPECT_EQ(clash.function, "f");
  EXPECT_EQ(clash.operation, OperationKind::sum);
  EXPECT_EQ(clash.expression, "C * v + w");
  EXPECT_EQ(clash.subject, "C * v");
  EXPECT_EQ(clash.object, "w");
  EXPECT_EQ(text(clash.left), "body");
  EXPECT_EQ(text(clash.right), "mast");
  ASSERT_EQ(clash.left_proof.size(), 2u);
  EXPECT_EQ(clash.left_proof[0].kind, ReasonKind::operation);
  EXPECT_EQ(clash.left_proof[0].object, "product");
  EXPECT_EQ(clash.left_proof[1].kind, ReasonKind::declared);
  EXPECT_EQ(clash.left_proof[1].object, "passive ned to body");
  ASSERT_EQ(clash.right_proof.size(), 1u);
  EXPECT_EQ(clash.right_proof[0].subject, "w");
}

TEST(Findings, ProofsTellAssignmentsAndNames) {
  Sketch f("f");
  const ValueId v = f.variable(Shape::vector, "v_ned", in("ned"), Source::named);
  const ValueId x = f.assign("x", v);
  f.sum(x, f.variable(Shape::vector, "w", in("mast")));
  const Clash clash = only(solved({f}));
  ASSERT_EQ(clash.left_proof.size(), 2u);
  EXPECT_EQ(clash.left_proof[0].kind, ReasonKind::assigned);
  EXPECT_EQ(clash.left_proof[0].subject, "v_ned");
  EXPECT_EQ(clash.left_proof[0].object, "x");
  EXPECT_EQ(clash.left_proof[1].kind, ReasonKind::named);
}

TEST(Findings, ContradictingPhrasesOfOneParameterAreAContractClash) {
  Sketch f("f", {"v"});
  const ValueId v = f.parameter(0, Shape::vector, in("ned"));
  f.hold(v, in("body"), Source::declared, true);
  f.sum(v, f.variable(Shape::vector, "w", in("mast")));
  const Clash clash = only(solved({f}));
  EXPECT_EQ(clash.kind, ClashKind::contract);
  EXPECT_EQ(text(clash.left), "ned");
  EXPECT_EQ(text(clash.right), "body");
}

// Places decide, not the order in which functions come.
TEST(Findings, AreSortedByPlace) {
  auto faulty = [](const std::string& name, std::uint32_t line) {
    Sketch f(name, {}, line);
    f.sum(f.variable(Shape::vector, "a", in("ned")), f.variable(Shape::vector, "b", in("body")));
    return f;
  };
  const std::vector<Sketch> sketches = {faulty("late", 300), faulty("early", 100), faulty("middle", 200)};
  auto order = [](const Solution& s) {
    std::string names;
    for (const Clash& c : s.clashes) names += c.function + " ";
    return names;
  };
  EXPECT_EQ(order(solved(sketches)), "early middle late ");
  EXPECT_EQ(order(solved({sketches[1], sketches[2], sketches[0]})), "early middle late ");
}

// A template's instances fault at one place of the source.
TEST(Findings, OnePlaceIsToldOnce) {
  auto instance = [](const std::string& key) {
    Sketch f(key);
    f.sum(f.variable(Shape::vector, "a", in("ned")), f.variable(Shape::vector, "b", in("body")));
    return f;
  };
  EXPECT_EQ(solved({instance("f<int>"), instance("f<long>")}).clashes.size(), 1u);
}

TEST(Findings, HaveAnUpperBoundInOneBody) {
  Sketch f("f");
  const ValueId n = f.variable(Shape::vector, "n", in("ned")), b = f.variable(Shape::vector, "b", in("body"));
  for (int i = 0; i < 60; ++i) f.sum(n, b);
  EXPECT_EQ(solved({f}).clashes.size(), 50u);
}

TEST(Share, CountsDeclarationsThatCarryARotation) {
  Sketch f("f");
  f.variable(Shape::rotation, "R", passive("ned", "body"));
  f.variable(Shape::rotation, "unknown");
  f.variable(Shape::vector, "v", in("ned"));
  Facts facts = facts_of({f});
  facts.fields = {{"S::R", "R", {}, true, true}, {"S::Q", "Q", {}, true, false}, {"S::v", "v", {}, false, true}};
  const Solution s = solve(facts, FrameCatalogue::builtin());
  EXPECT_EQ(s.rotations, 4u);
  EXPECT_EQ(s.rotations_known, 2u);
}

}  // namespace
}  // namespace dextral::solve
