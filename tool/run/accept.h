// What the source says about its findings, and what it says wrongly.
//
// `accept RULE because REASON` sets a finding of that rule on its lines aside.
// An acceptance that sets nothing aside is stale, and a phrase that does not
// parse or stands nowhere is wrong: both become clashes, so that the rules
// tell them like any other.
#pragma once

#include <vector>

#include "core/facts.h"
#include "rules/rule.h"
#include "solve/solution.h"

namespace dextral::run {

struct Accepted {
  std::vector<Finding> findings;  // what stays
  std::vector<Finding> set_aside;
  std::vector<solve::Clash> stale;  // acceptances that matched nothing, by place
};

// Only where everything was read in full can an acceptance be called stale:
// elsewhere its finding may stand in what was not read.
Accepted accept(std::vector<Finding>, const std::vector<AcceptanceAt>&, bool all_read);

// Complaints about phrases as clashes; those about the compilation are left out.
std::vector<solve::Clash> wrong_phrases(const std::vector<Complaint>&);

// Is it about what could not be read, not about a phrase?
bool about_reading(const Complaint&);

}  // namespace dextral::run
