#include "core/quantity.h"

namespace dextral {

namespace {

auto tie(const Quantity& q) {
  return std::tie(q.kind, q.in, q.first, q.second, q.from_point, q.to_point, q.sequence, q.word, q.second_word, q.stored,
                  q.unit, q.turning, q.scalar, q.product, q.maps_by, q.layout, q.form, q.hand, q.seen_from, q.row_vectors,
                  q.small, q.increment);
}

}  // namespace

bool operator==(const Quantity& a, const Quantity& b) {
  if (tie(a) != tie(b) || bool(a.of) != bool(b.of)) return false;
  return !a.of || *a.of == *b.of;
}

Frames frames(const Quantity& q) {
  switch (q.kind) {
    case Kind::passive:
    case Kind::linear: return {q.second, q.first};
    case Kind::active: return {q.first, q.second};
    case Kind::tensor:
    case Kind::skew: return {q.in, q.in};
    case Kind::covariance: {
      if (!q.of) return {};
      Frame frame = frames(*q.of).rows;
      return {frame, frame};
    }
    case Kind::vector:
    case Kind::position:
    case Kind::rate:
    case Kind::velocity:
    case Kind::acceleration:
    case Kind::specific_force:
    case Kind::torque: return {q.in, {}};
    case Kind::turn:
    case Kind::angles:
    case Kind::angle_rates:
    case Kind::along:
    case Kind::heading:
    case Kind::geodetic:
    case Kind::chosen:
    case Kind::none:
    case Kind::unit: return {};
  }
  return {};
}

}  // namespace dextral
