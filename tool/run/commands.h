// The command line: what was asked, as values.
//
// Everything after a lone `--` is given to Clang for files that no compile
// command names. The exit status is part of the interface:
//
//     0  nothing at or above the threshold
//     1  a finding at or above the threshold (--fail-on)
//     2  the call or the project file is wrong
//     3  something could not be read, and --allow-unread was not given
//
// The higher status wins: a run that could not read everything is no clean bill
// and no full list of findings either.
#pragma once

#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "core/evidence.h"
#include "project/project.h"
#include "run/workers.h"

namespace dextral::run {

enum class Status { clean = 0, findings = 1, wrong_call = 2, not_read = 3 };

enum class Format { text, sarif, json };
enum class Color { automatic, always, never };

struct Lint {
  project::Request request;
  Limits limits;
  Format format = Format::text;
  std::string output;                                     // file, or empty: standard output
  std::optional<Certainty> fail_on = Certainty::certain;  // nothing: never
  Certainty show = Certainty::suspect;
  std::string known;         // findings told before, or empty
  std::string update_known;  // where to write the findings of this run, or empty
  bool write_repairs = false;
  bool dry_run = false;
  bool allow_unread = false;
  bool probe = false;  // run home-grown functions to find what they do
  Color color = Color::automatic;
};

struct ShowRules {
  std::string id;  // empty: all
};

struct ShowFacts {
  project::Request request;
  Limits limits;
};

struct Probe {
  project::Request request;
  Limits limits;
  std::string name;  // of functions, with or without their scope
  bool all = false;  // else: the functions of that name
  Format format = Format::text;
};

// The call was answered already: help, version, a wrong option.
struct Answered {
  Status status = Status::clean;
  std::string output;
  std::string error;
};

using Command = std::variant<Answered, Lint, ShowRules, ShowFacts, Probe>;

// Arguments without the program's name.
Command parse(const std::vector<std::string>& arguments);

// Is something of this certainty to be told, to fail on?
bool shows(const Lint&, Certainty);
bool fails(const Lint&, Certainty);

// Color as asked; by itself only on a terminal, and never with NO_COLOR set.
bool colored(const Lint&);

Status status(const Lint&, bool all_read, const std::vector<Certainty>& findings);

}  // namespace dextral::run
