// Two statements about one parameter, return or field contradict each other: a
// declaration and its definition, or an override and its base.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return clash.kind == solve::ClashKind::contract; }

std::string sentence(const Clash& clash) {
  return "the phrases for " + quoted(clash.subject) + " disagree: " + frame(clash.left) + " in one place, " + frame(clash.right) + " in another";
}

}  // namespace

Rule rule_contract_clash() {
  return {"contract-clash", "a declaration and its definition or override say different things", fits, sentence, nullptr, 10};
}

}  // namespace dextral
