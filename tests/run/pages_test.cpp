// The rules as `dextral rules` shows them.
#include "run/pages.h"

#include <gtest/gtest.h>
#include <unistd.h>

#include <filesystem>
#include <fstream>

namespace dextral::run {
namespace {

std::vector<Rule> two_rules() {
  Rule order, scalar;
  order.id = "wrong-order";
  order.summary = "factors stand in the wrong order";
  scalar.id = "scalar-place";
  scalar.summary = "scalar first read as scalar last";
  return {scalar, order};
}

TEST(Pages, TheListIsAligned) {
  EXPECT_EQ(rule_list(two_rules()),
            "scalar-place  scalar first read as scalar last\nwrong-order   factors stand in the wrong order\n");
}

TEST(Pages, ThePageIsReadWhereItExists) {
  const auto folder = std::filesystem::temp_directory_path() / ("dextral-pages-" + std::to_string(getpid()));
  std::filesystem::create_directories(folder);
  std::ofstream(folder / "wrong-order.md") << "# wrong-order\n";
  const std::vector<std::string> folders{"/nowhere", folder};
  EXPECT_EQ(rule_page("wrong-order", two_rules(), folders).text, "# wrong-order\n");
  EXPECT_EQ(rule_page("scalar-place", two_rules(), folders).text, "scalar-place: scalar first read as scalar last\n");
  std::filesystem::remove_all(folder);
}

TEST(Pages, AWrongIdIsNoPath) {
  Page page = rule_page("../../etc/passwd", two_rules(), {"/"});
  EXPECT_FALSE(page.found);
  EXPECT_NE(rule_page("wrong-ordr", two_rules(), {}).text.find("did you mean `wrong-order`?"), std::string::npos);
}

TEST(Pages, FoldersBesideTheProgram) {
  EXPECT_EQ(page_folders("/usr/bin/dextral").front(), "/usr/bin/../share/doc/dextral/docs/rules");
}

}  // namespace
}  // namespace dextral::run
