// Two factors stand in the wrong order: exchanged, their frames chain.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return of_frames(clash) && first_repair(clash, RepairKind::swap); }

std::string sentence(const Clash& clash) {
  const auto& repair = clash.repairs[0];
  return quoted(repair.subject) + " and " + quoted(repair.other) + " are in the wrong order: " + disagreement(clash);
}

std::optional<Witness> witness(const Clash& clash) {
  (void)clash;
  return Witness{degrees_of_wrong_order(), "for yaw 30, pitch 20, roll 10 deg with yaw -40, pitch 15, roll 25 deg"};
}

}  // namespace

Rule rule_wrong_order() {
  return {"wrong-order", "two factors are composed in the wrong order", fits, sentence, witness, 20};
}

}  // namespace dextral
