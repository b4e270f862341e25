// Where a fact comes from, how far it can be trusted, and how a contradiction
// was reached.
//
// A Reason is one link of a chain of evidence, in terms of the code; its words
// are made in `tell`. A finding is as strong as its weakest fact.
#pragma once

#include <string>
#include <vector>

#include "core/span.h"

namespace dextral {

enum class Source { declared, modelled, measured, named, remarked, mined };
enum class Certainty { certain, likely, suspect };  // weaker is greater

inline Certainty certainty(Source s) {
  switch (s) {
    case Source::declared: case Source::modelled: case Source::measured: return Certainty::certain;
    case Source::named: case Source::remarked: return Certainty::likely;
    case Source::mined: return Certainty::suspect;
  }
  return Certainty::suspect;
}
inline Certainty weaker(Certainty a, Certainty b) { return a < b ? b : a; }
const char* text(Certainty);
const char* text(Source);

enum class ReasonKind {
  declared,    // subject is declared as object (a phrase)
  named,       // subject reads as object by a name pattern
  operation,   // subject is an expression; object names the operation
  assigned,    // subject is assigned to object
  passed,      // subject is passed as object
  returned,    // subject is returned from object
  called,      // subject is a call; object is the function
  read,        // subject is read from object
};

struct Reason {
  ReasonKind kind = ReasonKind::operation;
  Source source = Source::modelled;
  Span span;
  std::string subject;
  std::string object;
  bool operator==(const Reason&) const = default;
};

}  // namespace dextral
