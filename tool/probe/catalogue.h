// The catalogue: functions of a few numbers, by definition.
//
// An entry takes and gives things: 1 a number, 3 a vector or a triple of
// angles, 4 a quaternion, 9 a matrix, 12 and 16 a pose. It computes what it
// means; nothing is looked up. Entries stand in one canonical operand order and
// reading; the matcher permutes operands of equal size, so `a b` and `b a` are
// one entry. An entry that can be undone is matched backwards too: a candidate
// is its inverse where the entry takes the candidate's outputs back to the
// candidate's inputs, on whatever branch.
//
// A new function is added in one place: one `add` in the file of its family.
#pragma once

#include <functional>
#include <map>
#include <memory>
#include <string>
#include <vector>

#include "core/measured.h"

namespace dextral::probe {

// A thing as the code names it.
struct Named {
  std::string text;                  // "C", "(roll, pitch, yaw)"
  std::vector<std::string> parts;    // each number: "roll", "rpy[0]"
  std::vector<std::string> formals;  // the groups that it lies in
  bool output = false;
  bool partial = false;  // it is a part of a group: no phrase can stand on the group
};

struct Bound {
  std::vector<Named> in, out;  // in the order of the entry
  bool backward = false;
};

// How two values of the output may differ and still be the same.
enum class Sameness { plain, up_to_sign, up_to_shadow };

struct Entry {
  std::string id;
  std::vector<int> in, out;
  std::function<bool(const double* const* in, double* const* out)> eval;  // false: undefined there
  std::function<Meaning(const Bound&)> say;
  Sameness sameness = Sameness::plain;
  bool forward = true;
  bool backward = false;
  int rank = 0;  // of equal functions the lowest is the canonical one
};

using Shape = std::pair<std::vector<int>, std::vector<int>>;  // sorted sizes in, out

class Catalogue {
 public:
  void add(Entry);
  const std::vector<const Entry*>& forward(const Shape&) const;
  const std::vector<const Entry*>& backward(const Shape&) const;
  std::size_t size() const { return entries_.size(); }
  std::vector<std::string> ids() const;  // also those of inverses

 private:
  std::vector<std::unique_ptr<Entry>> entries_;
  std::map<Shape, std::vector<const Entry*>> forward_, backward_;
};

const Catalogue& catalogue();

// One per file.
void add_vectors(Catalogue&);
void add_matrices(Catalogue&);
void add_sequences(Catalogue&);
void add_turns(Catalogue&);
void add_quaternions(Catalogue&);
void add_rates(Catalogue&);
void add_euler_rates(Catalogue&);
void add_maps(Catalogue&);
void add_poses(Catalogue&);
void add_units(Catalogue&);

// Quantities of generic contracts.
Frame variable(const std::string& name);                            // ?A
Quantity in(const std::string& frame);                              // in ?A
Quantity map(const std::string& rows, const std::string& columns);  // M[?A,?B], as `passive ?B to ?A`
Quantity passive(const std::string& a, const std::string& b);       // passive ?A to ?B
Quantity active(const std::string& a, const std::string& b);        // active ?A to ?B
Quantity quaternion_of(Quantity sense, bool scalar_last);           // hamilton, maps by qvq*
Quantity turn(const std::string& a, const std::string& b, Form form);
Quantity rate(const std::string& of, const std::string& against, const std::string& in);

// A meaning with its words and the terms of what can be said of whole groups.
Meaning meaning(std::string id, std::string words);
void term(Meaning&, const Named&, const Quantity&);

}  // namespace dextral::probe
