// Positions are chained over points that do not meet.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return clash.kind == solve::ClashKind::points; }

std::string sentence(const Clash& clash) {
  return quoted(clash.subject) + " ends at " + frame(clash.left) + ", " + quoted(clash.object) + " begins at " + frame(clash.right);
}

}  // namespace

Rule rule_point_clash() {
  return {"point-clash", "positions are chained over points that do not meet", fits, sentence, nullptr, 10};
}

}  // namespace dextral
