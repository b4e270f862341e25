// Each file of examples/ gives just the problems that stand in it as comments.
#include <algorithm>
#include <fstream>

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

}  // namespace
}  // namespace dextral::project
