#include "run/pages.h"

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "core/frame.h"

namespace dextral::run {

namespace {

std::optional<std::string> read_file(const std::filesystem::path& path) {
  std::ifstream stream(path, std::ios::binary);
  if (!stream) return std::nullopt;
  std::ostringstream text;
  text << stream.rdbuf();
  return text.str();
}

std::string no_such_rule(const std::string& id, const std::vector<Rule>& rules) {
  std::vector<std::string> ids;
  for (const Rule& rule : rules) ids.push_back(rule.id);
  std::string text = "there is no rule `" + id + "`";
  if (auto nearest = nearest_word(id, ids)) text += "; did you mean `" + *nearest + "`?";
  return text + "; `dextral rules` lists them\n";
}

}  // namespace

std::vector<std::string> page_folders(const std::string& program) {
  const std::filesystem::path folder = std::filesystem::path(program).parent_path();
  return {folder / "../share/doc/dextral/docs/rules", folder / "../docs/rules"};
}

Page rule_page(const std::string& id, const std::vector<Rule>& rules, const std::vector<std::string>& folders) {
  auto rule = std::find_if(rules.begin(), rules.end(), [&](const Rule& r) { return r.id == id; });
  if (rule == rules.end()) return {false, no_such_rule(id, rules)};
  for (const std::string& folder : folders)
    if (auto text = read_file(std::filesystem::path(folder) / (id + ".md"))) return {true, *text};
  return {true, rule->id + ": " + rule->summary + "\n"};
}

std::string rule_list(const std::vector<Rule>& rules) {
  std::size_t width = 0;
  for (const Rule& rule : rules) width = std::max(width, rule.id.size());
  std::string list;
  for (const Rule& rule : rules) list += rule.id + std::string(width + 2 - rule.id.size(), ' ') + rule.summary + "\n";
  return list;
}

}  // namespace dextral::run
