// A candidate as a function of numbers.
//
// Its objects are laid anew into the memory of the machine for each run, so that
// nothing of one run is seen by the next. First it is run with everything set, at a few
// chosen and random points, to see which numbers it reads before it writes them
// and which it writes: those are its inputs and outputs, whatever the code says
// of const. A group that is written only here and there keeps some of what was
// in it, so it is an input too. What a plain pointer leads to counts as far as
// it is touched. Then only the inputs are set; a run that reads more is refused
// by the machine.
//
// A function that reads a global whose value is not constant is refused with its
// name.
#pragma once

#include <memory>
#include <variant>
#include <vector>

#include "probe/drive_evaluate.h"
#include "probe/recognise.h"

namespace dextral::probe {

// Steps of the machine so far.
struct Effort {
  std::size_t longest = 0;  // of one run
  std::size_t total = 0;
};

struct Driven {
  Signature signature;
  Run run;
  std::shared_ptr<Effort> effort;
};

// The sets of values that the integers of a candidate are tried with; one empty
// set where it has none.
std::vector<std::vector<Selected>> selections(Stage&);

std::variant<Driven, Refusal> drive(const std::shared_ptr<Stage>&, const std::vector<Selected>&);

}  // namespace dextral::probe
