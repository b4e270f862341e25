// Facts: what gather saw in one translation unit, in the words of the algebra.
//
// A function is a list of values and a list of operations on them, in the
// order of the text. A value is one version of one thing: `v = R * v` makes a
// new value. Every value has two slots, rows and columns, that hold frames; a
// vector uses its rows. What is not understood has no operation: it forgets.
//
// Objects (structs, `*this`, what a pointer points at) are not values. A
// Snapshot names one at a moment: the path of its root, an epoch that grows
// when a call may have changed it, and the parts written since. So a callee's
// `s.imu.R` finds the caller's `state.nav.imu.R` without either knowing the
// other's text.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <utility>
#include <variant>
#include <vector>

#include "core/evidence.h"
#include "core/measured.h"
#include "core/quantity.h"
#include "core/span.h"

namespace dextral {

enum class ValueId : std::uint32_t { none = 0xffffffff };

enum class Shape { unknown, number, vector, row, matrix, rotation, quaternion, pose, object, container };

struct Value {
  Shape shape = Shape::unknown;
  bool rotation = false;     // its type or its making says that it is a rotation or a pose
  std::string text;          // as the code names it
  std::string inverse_form;  // how the code inverts it: "{}.transpose()"; empty: unknown
  Span span;
  bool of_rotation = false;  // a vector made of the numbers of a rotation: what it is summed with turns
};

enum class OperationKind {
  product,      // operands 0, 1
  transpose,    // of operand 0
  inverse,      // of operand 0
  copy,         // scaling, negation, normalisation, conversion, evaluation
  sum,          // all operands and the result alike
  difference,   // likewise
  cross,        // likewise
  dot,          // operands alike, no frame in the result
  skew,         // cross-product matrix of operand 0
  unskew,       // its inverse
  translation,  // of a pose: a vector in its rows
  pose,         // from a rotation (operand 0) and a translation (operand 1)
  column,       // numbers[0] of operand 0: a vector in its rows
  row,          // numbers[0] of operand 0: a vector in its columns
  transform,    // operand 0 maps operand 1 from both sides: M T M^T
  shuffle,      // signed permutation of operand 0: numbers[i] = +-(source + 1); 0: unknown component
  join,         // one of the operands, by the path taken
  hold,         // operand 0 is what a phrase says: item indexes Function::holds
  call,         // item indexes Function::calls
};

struct Operand {
  ValueId value = ValueId::none;
  Span span;         // invalid inside a macro: no repair is offered there
  std::string text;
};

// Another function that does the same with one operand inverted.
struct Twin {
  int operand = 0;
  std::string name;
};

struct Operation {
  OperationKind kind = OperationKind::copy;
  ValueId result = ValueId::none;
  std::vector<Operand> operands;
  std::vector<int> numbers;
  std::uint32_t item = 0;
  ReasonKind how = ReasonKind::operation;  // of copies: assigned, passed, returned
  Span span;
  std::string text;    // the expression, shortened
  std::string target;  // of copies: what it is assigned or passed to
  std::vector<std::uint32_t> arms;  // branches that it stands in: twice the number of the branch, plus the arm
  std::vector<Twin> twins;
  Span callee;         // the name of the function that a twin would replace
};

// Does the result have the frames of the operands?
inline bool keeps_kind(OperationKind kind) {
  return kind == OperationKind::copy || kind == OperationKind::sum || kind == OperationKind::difference || kind == OperationKind::cross;
}

// Can only one of the two be on a path?
bool exclude_each_other(const Operation&, const Operation&);

// A phrase that a value must meet.
struct Hold {
  Quantity quantity;
  Source source = Source::declared;
  std::string said;     // the phrase, printed
  Span phrase;          // where the phrase stands
  std::string subject;  // what it is said of
  bool contract = false;  // on a parameter, a return or a field: seen from outside
  // Of an argument after a call: the call and its formal. Where the callee
  // changes the argument in place, the phrase does not bind what comes out.
  int call = -1;
  std::string formal;
};

struct Snapshot;
struct Part {
  std::string path;  // "imu.R", relative to the snapshot
  std::variant<ValueId, std::shared_ptr<const Snapshot>> is;
};

// An object at a moment.
struct Snapshot {
  std::string path;  // "p0", "this.imu", "l3", "return"; empty: unknown
  std::uint32_t epoch = 0;
  std::vector<Part> parts;  // newest last; the longest prefix of a path wins, then the newest
};

// What one formal parameter (or `this`, or `return`) of a callee stands for.
struct Binding {
  std::string formal;  // "p0", "this", "return"
  std::variant<ValueId, Snapshot> before{ValueId::none};
  std::variant<ValueId, Snapshot> after{ValueId::none};  // where the callee may write
  Span span;
  std::string text;
  std::string object;  // path of the argument, where it is an object
};

struct Call {
  std::string callee;  // Function::key
  std::string name;
  bool dispatched = false;  // chosen at run time: only the contract counts
  std::vector<Binding> bindings;
};

// A value that stands for a path at an epoch.
struct Reading {
  std::string path;
  std::uint32_t epoch = 0;
  ValueId value = ValueId::none;
};

struct Declaration {
  ValueId value = ValueId::none;
  std::string name;
  Span span;
  bool rotation = false;
};

struct Function {
  std::string key;   // the same in every unit
  std::string name;  // qualified, for people
  Span span;         // of its head
  bool body = false;
  bool template_instance = false;
  std::vector<std::string> parameter_names;
  std::vector<std::string> overrides;  // keys of the methods it overrides
  std::vector<Value> values;
  std::vector<Operation> operations;
  std::vector<Hold> holds;
  std::vector<Call> calls;
  std::vector<Reading> readings;
  std::vector<std::pair<std::string, std::variant<ValueId, Snapshot>>> exits;  // formal, at the end
  std::vector<Declaration> declarations;
};

// A thing said in the source that does not parse or does not belong there.
enum class ComplaintKind { phrase, unattached, unknown_frame, unknown_name, compile_error, missing_header };
struct Complaint {
  ComplaintKind kind = ComplaintKind::phrase;
  Span span;
  std::string wrong;    // the word that is wrong
  std::string message;  // what is wrong with it
  std::string nearest;  // the nearest right word, or empty
};

struct AcceptanceAt {
  Acceptance acceptance;
  Span span;              // of the comment
  Position from, to;      // lines that it covers, inclusive
};

struct FieldFacts {
  std::string key;   // record and field, qualified
  std::string name;
  Span span;
  bool rotation = false;
  bool known = false;  // a phrase gives all its frames
};

struct Facts {
  std::string unit;  // the main file
  bool read = false;
  std::string not_read_because;
  FileTable files;
  std::vector<Function> functions;
  std::vector<FieldFacts> fields;
  std::vector<Complaint> complaints;
  std::vector<AcceptanceAt> acceptances;
  std::vector<Measurement> measurements;
};

// The facts of all units, joined: files numbered anew, a function that several
// units have kept once, everything sorted.
Facts join(std::vector<Facts>);

// Bytes for the way between a worker and its parent, and back. A damaged input
// gives nothing.
std::string encode(const Facts&);
std::optional<Facts> decode(const std::string&);

// One readable line per value and operation.
std::string print(const Function&, const FileTable&);

}  // namespace dextral
