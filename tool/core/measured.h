// What a function does, as found by running it.
//
// The numbers that a function takes and gives lie in groups: one parameter, one
// field of a parameter, `this`, what is returned, or a global that it reads. A
// measurement is a set of meanings. One meaning identifies the function.
// Several are an ambiguity: they agree on all inputs that could be tried, and
// nobody chooses between them. None, with a refusal, says why it could not be
// run; none without one, that it was run and is nothing of the catalogue.
//
// A meaning speaks in phrases: a generic contract whose frames are variables.
// A product of matrices takes M[?A, ?B] and M[?B, ?C] and gives M[?A, ?C]; a
// builder takes `angles 321 ?A to ?B` and gives `passive ?A to ?B`. So the
// solver needs to know nothing of the catalogue. Where the language of phrases
// cannot say what was measured (an unusual sign of one angle), the contract is
// empty and only the words are told.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "core/quantity.h"
#include "core/span.h"

namespace dextral {

struct Group {
  std::string formal;      // "p0", "this", "return", "p1.q", "global NAME": as in Binding
  std::string text;        // as the code names it
  std::size_t count = 0;   // of numbers
  std::size_t rows = 0;    // declared extents of a matrix; 0: flat, or no matrix
  std::size_t columns = 0;
  bool integer = false;    // a selector, not a measure
  bool quaternion = false;    // its type says so
  bool column_major = false;  // numbers lie column by column (rows and columns are known)
};

struct Signature {
  std::vector<Group> inputs, outputs;
  bool single_precision = false;  // some number on the way is a float
};

// What a meaning says of one group.
struct Term {
  std::string formal;
  bool output = false;
  Quantity quantity;
};

struct Meaning {
  std::string id;                        // of the catalogue: "matrix-product"
  std::string words;                     // "c = a b, rows by columns", with the names of the groups
  std::string formula;                   // "R1(roll) R2(pitch) R3(yaw)"; or empty
  std::vector<Term> contract;            // may be empty
  std::vector<std::string> equivalents;  // other descriptions of the same function
};

// Which value a selector had.
struct Selected {
  std::string formal;
  long long value = 0;
};

struct Trial {
  std::vector<double> input, output;  // all groups in order
};

struct Measurement {
  std::string key;   // Function::key
  std::string name;  // qualified, for people
  Span span;         // of its head
  Signature signature;
  std::vector<Selected> selected;  // one measurement for each tried set
  std::vector<Meaning> meanings;
  std::string refusal;
  std::vector<Trial> trials;  // a few, for people
  std::size_t points = 0;     // at which it was run
  std::size_t steps = 0;      // of the evaluator, at the slowest point
  double worst = 0;           // disagreement, relative
};

}  // namespace dextral
