// Globs, and which files are in the scope.
#include "project/scope.h"

#include "support.h"

namespace dextral::project {
namespace {

namespace fs = std::filesystem;

TEST(Scope, GlobsCoverFilesAndFolders) {
  EXPECT_TRUE(covers("src", "src/a.cpp"));
  EXPECT_TRUE(covers("src/", "src/deep/a.cpp"));
  EXPECT_TRUE(covers("./src", "src/a.cpp"));
  EXPECT_TRUE(covers(".", "a.cpp"));
  EXPECT_TRUE(covers("src/*.cpp", "src/a.cpp"));
  EXPECT_TRUE(covers("src/*", "src/deep/a.cpp"));
  EXPECT_TRUE(covers("**/*.cpp", "a.cpp"));
  EXPECT_TRUE(covers("**/*.cpp", "x/y/a.cpp"));
  EXPECT_TRUE(covers("a/**/z/*.h", "a/z/q.h"));
  EXPECT_TRUE(covers("a/**/z/*.h", "a/b/c/z/q.h"));
  EXPECT_TRUE(covers("src/na?_*", "src/nav_gps/x.c"));
  EXPECT_TRUE(covers("**", "x/y"));
}

TEST(Scope, GlobsLeaveOthersOut) {
  EXPECT_FALSE(covers("src", "src2/a.cpp"));
  EXPECT_FALSE(covers("src", "lib/src/a.cpp"));
  EXPECT_FALSE(covers("*.cpp", "src/a.cpp"));
  EXPECT_FALSE(covers("src/*.cpp", "src/a.cc"));
  EXPECT_FALSE(covers("src/?.cpp", "src/ab.cpp"));
  EXPECT_FALSE(covers("a/**/z/*.h", "a/b/q.h"));
}

TEST(Scope, ManyStarsEndQuickly) {
  std::string glob, path;
  for (int i = 0; i < 40; ++i) glob += "**/*a*a*a*/", path += "aaaaaaaaaaaaaaaaaaaaaab/";
  EXPECT_FALSE(covers(glob + "q", path + "z"));
}

TEST(Scope, PathsBelowFolders) {
  EXPECT_TRUE(is_below("/a/b", "/a"));
  EXPECT_TRUE(is_below("/a", "/a"));
  EXPECT_TRUE(is_below("/a", "/"));
  EXPECT_FALSE(is_below("/ab", "/a"));
  EXPECT_EQ(normal("x/../y/.", "/a"), "/a/y");
  EXPECT_EQ(normal("/", "/a"), "/");
}

ProjectFile file_at(const std::string& root) {
  ProjectFile file;
  file.root = root;
  file.real_root = real(root);
  return file;
}

TEST(Scope, EverythingBelowTheRoot) {
  Folder folder;
  ProjectFile file = file_at(folder.path());
  EXPECT_TRUE(file.in_scope(folder / "a.cpp"));
  EXPECT_TRUE(file.in_scope(folder / "x/../a.cpp"));
  EXPECT_FALSE(file.in_scope(folder / "../a.cpp"));
  EXPECT_FALSE(file.in_scope(folder / "x/../../a.cpp"));
  EXPECT_FALSE(file.in_scope(folder.path() + "2/a.cpp"));
}

TEST(Scope, ScopeAndOutside) {
  Folder folder;
  ProjectFile file = file_at(folder.path());
  file.scope = {"src"};
  file.outside = {"src/generated/**", "**/*_test.cpp"};
  EXPECT_TRUE(file.in_scope(folder / "src/a.cpp"));
  EXPECT_FALSE(file.in_scope(folder / "lib/a.cpp"));
  EXPECT_FALSE(file.in_scope(folder / "src/generated/a.cpp"));
  EXPECT_FALSE(file.in_scope(folder / "src/a_test.cpp"));
}

TEST(Scope, LinksCountWhereTheyLead) {
  Folder ours, other;
  ours.put("src/a.cpp", "");
  other.put("b.cpp", "");
  fs::create_directory_symlink(other.path(), ours / "link");
  fs::create_directory_symlink(ours / "src", ours / "inner");
  fs::create_directory_symlink(ours.path(), other / "way");
  ProjectFile file = file_at(ours.path());
  EXPECT_FALSE(file.in_scope(ours / "link/b.cpp"));
  EXPECT_TRUE(file.in_scope(ours / "inner/a.cpp"));
  file.outside = {"src"};
  EXPECT_FALSE(file.in_scope(ours / "inner/a.cpp"));
  // The root itself is reached through a link.
  ProjectFile linked = file_at(other / "way");
  EXPECT_TRUE(linked.in_scope(other / "way/src/a.cpp"));
  EXPECT_TRUE(linked.in_scope(ours / "src/a.cpp"));
}

TEST(Scope, SystemHeadersAreNeverOurs) {
  ProjectFile file = file_at("/");
  EXPECT_FALSE(file.in_scope("/usr/include/stdio.h"));
  EXPECT_TRUE(file.in_scope("/home/a.cpp"));
  EXPECT_TRUE(file_at("/usr/include/nav").in_scope("/usr/include/nav/a.h"));
}

}  // namespace
}  // namespace dextral::project
