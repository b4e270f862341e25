// A map is transposed or inverted once too often: without the inversion both sides
// agree.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return of_frames(clash) && first_repair(clash, RepairKind::drop_inverse); }

std::string sentence(const Clash& clash) {
  return quoted(clash.repairs[0].subject) + " is inverted needlessly: " + disagreement(clash);
}

std::optional<Witness> witness(const Clash& clash) {
  if (!clash.repairs[0].rotation) return std::nullopt;
  return Witness{degrees_of_missing_inverse(), "at yaw 30, pitch 20, roll 10 deg"};
}

}  // namespace

Rule rule_needless_inverse() {
  return {"needless-inverse", "a rotation or pose is transposed or inverted once too often", fits, sentence, witness, 20};
}

}  // namespace dextral
