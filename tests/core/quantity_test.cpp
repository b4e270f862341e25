// Quantities: which frames their kinds give, and when two are the same.
#include "core/quantity.h"

#include <gtest/gtest.h>

#include <functional>

#include "core/evidence.h"

namespace dextral {
namespace {

Frame named(const char* name) { return {name, "", false, false, ""}; }

Quantity of(Kind kind) {
  Quantity q;
  q.kind = kind;
  q.in = named("body");
  q.first = named("ned");
  q.second = named("mast");
  return q;
}

std::string pair(const Quantity& q) {
  const Frames f = frames(q);
  return text(f.rows) + "<-" + text(f.columns);
}

// Passive "A to B" is M[B,A], active "A to B" its transpose: docs/algebra.md,
// checked there against NAIF SPICE rotation.req.
TEST(Quantity, MapsTakeColumnsAndGiveRows) {
  EXPECT_EQ(pair(of(Kind::passive)), "mast<-ned");
  EXPECT_EQ(pair(of(Kind::linear)), "mast<-ned");
  EXPECT_EQ(pair(of(Kind::active)), "ned<-mast");
}

TEST(Quantity, TensorsStandInOneFrame) {
  EXPECT_EQ(pair(of(Kind::tensor)), "body<-body");
  EXPECT_EQ(pair(of(Kind::skew)), "body<-body");
  Quantity covariance = of(Kind::covariance);
  EXPECT_EQ(pair(covariance), "<-");
  covariance.of = std::make_shared<const Quantity>(of(Kind::position));
  EXPECT_EQ(pair(covariance), "body<-body");
  covariance.of = std::make_shared<const Quantity>(of(Kind::angles));
  EXPECT_EQ(pair(covariance), "<-");
}

TEST(Quantity, VectorsHaveRowsAlone) {
  for (Kind kind : {Kind::vector, Kind::position, Kind::rate, Kind::velocity, Kind::acceleration, Kind::specific_force,
                    Kind::torque})
    EXPECT_EQ(pair(of(kind)), "body<-") << int(kind);
}

TEST(Quantity, WhatIsNoVectorHasNoFrame) {
  for (Kind kind : {Kind::turn, Kind::angles, Kind::angle_rates, Kind::along, Kind::heading, Kind::geodetic,
                    Kind::chosen, Kind::none, Kind::unit})
    EXPECT_EQ(pair(of(kind)), "<-") << int(kind);
}

TEST(Quantity, EachFieldTellsTwoApart) {
  using Change = std::function<void(Quantity&)>;
  const std::vector<Change> changes = {
      [](Quantity& q) { q.kind = Kind::active; },
      [](Quantity& q) { q.in = named("x"); },
      [](Quantity& q) { q.first = named("x"); },
      [](Quantity& q) { q.second.tag = "k"; },
      [](Quantity& q) { q.from_point = "x"; },
      [](Quantity& q) { q.to_point = "x"; },
      [](Quantity& q) { q.sequence = "321"; },
      [](Quantity& q) { q.word = "up"; },
      [](Quantity& q) { q.second_word = "up"; },
      [](Quantity& q) { q.stored = {"yaw"}; },
      [](Quantity& q) { q.unit = Unit::deg; },
      [](Quantity& q) { q.turning = Turning::fixed; },
      [](Quantity& q) { q.scalar = ScalarPlace::last; },
      [](Quantity& q) { q.product = Product::shuster; },
      [](Quantity& q) { q.maps_by = QuaternionMap::q_star_vq; },
      [](Quantity& q) { q.layout = Layout::column_major; },
      [](Quantity& q) { q.form = Form::mrp; },
      [](Quantity& q) { q.hand = Hand::left; },
      [](Quantity& q) { q.seen_from = named("x"); },
      [](Quantity& q) { q.row_vectors = true; },
      [](Quantity& q) { q.small = true; },
      [](Quantity& q) { q.increment = true; },
      [](Quantity& q) { q.of = std::make_shared<const Quantity>(of(Kind::vector)); },
  };
  const Quantity plain = of(Kind::passive);
  for (std::size_t i = 0; i < changes.size(); ++i) {
    Quantity other = plain, same = plain;
    changes[i](other);
    EXPECT_FALSE(other == plain) << i;
    changes[i](same);
    EXPECT_TRUE(other == same) << i;
  }
}

TEST(Quantity, CovariancesAreComparedByWhatTheyAreOf) {
  Quantity a = of(Kind::covariance), b = a;
  a.of = std::make_shared<const Quantity>(of(Kind::vector));
  b.of = std::make_shared<const Quantity>(of(Kind::vector));
  EXPECT_TRUE(a == b);
  b.of = std::make_shared<const Quantity>(of(Kind::rate));
  EXPECT_FALSE(a == b);
}

TEST(Evidence, AFindingIsAsStrongAsItsWeakestFact) {
  EXPECT_EQ(weaker(Certainty::certain, Certainty::suspect), Certainty::suspect);
  EXPECT_EQ(weaker(Certainty::likely, Certainty::certain), Certainty::likely);
  EXPECT_EQ(weaker(Certainty::likely, Certainty::likely), Certainty::likely);
}

TEST(Evidence, EverySourceHasAWordAndACertainty) {
  auto told = [](Source s) { return std::string(text(s)) + " " + text(certainty(s)); };
  EXPECT_EQ(told(Source::declared), "declared certain");
  EXPECT_EQ(told(Source::modelled), "modelled certain");
  EXPECT_EQ(told(Source::measured), "measured certain");
  EXPECT_EQ(told(Source::named), "named likely");
  EXPECT_EQ(told(Source::remarked), "remarked likely");
  EXPECT_EQ(told(Source::mined), "mined suspect");
}

}  // namespace
}  // namespace dextral
