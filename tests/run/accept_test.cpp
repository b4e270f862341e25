// Acceptances set findings aside; stale ones and wrong phrases are clashes.
#include "run/accept.h"

#include <gtest/gtest.h>

namespace dextral::run {
namespace {

Finding finding(const std::string& rule, FileId file, std::uint32_t line) {
  Finding f;
  f.rule = rule;
  f.span = {file, {line, 5}, {line, 9}};
  return f;
}

AcceptanceAt acceptance(const std::string& rule, FileId file, std::uint32_t from, std::uint32_t to) {
  return {{rule, "by design"}, {file, {from, 1}, {from, 30}}, {from, 1}, {to, 80}};
}

constexpr FileId kOne{1}, kTwo{2};
const std::set<FileId> kBoth{kOne, kTwo};

TEST(Accept, SetsAsideTheRuleOnItsLines) {
  Accepted got = accept({finding("wrong-order", kOne, 10), finding("wrong-order", kOne, 13)},
                        {acceptance("wrong-order", kOne, 9, 12)}, kBoth);
  ASSERT_EQ(got.findings.size(), 1u);
  EXPECT_EQ(got.findings[0].span.begin.line, 13u);
  EXPECT_EQ(got.set_aside.size(), 1u);
  EXPECT_TRUE(got.stale.empty());
}

TEST(Accept, FirstAndLastLineCount) {
  EXPECT_TRUE(
      accept({finding("a", kOne, 9), finding("a", kOne, 12)}, {acceptance("a", kOne, 9, 12)}, kBoth).findings.empty());
  EXPECT_EQ(
      accept({finding("a", kOne, 8), finding("a", kOne, 13)}, {acceptance("a", kOne, 9, 12)}, kBoth).findings.size(),
      2u);
}

TEST(Accept, AnotherRuleOrFileStays) {
  Accepted got = accept({finding("frame-clash", kOne, 10), finding("wrong-order", kTwo, 10)},
                        {acceptance("wrong-order", kOne, 9, 12)}, kBoth);
  EXPECT_EQ(got.findings.size(), 2u);
  ASSERT_EQ(got.stale.size(), 1u);
  EXPECT_EQ(got.stale[0].kind, solve::ClashKind::stale);
  EXPECT_EQ(got.stale[0].span.begin.line, 9u);
  EXPECT_EQ(got.stale[0].wrong, "wrong-order");
  EXPECT_EQ(got.stale[0].message, "by design");
  EXPECT_EQ(got.stale[0].certainty, Certainty::certain);
}

TEST(Accept, TwoAcceptancesOfOneFindingAreBothUsed) {
  EXPECT_TRUE(
      accept({finding("a", kOne, 3)}, {acceptance("a", kOne, 3, 3), acceptance("a", kOne, 1, 9)}, kBoth).stale.empty());
}

TEST(Accept, NothingIsStaleWhereSomethingWasNotRead) {
  EXPECT_TRUE(accept({}, {acceptance("a", kOne, 1, 1)}, {}).stale.empty());
  EXPECT_EQ(accept({}, {acceptance("a", kOne, 1, 1)}, kBoth).stale.size(), 1u);
}

Facts joined() {
  Facts facts;
  facts.read = true;
  facts.files.add("/p/a.cpp");
  facts.files.add("/p/a.h");
  return facts;
}

TEST(SettledFiles, AllOfAWholeProjectElseTheUnits) {
  const std::vector<project::Unit> units{{"/p/a.cpp", "/p", {}}};
  EXPECT_EQ(settled_files(joined(), units, true), (std::set<FileId>{FileId(0), FileId(1)}));
  EXPECT_EQ(settled_files(joined(), units, false), std::set<FileId>{FileId(0)});
}

TEST(SettledFiles, NoneWhereSomethingWasNotRead) {
  Facts lost = joined(), broken = joined(), misspelt = joined();
  lost.read = false;
  broken.complaints = {{ComplaintKind::missing_header, {}, "b.h", "", ""}};
  misspelt.complaints = {{ComplaintKind::unknown_frame, {}, "bodi", "", ""}};
  EXPECT_TRUE(settled_files(lost, {}, true).empty());
  EXPECT_TRUE(settled_files(broken, {}, true).empty());
  EXPECT_EQ(settled_files(misspelt, {}, true).size(), 2u);
}

TEST(WrongPhrases, KeepTheirWordsAndPlaces) {
  Span place{kOne, {4, 7}, {4, 10}};
  std::vector<solve::Clash> got =
      wrong_phrases({{ComplaintKind::unknown_frame, place, "bodi", "no such frame", "body"}});
  ASSERT_EQ(got.size(), 1u);
  EXPECT_EQ(got[0].kind, solve::ClashKind::phrase);
  EXPECT_EQ(got[0].span, place);
  EXPECT_EQ(got[0].wrong, "bodi");
  EXPECT_EQ(got[0].message, "no such frame");
  EXPECT_EQ(got[0].nearest, "body");
}

TEST(WrongPhrases, LeaveTheCompilationOut) {
  std::vector<Complaint> complaints;
  for (ComplaintKind kind : {ComplaintKind::phrase, ComplaintKind::unattached, ComplaintKind::unknown_frame,
                             ComplaintKind::unknown_name, ComplaintKind::compile_error, ComplaintKind::missing_header})
    complaints.push_back({kind, {}, "", "", ""});
  EXPECT_EQ(wrong_phrases(complaints).size(), 4u);
}

}  // namespace
}  // namespace dextral::run
