// Which functions can be measured, and how their arguments lie in memory.
//
// A candidate takes and gives a few numbers, however they are wrapped: arrays,
// pointers to them, structs and classes with private members, classes of
// libraries. Each argument, `this` and the result is an object in memory; its
// numbers are flattened by the layout of the record and gathered in bundles: one
// vector, matrix, quaternion or angle each, with the path that facts call it by.
//
// Whether an object is read or written is not looked at here: that is found by
// running (drive.h). Nor is the extent of what a plain pointer leads to. What is
// no number (a text, a pointer within a struct) stays unset; a function that
// reads it is refused when it does.
#pragma once

#include <cstddef>
#include <cstdint>
#include <map>
#include <optional>
#include <set>
#include <string>
#include <vector>

#include "core/measured.h"
#include "project/project.h"

namespace clang {
class ASTContext;
class FunctionDecl;
class Sema;
}  // namespace clang

namespace dextral::probe {

enum class Number { single_float, double_float, integer };

struct Leaf {
  Number number = Number::double_float;
  std::size_t offset = 0;  // within its object
  std::size_t bytes = 8;
};

struct Bundle {
  Group group;
  std::vector<Leaf> leaves;
  std::vector<long long> values;  // what an integer is tried with
};

struct Object {
  std::size_t bytes = 0;
  std::vector<Bundle> bundles;
  bool open = false;   // behind a plain pointer: the numbers that are touched count
  bool other = false;  // holds other things than numbers too
};

// Where the generated code takes a piece of an object as a word of its own.
struct Piece {
  enum class Kind { integer, single_float, double_float, bytes };
  Kind kind = Kind::bytes;
  std::size_t offset = 0;
  std::size_t bytes = 0;
};

struct Passing {
  enum class Kind { nothing, address, pieces };
  Kind kind = Kind::nothing;
  std::vector<Piece> pieces;
};

struct Formal {
  std::string name;  // "this", "p0", "return"
  Object object;
  bool behind_pointer = false;  // the code says a pointer or a reference
  Passing passing;
  std::uint64_t fixed_at = 0;  // of a global: where every machine has it
};

struct Candidate {
  std::string key;
  std::string name;
  Span span;
  std::string symbol;            // in the module
  std::vector<Formal> formals;   // in the order of the arguments, `this` first
  std::optional<Formal> result;  // an object returned by address stands first or second among the arguments
  bool result_after_this = false;
  std::string refusal;           // why it cannot be called at all
};

struct Wanted {
  std::string name;  // of functions, with or without their scope; empty: all candidates
  // More values for integers, by function key and formal: constants that other units pass.
  std::map<std::pair<std::string, std::string>, std::vector<long long>> constants;
};

struct Found {
  clang::FunctionDecl* function = nullptr;
  Candidate candidate;
};

// Functions with a body by their keys, candidates or not.
std::vector<clang::FunctionDecl*> find_functions(clang::ASTContext&, const std::set<std::string>& keys);

// The candidates of the scope in the order of the text. Asked for by name, a
// function that is none is there too, with the reason.
std::vector<Found> find_candidates(clang::ASTContext&, clang::Sema&, const project::Project&, const Wanted&, FileTable&);

}  // namespace dextral::probe
