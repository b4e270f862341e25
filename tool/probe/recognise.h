// What is this function of numbers? The catalogue, matched by running.
//
// The catalogue is computed from definitions, never from copied tables:
// elementary rotations and their products, Rodrigues' formula, the product of
// quaternions, limits of difference quotients. A candidate is run at chosen
// inputs (where sequences differ most) and at random ones; an entry that agrees
// within the precision of the signature is run again at fresh points before it
// counts. Entries that are the same function are one meaning with equivalents;
// entries that differ but cannot be told apart by the inputs are all returned.
#pragma once

#include <functional>
#include <variant>
#include <vector>

#include "core/measured.h"

namespace dextral::probe {

struct Refusal {
  std::string why;  // "calls printf", "runs on past 2000000 steps"
};

using Numbers = std::vector<double>;

// All inputs in the order of the signature to all outputs in the order of the
// signature. May refuse at some inputs and not at others.
using Run = std::function<std::variant<Numbers, Refusal>(const Numbers&)>;

// Fills meanings, refusal, trials, points and worst. Never throws; the same
// function gives the same measurement.
Measurement recognise(const Signature&, const Run&);

}  // namespace dextral::probe
