// Which files a call reads, and with which flags.
#include "project/units.h"

#include "support.h"

namespace dextral::project {
namespace {

namespace fs = std::filesystem;

// Runs in the folder, as from a shell.
class Units : public testing::Test {
 protected:
  Units() : before_(fs::current_path()) { fs::current_path(folder.path()); }
  ~Units() override { fs::current_path(before_); }

  Project ask(const std::vector<std::string>& paths = {}, const std::vector<std::string>& flags = {}) {
    Request request;
    request.paths = paths;
    request.flags = flags;
    request.models_folder = std::string(DEXTRAL_SOURCE) + "/rules/libraries";
    return read(request);
  }

  // Paths relative to the folder.
  Lines files(const Project& project) const {
    Lines list;
    for (const Unit& unit : project.units)
      list.push_back(fs::path(unit.file).lexically_relative(folder.path()).string());
    return list;
  }

  void database(const Lines& sources, const std::string& name = "compile_commands.json") {
    std::string text;
    for (const std::string& source : sources) {
      folder.put(source, "");
      text += std::string(text.empty() ? "" : ",") + "{\"directory\": \"" + folder.path() + "\", \"file\": \"" +
              source + "\", \"command\": \"g++ -DOF_" + fs::path(source).stem().string() + " " + source + "\"}";
    }
    folder.put(name, "[" + text + "]");
  }

  Folder folder;

