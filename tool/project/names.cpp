// Name patterns: "C_{to}{from}" read against names of the code.
//
// A placeholder stands for a letter or word of `letters` or for the name of a
// known frame; of several that fit the longest is tried first. {any} stands for
// one or more characters. Case counts. The pattern must fit the whole name, as
// it stands or without m_ and underscores around it.
#include "project/names.h"

#include <algorithm>
#include <map>

#include "phrase/phrase.h"
#include "project/project.h"

namespace dextral::project {

namespace {

std::string bare(std::string name) {
  if (name.rfind("m_", 0) == 0) name = name.substr(2);
  name.erase(0, std::min(name.find_first_not_of('_'), name.size()));
  while (!name.empty() && name.back() == '_') name.pop_back();
  return name;
}

class Matcher {
 public:
  Matcher(const ProjectFile& file, const std::vector<PatternPart>& parts) : file_(file), parts_(parts) {}

  // The frames of the placeholders, or nothing.
  const std::map<std::string, std::string>* run(const std::string& name) {
    filled_.clear();
    return fits(0, name) ? &filled_ : nullptr;
  }

 private:
  bool fits(std::size_t part, const std::string& rest) {
    if (part == parts_.size()) return rest.empty();
    const PatternPart& now = parts_[part];
    if (!now.placeholder) return rest.rfind(now.text, 0) == 0 && fits(part + 1, rest.substr(now.text.size()));
    for (std::size_t length = rest.size(); length > 0; --length)
      if (takes(part, rest.substr(0, length), rest.substr(length))) return true;
    return false;
  }

  bool takes(std::size_t part, const std::string& word, const std::string& rest) {
    const std::string& slot = parts_[part].text;
    if (slot == "any") return fits(part + 1, rest);
    std::string frame = frame_of(word);
    if (frame.empty()) return false;
    auto [at, fresh] = filled_.try_emplace(slot, frame);
    if (!fresh) return at->second == frame && fits(part + 1, rest);
    if (fits(part + 1, rest)) return true;
    filled_.erase(slot);
    return false;
  }

  std::string frame_of(const std::string& word) const {
    for (const auto& [letter, frame] : file_.letters)
      if (letter == word) return frame;
    return file_.frames.find(word) ? word : "";
  }

  const ProjectFile& file_;
  const std::vector<PatternPart>& parts_;
  std::map<std::string, std::string> filled_;
};

std::string fill(const std::string& phrase, const std::map<std::string, std::string>& filled) {
  auto parts = pattern_parts(phrase);
  if (!parts) return "";
  std::string text;
  for (const PatternPart& part : *parts) {
    auto frame = part.placeholder ? filled.find(part.text) : filled.end();
    text += frame == filled.end() ? part.text : frame->second;
  }
  return text;
}

}  // namespace

std::optional<std::vector<PatternPart>> pattern_parts(const std::string& pattern) {
  std::vector<PatternPart> parts;
  for (std::size_t at = 0; at < pattern.size();) {
    if (pattern[at] == '}') return std::nullopt;
    bool placeholder = pattern[at] == '{';
    std::size_t end = placeholder ? pattern.find('}', at) : std::min(pattern.find_first_of("{}", at), pattern.size());
    if (end == std::string::npos) return std::nullopt;
    std::string text = pattern.substr(at + placeholder, end - at - placeholder);
    bool word = !text.empty() &&
                std::all_of(text.begin(), text.end(), [](unsigned char c) { return std::isalnum(c) || c == '_'; });
    if (placeholder && !word) return std::nullopt;
    parts.push_back({text, placeholder, at});
    at = end + placeholder;
  }
  return parts;
}

std::optional<Quantity> named(const ProjectFile& file, const std::string& name) {
  for (const NamePattern& pattern : file.patterns) {
    auto parts = pattern_parts(pattern.pattern);
    if (!parts) continue;
    Matcher matcher(file, *parts);
    const auto* filled = matcher.run(name);
    if (!filled) filled = matcher.run(bare(name));
    if (!filled) continue;
    auto parsed = phrase::parse(fill(pattern.phrase, *filled));
    if (auto* quantity = std::get_if<Quantity>(&parsed)) return *quantity;
  }
  return std::nullopt;
}

}  // namespace dextral::project
