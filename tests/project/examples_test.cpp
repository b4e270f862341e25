// Each file of examples/ gives just the problems that stand in it as comments.
#include <algorithm>
#include <fstream>
#include <iterator>

#include "phrase/phrase.h"
#include "project/project_file.h"
#include "support.h"

namespace dextral::project {
namespace {

namespace fs = std::filesystem;

const std::string kExamples = std::string(DEXTRAL_SOURCE) + "/tests/project/examples";

Lines expected(const std::string& path) {
  const std::string mark = "// expect ";
  std::ifstream in(path);
  Lines list;
  for (std::string line; std::getline(in, line);)
    if (line.rfind(mark, 0) == 0) list.push_back(line.substr(mark.size()));
  return list;
}

TEST(Examples, GiveTheProblemsThatTheyName) {
  int right = 0, wrong = 0;
  for (const auto& entry : fs::directory_iterator(kExamples)) {
    std::string name = entry.path().filename().string();
    if (name.rfind("right-", 0) != 0 && name.rfind("wrong-", 0) != 0) continue;
    ++(name[0] == 'r' ? right : wrong);
    std::vector<Problem> problems;
    std::vector<std::string> notes;
    read_project_file(entry.path().string(), problems, notes);
    Lines got = lines(problems, kExamples), want = expected(entry.path().string());
    std::sort(got.begin(), got.end());
    std::sort(want.begin(), want.end());
    EXPECT_EQ(got, want) << name;
    EXPECT_EQ(name[0] == 'r', want.empty()) << name;
  }
  EXPECT_GE(right, 3);
  EXPECT_GE(wrong, 10);
}

// The first example of a page.
std::string shown(const std::string& page) {
  std::ifstream in(std::string(DEXTRAL_SOURCE) + "/docs/" + page);
  std::string text(std::istreambuf_iterator<char>(in), {});
  std::size_t start = text.find("```json\n") + 8;
  return text.substr(start, text.find("```", start) - start);
}

TEST(Examples, ThePageOfTheProjectFileShowsARightOne) {
  Folder folder;
  folder.put("tools/kit.json", shown("library-models.md"));
  folder.put("build/compile_commands.json", "[]");
  std::vector<Problem> problems;
  std::vector<std::string> notes;
  ProjectFile file = read_project_file(folder.put("dextral.json", shown("project-file.md")), problems, notes);
  EXPECT_EQ(lines(problems), Lines{});
  EXPECT_EQ(notes, Lines{});
  auto says = [&](const std::string& name) { return phrase::print(named(file, name).value()); };
  for (const char* name : {"C_bn", "m_C_bn", "C_bn_", "C_bodyned"}) EXPECT_EQ(says(name), "passive ned to body");
  EXPECT_EQ(says("velocity_n"), "in ned");
}

TEST(Examples, ThePageOfTheModelsShowsARightOne) {
  std::vector<Problem> problems;
  LibraryModel model = read_model("kit.json", shown("library-models.md"), problems);
  EXPECT_EQ(lines(problems), Lines{});
  EXPECT_EQ(model.types.size(), 3u);
  EXPECT_EQ(model.functions.size(), 6u);
}

}  // namespace
}  // namespace dextral::project
