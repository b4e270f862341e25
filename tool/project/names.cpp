// Name patterns: "C_{to}{from}" read against names of the code.
#include <algorithm>

#include "phrase/phrase.h"
#include "project/project.h"

namespace dextral::project {

namespace {

using Filled = std::vector<std::pair<std::string, std::string>>;

std::string bare(std::string name) {
  if (name.rfind("m_", 0) == 0) name = name.substr(2);
  while (!name.empty() && name[0] == '_') name = name.substr(1);
  while (!name.empty() && name.back() == '_') name.pop_back();
  return name;
}

// Words that a placeholder may stand for, longest first, with their frames.
std::vector<std::pair<std::string, std::string>> frame_words(const ProjectFile& file) {
  std::vector<std::pair<std::string, std::string>> words = file.letters;
  for (const std::string& name : file.frames.names()) words.emplace_back(name, name);
  std::stable_sort(words.begin(), words.end(), [](const auto& a, const auto& b) { return a.first.size() > b.first.size(); });
  return words;
}

bool match(const std::string& pattern, const std::string& name, const std::vector<std::pair<std::string, std::string>>& words, Filled& filled) {
  if (pattern.empty()) return name.empty();
  if (pattern[0] != '{') return !name.empty() && name[0] == pattern[0] && match(pattern.substr(1), name.substr(1), words, filled);
  std::size_t close = pattern.find('}');
  std::string slot = pattern.substr(1, close - 1), rest = pattern.substr(close + 1);
  if (slot == "any") {
    for (std::size_t length = 1; length <= name.size(); ++length)
      if (match(rest, name.substr(length), words, filled)) return true;
    return false;
  }
  for (const auto& [word, frame] : words) {
    if (name.rfind(word, 0) != 0) continue;
    filled.emplace_back(slot, frame);
    if (match(rest, name.substr(word.size()), words, filled)) return true;
    filled.pop_back();
  }
  return false;
}

}  // namespace

std::optional<Quantity> named(const ProjectFile& file, const std::string& name) {
  if (file.patterns.empty()) return std::nullopt;
  auto words = frame_words(file);
  for (const NamePattern& pattern : file.patterns) {
    Filled filled;
    if (!match(pattern.pattern, bare(name), words, filled)) continue;
    std::string text = pattern.phrase;
    for (const auto& [slot, frame] : filled)
      for (std::size_t at; (at = text.find("{" + slot + "}")) != std::string::npos;) text.replace(at, slot.size() + 2, frame);
    auto parsed = phrase::parse(text);
    if (auto* quantity = std::get_if<Quantity>(&parsed)) return *quantity;
  }
  return std::nullopt;
}

}  // namespace dextral::project
