// Repairs: as a patch, and written into files.
#include "tell/repairs.h"

#include <gtest/gtest.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>

namespace dextral::tell {
namespace {

namespace fs = std::filesystem;

class Repairs : public testing::Test {
 protected:
  void SetUp() override {
    std::string pattern = (fs::temp_directory_path() / "repairs.XXXXXX").string();
    ASSERT_NE(mkdtemp(pattern.data()), nullptr);
    root = fs::canonical(pattern).string();
  }
  void TearDown() override { fs::remove_all(root); }

  FileId file(const std::string& name, const std::string& text) {
    std::ofstream(root + "/" + name, std::ios::binary) << text;
    return files.add(root + "/" + name);
  }
  std::string text(const std::string& name) const {
    std::ifstream in(root + "/" + name, std::ios::binary);
    return {std::istreambuf_iterator<char>(in), {}};
  }
  static solve::Edit edit(FileId id, Position begin, Position end, const std::string& text) {
    return {Span{id, begin, end}, text};
  }
  void add(std::vector<solve::Edit> edits) {
    Finding finding;
    finding.repairs.resize(1);
    finding.repairs[0].edits = std::move(edits);
    findings.push_back(finding);
  }
  std::size_t entries() const { return std::size_t(std::distance(fs::directory_iterator(root), {})); }

  std::string root;
  FileTable files;
  std::vector<Finding> findings;
  InScope everywhere = [](const std::string&) { return true; };
};

TEST_F(Repairs, DiffShowsContextAndLeavesTheFile) {
  const FileId id = file("a.cpp", "1\n2\n3\n4\nv = R * w;\n6\n7\n8\n9\n");
  add({edit(id, {5, 6}, {5, 6}, ".transpose()")});
  EXPECT_EQ(diff(findings, files, root, everywhere),
            "--- a/a.cpp\n+++ b/a.cpp\n@@ -2,7 +2,7 @@\n 2\n 3\n 4\n-v = R * w;\n+v = R.transpose() * w;\n 6\n 7\n 8\n");
  EXPECT_EQ(text("a.cpp"), "1\n2\n3\n4\nv = R * w;\n6\n7\n8\n9\n");
}

TEST_F(Repairs, DistantChangesAreHunksWithShiftedLines) {
  std::string body;
  for (int i = 1; i <= 20; ++i) body += std::to_string(i) + "\n";
  const FileId id = file("a.cpp", body);
  add({edit(id, {2, 1}, {3, 1}, "")});
  add({edit(id, {18, 1}, {18, 3}, "x")});
  const std::string patch = diff(findings, files, root, everywhere);
  EXPECT_NE(patch.find("@@ -1,6 +1,5 @@\n"), std::string::npos) << patch;
  EXPECT_NE(patch.find("@@ -15,6 +14,6 @@\n"), std::string::npos) << patch;
}

TEST_F(Repairs, DiffTellsAMissingLastLineEnd) {
  add({edit(file("a.cpp", "ab"), {1, 1}, {1, 2}, "c")});
  EXPECT_EQ(diff(findings, files, root, everywhere),
            "--- a/a.cpp\n+++ b/a.cpp\n@@ -1,1 +1,1 @@\n-ab\n\\ No newline at end of file\n+cb\n"
            "\\ No newline at end of file\n");
}

// The outside check: what patch(1) makes of the diff is what apply() writes.
TEST_F(Repairs, PatchAndApplyAgree) {
  if (std::system("command -v patch >/dev/null") != 0) FAIL() << "this test needs patch(1)";
  const std::string body = "a b\n\nc d\n1\n2\n3\n4\n5\n6\n7\n8\ne f";
  const FileId id = file("a b.cpp", body);
  add({edit(id, {1, 1}, {1, 2}, "b"), edit(id, {1, 3}, {1, 4}, "a")});
  add({edit(id, {3, 2}, {3, 2}, "\nnew\n")});
  add({edit(id, {12, 1}, {12, 2}, "")});
  std::ofstream(root + "/p", std::ios::binary) << diff(findings, files, root, everywhere);
  ASSERT_EQ(std::system(("cd '" + root + "' && patch -s -p1 -o patched -i p").c_str()), 0);
  EXPECT_TRUE(apply(findings, files, everywhere).empty());
  EXPECT_EQ(text("a b.cpp"), "b a\n\nc\nnew\n d\n1\n2\n3\n4\n5\n6\n7\n8\n f");
  EXPECT_EQ(text("patched"), text("a b.cpp"));
}

TEST_F(Repairs, ApplyKeepsPermissionsAndLineEndsAndLeavesNothingBehind) {
  const FileId id = file("a.cpp", "a\r\nb\r\n");
  fs::permissions(root + "/a.cpp", fs::perms(0750));
  add({edit(id, {1, 2}, {1, 2}, "\nx")});
  EXPECT_TRUE(apply(findings, files, everywhere).empty());
  EXPECT_EQ(text("a.cpp"), "a\r\nx\r\nb\r\n");
  EXPECT_EQ(fs::status(root + "/a.cpp").permissions(), fs::perms(0750));
  EXPECT_EQ(entries(), 1u);
}

TEST_F(Repairs, OverlapLeavesTheLaterRepairOutWhole) {
  const FileId id = file("a.cpp", "abcdef\n");
  add({edit(id, {1, 2}, {1, 4}, "X")});
  add({edit(id, {1, 6}, {1, 7}, "Y"), edit(id, {1, 3}, {1, 5}, "Z")});
  const auto problems = apply(findings, files, everywhere);
  ASSERT_EQ(problems.size(), 1u);
  EXPECT_EQ(problems[0].place, (Position{1, 3}));
  EXPECT_EQ(text("a.cpp"), "aXdef\n");
}

TEST_F(Repairs, TheSameRepairIsMadeOnce) {
  const FileId id = file("a.cpp", "R w\n");
  add({edit(id, {1, 2}, {1, 2}, ".t()")});
  add({edit(id, {1, 2}, {1, 2}, ".t()")});
  EXPECT_TRUE(apply(findings, files, everywhere).empty());
  EXPECT_EQ(text("a.cpp"), "R.t() w\n");
}

TEST_F(Repairs, NothingOutsideTheScopeIsWrittenNotEvenThroughALink) {
  file("outside.cpp", "a\n");
  fs::create_symlink(root + "/outside.cpp", root + "/inside.cpp");
  add({edit(files.add(root + "/inside.cpp"), {1, 1}, {1, 2}, "b")});
  const InScope scope = [](const std::string& path) { return path.ends_with("/inside.cpp"); };
  EXPECT_EQ(diff(findings, files, root, scope), "");
  EXPECT_EQ(apply(findings, files, scope).size(), 1u);
  EXPECT_EQ(text("outside.cpp"), "a\n");
}

TEST_F(Repairs, PlacesAndFilesThatAreGoneAreTold) {
  add({edit(file("a.cpp", "a\n"), {7, 1}, {7, 2}, "b")});
  add({edit(files.add(root + "/none.cpp"), {1, 1}, {1, 2}, "b")});
  const auto problems = apply(findings, files, everywhere);
  ASSERT_EQ(problems.size(), 2u);
  EXPECT_EQ(problems[0].message, "the file has no such place any more; run the check again");
  EXPECT_EQ(text("a.cpp"), "a\n");
}

}  // namespace
}  // namespace dextral::tell
