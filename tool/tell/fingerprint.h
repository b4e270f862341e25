// Names of findings that survive a shift of lines.
//
// A fingerprint is a hash of the rule, the file relative to the root, the
// function, the line of source without the space around it, and a counter for
// findings that have all of these in common. It changes when the line itself,
// its function or its file is renamed: then the finding is a new one.
#pragma once

#include <string>
#include <vector>

#include "rules/rule.h"
#include "tell/source.h"

namespace dextral::tell {

// One for each finding. The counter follows the order given: sort first.
std::vector<std::string> fingerprints(const std::vector<Finding>&, const FileTable&, const std::string& root, Source&);

}  // namespace dextral::tell