 private:
  fs::path before_;
};

const std::string kGuessed =
    "no compile_commands.json was found: flags are guessed; give it with --compile-commands, or flags behind --";

TEST_F(Units, WithoutADatabaseEverySourceBelow) {
  for (const char* name : {"b.cpp", "a/x.c", "a/y.cxx", "a/z.h", "notes.txt", ".git/no.c", "out/CMakeCache.txt",
                           "out/no.cpp", "x/CMakeFiles/no.c"})
    folder.put(name, "");
  Project project = ask();
  EXPECT_EQ(lines(project.problems), Lines{});
  EXPECT_EQ(files(project), (Lines{"a/x.c", "a/y.cxx", "b.cpp"}));
  EXPECT_EQ(project.notes, Lines{kGuessed});
  EXPECT_EQ(project.file.root, folder.path());
  EXPECT_EQ(project.file.path, "");
}

TEST_F(Units, HeadersWhereThereAreNoSources) {
  folder.put("include/nav/a.hpp", "");
  folder.put("include/nav/b.h", "class B;");
  Project project = ask();
  EXPECT_EQ(files(project), (Lines{"include/nav/a.hpp", "include/nav/b.h"}));
  EXPECT_EQ(project.units[1].arguments[0], "-xc++");
}

TEST_F(Units, TheWholeDatabaseInTheScope) {
  database({"src/a.cpp", "lib/b.cpp", "src/c.cpp"});
  folder.put("src/not_built.cpp", "");
  EXPECT_EQ(files(ask()), (Lines{"lib/b.cpp", "src/a.cpp", "src/c.cpp"}));
  folder.put("dextral.json", R"({"outside": ["lib"]})");
  EXPECT_EQ(files(ask()), (Lines{"src/a.cpp", "src/c.cpp"}));
}

TEST_F(Units, PathsChooseUnits) {
  database({"src/a.cpp", "lib/b.cpp", "src/c.cpp", "src2/d.cpp"});
  EXPECT_EQ(files(ask({"src"})), (Lines{"src/a.cpp", "src/c.cpp"}));
  EXPECT_EQ(files(ask({"src/c.cpp", "./lib/../lib/b.cpp", "src/c.cpp"})), (Lines{"lib/b.cpp", "src/c.cpp"}));
  EXPECT_EQ(ask({"src/a.cpp"}).units[0].arguments, Lines{"-DOF_a"});
}

TEST_F(Units, AHeaderTakesTheFlagsOfTheUnitMostLikeIt) {
  database({"src/gps/a.cpp", "src/nav/b.cpp", "src/nav/c.cpp"});
  folder.put("src/nav/c.h", "");
  folder.put("src/gps/z.hpp", "");
  folder.put("src/nav/new.c", "");
  Project project = ask({"src/nav/c.h", "src/gps/z.hpp", "src/nav/new.c"});
  EXPECT_EQ(files(project), (Lines{"src/gps/z.hpp", "src/nav/c.h", "src/nav/new.c"}));
  EXPECT_EQ(project.units[0].arguments, (Lines{"-xc++", "-DOF_a"}));
  EXPECT_EQ(project.units[1].arguments, (Lines{"-xc++", "-DOF_c"}));
  EXPECT_EQ(project.units[2].arguments, Lines{"-DOF_b"});
}

TEST_F(Units, TheDatabaseIsFoundUpwardsAndInBuild) {
  database({"src/deep/a.cpp"}, "build/compile_commands.json");
  Project project = ask({"src/deep/a.cpp"});
  EXPECT_EQ(project.units[0].arguments, Lines{"-DOF_a"});
  EXPECT_TRUE(project.notes.empty());
}

TEST_F(Units, TheDatabaseOfTheProjectFileAndOfTheCall) {
  database({"a.cpp"}, "one/compile_commands.json");
  folder.put("dextral.json", R"({"compile commands": "one"})");
  EXPECT_EQ(ask().units[0].arguments, Lines{"-DOF_a"});
  folder.put("two.json", R"([{"file": "a.cpp", "command": "g++ -DCALL a.cpp"}])");
  Request request;
  request.compile_commands = "two.json";
  EXPECT_EQ(read(request).units[0].arguments, Lines{"-DCALL"});
}

TEST_F(Units, AStrangersDatabaseIsNotTaken) {
  database({"other/b.cpp"});
  folder.put("mine/dextral.json", "{}");
  folder.put("mine/a.cpp", "");
  Project project = ask({"mine"});
  EXPECT_EQ(files(project), Lines{"mine/a.cpp"});
  EXPECT_EQ(project.units[0].arguments.back(), "-std=gnu++20");
  EXPECT_EQ(project.notes, Lines{(folder / "compile_commands.json") + " names no file of this project's scope"});
}

TEST_F(Units, FlagsOfTheCallAreForFilesWithoutACommand) {
  folder.put("a.cpp", "");
  folder.put("b.h", "class B;");
  Project project = ask({"a.cpp", "b.h"}, {"-Iinc", "-Wall", "-std=c++17"});
  EXPECT_EQ(project.units[0].arguments, (Lines{"-I" + (folder / "inc"), "-std=c++17"}));
  EXPECT_EQ(project.units[1].arguments, (Lines{"-xc++", "-I" + (folder / "inc"), "-std=c++17"}));
  EXPECT_TRUE(project.notes.empty());
}

TEST_F(Units, AFileNamedThroughALink) {
  database({"src/a.cpp"});
  fs::create_directory_symlink("src", "link");
  EXPECT_EQ(files(ask({"link/a.cpp"})), Lines{"src/a.cpp"});
}

TEST_F(Units, WhatCannotBeReadIsAProblem) {
  folder.put("notes.txt", "");
  Project project = ask({"gone.cpp", "notes.txt"});
  EXPECT_EQ(lines(project.problems),
            (Lines{"0:0: there is no such file or folder; check the path",
                   "0:0: this is no C or C++ file by its name; name sources, headers or folders"}));
  EXPECT_EQ(project.problems[0].file, folder / "gone.cpp");
}

TEST_F(Units, NothingToReadIsAProblem) {
  EXPECT_EQ(
      lines(ask().problems),
      Lines{
          "0:0: there is no C or C++ file to read in the scope; name other paths, or widen \"scope\" in dextral.json"});
}

TEST_F(Units, AFileOutsideTheScopeIsReadAndNoted) {
  folder.put("dextral.json", R"({"scope": ["src"]})");
  folder.put("lib/a.cpp", "");
  Project project = ask({"lib/a.cpp"}, {"-DA"});
  EXPECT_EQ(files(project), Lines{"lib/a.cpp"});
  EXPECT_EQ(project.notes, Lines{(folder / "lib/a.cpp") + " is outside the scope: nothing in it is judged"});
}

TEST_F(Units, TheProjectFileIsFoundUpwardsFromTheFirstPath) {
  folder.put("p/dextral.json", R"({"frames": {"mast": {}}})");
  folder.put("p/src/a.cpp", "");
  Project project = ask({"p/src/a.cpp"});
  EXPECT_EQ(project.file.path, folder / "p/dextral.json");
  EXPECT_EQ(project.file.root, folder / "p");
  EXPECT_EQ(project.file.declared_frames, Lines{"mast"});
}

TEST_F(Units, AGivenProjectFileSaysWhatToRead) {
  folder.put("p/own.json", "{}");
  folder.put("p/a.cpp", "");
  folder.put("b.cpp", "");
  Request request;
  request.project_file = "p/own.json";
  EXPECT_EQ(files(read(request)), Lines{"p/a.cpp"});
}

TEST_F(Units, WithoutAProjectFileTheRootHoldsAllPaths) {
  Folder other;
  folder.put("a.cpp", "");
  other.put("x/b.cpp", "");
  EXPECT_EQ(ask({other / "x"}).file.root, other / "x");
  Project both = ask({"a.cpp", other / "x/b.cpp"});
  EXPECT_EQ(both.units.size(), 2u);
  EXPECT_TRUE(both.file.in_scope(folder / "a.cpp") && both.file.in_scope(other / "x/b.cpp"));
}

TEST_F(Units, AProjectsModelCorrectsOneThatCameWithTheProgram) {
  folder.put("a.cpp", "");
  folder.put("own.json", R"({"library": "own", "functions": [{"name": "Eigen::MatrixBase::cross", "is": "opaque"}]})");
  folder.put("dextral.json", R"({"models": ["own.json"]})");
  Project project = ask();
  EXPECT_EQ(lines(project.problems), Lines{});
  EXPECT_EQ(project.models.functions("Eigen::MatrixBase::cross")->front().is, "opaque");
  EXPECT_NE(project.models.type("Eigen::Transform"), nullptr);
}

TEST_F(Units, AModelsFolderWithoutModels) {
  folder.put("a.cpp", "");
  Request request;
  request.models_folder = "none";
  EXPECT_EQ(lines(read(request).problems), Lines{"0:0: there are no library models in this folder; give the folder "
                                                 "with --models, or install the program anew"});
}

}  // namespace
}  // namespace dextral::project
