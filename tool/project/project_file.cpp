#include "project/project_file.h"

#include <algorithm>
#include <filesystem>
#include <set>
#include <system_error>

#include "phrase/phrase.h"
#include "project/frames.h"
#include "project/json_text.h"
#include "project/names.h"
#include "project/scope.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

using NodeKind = JsonNode::Kind;

constexpr std::size_t kMostWildcards = 2;

// `{to}` as a word of the same length that no frame has, so that places in the
// phrase stay what they are.
std::string slot_word(const std::string& slot) { return "_" + slot + "_"; }

std::string plain_words(std::string phrase) {
  for (char& c : phrase)
    if (c == '{' || c == '}') c = '_';
  return phrase;
}

class FileReader {
 public:
  FileReader(ProjectFile& file, std::vector<Problem>& problems, std::vector<std::string>& notes)
      : file_(file), notes_(notes), check_(file.path, "docs/project-file.md", problems) {}

  void run(const JsonNode& root) {
    if (!check_.is(root, NodeKind::object, "an object")) return;
    check_.keys(root, {"$schema", "about", "frames", "only declared frames", "letters", "names", "contracts", "scope",
                       "outside", "models", "compile commands"});
    check_.text(root, "$schema");
    check_.text(root, "about");
    if (const JsonNode* frames = check_.get(root, "frames", NodeKind::object, "an object of frames"))
      read_frames(*frames, file_, check_);
    if (const JsonNode* only = check_.get(root, "only declared frames", NodeKind::boolean, "true or false"))
      file_.only_declared_frames = only->truth;
    each(root, "letters", "an object: letters to frames", &FileReader::letter);
    each(root, "names", "an object: patterns to phrases", &FileReader::pattern);
    each(root, "contracts", "an object: qualified names to phrases", &FileReader::contract);
    globs(root, "scope", file_.scope);
    globs(root, "outside", file_.outside);
    models(root);
    compile_commands(root);
  }

 private:
  void each(const JsonNode& root, const char* key, const char* what,
            void (FileReader::*visit)(const JsonNode&, const JsonNode&)) {
    const JsonNode* node = check_.get(root, key, NodeKind::object, what);
    if (!node) return;
    for (const JsonMember& member : node->members) (this->*visit)(member.key, member.value);
  }

  // The texts of a list.
  std::vector<const JsonNode*> texts(const JsonNode& root, const char* key, const char* what) {
    std::vector<const JsonNode*> list;
    const JsonNode* node = check_.get(root, key, NodeKind::list, what);
    if (!node) return list;
    for (const JsonNode& item : node->items)
      if (check_.is(item, NodeKind::text, "a text")) list.push_back(&item);
    return list;
  }

  void note(const JsonNode& at, std::size_t offset, const std::string& message) {
    notes_.push_back(file_.path + ":" + std::to_string(at.line) + ":" + std::to_string(at.column_of(offset)) + ": " +
                     message);
  }

  void letter(const JsonNode& key, const JsonNode& node) {
    bool word = !key.text.empty() && std::all_of(key.text.begin(), key.text.end(),
                                                 [](unsigned char c) { return std::isalnum(c) || c == '_'; });
    if (!word) return check_.problem(key, "\"" + key.text + "\" cannot stand in a name", "use letters, digits and _");
    if (!check_.is(node, NodeKind::text, "the name of a frame")) return;
    if (!file_.frames.find(node.text)) {
      auto near = nearest_word(node.text, file_.frames.names());
      return check_.problem(node, "the frame \"" + node.text + "\" is not declared",
                            near ? "did you mean \"" + *near + "\"?" : "declare it under \"frames\"");
    }
    file_.letters.emplace_back(key.text, node.text);
  }

  void pattern(const JsonNode& key, const JsonNode& node) {
    auto parts = pattern_parts(key.text);
    if (!parts)
      return check_.problem(key, "a placeholder in \"" + key.text + "\" is not complete",
                            "write it as a word in braces: {to}");
    std::set<std::string> slots;
    std::size_t wildcards = 0;
    for (const PatternPart& part : *parts) {
      if (part.placeholder && part.text == "any")
        ++wildcards;
      else if (part.placeholder)
        slots.insert(part.text);
    }
    if (slots.empty())
      return check_.problem(key, "the pattern \"" + key.text + "\" has no placeholder for a frame",
                            "write for instance \"C_{to}{from}\"");
    if (wildcards > kMostWildcards)
      return check_.problem(key, "the pattern has more than two {any}", "say more of the name");
    if (!separable(*parts))
      return check_.problem(key, "two placeholders stand side by side, and there are no letters to tell them apart",
                            "say under \"letters\" which letters stand for which frames");
    if (!check_.is(node, NodeKind::text, "a phrase") || !template_fits(node, slots)) return;
    file_.patterns.push_back({key.text, node.text});
  }

  bool separable(const std::vector<PatternPart>& parts) const {
    if (!file_.letters.empty()) return true;
    auto pair = [](const PatternPart& a, const PatternPart& b) { return a.placeholder && b.placeholder; };
    return std::adjacent_find(parts.begin(), parts.end(), pair) == parts.end();
  }

