// Two things that must be in one frame are in two, and no single inversion or
// exchange of factors mends it.
#include "rules/support/words.h"

namespace dextral {

using namespace words;
using solve::Clash;
using solve::RepairKind;

namespace {

bool fits(const Clash& clash) { return of_frames(clash); }

std::string sentence(const Clash& clash) {
  const std::string left = frame(clash.left), right = frame(clash.right);
  if (clash.operation == OperationKind::hold)
    return quoted(clash.subject) + " is in " + left + ", but " + quoted(clash.object) + " is declared in " + right;
  if (clash.object.empty() || clash.object == clash.subject)
    return quoted(clash.expression) + " joins " + left + " and " + right;
  return quoted(clash.subject) + " is in " + left + ", " + quoted(clash.object) + " in " + right;
}

std::optional<Witness> witness(const Clash& clash) {
  (void)clash;
  return Witness{degrees_of_wrong_frame(), "at yaw 30, pitch 20, roll 10 deg between the frames"};
}

}  // namespace

Rule rule_frame_clash() {
  return {"frame-clash", "quantities in different frames are combined", fits, sentence, witness, 90};
}

}  // namespace dextral
