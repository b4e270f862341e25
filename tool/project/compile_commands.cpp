#include "project/compile_commands.h"

#include <algorithm>
#include <filesystem>
#include <map>
#include <set>
#include <system_error>

#include "project/flags.h"
#include "project/json_text.h"
#include "project/scope.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

using NodeKind = JsonNode::Kind;

class DatabaseReader {
 public:
  DatabaseReader(const std::string& path, std::vector<Problem>& problems, std::vector<std::string>& notes)
      : path_(path),
        folder_(fs::path(path).parent_path().string()),
        notes_(notes),
        check_(path, "the JSON compilation database format, or write the file anew with your build system", problems) {}

  std::vector<Unit> run(const JsonNode& root) {
    if (!check_.is(root, NodeKind::list, "a list of compile commands")) return {};
    for (const JsonNode& entry : root.items) read(entry);
    tell();
    std::vector<Unit> units;
    for (auto& [file, unit] : units_) units.push_back(std::move(unit));
    return units;
  }

 private:
  void read(const JsonNode& entry) {
    if (!check_.is(entry, NodeKind::object, "a compile command")) return;
    const JsonNode* file = check_.get(entry, "file", NodeKind::text, "a path");
    if (!file) {
      if (!entry.find("file")) check_.problem(entry, "the key \"file\" is missing", "write the file anew");
      return;
    }
    std::string directory = check_.text(entry, "directory", "a path");
    Unit unit;
    unit.directory = normal(directory, folder_);
    unit.file = normal(file->text, unit.directory);
    std::error_code error;
    if (!is_source(unit.file) || units_.contains(unit.file)) return;
    if (!fs::is_regular_file(unit.file, error)) {
      gone_.insert(unit.file);
      return;
    }
    if (auto words = command(entry)) {
      unit.arguments = arguments(*words, unit);
      units_.emplace(unit.file, std::move(unit));
    }
  }

  std::optional<std::vector<std::string>> command(const JsonNode& entry) {
    if (entry.find("arguments")) {
      const JsonNode* list = check_.get(entry, "arguments", NodeKind::list, "a list of texts");
      if (!list) return std::nullopt;
      std::vector<std::string> words;
      for (const JsonNode& item : list->items) {
        if (!check_.is(item, NodeKind::text, "a text")) return std::nullopt;
        words.push_back(item.text);
      }
      return words;
    }
    if (const JsonNode* text = check_.get(entry, "command", NodeKind::text, "a text")) return split_command(text->text);
    if (!entry.find("command"))
      check_.problem(entry, "the entry has neither \"command\" nor \"arguments\"", "write the file anew");
    return std::nullopt;
  }

  std::vector<std::string> arguments(const std::vector<std::string>& words, const Unit& unit) {
    std::vector<std::string> missing, flags = clean_flags(words, unit.directory, missing);
    missing_.insert(missing.begin(), missing.end());
    Language language = language_of(unit.file);
    if (compiler_of(words).find("++") != std::string::npos) language = Language::cxx;
    for (const std::string& flag : flags)
      if (flag.rfind("-x", 0) == 0) language = flag.find("++") == std::string::npos ? Language::c : Language::cxx;
    return settle_language(std::move(flags), unit.file, language);
  }

  void tell() {
    auto note = [&](const std::set<std::string>& files, const std::string& what) {
      if (files.empty()) return;
      std::string more = files.size() > 1 ? " and " + std::to_string(files.size() - 1) + " more" : "";
      notes_.push_back(path_ + ": " + what + ": " + *files.begin() + more);
    };
    note(gone_, "files that do not exist are left out");
    note(missing_, "response files that cannot be read; their flags are missing");
  }

  const std::string& path_;
  std::string folder_;
  std::vector<std::string>& notes_;
  JsonChecker check_;
  std::map<std::string, Unit> units_;
  std::set<std::string> gone_, missing_;
};

}  // namespace

std::vector<Unit> read_compile_commands(const std::string& path, std::vector<Problem>& problems,
                                        std::vector<std::string>& notes) {
  std::string text;
  if (!read_file(path, text, problems, kMostBytesGenerated)) return {};
  std::size_t before = problems.size();
  JsonNode root = read_json(path, text, problems);
  if (problems.size() != before) return {};
  return DatabaseReader(path, problems, notes).run(root);
}

}  // namespace dextral::project
