// Reports: findings in words, for people and for programs.
//
// Text follows the GNU error format: `file:line:column: warning: RULE
// (CERTAINTY): sentence`, then the evidence, indented, each step with the line
// of source it stands on. SARIF is version 2.1.0. JSON is our own stable shape
// (docs/findings.schema.json). All wording, order and colour of findings is
// made in this folder; the same findings give the same bytes.
//
// Limits: source is quoted from the files as they are when the report is
// written; a file that changed or is gone since it was read is quoted wrongly
// or not at all.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/span.h"
#include "rules/rule.h"
#include "tell/ledger.h"
#include "tell/paths.h"

namespace dextral::tell {

// A unit that was not read, or only in part.
struct NotRead {
  std::string unit;
  bool lost = false;  // else: read in part
  std::string why;
};

struct Summary {
  std::size_t read = 0, not_read = 0;
  std::vector<std::string> missing_headers;
  std::size_t rotations = 0, rotations_known = 0;
  std::size_t accepted = 0;
  std::vector<NotRead> unread = {};  // told with their reasons
  std::size_t known = 0;             // set aside by the ledger
  std::vector<Known> gone = {};      // in the ledger, and found no more
};

struct Style {
  std::string root;                                       // paths below it are told relative to it
  std::optional<Certainty> fail_on = Certainty::certain;  // told as errors from here on
  bool color = false;
  std::string version = "";  // of the program, for SARIF
  std::string pages = "";    // URI of the folder with the rules' pages, or empty
};

// By file, place and rule; one of each.
void sort(std::vector<Finding>&, const FileTable&);

std::string text(const std::vector<Finding>&, const FileTable&, const Summary&, const Style&);
std::string sarif(const std::vector<Finding>&, const FileTable&, const Summary&, const Style&);
std::string json(const std::vector<Finding>&, const FileTable&, const Summary&, const Style&);

// "An aid, not a proof: ..."
extern const char* const kCaution;

}  // namespace dextral::tell
