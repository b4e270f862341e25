// SARIF: places, columns, evidence and fixes.
#include <gtest/gtest.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <nlohmann/json.hpp>

#include "tell/report.h"

namespace dextral::tell {
namespace {

TEST(Sarif, CarriesPlaceEvidenceFixAndFingerprint) {
  std::string root = (std::filesystem::temp_directory_path() / "sarif.XXXXXX").string();
  ASSERT_NE(mkdtemp(root.data()), nullptr);
  // Two bytes and one unit, then four bytes and two units.
  std::ofstream(root + "/a b.cpp") << "\xc3\xa4\xf0\x9f\x98\x80 R * w;\n";
  FileTable files;
  const FileId id = files.add(root + "/a b.cpp");
  Finding finding;
  finding.rule = "missing-inverse";
  finding.sentence = "the inverse of `R` is missing";
  finding.span = {id, {1, 8}, {1, 9}};
  Reason reason;
  reason.span = finding.span;
  finding.left = finding.right = {reason};
  finding.repairs.resize(1);
  finding.repairs[0].kind = solve::RepairKind::transpose;
  finding.repairs[0].edits = {{{id, {1, 9}, {1, 9}}, ".t()"}};

  Style style;
  style.root = root;
  const std::string text = sarif({finding}, files, {}, style);
  EXPECT_EQ(sarif({finding}, files, {}, style), text);
  std::filesystem::remove_all(root);

  const auto log = nlohmann::json::parse(text);
  EXPECT_EQ(log["version"], "2.1.0");
  const auto run = log["runs"][0], result = run["results"][0];
  EXPECT_EQ(run["columnKind"], "utf16CodeUnits");
  EXPECT_EQ(result["level"], "error");
  const auto place = result["locations"][0]["physicalLocation"];
  EXPECT_EQ(place["artifactLocation"]["uri"], "a%20b.cpp");
  const std::string base = place["artifactLocation"]["uriBaseId"];
  EXPECT_EQ(run["originalUriBaseIds"][base]["uri"], "file://" + root + "/");
  EXPECT_EQ(place["region"]["startColumn"], 5);
  EXPECT_EQ(place["region"]["endColumn"], 6);
  EXPECT_EQ(result["relatedLocations"].size(), 2u);
  EXPECT_EQ(result["codeFlows"][0]["threadFlows"][0]["locations"].size(), 3u);
  const auto replacement = result["fixes"][0]["artifactChanges"][0]["replacements"][0];
  EXPECT_EQ(replacement["insertedContent"]["text"], ".t()");
  EXPECT_EQ(replacement["deletedRegion"]["startColumn"], 6);
  EXPECT_EQ(result["partialFingerprints"]["dextral/v1"].get<std::string>().size(), 16u);
}

}  // namespace
}  // namespace dextral::tell
