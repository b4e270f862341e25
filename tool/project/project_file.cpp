#include "project/project_file.h"

#include <algorithm>
#include <filesystem>

#include "phrase/phrase.h"
#include "project/json_text.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

class FileReader {
 public:
  FileReader(ProjectFile& file, std::vector<Problem>& problems) : file_(file), problems_(problems) {}

  void run(const JsonNode& root) {
    if (!is(root, JsonNode::Kind::object, "an object")) return;
    keys(root, {"frames", "letters", "names", "contracts", "scope", "outside", "models", "compile commands", "about"});
    each(root, "frames", [&](const JsonNode& key, const JsonNode& node) { frame(key, node); });
    each(root, "letters", [&](const JsonNode& key, const JsonNode& node) { letter(key, node); });
    each(root, "names", [&](const JsonNode& key, const JsonNode& node) { pattern(key, node); });
    each(root, "contracts", [&](const JsonNode& key, const JsonNode& node) { contract(key, node); });
    texts(root, "scope", file_.scope);
    texts(root, "outside", file_.outside);
    texts(root, "models", file_.models);
    if (const JsonNode* commands = root.find("compile commands"); commands && is(*commands, JsonNode::Kind::text, "a path")) file_.compile_commands = commands->text;
  }

 private:
  void problem(const JsonNode& at, const std::string& message, const std::string& remedy, std::size_t inside = 0) {
    problems_.push_back({file_.path, at.line, at.column + std::uint32_t(inside ? inside + 1 : 0), message, remedy});
  }
  bool is(const JsonNode& node, JsonNode::Kind kind, const std::string& what) {
    if (node.kind == kind) return true;
    problem(node, what + " was expected here", "see docs/project-file.md");
    return false;
  }
  void keys(const JsonNode& node, const std::vector<std::string>& known) {
    for (const JsonMember& member : node.members) {
      if (std::find(known.begin(), known.end(), member.key.text) != known.end()) continue;
      auto near = nearest_word(member.key.text, known);
      problem(member.key, "the key \"" + member.key.text + "\" is unknown", near ? "did you mean \"" + *near + "\"?" : "take it out");
    }
  }
  template <typename Visit>
  void each(const JsonNode& root, const char* key, Visit visit) {
    const JsonNode* node = root.find(key);
    if (!node || !is(*node, JsonNode::Kind::object, "an object")) return;
    for (const JsonMember& member : node->members) visit(member.key, member.value);
  }
  void texts(const JsonNode& root, const char* key, std::vector<std::string>& out) {
    const JsonNode* node = root.find(key);
    if (!node || !is(*node, JsonNode::Kind::list, "a list of texts")) return;
    for (const JsonNode& item : node->items)
      if (is(item, JsonNode::Kind::text, "a text")) out.push_back(item.text);
  }

  void frame(const JsonNode& key, const JsonNode& node) {
    if (!is(node, JsonNode::Kind::object, "an object")) return;
    keys(node, {"axes", "hand", "parallel to", "alias of", "about"});
    file_.declared_frames.push_back(key.text);
    if (const JsonNode* of = node.find("alias of")) {
      if (auto wrong = file_.frames.alias(key.text, of->text)) problem(*of, *wrong, "name another frame");
      return;
    }
    FrameFacts facts;
    facts.name = key.text;
    if (const JsonNode* hand = node.find("hand")) {
      if (hand->text != "right" && hand->text != "left") problem(*hand, "right or left was expected", "write \"right\" or \"left\"");
      else facts.hand = hand->text == "left" ? Hand::left : Hand::right;
    }
    if (const JsonNode* parallel = node.find("parallel to")) facts.parallel_to = parallel->text;
    if (const JsonNode* about = node.find("about")) facts.about = about->text;
    if (const JsonNode* axes = node.find("axes"); axes && !axis_list(*axes, facts)) return;
    if (auto wrong = file_.frames.declare(facts)) problem(key, *wrong, "correct the frame");
  }

  bool axis_list(const JsonNode& axes, FrameFacts& facts) {
    if (axes.items.size() != 3) return problem(axes, "three axes were expected", "for instance [\"forward\", \"right\", \"down\"]"), false;
    std::array<Direction, 3> list{};
    std::vector<std::string> words;
    for (int i = 0; i < 18; ++i) words.push_back(text(Direction(i)));
    for (std::size_t i = 0; i < 3; ++i) {
      auto found = direction(axes.items[i].text);
      if (!found) {
        auto near = nearest_word(axes.items[i].text, words);
        problem(axes.items[i], "\"" + axes.items[i].text + "\" is no direction", near ? "did you mean \"" + *near + "\"?" : "north, east, down, forward, right ...");
        return false;
      }
      list[i] = *found;
    }
    facts.axes = list;
    return true;
  }

