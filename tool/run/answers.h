// The commands that answer without judging: `rules`, `facts` and `probe`; and what is
// told of a project before it is read.
#pragma once

#include <string>
#include <vector>

#include "project/project.h"
#include "run/commands.h"

namespace dextral::run {

// This program's own path, or empty.
std::string program_path();

Status answer(const Answered&);
Status answer(const ShowRules&);
Status answer(const ShowFacts&);
Status answer(const Probe&);

// Problems and notes to standard error; false where there is a problem.
bool tell_project(const project::Project&);

// "dextral.json:3:7: error: message; remedy"
std::string text(const project::Problem&);

// How a unit is read.
ReadUnit reader(const project::Project&);

// Adds what the small functions of the units measure as, found by running them.
void add_measurements(std::vector<Facts>& units, const project::Project&, const Limits&);

}  // namespace dextral::run
