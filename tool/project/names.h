// The parts of a name pattern: "C_{to}{from}" is a text and two placeholders.
#pragma once

#include <optional>
#include <string>
#include <vector>

namespace dextral::project {

struct PatternPart {
  std::string text;
  bool placeholder = false;
  std::size_t offset = 0;  // in the pattern
};

// Nothing where braces do not pair or a placeholder is no word.
std::optional<std::vector<PatternPart>> pattern_parts(const std::string& pattern);

}  // namespace dextral::project
