// Fingerprints that survive shifts, and the ledger of known findings.
#include "tell/ledger.h"

#include <gtest/gtest.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>

#include "tell/fingerprint.h"

namespace dextral::tell {
namespace {

class Ledger : public testing::Test {
 protected:
  void SetUp() override {
    std::string pattern = (std::filesystem::temp_directory_path() / "ledger.XXXXXX").string();
    ASSERT_NE(mkdtemp(pattern.data()), nullptr);
    root = pattern;
    id = files.add(root + "/a.cpp");
  }
  void TearDown() override { std::filesystem::remove_all(root); }

  void write(const std::string& text) { std::ofstream(root + "/a.cpp", std::ios::binary) << text; }
  Finding at(std::uint32_t line) const {
    Finding finding;
    finding.rule = "missing-inverse";
    finding.function = "f";
    finding.sentence = "s";
    finding.span = {id, {line, 1}, {line, 2}};
    return finding;
  }
  std::vector<std::string> prints(const std::vector<Finding>& findings) const {
    Source source;
    return fingerprints(findings, files, root, source);
  }

  std::string root;
  FileTable files;
  FileId id = FileId::none;
};

TEST_F(Ledger, FingerprintsSurviveShiftsAndIndentation) {
  write("v = R * w;\n");
  const auto before = prints({at(1)});
  write("// new\n\n  v = R * w;\n");
  EXPECT_EQ(prints({at(3)}), before);
  write("v = Q * w;\n");
  EXPECT_NE(prints({at(1)}), before);
}

TEST_F(Ledger, EqualLinesAreCountedApart) {
  write("x;\nx;\n");
  const auto two = prints({at(1), at(2)});
  EXPECT_NE(two[0], two[1]);
  EXPECT_EQ(two[0].size(), 16u);
}

TEST_F(Ledger, WhatIsWrittenIsRead) {
  const std::vector<Known> sorted{{"1", "r", "a", "s \"q\""}, {"2", "r", "b", "s"}};
  const std::string text = write_ledger({sorted[1], sorted[0], sorted[1]});
  EXPECT_EQ(std::get<std::vector<Known>>(read_ledger(text)), sorted);
  EXPECT_EQ(write_ledger(sorted), text);
}

TEST_F(Ledger, KnownFindingsAreSetAsideAndGoneOnesTold) {
  write("x;\ny;\n");
  std::vector<Known> ledger = entries({at(1)}, files, root);
  ledger.push_back({"0", "r", "a.cpp", "gone"});
  ledger.push_back({"0", "r", "b.cpp", "not looked at"});
  const SetAside result = set_aside({at(1), at(2)}, ledger, files, root, [](auto& file) { return file == "a.cpp"; });
  EXPECT_EQ(result.known, 1u);
  ASSERT_EQ(result.fresh.size(), 1u);
  EXPECT_EQ(result.fresh[0].span.begin.line, 2u);
  EXPECT_EQ(result.gone, (std::vector<Known>{ledger[1]}));
}

TEST_F(Ledger, ADamagedFileHasAMessage) {
  const auto broken = read_ledger("{\n  \"version\": 1,,\n}");
  ASSERT_TRUE(std::holds_alternative<LedgerProblem>(broken));
  EXPECT_EQ(std::get<LedgerProblem>(broken).line, 2u);
  for (const char* text : {"", "[]", "{\"version\": 9, \"known findings\": []}",
                           "{\"version\": 1, \"known findings\": [{\"rule\": 3}]}"}) {
    const auto read = read_ledger(text);
    ASSERT_TRUE(std::holds_alternative<LedgerProblem>(read)) << text;
    EXPECT_FALSE(std::get<LedgerProblem>(read).message.empty());
  }
}

}  // namespace
}  // namespace dextral::tell
