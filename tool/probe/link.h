// Functions that other units define.
//
// What a unit's candidates call and do not define is looked up by key, emitted
// from the unit that has it, and linked in; then what that calls, and so on. A
// unit emits for others only what the facts say that others call of it, once
// for a whole run: the bitcode is kept in a folder that all workers share.
// Emitting a unit of a plain C kit again takes about as long as reading its
// bitcode; one that includes a template library takes a hundred times longer.
#pragma once

#include <map>
#include <set>
#include <string>
#include <vector>

#include "core/facts.h"
#include "probe/emit.h"

namespace dextral::probe {

struct Elsewhere {
  std::map<std::string, std::string> unit_of;           // Function::key to the main file of a unit
  std::map<std::string, std::set<std::string>> called;  // of each such unit: the keys that others call
  std::string folder;                                   // of bitcode; empty: none is kept
};

// From the facts of all units, before they are joined.
Elsewhere elsewhere(const std::vector<Facts>&);

// Links in what is missed and found elsewhere; what stays missed is listed.
void link(Kit&, const project::Project&, const Elsewhere&);

}  // namespace dextral::probe
