// A map is used forwards where its transpose, inverse or conjugate belongs: a single
// inversion of one factor makes both sides agree.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) {
  return (of_frames(clash) || clash.kind == solve::ClashKind::tensor) && (first_repair(clash, RepairKind::transpose) || first_repair(clash, RepairKind::twin_function));
}

std::string sentence(const Clash& clash) {
  const auto& repair = clash.repairs[0];
  if (repair.kind == RepairKind::twin_function)
    return quoted(repair.subject) + " stands where " + quoted(repair.other) + " belongs: " + disagreement(clash);
  return "the inverse of " + quoted(repair.subject) + " is missing: " + disagreement(clash);
}

std::optional<Witness> witness(const Clash& clash) {
  if (!clash.repairs[0].rotation) return std::nullopt;
  return Witness{degrees_of_missing_inverse(), "at yaw 30, pitch 20, roll 10 deg"};
}

}  // namespace

Rule rule_missing_inverse() {
  return {"missing-inverse", "the transpose or inverse of a rotation or pose is missing", fits, sentence, witness, 20};
}

}  // namespace dextral
