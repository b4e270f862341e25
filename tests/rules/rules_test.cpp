// The rules: the registry, and for each rule which clashes are its own, what it
// says of them and how far off it says the result is.
#include <gtest/gtest.h>

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <set>
#include <sstream>

#include "core/witness.h"
#include "rules/rule.h"

namespace dextral {
namespace {

using solve::Clash;
using solve::ClashKind;
using solve::Repair;
using solve::RepairKind;
namespace files = std::filesystem;

const files::path kSource = DEXTRAL_SOURCE;

std::string content(const files::path& path) {
  std::ifstream in(path);
  std::stringstream all;
  all << in.rdbuf();
  return all.str();
}

std::set<std::string> rule_files() {
  std::set<std::string> ids;
  for (const auto& entry : files::directory_iterator(kSource / "rules"))
    if (entry.path().extension() == ".cpp") ids.insert(entry.path().stem());
  return ids;
}

TEST(Registry, HasEveryRuleFileOnceInOrder) {
  std::vector<std::string> ids;
  for (const Rule& rule : rules()) ids.push_back(rule.id);
  EXPECT_TRUE(std::is_sorted(ids.begin(), ids.end()));
  const std::set<std::string> expected = rule_files();
  EXPECT_EQ(ids, std::vector<std::string>(expected.begin(), expected.end()));
}

TEST(Registry, EachRuleIsWhole) {
  for (const Rule& rule : rules()) {
    EXPECT_NE(rule.fits, nullptr) << rule.id;
    EXPECT_NE(rule.sentence, nullptr) << rule.id;
    EXPECT_FALSE(rule.summary.empty()) << rule.id;
    EXPECT_NE(rule.summary.back(), '.') << rule.id;
  }
}

TEST(Registry, EachRuleHasAPageOfItsName) {
  for (const Rule& rule : rules()) {
    const std::string page = content(kSource / "docs" / "rules" / (rule.id + ".md"));
    EXPECT_EQ(page.rfind("# " + rule.id + "\n", 0), 0u) << rule.id;
  }
  for (const auto& entry : files::directory_iterator(kSource / "docs" / "rules"))
    EXPECT_TRUE(rule_files().contains(entry.path().stem())) << entry.path();
}

TEST(Registry, EachRuleIsExpectedSomewhereInTheFixtures) {
  std::string all;
  for (const auto& entry : files::recursive_directory_iterator(kSource / "fixtures"))
    if (entry.is_regular_file()) all += content(entry.path());
  for (const Rule& rule : rules()) EXPECT_NE(all.find(rule.id), std::string::npos) << rule.id;
}

Clash clash(ClashKind kind = ClashKind::frames) {
  Clash c;
  c.kind = kind;
  c.function = "nav::step";
  c.expression = "C * v";
  c.operation = OperationKind::product;
  c.subject = "C";
  c.object = "v";
  c.left = {"ned", "", false, false, ""};
  c.right = {"body", "", false, false, ""};
  return c;
}

Clash mended_by(RepairKind kind, ClashKind clash_kind = ClashKind::frames) {
  Clash c = clash(clash_kind);
  Repair repair;
  repair.kind = kind;
  repair.subject = "C";
  repair.other = "D";
  repair.rotation = true;
  c.repairs = {repair};
  return c;
}

Finding judged(const Clash& c) {
  solve::Solution solution;
  solution.clashes = {c};
  const std::vector<Finding> findings = judge(solution);
  EXPECT_EQ(findings.size(), 1u);
  return findings.empty() ? Finding{} : findings[0];
}

TEST(MissingInverse, IsATransposeThatMends) {
  const Finding f = judged(mended_by(RepairKind::transpose));
  EXPECT_EQ(f.rule, "missing-inverse");
  EXPECT_EQ(f.sentence, "the inverse of `C` is missing: `C` meets ned where `v` meets body");
  ASSERT_TRUE(f.witness);
  EXPECT_EQ(f.witness->degrees, degrees_of_missing_inverse());
  EXPECT_EQ(f.witness->attitude, "at yaw 30, pitch 20, roll 10 deg");
}

TEST(MissingInverse, HasNoAngleForWhatIsNoRotation) {
  Clash c = mended_by(RepairKind::transpose);
  c.repairs[0].rotation = false;
  EXPECT_FALSE(judged(c).witness);
}

TEST(MissingInverse, IsAlsoTheOtherOfTwoFunctions) {
  const Finding f = judged(mended_by(RepairKind::twin_function));
  EXPECT_EQ(f.rule, "missing-inverse");
  EXPECT_EQ(f.sentence, "`C` stands where `D` belongs: `C` meets ned where `v` meets body");
}

TEST(NeedlessInverse, IsAnInverseWhoseLossMends) {
  const Finding f = judged(mended_by(RepairKind::drop_inverse));
  EXPECT_EQ(f.rule, "needless-inverse");
  EXPECT_EQ(f.sentence, "`C` is inverted needlessly: `C` meets ned where `v` meets body");
  ASSERT_TRUE(f.witness);
  EXPECT_EQ(f.witness->degrees, degrees_of_missing_inverse());
  Clash c = mended_by(RepairKind::drop_inverse);
  c.repairs[0].rotation = false;
  EXPECT_FALSE(judged(c).witness);
}

TEST(WrongOrder, IsAnExchangeThatMends) {
  const Finding f = judged(mended_by(RepairKind::swap));
  EXPECT_EQ(f.rule, "wrong-order");
  EXPECT_EQ(f.sentence, "`C` and `D` are in the wrong order: `C` meets ned where `v` meets body");
  ASSERT_TRUE(f.witness);
  EXPECT_EQ(f.witness->degrees, degrees_of_wrong_order());
}

TEST(FrameClash, IsWhatNoInversionOrExchangeMends) {
  for (RepairKind kind : {RepairKind::other_variable, RepairKind::swap_arguments})
    EXPECT_EQ(judged(mended_by(kind)).rule, "frame-clash");
  const Finding f = judged(clash());
  EXPECT_EQ(f.rule, "frame-clash");
  EXPECT_EQ(f.sentence, "`C` is in ned, `v` in body");
  ASSERT_TRUE(f.witness);
  EXPECT_EQ(f.witness->degrees, degrees_of_wrong_frame());
}

TEST(FrameClash, SpeaksOfDeclarationsAndOfOneThingAlone) {
  Clash c = clash();
  c.operation = OperationKind::hold;
  EXPECT_EQ(judged(c).sentence, "`C` is in ned, but `v` is declared in body");
  c = clash();
  c.object.clear();
  EXPECT_EQ(judged(c).sentence, "`C * v` joins ned and body");
}

TEST(FrameClash, NamesTheObjectOfAnOwnFrameAndWhatIsUnknown) {
  Clash c = clash();
  c.left = {"body", "", true, false, "ship"};
  c.right = {};
  EXPECT_EQ(judged(c).sentence, "`C` is in own body of `ship`, `v` in an unknown frame");
}

TEST(OneSidedTensor, LacksTheTransposeOnTheRight) {
  const Finding f = judged(mended_by(RepairKind::two_sided, ClashKind::tensor));
  EXPECT_EQ(f.rule, "one-sided-tensor");
  EXPECT_EQ(f.sentence, "the tensor is mapped on the left only: the transpose of `C` is missing on the right");
  EXPECT_EQ(judged(clash(ClashKind::tensor)).sentence,
            "`C` is declared a tensor in one frame, but its rows and columns meet ned and body");
}

TEST(ContractClash, TellsBothPhrases) {
  const Finding f = judged(clash(ClashKind::contract));
  EXPECT_EQ(f.rule, "contract-clash");
  EXPECT_EQ(f.sentence, "the phrases for `C` disagree: ned in one place, body in another");
  EXPECT_FALSE(f.witness);
}

TEST(PointClash, TellsBothChains) {
  Clash c = clash(ClashKind::points);
  c.left = c.right = {};
  c.left_points = "from hull to mast";
  c.right_points = "from mast to hull";
  const Finding f = judged(c);
  EXPECT_EQ(f.rule, "point-clash");
  EXPECT_EQ(f.sentence, "`C` goes from hull to mast, `v` is to go from mast to hull");
  EXPECT_EQ(f.left_says, "from hull to mast");
  EXPECT_EQ(f.right_says, "from mast to hull");
}

TEST(PhraseError, TellsTheWordAndTheNearest) {
  Clash c = clash(ClashKind::phrase);
  c.message = "this begins no phrase";
  EXPECT_EQ(judged(c).sentence, "this begins no phrase");
  c.wrong = "pasive";
  EXPECT_EQ(judged(c).sentence, "`pasive`: this begins no phrase");
  c.nearest = "passive";
  EXPECT_EQ(judged(c).sentence, "`pasive`: this begins no phrase; did you mean `passive`?");
  EXPECT_EQ(judged(c).rule, "phrase-error");
}

TEST(StaleAccept, TellsWhatIsNotThereAnyMore) {
  Clash c = clash(ClashKind::stale);
  EXPECT_EQ(judged(c).sentence, "nothing is left to accept here: `C * v`");
  c.wrong = "wrong-order";
  EXPECT_EQ(judged(c).sentence, "nothing is left to accept here: `wrong-order`");
  EXPECT_EQ(judged(c).rule, "stale-accept");
}

// Every kind of clash with every kind of first repair has one rule of the lowest rank.
TEST(Judge, EveryClashHasARule) {
  for (int kind = 0; kind <= int(ClashKind::stale); ++kind)
    for (int repair = 0; repair <= int(RepairKind::subtract); ++repair) {
      Clash c = mended_by(RepairKind(repair), ClashKind(kind));
      c.message = "a message";
      EXPECT_FALSE(judged(c).sentence.empty()) << kind << " " << repair;
      int best = 1000, owners = 0;
      for (const Rule& rule : rules()) {
        if (!rule.fits(c) || rule.rank > best) continue;
        owners = rule.rank < best ? 1 : owners + 1;
        best = rule.rank;
      }
      EXPECT_EQ(owners, 1) << kind << " " << repair;
    }
}

TEST(Judge, HandsOnThePlaceTheProofsAndTheRepairs) {
  Clash c = mended_by(RepairKind::transpose);
  c.certainty = Certainty::likely;
  c.span = {FileId(0), {3, 4}, {3, 9}};
  c.left_proof = {{ReasonKind::declared, Source::declared, {}, "C", "passive ned to body"}};
  const Finding f = judged(c);
  EXPECT_EQ(f.certainty, Certainty::likely);
  EXPECT_EQ(f.span, c.span);
  EXPECT_EQ(f.function, "nav::step");
  EXPECT_EQ(f.left, c.left_proof);
  EXPECT_TRUE(f.right.empty());
  EXPECT_EQ(f.left_says, "ned");
  EXPECT_EQ(f.right_says, "body");
  EXPECT_EQ(f.repairs.size(), 1u);
}

}  // namespace
}  // namespace dextral
