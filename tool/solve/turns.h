// Sums that are a rotation written out.
//
// c v + s k x v + (1 - c) (k . v) k and v + s k x v + (1 - c) k x (k x v) turn v
// about k: their terms look alike, and the result is in whatever frame the turn
// leads to. So is v + 2 w e x v + 2 e x (e x v) with e the vector of a quaternion.
// Such a sum keeps no frame.
//
// Limits: terms are compared by their values, not by what these are worth.
#pragma once

#include <map>

#include "core/facts.h"

namespace dextral::solve {

class Turns {
 public:
  explicit Turns(const Function&);
  bool is_turn(const Operation&) const;

 private:
  struct Terms;
  void collect(ValueId, Terms&, int depth) const;
  ValueId plain(ValueId) const;  // without copies
  const Operation* maker(ValueId) const;

  const Function& function_;
  std::map<ValueId, const Operation*> makers_;
};

}  // namespace dextral::solve
