// An acceptance that no finding meets any more.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return clash.kind == solve::ClashKind::stale; }

std::string sentence(const Clash& clash) {
  return "nothing is left to accept here: " + quoted(clash.wrong.empty() ? clash.expression : clash.wrong);
}

}  // namespace

Rule rule_stale_accept() {
  return {"stale-accept", "an acceptance matches no finding", fits, sentence, nullptr, 10};
}

}  // namespace dextral
