// What solving gives: the frames of every value, and the contradictions.
#pragma once

#include <string>
#include <vector>

#include "core/algebra.h"
#include "core/facts.h"

namespace dextral::solve {

// A replacement of source text. An empty text deletes.
struct Edit {
  Span span;
  std::string text;
};

enum class RepairKind {
  none,
  transpose,       // the transpose (inverse, conjugate) of `subject` is missing
  drop_inverse,    // the inverse of `subject` is one too many
  swap,            // the factors `subject` and `other` are in the wrong order
  swap_arguments,  // the arguments `subject` and `other` are exchanged
  other_variable,  // `other` where `subject` stands
  twin_function,   // `other` where the function `subject` stands
  two_sided,       // the transpose of `subject` is missing on the right
  add,             // `subject` is to be added to `other`
  subtract,        // `subject` is to be subtracted from `other`
};

struct Repair {
  RepairKind kind = RepairKind::none;
  Span span;             // the operation that it mends
  std::string subject;   // the expression that it speaks of
  std::string other;
  std::string call;       // a function that does just this, to call instead; or empty
  bool rotation = false;  // the subject is a rotation or a pose
  std::vector<Edit> edits;  // empty: no edit is safe to offer
};

enum class ClashKind { frames, points, tensor, contract, phrase, stale };

// Two facts that contradict each other. `left` holds along left_proof, `right`
// along right_proof; both start where they meet.
struct Clash {
  ClashKind kind = ClashKind::frames;
  Span span;               // the place that the repairs point at
  std::string function;    // qualified name
  std::string expression;  // text at the place
  OperationKind operation = OperationKind::copy;
  std::string subject;     // the thing that has `left`
  std::string object;      // the thing that has `right`, may be empty
  Frame left, right;
  std::string left_points, right_points;  // of points: "from hull to mast"
  std::vector<Reason> left_proof, right_proof;
  Certainty certainty = Certainty::certain;
  std::vector<Repair> repairs;  // best first; several: alternatives
  // phrase and stale: the complaint or acceptance in words of the code.
  std::string wrong, message, nearest;
};

struct KnownFrames {
  Frame rows, columns;  // empty: unknown
  Certainty certainty = Certainty::certain;
};

struct Solution {
  std::vector<std::vector<KnownFrames>> values;  // by function, by value
  std::vector<Clash> clashes;                    // sorted by place
  std::size_t rotations = 0, rotations_known = 0;  // declarations that carry one
};

}  // namespace dextral::solve
