// What callers need to know of a solved function: which of the frames that can
// be seen from outside are equal, and which are known, each with its proof.
//
// A scheme is "for all frames that are left": every call gets its own copy.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "core/algebra.h"
#include "core/evidence.h"
#include "core/facts.h"

namespace dextral::solve {

// A slot that a caller can see: `p1.imu` before the call, `return`, ...
struct Visible {
  std::string formal;   // "p0", "this", "return"
  std::string path;     // below it: ".imu.R"
  bool after = false;
  Slot slot = Slot::rows;
  auto operator<=>(const Visible&) const = default;
};

struct SchemeEdge {
  Visible left;
  Visible right;    // unless `constant` is known
  Frame constant;
  Certainty certainty = Certainty::certain;
  std::vector<Reason> proof;
};

struct Scheme {
  std::vector<SchemeEdge> edges;
  std::vector<Visible> unchanged;  // formals that the body leaves as they are (path "")
};

using Schemes = std::map<std::string, Scheme>;  // by Function::key

}  // namespace dextral::solve
