// The ledger of known findings: what a code base has agreed to live with for
// now, so that only new findings are told.
//
// It is a JSON file, sorted, one finding a line, made to be kept under version
// control and read in a review. A finding is known by its fingerprint, rule and
// file. Entries that match nothing any more are told, so that the ledger
// shrinks; but only those of files that this run has looked at.
#pragma once

#include <functional>
#include <string>
#include <variant>
#include <vector>

#include "rules/rule.h"

namespace dextral::tell {

struct Known {
  std::string fingerprint, rule, file, sentence;
  bool operator==(const Known&) const = default;
};

struct LedgerProblem {
  std::size_t line = 0, column = 0;  // from 1; 0: the file as a whole
  std::string message;               // what is wrong, and the remedy
};

// Is everything known of this file (relative to the root)?
using LookedAt = std::function<bool(const std::string& file)>;

std::variant<std::vector<Known>, LedgerProblem> read_ledger(const std::string& text);
std::string write_ledger(std::vector<Known>);

// Sorted findings as entries.
std::vector<Known> entries(const std::vector<Finding>&, const FileTable&, const std::string& root);

struct SetAside {
  std::vector<Finding> fresh;
  std::size_t known = 0;
  std::vector<Known> gone;
};
// Sorted findings against a ledger. Give all findings of the run, before what
// is not to be shown is left out: the fingerprints count equal ones.
SetAside set_aside(std::vector<Finding>, const std::vector<Known>&, const FileTable&, const std::string& root,
                   const LookedAt&);

// What the ledger becomes: the findings of this run, and the entries of files
// that it has not looked at.
std::vector<Known> updated(const std::vector<Known>& before, const std::vector<Finding>&, const FileTable&,
                           const std::string& root, const LookedAt&);

}  // namespace dextral::tell
