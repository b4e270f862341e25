// One function: its operations put on a sheet, in an order in which strong
// facts come first.
//
// Order: what phrases declare; the operations in the order of the text, calls
// by their callees' schemes; joins whose branches agree; then what names say.
// An operation that contradicts what is already known is recorded as a
// conflict and adds nothing more, so that one fault does not cascade.
// An Alteration replaces one operation by an edited one: the repair search
// asks what a body would mean if it were written differently.
#pragma once

#include <map>
#include <optional>
#include <set>
#include <string>
#include <vector>

#include "core/facts.h"
#include "core/frame.h"
#include "solve/scheme.h"
#include "solve/sheet.h"

namespace dextral::solve {

struct Conflict {
  std::uint32_t operation = 0;
  NodeId left = NodeId::none, right = NodeId::none;
  int left_operand = kResult, right_operand = kResult;  // of the law; for holds operand 0 against the phrase
  Certainty certainty = Certainty::certain;
  const SchemeEdge* via = nullptr;
};

struct Altered {
  Operation with;                       // the edited operation
  std::set<int> flipped;                // operands (calls: bindings) taken transposed
  std::pair<int, int> exchanged{-1, -1};  // bindings of a call that change places
  std::string callee;                   // another function called instead
};
using Alteration = std::map<std::uint32_t, Altered>;  // by operation

struct Sheeted {
  Sheet sheet;
  std::vector<NodeId> values;  // node of the rows of each value; columns follow
  std::map<std::pair<std::string, std::uint32_t>, NodeId> places;  // by path and epoch
  std::vector<Conflict> conflicts;
};

// Functions that differ from another by a letter or two in the name and take
// the same arguments: key and name, by key.
using Twins = std::map<std::string, std::vector<std::pair<std::string, std::string>>>;

struct Setting {
  const Schemes& schemes;
  const Twins& twins;
  const FrameCatalogue& frames;
  bool first_pass = false;  // of functions that call each other: what a call gives is not known yet
};

inline constexpr std::uint32_t kNoOperation = 0xffffffff;

// `last`: an operation that is inserted after all others, so that its conflict
// is seen from there.
Sheeted sheet_of(const Function&, const Setting&, const std::set<std::uint32_t>& removed,
                 const Alteration* = nullptr, std::uint32_t last = kNoOperation);

// Do two phrases of one thing contradict each other, before anything is made of it?
bool is_of_phrases(const Function&, const Sheeted&, const Conflict&);

// The node of a slot of what `thing` stands for at `path` below it, or none.
NodeId node_of(Sheeted&, const std::variant<ValueId, Snapshot>& thing, const std::string& path, Slot);

Scheme scheme_of(const Function&, Sheeted&, const Setting&);

// The reasons along a chain of edges.
std::vector<Reason> reasons(const Function&, const std::vector<Edge>&);

}  // namespace dextral::solve
