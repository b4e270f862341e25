// What of the project was not read, and why.
//
// A unit can be lost (its worker crashed, its file is gone) or be read in part
// (a header is missing, a line does not compile). Either is told: a report on
// half the code must not look like one on all of it.
#pragma once

#include <string>
#include <vector>

#include "core/facts.h"

namespace dextral::run {

struct Unread {
  std::string unit;
  bool lost = false;  // else: read in part
  std::string why;    // "nav.h:3:10: the header is missing: gains.h (and 2 more)"
};

// By unit, in the order given.
std::vector<Unread> unread(const std::vector<Facts>&);

std::string text(const Unread&);
void tell_unread(const std::vector<Unread>&);  // on standard error

}  // namespace dextral::run
