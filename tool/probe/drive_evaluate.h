// One run of a candidate, on objects of its own.
//
// A machine is kept for many runs, since it prepares code only once. No run can
// write to what the next one reads: it gets new objects, and the machine lets
// nothing write to globals.
#pragma once

#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "probe/emit.h"
#include "probe/machine.h"

namespace dextral::probe {

// One value for each leaf of an object, bundle by bundle; nothing: unset.
using Values = std::vector<std::optional<double>>;

// For each formal its values; the last entry is the result's.
using Setting = std::vector<Values>;

struct Outcome {
  std::string refusal;
  Setting after;                                // what stands there at the end
  std::vector<std::vector<bool>> read, written;  // of each leaf; the result counts as written
  bool returns_argument = false;                // the result is one of the objects that were given
  std::vector<std::string> globals;             // that were read and are not fixed
  std::size_t steps = 0;
};

Setting empty_setting(const Candidate&);
const Formal& formal_at(const Candidate&, std::size_t);  // the result last
std::size_t formal_count(const Candidate&);              // with the result

class Stage {
 public:
  // Both outlive it.
  Stage(const Kit& kit, const Candidate& candidate) : kit_(kit), candidate_(candidate) {}
  Outcome run(const Setting&);
  const Kit& kit() const { return kit_; }
  const Candidate& candidate() const { return candidate_; }

 private:
  const Kit& kit_;
  const Candidate& candidate_;
  std::unique_ptr<Machine> machine_;
  std::size_t runs_ = 0;
};

}  // namespace dextral::probe
