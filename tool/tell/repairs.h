// Repairs as a patch to read, and repairs written into the files.
//
// Of each finding the first repair that has edits is taken, whole or not at
// all: one whose edits overlap those of an earlier finding, lie outside the
// scope, or point where the file has no text is left out and told. The same
// repair of two findings is made once. Line ends stay as the file has them.
//
// Limits: each file is replaced in one step, several files are not; a file that
// changed since it was read is noticed only where a place is gone; other hard
// links to a file keep the old text.
#pragma once

#include <functional>
#include <string>
#include <vector>

#include "rules/rule.h"

namespace dextral::tell {

struct RepairProblem {
  std::string file;     // absolute
  Position place;       // line 0: the file as a whole
  std::string message;  // what is wrong, and the remedy
  bool operator==(const RepairProblem&) const = default;
};

// May this file be written? Asked with the path as told, and without its links.
using InScope = std::function<bool(const std::string& path)>;

// A unified diff, by file; names below the root are relative to it.
std::string diff(const std::vector<Finding>&, const FileTable&, const std::string& root, const InScope&);

// Writes the repairs, and returns what was not repaired and why.
std::vector<RepairProblem> apply(const std::vector<Finding>&, const FileTable&, const InScope&);

}  // namespace dextral::tell
