// What functions tell their callers: schemes, chains, recursion, contracts,
// in-place changes, objects and their own frames, measured meanings.
#include <gtest/gtest.h>

#include "tests/solve/support.h"

namespace dextral::solve {
namespace {

Clash only(const Solution& s) {
  EXPECT_EQ(s.clashes.size(), 1u);
  return s.clashes.empty() ? Clash{} : s.clashes[0];
}

// NAME(v) gives what `callee` gives for v.
Sketch passing_on(const std::string& name, const std::string& callee, std::uint32_t line) {
  Sketch f(name, {"v"}, line);
  const ValueId v = f.parameter(0, Shape::vector);
  f.returns(callee.empty() ? v : f.call(callee, {v}, Shape::vector));
  return f;
}

TEST(Scheme, EachCallHasItsOwnFrames) {
  Sketch f("f");
  const ValueId n = f.call("same", {f.variable(Shape::vector, "n", in("ned"))}, Shape::vector);
  const ValueId b = f.call("same", {f.variable(Shape::vector, "b", in("body"))}, Shape::vector);
  const Solution s = solved({passing_on("same", "", 10), f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 1, n), "ned<-?");
  EXPECT_EQ(frames_of(s, 1, b), "body<-?");
}

TEST(Scheme, AGenericContractBindsTheFramesOfOneCall) {
  Sketch g("turn", {"R", "v"}, 10);
  g.parameter(0, Shape::rotation, passive(variable("A"), variable("B")));
  g.parameter(1, Shape::vector, in(variable("A")));
  g.function().body = false;
  g.set_exit("return", g.variable(Shape::vector, "return"));
  g.hold(ValueId(g.function().values.size() - 1), in(variable("B")), Source::declared, true);
  Sketch f("f");
  const ValueId C = f.variable(Shape::rotation, "C", passive("ned", "body"));
  const ValueId w = f.call("turn", {C, f.variable(Shape::vector, "v", in("ned"))}, Shape::vector);
  Solution s = solved({g, f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 1, w), "body<-?");
  Sketch h("h");
  const ValueId D = h.variable(Shape::rotation, "D", passive("ned", "body"));
  h.call("turn", {D, h.variable(Shape::vector, "v", in("mast"))}, Shape::vector);
  EXPECT_EQ(solved({g, h}).clashes.size(), 1u);
}

// A body held to ?A and ?B may not mix them.
TEST(Scheme, AGenericBodyIsHeldToItsVariables) {
  Sketch g("turn", {"R", "v"}, 10);
  const ValueId R = g.parameter(0, Shape::rotation, passive(variable("A"), variable("B")));
  const ValueId v = g.parameter(1, Shape::vector, in(variable("B")));
  g.returns(g.product(R, v), in(variable("A")));
  EXPECT_EQ(only(solved({g})).repairs.at(0).kind, RepairKind::transpose);
}

// A phrase at each end, nothing between: four functions.
TEST(Chain, AFaultIsFoundOverFourFunctionsAndEachHopIsTold) {
  Sketch source("gravity", {}, 10);
  source.returns(source.variable(Shape::vector, "g", in("ned")));
  Sketch second("second", {}, 20), third("third", {}, 30);
  second.returns(second.call("gravity", {}, Shape::vector));
  third.returns(third.call("second", {}, Shape::vector));
  Sketch user("user", {}, 40);
  user.sum(user.call("third", {}, Shape::vector), user.variable(Shape::vector, "f", in("body")));
  const Clash clash = only(solved({user, third, second, source}));
  EXPECT_EQ(clash.function, "user");
  std::vector<std::string> hops;
  for (const Reason& r : clash.left_proof)
    if (r.kind == ReasonKind::called) hops.push_back(r.object);
  EXPECT_EQ(hops, (std::vector<std::string>{"third", "second", "gravity"}));
  EXPECT_EQ(clash.left_proof.back().object, "in ned");
}

TEST(Chain, WhatACalleeNeedsIsAskedOfTheCaller) {
  Sketch inner("inner", {"v"}, 10);
  inner.sum(inner.parameter(0, Shape::vector), inner.variable(Shape::vector, "w", in("body")));
  Sketch f("f");
  f.call("outer", {f.variable(Shape::vector, "n", in("ned"))}, Shape::vector);
  const Clash clash = only(solved({f, inner, passing_on("outer", "inner", 30)}));
  EXPECT_EQ(clash.function, "f");
  EXPECT_EQ(clash.subject, "n");
}

TEST(Chain, CertaintyIsThatOfTheWeakestHop) {
  Sketch source("gravity", {}, 10);
  source.returns(source.variable(Shape::vector, "g_ned", in("ned"), Source::named));
  Sketch user("user", {}, 40);
  user.sum(user.call("gravity", {}, Shape::vector), user.variable(Shape::vector, "f", in("body")));
  EXPECT_EQ(only(solved({source, user})).certainty, Certainty::likely);
}

TEST(Chain, AFunctionThatNobodyKnowsSaysNothing) {
  Sketch f("f");
  const ValueId r = f.call("unheard_of", {f.variable(Shape::vector, "n", in("ned"))}, Shape::vector);
  const Solution s = solved({f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 0, r), "?<-?");
}

// even(v) = v or odd(v), odd(v) = even(v).
TEST(Recursion, FunctionsThatCallEachOtherKeepTheFrame) {
  Sketch even("even", {"v"}, 10);
  const ValueId v = even.parameter(0, Shape::vector);
  even.returns(even.join({v, even.call("odd", {v}, Shape::vector)}, "r"));
  Sketch f("f");
  const ValueId r = f.call("even", {f.variable(Shape::vector, "n", in("ned"))}, Shape::vector);
  const Solution s = solved({even, passing_on("odd", "even", 30), f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 2, r), "ned<-?");
}

TEST(Recursion, AFaultInAFunctionThatCallsItselfIsFound) {
  Sketch f("f", {"C", "v"});
  const ValueId C = f.parameter(0, Shape::rotation, passive("ned", "body"));
  const ValueId v = f.parameter(1, Shape::vector, in("ned"));
  f.returns(f.call("f", {C, f.product(C, v)}, Shape::vector));
  EXPECT_EQ(solved({f}).clashes.size(), 1u);
}

TEST(Dispatch, AMethodChosenAtRunTimeSpeaksByItsContractAlone) {
  Sketch base("read", {}, 10);
  base.returns(base.variable(Shape::vector, "raw", in("body")));
  for (auto [dispatched, expected] : {std::pair{false, "body<-?"}, std::pair{true, "?<-?"}}) {
    Sketch f("f");
    const ValueId r = f.call("read", {}, Shape::vector, dispatched);
    EXPECT_EQ(frames_of(solved({base, f}), 1, r), expected);
  }
  Sketch promised("read", {}, 10);
  promised.returns(promised.variable(Shape::vector, "raw"), in("body"));
  Sketch f("f");
  const ValueId r = f.call("read", {}, Shape::vector, true);
  EXPECT_EQ(frames_of(solved({promised, f}), 1, r), "body<-?");
}

// void to_body(C, v): v = C * v.
Sketch to_body_in_place() {
  Sketch g("to_body", {"v"}, 10);
  const ValueId v = g.parameter(0, Shape::vector);
  const ValueId C = g.variable(Shape::rotation, "C", passive("ned", "body"));
  g.set_exit("p0", g.assign("v", g.product(C, v)));
  return g;
}

TEST(InPlace, TheArgumentIsAnotherValueAfterTheCall) {
  Sketch f("f");
  const ValueId before = f.variable(Shape::vector, "v", in("ned"));
  const ValueId after = f.call_in_place("to_body", before);
  const Solution s = solved({to_body_in_place(), f});
  EXPECT_TRUE(s.clashes.empty());
  EXPECT_EQ(frames_of(s, 1, before), "ned<-?");
  EXPECT_EQ(frames_of(s, 1, after), "body<-?");
}

// The phrase of the variable does not bind what comes out of a call that reads
// the argument and changes it.
TEST(InPlace, ThePhraseOfTheVariableHoldsBeforeTheCallOnly) {
  Sketch f("f");
  const ValueId after = f.call_in_place("to_body", f.variable(Shape::vector, "v", in("ned")));
  f.hold(after, in("ned"));
  f.function().holds.back().call = 0;
  f.function().holds.back().formal = "p0";
  EXPECT_TRUE(solved({to_body_in_place(), f}).clashes.empty());
}

TEST(InPlace, OfAPureOutputThePhraseHoldsAfterTheCall) {
  Sketch g("fill", {"out"}, 10);
  g.set_exit("p0", g.variable(Shape::vector, "out", in("body")));
  Sketch f("f");
  const ValueId after = f.call_in_place("fill", f.variable(Shape::vector, "v"));
  f.hold(after, in("ned"));
  f.function().holds.back().call = 0;
  f.function().holds.back().formal = "p0";
  EXPECT_EQ(solved({g, f}).clashes.size(), 1u);
}

TEST(InPlace, WhatACalleeLeavesAloneIsTheSameAfter) {
  Sketch g("look", {"s"}, 10);
  g.set_exit("p0", Snapshot{"p0", 0, {}});
  Sketch f("f");
  const ValueId before = f.variable(Shape::vector, "s.v", in("ned")), after = f.variable(Shape::vector, "s.v");
  f.function().readings = {{"l0.v", 0, before}, {"l0.v", 1, after}};
  f.add_call({"look", "look", false, {{"p0", Snapshot{"l0", 0, {}}, Snapshot{"l0", 1, {}}, {}, "s"}}}, "look(s)");
  EXPECT_EQ(frames_of(solved({g, f}), 1, after), "ned<-?");
}

// s.imu.R of the callee is state.nav.imu.R of the caller.
TEST(Objects, APathOfTheCalleeIsFoundInTheCallersObject) {
  Sketch g("level", {"s"}, 10);
  const ValueId R = g.variable(Shape::rotation, "s.imu.R");
  g.function().readings = {{"p0.imu.R", 0, R}};
  g.product(R, g.variable(Shape::vector, "v", in("ned")));
  Sketch f("f");
  const ValueId mine = f.variable(Shape::rotation, "state.nav.imu.R", passive("mast", "body"));
  f.function().readings = {{"l1.nav.imu.R", 0, mine}};
  f.add_call({"level", "level", false, {{"p0", Snapshot{"l1.nav", 0, {}}, ValueId::none, {}, "state.nav"}}},
             "level(state.nav)");
  const Clash clash = only(solved({g, f}));
  EXPECT_EQ(clash.function, "f");
  EXPECT_NE(text(clash.left), text(clash.right));
}

TEST(Objects, APartWrittenSinceWinsOverThePlace) {
  Sketch g("level", {"s"}, 10);
  const ValueId v = g.variable(Shape::vector, "s.v");
  g.function().readings = {{"p0.v", 0, v}};
  g.sum(v, g.variable(Shape::vector, "w", in("ned")));
  Sketch f("f");
  const ValueId old = f.variable(Shape::vector, "s.v", in("body")), fresh = f.variable(Shape::vector, "n", in("ned"));
  f.function().readings = {{"l0.v", 0, old}};
  f.add_call({"level", "level", false, {{"p0", Snapshot{"l0", 0, {{".v", fresh}}}, ValueId::none, {}, "s"}}},
             "level(s)");
  EXPECT_TRUE(solved({g, f}).clashes.empty());
}

TEST(Objects, WhatAFunctionPutsIntoAnObjectIsSeenOutside) {
  Sketch g("make", {}, 10);
  const ValueId v = g.variable(Shape::vector, "s.v", in("ned"));
  auto inner = std::make_shared<const Snapshot>(Snapshot{"", 0, {{".v", v}}});
  g.set_exit("return", Snapshot{"", 0, {{".imu", inner}}});
  Sketch f("f");
  const ValueId got = f.variable(Shape::vector, "s.imu.v");
  f.function().readings = {{"l0.imu.v", 1, got}};
  f.add_call({"make", "make", false, {{"return", ValueId::none, Snapshot{"l0", 1, {}}, {}, "s"}}}, "make()");
  EXPECT_EQ(frames_of(solved({g, f}), 1, got), "ned<-?");
}

TEST(Own, FramesOfTwoObjectsDoNotMix) {
  Sketch f("f", {"a", "b"});
  const ValueId v = f.variable(Shape::vector, "a.v"), w = f.variable(Shape::vector, "b.v");
  f.function().readings = {{"p0.v", 0, v}, {"p1.v", 0, w}};
  f.hold(v, in(own("body", "p0")));
  f.hold(w, in(own("body", "p1")));
  f.sum(v, w);
  const Clash clash = only(solved({f}));
  EXPECT_EQ(clash.left.owner, "a");
  EXPECT_EQ(clash.right.owner, "b");
}

TEST(Own, FramesOfOneObjectMeet) {
  Sketch f("f", {"a"});
  const ValueId v = f.variable(Shape::vector, "a.v"), w = f.variable(Shape::vector, "a.w");
  f.hold(v, in(own("body", "p0")));
  f.hold(w, in(own("body", "p0")));
  f.sum(v, w);
  EXPECT_TRUE(solved({f}).clashes.empty());
}

// The frame that a method speaks of belongs to the object it is called on.
Sketch velocity_of_object() {
  Sketch g("Hull::velocity", {}, 10);
  const ValueId v = g.variable(Shape::vector, "v");
  g.function().readings = {{"this.v", 0, v}};
  g.hold(v, in(own("body", "this")));
  g.returns(v);
  g.set_exit("this", Snapshot{"this", 0, {}});
  return g;
}

ValueId velocity(Sketch& f, const std::string& object) {
  const ValueId r = f.value(Shape::vector, object + ".velocity()");
  f.add_call({"Hull::velocity",
              "Hull::velocity",
              false,
              {{"this", Snapshot{object, 0, {}}, Snapshot{object, 0, {}}, {}, object, object},
               {"return", ValueId::none, r, {}, f.text(r)}}},
             f.text(r));
  return r;
}

TEST(Own, AMethodSpeaksOfTheObjectItIsCalledOn) {
  Sketch same("same"), mixed("mixed");
  same.sum(velocity(same, "l0"), velocity(same, "l0"));
  mixed.sum(velocity(mixed, "l0"), velocity(mixed, "l1"));
  EXPECT_TRUE(solved({velocity_of_object(), same}).clashes.empty());
  EXPECT_EQ(solved({velocity_of_object(), mixed}).clashes.size(), 1u);
}

TEST(Own, OfAnObjectThatNobodyCanNameIsSomeFrame) {
  Sketch f("f");
  const ValueId a = velocity(f, ""), b = velocity(f, "");
  f.sum(a, f.variable(Shape::vector, "n", in("ned")));
  f.sum(b, f.variable(Shape::vector, "m", in("mast")));
  EXPECT_TRUE(solved({velocity_of_object(), f}).clashes.empty());
}

Measurement product_measured(const std::string& key) {
  auto said = [](const char* formal, bool output, const Said& s) { return Term{formal, output, s.quantity}; };
  Meaning meaning;
  meaning.id = "matrix times vector";
  meaning.words = "multiplies a matrix by a vector";
  meaning.contract = {said("p0", false, passive(variable("A"), variable("B"))), said("p1", false, in(variable("A"))),
                      said("return", true, in(variable("B")))};
  Measurement m;
  m.key = m.name = key;
  m.meanings = {meaning};
  return m;
}

Solution solved_with(const std::vector<Measurement>& measurements, const std::string& frame) {
  Sketch opaque("mystery", {"m", "v"}, 10);
  opaque.parameter(0, Shape::matrix);
  opaque.parameter(1, Shape::vector);
  Sketch f("f");
  const ValueId C = f.variable(Shape::matrix, "C", passive("ned", "body"));
  f.hold(f.call("mystery", {C, f.variable(Shape::vector, "v", in(frame))}, Shape::vector), in("body"));
  Facts facts = facts_of({opaque, f});
  facts.measurements = measurements;
  return solve(facts, FrameCatalogue::builtin());
}

TEST(Measured, AMeaningIsAContract) {
  EXPECT_TRUE(solved_with({}, "mast").clashes.empty());
  EXPECT_TRUE(solved_with({product_measured("mystery")}, "ned").clashes.empty());
  const Solution s = solved_with({product_measured("mystery")}, "mast");
  EXPECT_EQ(only(s).certainty, Certainty::certain);
}

TEST(Measured, AnAmbiguityOrASelectorSaysNothing) {
  Measurement twofold = product_measured("mystery"), refused = product_measured("mystery"),
              wordless = product_measured("mystery");
  twofold.meanings.push_back(twofold.meanings[0]);
  refused.meanings.clear();
  wordless.meanings[0].contract.clear();
  const Measurement one = product_measured("mystery");
  for (const std::vector<Measurement>& list : {std::vector{twofold}, {refused}, {wordless}, {one, one}})
    EXPECT_TRUE(solved_with(list, "mast").clashes.empty());
}

}  // namespace
}  // namespace dextral::solve