  void letter(const JsonNode& key, const JsonNode& node) {
    if (!is(node, JsonNode::Kind::text, "the name of a frame")) return;
    if (!file_.frames.find(node.text)) {
      auto near = nearest_word(node.text, file_.frames.names());
      return problem(node, "the frame \"" + node.text + "\" is not declared", near ? "did you mean \"" + *near + "\"?" : "declare it under \"frames\"");
    }
    file_.letters.emplace_back(key.text, node.text);
  }

  void pattern(const JsonNode& key, const JsonNode& node) {
    if (!is(node, JsonNode::Kind::text, "a phrase")) return;
    if (key.text.find('{') == std::string::npos || key.text.find('}') == std::string::npos)
      return problem(key, "the pattern \"" + key.text + "\" has no placeholder", "write for instance \"C_{to}{from}\"");
    std::string trial = node.text;
    for (std::size_t at; (at = trial.find('{')) != std::string::npos;) {
      std::size_t close = trial.find('}', at);
      if (close == std::string::npos) return problem(node, "a placeholder is not closed", "write {to}");
      std::string slot = trial.substr(at, close - at + 1);
      if (key.text.find(slot) == std::string::npos) return problem(node, "the pattern has no placeholder " + slot, "use the placeholders of the pattern");
      trial.replace(at, close - at + 1, "frame");
    }
    if (auto parsed = phrase::parse(trial); auto* error = std::get_if<phrase::Error>(&parsed)) return wrong_phrase(node, *error);
    file_.patterns.push_back({key.text, node.text});
  }

  void wrong_phrase(const JsonNode& node, const phrase::Error& error) {
    problem(node, "the phrase does not parse: " + error.message + (error.wrong.empty() ? "" : ", not `" + error.wrong + "`"),
            error.nearest.empty() ? "see docs/phrases.md" : "did you mean `" + error.nearest + "`?", error.offset);
  }

  void contract(const JsonNode& key, const JsonNode& node) {
    Contract contract;
    contract.entity = key.text;
    contract.line = key.line;
    auto add = [&](const std::string& name, const JsonNode& text) {
      if (!is(text, JsonNode::Kind::text, "a phrase")) return;
      auto parsed = phrase::parse(text.text);
      if (auto* error = std::get_if<phrase::Error>(&parsed)) return wrong_phrase(text, *error);
      contract.phrases.emplace_back(name, text.text);
    };
    if (node.kind == JsonNode::Kind::text) add("", node);
    else if (is(node, JsonNode::Kind::object, "a phrase, or an object of phrases"))
      for (const JsonMember& member : node.members) add(member.key.text, member.value);
    file_.contracts.push_back(std::move(contract));
  }

  ProjectFile& file_;
  std::vector<Problem>& problems_;
};

bool glob(const char* pattern, const char* text) {
  if (!*pattern) return !*text;
  if (pattern[0] == '*' && pattern[1] == '*') {
    const char* rest = pattern[2] == '/' ? pattern + 3 : pattern + 2;
    for (const char* at = text;; ++at) {
      if (glob(rest, at)) return true;
      if (!*at) return false;
    }
  }
  if (*pattern == '*') {
    for (const char* at = text;; ++at) {
      if (glob(pattern + 1, at)) return true;
      if (!*at || *at == '/') return false;
    }
  }
  return *text && (*pattern == '?' ? *text != '/' : *pattern == *text) && glob(pattern + 1, text + 1);
}

// A glob, a file or a folder.
bool covers(const std::string& pattern, const std::string& path) {
  std::string clean = pattern;
  while (!clean.empty() && clean.back() == '/') clean.pop_back();
  if (clean == "." || clean == "**") return true;
  return glob(clean.c_str(), path.c_str()) || path.rfind(clean + "/", 0) == 0;
}

}  // namespace

bool ProjectFile::in_scope(const std::string& path) const {
  std::string relative = fs::path(path).lexically_normal().lexically_relative(root).string();
  if (relative.empty() || relative.rfind("..", 0) == 0) return false;
  auto any = [&](const std::vector<std::string>& list) { return std::any_of(list.begin(), list.end(), [&](const std::string& p) { return covers(p, relative); }); };
  return (scope.empty() || any(scope)) && !any(outside);
}

ProjectFile read_project_file(const std::string& path, std::vector<Problem>& problems) {
  ProjectFile file;
  file.path = path;
  file.root = fs::path(path).parent_path().string();
  std::string text;
  if (!read_file(path, text, problems)) return file;
  std::size_t before = problems.size();
  JsonNode root = read_json(path, text, problems);
  if (problems.size() == before) FileReader(file, problems).run(root);
  return file;
}

}  // namespace dextral::project
