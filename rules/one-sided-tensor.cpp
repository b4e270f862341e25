// A tensor (inertia, covariance) is mapped from one side only: M T instead of
// M T M^T. It is no tensor in either frame.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return clash.kind == solve::ClashKind::tensor; }

std::string sentence(const Clash& clash) {
  if (first_repair(clash, RepairKind::two_sided))
    return "the tensor is mapped on the left only: the transpose of " + quoted(clash.repairs[0].subject) + " is missing on the right";
  return quoted(clash.subject) + " is declared a tensor in one frame, but its rows and columns meet " + frame(clash.left) + " and " + frame(clash.right);
}

}  // namespace

Rule rule_one_sided_tensor() {
  return {"one-sided-tensor", "a tensor is transformed on one side only", fits, sentence, nullptr, 10};
}

}  // namespace dextral
