// A phrase does not parse, or does not belong where it stands.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return clash.kind == solve::ClashKind::phrase; }

std::string sentence(const Clash& clash) {
  std::string text = clash.wrong.empty() ? clash.message : quoted(clash.wrong) + ": " + clash.message;
  return clash.nearest.empty() ? text : text + "; did you mean " + quoted(clash.nearest) + "?";
}

}  // namespace

Rule rule_phrase_error() {
  return {"phrase-error", "a phrase does not parse or belongs to nothing", fits, sentence, nullptr, 10};
}

}  // namespace dextral
