#include "phrase/phrase.h"

namespace dextral::phrase {

namespace {

std::string dashed(const std::string& sequence) {
  std::string text;
  for (char c : sequence) text += (text.empty() ? "" : "-") + std::string(1, c);
  return text;
}

std::string from_to(const Quantity& q) { return text(q.first) + " to " + text(q.second); }

std::string head(const Quantity& q) {
  std::string in = " in " + text(q.in);
  switch (q.kind) {
    case Kind::vector: return "in " + text(q.in);
    case Kind::position: return "from " + q.from_point + " to " + q.to_point + in;
    case Kind::passive: return "passive " + from_to(q);
    case Kind::active: return q.first == q.second ? "active in " + text(q.first) : "active " + from_to(q);
    case Kind::turn: return "turn " + from_to(q);
    case Kind::angles: return "angles " + dashed(q.sequence) + " " + from_to(q);
    case Kind::angle_rates: return "angle rates " + dashed(q.sequence) + " " + from_to(q);
    case Kind::rate: return "rate of " + text(q.second) + " against " + text(q.first) + in;
    case Kind::velocity: return "velocity of " + q.to_point + " against " + text(q.first) + in;
    case Kind::acceleration: return "acceleration of " + q.to_point + " against " + text(q.first) + in;
    case Kind::specific_force: return "specific force" + in;
    case Kind::torque: return "torque about " + q.to_point + in;
    case Kind::along: return "along " + q.word;
    case Kind::heading: return "angle from " + q.word + " toward " + q.second_word;
    case Kind::geodetic: return "geodetic " + q.word;
    case Kind::tensor: return "tensor" + in + (q.to_point.empty() ? "" : " about " + q.to_point);
    case Kind::covariance: return "covariance of " + (q.of ? head(*q.of) : "none");
    case Kind::linear: return "linear " + from_to(q);
    case Kind::skew: return "skew" + in;
    case Kind::chosen: return "in frame named by " + q.word;
    case Kind::none: return "none";
    case Kind::unit: return "";
  }
  return "";
}

}  // namespace

std::string print(const Quantity& q) {
  std::string out = head(q);
  auto add = [&](bool said, const std::string& word) {
    if (said) out += (out.empty() ? "" : ", ") + word;
  };
  add(q.unit == Unit::deg, "deg");
  add(q.unit == Unit::rad, "rad");
  add(q.turning == Turning::moving, "moving");
  add(q.turning == Turning::fixed, "fixed");
  if (!q.stored.empty()) {
    std::string roles;
    for (const std::string& role : q.stored) roles += " " + role;
    add(true, "stored" + roles);
  }
  add(q.scalar == ScalarPlace::first, "scalar first");
  add(q.scalar == ScalarPlace::last, "scalar last");
  add(q.product == Product::hamilton, "hamilton");
  add(q.product == Product::shuster, "shuster");
  add(q.maps_by == QuaternionMap::qvq_star, "maps by qvq*");
  add(q.maps_by == QuaternionMap::q_star_vq, "maps by q*vq");
  add(q.seen_from.known(), "seen from " + text(q.seen_from));
  add(q.row_vectors, "row vectors");
  add(q.layout == Layout::row_major, "row-major");
  add(q.layout == Layout::column_major, "column-major");
  add(q.hand == Hand::left, "left-handed");
  add(q.hand == Hand::right, "right-handed");
  add(q.form == Form::rotation_vector, "as rotation vector");
  add(q.form == Form::mrp, "as mrp");
  add(q.form == Form::quaternion, "as quaternion");
  add(q.small, "small");
  add(q.increment, "increment");
  return out;
}

std::string print(const Acceptance& acceptance) { return "accept " + acceptance.rule + " because " + acceptance.reason; }

std::vector<Frame> mentioned(const Quantity& q) {
  std::vector<Frame> list;
  for (const Frame* frame : {&q.in, &q.first, &q.second, &q.seen_from})
    if (frame->known()) list.push_back(*frame);
  if (q.of)
    for (Frame& frame : mentioned(*q.of)) list.push_back(std::move(frame));
  return list;
}

}  // namespace dextral::phrase
