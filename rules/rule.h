// What a rule is, and what a finding is.
//
// A rule is one file in this folder: a function rule_ID() that returns a Rule.
// CMake finds the files by glob and writes the registry; there is no list to
// edit. A rule decides which clashes are its own and gives the sentence; the
// words of the evidence, order and colour are made in `tell`.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "solve/solution.h"

namespace dextral {

// How far off the result is at an ordinary attitude.
struct Witness {
  double degrees = 0;
  std::string attitude;  // "at yaw 30, pitch 20, roll 10 deg"
};

struct Finding {
  std::string rule;
  Certainty certainty = Certainty::certain;
  Span span;
  std::string function;
  std::string sentence;  // one plain sentence, no final period
  std::vector<Reason> left, right;  // the two sides of the chain, from the place outwards
  std::string left_says, right_says;  // what each side comes to: "ned", "from hull to mast"; or empty
  std::vector<solve::Repair> repairs;
  std::optional<Witness> witness;
};

struct Rule {
  std::string id;       // "missing-inverse"
  std::string summary;  // one line for SARIF and `dextral rules`
  // Is this clash mine? Rules are asked in the order of `rank`, lowest first.
  bool (*fits)(const solve::Clash&) = nullptr;
  std::string (*sentence)(const solve::Clash&) = nullptr;
  std::optional<Witness> (*witness)(const solve::Clash&) = nullptr;
  int rank = 50;
};

// All rules, by id. Written by CMake.
const std::vector<Rule>& rules();

// Each clash to the rule it belongs to.
std::vector<Finding> judge(const solve::Solution&);

}  // namespace dextral
