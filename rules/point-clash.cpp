// Positions are chained over points that do not meet: a sum for a difference, a
// chain the wrong way round, a link too many or too few.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return clash.kind == solve::ClashKind::points; }

std::string sentence(const Clash& clash) {
  return quoted(clash.subject) + " goes " + clash.left_points + ", " + quoted(clash.object) + " is to go " + clash.right_points;
}

}  // namespace

Rule rule_point_clash() {
  return {"point-clash", "positions are chained over points that do not meet", fits, sentence, nullptr, 10};
}

}  // namespace dextral
