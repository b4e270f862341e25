// `dextral rules`: the list of rules, and the page of one.
//
// Pages are docs/rules/ID.md. They are looked for beside the program: where it
// is installed, and in the source tree that it was built in. Without pages the
// summary of the rule is the answer.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "rules/rule.h"

namespace dextral::run {

struct Page {
  bool found = false;
  std::string text;  // or what is wrong
};

// Folders where the pages may be, for a program at this path.
std::vector<std::string> page_folders(const std::string& program);

Page rule_page(const std::string& id, const std::vector<Rule>&, const std::vector<std::string>& folders);
std::string rule_list(const std::vector<Rule>&);

}  // namespace dextral::run