  bool template_fits(const JsonNode& node, const std::set<std::string>& slots) {
    auto parts = pattern_parts(node.text);
    if (!parts) {
      check_.problem(node, "a placeholder in the phrase is not complete", "write it as a word in braces: {to}");
      return false;
    }
    std::set<std::string> used;
    for (const PatternPart& part : *parts) {
      if (!part.placeholder) continue;
      used.insert(slot_word(part.text));
      if (slots.contains(part.text)) continue;
      std::string remedy = part.text == "any" ? "{any} stands for no frame; give the part a name"
                                              : word_remedy(part.text, {slots.begin(), slots.end()});
      check_.problem_inside(node, part.offset, "the pattern has no placeholder {" + part.text + "}", remedy);
      return false;
    }
    return phrase_fits(node, plain_words(node.text), used);
  }

  // `slots` are words that stand for frames to come.
  bool phrase_fits(const JsonNode& node, const std::string& text, const std::set<std::string>& slots) {
    if (std::size_t first = text.find_first_not_of(' ');
        first != std::string::npos && text.rfind("accept ", first) == first) {
      check_.problem_inside(node, first, "an acceptance belongs in a comment beside the code",
                            "write //| " + text.substr(first));
      return false;
    }
    auto parsed = phrase::parse(text);
    if (const auto* error = std::get_if<phrase::Error>(&parsed)) {
      check_.problem_inside(
          node, std::min(error->offset, node.text.size()),
          "the phrase does not parse: " + error->message + (error->wrong.empty() ? "" : ", not `" + error->wrong + "`"),
          error->nearest.empty() ? "see docs/phrases.md" : "did you mean `" + error->nearest + "`?");
      return false;
    }
    std::set<std::string> told;
    for (const Frame& frame : phrase::mentioned(std::get<Quantity>(parsed)))
      if (!frame.variable && !slots.contains(frame.name) && told.insert(frame.name).second && !known(node, frame.name))
        return false;
    return true;
  }

  bool known(const JsonNode& node, const std::string& name) {
    if (file_.frames.find(name)) return true;
    auto near = file_.frames.nearest(name);
    std::size_t at = node.text.find(name);
    std::string message = "no frame \"" + name + "\" is declared";
    std::string remedy = near ? "did you mean \"" + *near + "\"?" : "declare it under \"frames\"";
    if (file_.only_declared_frames)
      check_.problem_inside(node, at, message, remedy);
    else if (near)
      note(node, at, message + "; " + remedy);
    return !file_.only_declared_frames;
  }

  void contract(const JsonNode& key, const JsonNode& node) {
    Contract contract;
    contract.entity = key.text;
    contract.line = key.line;
    auto add = [&](const std::string& name, const JsonNode& text) {
      if (check_.is(text, NodeKind::text, "a phrase") && phrase_fits(text, text.text, {}))
        contract.phrases.emplace_back(name, text.text);
    };
    if (key.text.empty() || key.text.rfind("::", 0) == 0)
      return check_.problem(key, "a qualified name was expected", "write for instance \"nav::rotate\"");
    if (node.kind == NodeKind::text)
      add("", node);
    else if (check_.is(node, NodeKind::object, "a phrase, or an object of phrases"))
      for (const JsonMember& member : node.members) add(member.key.text, member.value);
    if (!contract.phrases.empty()) file_.contracts.push_back(std::move(contract));
  }

  void globs(const JsonNode& root, const char* key, std::vector<std::string>& out) {
    for (const JsonNode* item : texts(root, key, "a list of globs")) {
      std::string wrong = wrong_glob(item->text);
      if (wrong.empty())
        out.push_back(item->text);
      else
        check_.problem(*item, wrong + ": \"" + item->text + "\"", "write for instance \"src/**\" or \"tests/*.cpp\"");
    }
  }

  void models(const JsonNode& root) {
    for (const JsonNode* item : texts(root, "models", "a list of model files")) {
      std::error_code error;
      if (fs::is_regular_file(normal(item->text, file_.root), error))
        file_.models.push_back(item->text);
      else
        check_.problem(*item, "there is no model file " + normal(item->text, file_.root),
                       "give its path from the folder of the project file");
    }
  }

  void compile_commands(const JsonNode& root) {
    const JsonNode* node = check_.get(root, "compile commands", NodeKind::text, "a path");
    if (!node) return;
    std::error_code error;
    if (fs::exists(normal(node->text, file_.root), error))
      file_.compile_commands = node->text;
    else
      check_.problem(*node, "there is no " + normal(node->text, file_.root),
                     "configure the build that writes it, or take the key out");
  }

  ProjectFile& file_;
  std::vector<std::string>& notes_;
  JsonChecker check_;
};

}  // namespace

ProjectFile read_project_file(const std::string& path, std::vector<Problem>& problems,
                              std::vector<std::string>& notes) {
  ProjectFile file;
  file.path = path;
  file.root = fs::path(path).parent_path().string();
  file.real_root = real(file.root);
  std::string text;
  if (!read_file(path, text, problems)) return file;
  std::size_t before = problems.size();
  JsonNode root = read_json(path, text, problems);
  if (problems.size() == before) FileReader(file, problems, notes).run(root);
  return file;
}

}  // namespace dextral::project
