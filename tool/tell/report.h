// Reports: findings in words, for people and for programs.
//
// Text follows the GNU error format: `file:line:column: warning: RULE
// (CERTAINTY): sentence`, then the evidence, indented, each step with the line
// of source it stands on. JSON is our own stable shape. All wording, order and
// colour of findings is made in this folder.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/span.h"
#include "rules/rule.h"

namespace dextral::tell {

struct Summary {
  std::size_t read = 0, not_read = 0;
  std::vector<std::string> missing_headers;
  std::size_t rotations = 0, rotations_known = 0;
  std::size_t accepted = 0;
};

struct Style {
  std::string root;                                       // paths below it are told relative to it
  std::optional<Certainty> fail_on = Certainty::certain;  // told as errors from here on
  bool color = false;
};

// By file, place and rule; one of each.
void sort(std::vector<Finding>&, const FileTable&);

std::string text(const std::vector<Finding>&, const FileTable&, const Summary&, const Style&);
std::string json(const std::vector<Finding>&, const FileTable&, const Summary&, const Style&);

// A path below the root without it.
std::string relative(const std::string& path, const std::string& root);

}  // namespace dextral::tell
