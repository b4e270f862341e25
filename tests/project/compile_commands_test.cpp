// compile_commands.json: its entries as units, and what is told about the others.
#include "project/compile_commands.h"

#include "support.h"

namespace dextral::project {
namespace {

struct Read {
  std::vector<Unit> units;
  std::vector<Problem> problems;
  std::vector<std::string> notes;
};

Read read_in(const Folder& folder, const std::string& text) {
  Read read;
  read.units = read_compile_commands(folder.put("compile_commands.json", text), read.problems, read.notes);
  return read;
}

TEST(CompileCommands, CommandOrArguments) {
  Folder folder;
  folder.put("src/a.cpp", "");
  folder.put("src/b.c", "");
  Read read = read_in(
      folder, R"([
    {"directory": "build", "file": "../src/b.c", "arguments": ["gcc", "-I", "x y", "-c", "../src/b.c"], "output": "b.o"},
    {"directory": ")" +
                  folder.path() +
                  R"(/build", "file": "../src/../src/a.cpp", "command": "g++ -I../inc -DA=\"1 2\" -c ../src/a.cpp"}])");
  EXPECT_EQ(lines(read.problems), Lines{});
  ASSERT_EQ(read.units.size(), 2u);
  EXPECT_EQ(read.units[0].file, folder / "src/a.cpp");
  EXPECT_EQ(read.units[0].directory, folder / "build");
  EXPECT_EQ(read.units[0].arguments, (Lines{"-I" + (folder / "inc"), "-DA=1 2"}));
  EXPECT_EQ(read.units[1].arguments, Lines{"-I" + (folder / "build/x y")});
}

TEST(CompileCommands, TheFirstEntryOfAFileCounts) {
  Folder folder;
  folder.put("a.cpp", "");
  Read read = read_in(
      folder,
      R"([{"file": "a.cpp", "command": "g++ -DONE a.cpp"}, {"file": "./a.cpp", "command": "g++ -DTWO a.cpp"}])");
  ASSERT_EQ(read.units.size(), 1u);
  EXPECT_EQ(read.units[0].arguments, Lines{"-DONE"});
}

TEST(CompileCommands, FilesThatAreGoneAreNoted) {
  Folder folder;
  Read read = read_in(folder, R"([{"file": "b.cpp", "command": "g++ b.cpp"}, {"file": "a.cpp", "command": "g++ a.cpp"},
                                  {"file": "kernel.cu", "command": "nvcc kernel.cu"}, {"file": "start.s", "command": "as start.s"}])");
  EXPECT_TRUE(read.units.empty());
  EXPECT_TRUE(read.problems.empty());
  EXPECT_EQ(read.notes, Lines{(folder / "compile_commands.json") +
                              ": files that do not exist are left out: " + (folder / "a.cpp") + " and 1 more"});
}

TEST(CompileCommands, MissingResponseFilesAreNoted) {
  Folder folder;
  folder.put("a.cpp", "");
  Read read = read_in(folder, R"([{"file": "a.cpp", "command": "g++ @flags.rsp a.cpp"}])");
  EXPECT_EQ(read.notes,
            Lines{(folder / "compile_commands.json") +
                  ": response files that cannot be read; their flags are missing: " + (folder / "flags.rsp")});
}

TEST(CompileCommands, TheCompilerSaysTheLanguage) {
  Folder folder;
  folder.put("a.c", "");
  EXPECT_EQ(read_in(folder, R"([{"file": "a.c", "command": "ccache g++ -std=c++17 a.c"}])").units[0].arguments,
            (Lines{"-xc++", "-std=c++17"}));
  EXPECT_EQ(read_in(folder, R"([{"file": "a.c", "command": "gcc -std=c++17 a.c"}])").units[0].arguments, Lines{});
  EXPECT_EQ(read_in(folder, R"([{"file": "a.c", "command": "gcc -x c++ a.c"}])").units[0].arguments, Lines{"-xc++"});
  EXPECT_EQ(read_in(folder, R"([{"file": "a.c", "command": "g++ -x c a.c"}])").units[0].arguments, Lines{});
}

TEST(CompileCommands, EntriesThatCannotBeUsed) {
  Folder folder;
  folder.put("a.cpp", "");
  Read read = read_in(folder,
                      "[1,\n{\"command\": \"g++\"},\n{\"file\": \"a.cpp\"},\n{\"file\": 3},\n"
                      "{\"file\": \"a.cpp\", \"arguments\": \"g++\"},\n{\"file\": \"a.cpp\", \"arguments\": [2]}]");
  const std::string see = "; see the JSON compilation database format, or write the file anew with your build system";
  EXPECT_EQ(
      lines(read.problems),
      (Lines{"1:2: a compile command was expected here" + see, "2:1: the key \"file\" is missing; write the file anew",
             "3:1: the entry has neither \"command\" nor \"arguments\"; write the file anew",
             "4:10: a path was expected here" + see, "5:32: a list of texts was expected here" + see,
             "6:33: a text was expected here" + see}));
  EXPECT_EQ(lines(read_in(folder, "{}").problems), Lines{"1:1: a list of compile commands was expected here" + see});
  EXPECT_EQ(read_in(folder, "[").problems.size(), 1u);
}

}  // namespace
}  // namespace dextral::project
