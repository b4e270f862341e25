// What the source says about its findings, and what it says wrongly.
//
// `accept RULE because REASON` sets a finding of that rule on its lines aside.
// An acceptance that sets nothing aside is stale, and a phrase that does not
// parse or stands nowhere is wrong: both become clashes, so that the rules
// tell them like any other.
#pragma once

#include <set>
#include <vector>

#include "core/facts.h"
#include "project/project.h"
#include "rules/rule.h"
#include "solve/solution.h"

namespace dextral::run {

struct Accepted {
  std::vector<Finding> findings;  // what stays
  std::vector<Finding> set_aside;
  std::vector<solve::Clash> stale;  // acceptances that matched nothing, by place
};

// An acceptance can be called stale only in a settled file: elsewhere its
// finding may stand in what was not read.
Accepted accept(std::vector<Finding>, const std::vector<AcceptanceAt>&, const std::set<FileId>& settled);

// Files of which all findings are known: none where something could not be
// read; all where the whole project was; else those that are units themselves,
// since what a header means may show in a unit that was not asked for.
std::set<FileId> settled_files(const Facts& joined, const std::vector<project::Unit>&, bool whole_project);

// Complaints about phrases as clashes; those about the compilation are left out.
std::vector<solve::Clash> wrong_phrases(const std::vector<Complaint>&);

// Is it about what could not be read, not about a phrase?
bool about_reading(const Complaint&);

}  // namespace dextral::run
