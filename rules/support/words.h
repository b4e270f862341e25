// Words that the rules share.
#pragma once

#include <string>

#include "core/witness.h"
#include "rules/rule.h"

namespace dextral::words {

inline std::string quoted(const std::string& code) { return "`" + code + "`"; }
inline std::string frame(const Frame& f) {
  if (!f.known()) return "an unknown frame";
  return f.own && !f.owner.empty() ? text(f) + " of " + quoted(f.owner) : text(f);
}

inline bool first_repair(const solve::Clash& clash, solve::RepairKind kind) {
  return !clash.repairs.empty() && clash.repairs[0].kind == kind;
}
inline bool of_frames(const solve::Clash& clash) { return clash.kind == solve::ClashKind::frames; }

// "`a` is in ned where `b` is in body".
inline std::string disagreement(const solve::Clash& clash) {
  if (clash.object.empty() || clash.object == clash.subject) return quoted(clash.subject) + " meets both " + frame(clash.left) + " and " + frame(clash.right);
  return quoted(clash.subject) + " meets " + frame(clash.left) + " where " + quoted(clash.object) + " meets " + frame(clash.right);
}

}  // namespace dextral::words
