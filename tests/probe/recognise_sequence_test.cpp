// All sequences: against Boost.QVM, against published numbers, and look-alikes.
#include <boost/qvm/mat.hpp>
#include <boost/qvm/mat_operations.hpp>
#include <boost/qvm/mat_traits_array.hpp>
#include <boost/qvm/quat.hpp>
#include <boost/qvm/quat_operations.hpp>

#include "recognise_support.h"

namespace dextral::probe {
namespace {

namespace qvm = boost::qvm;
using Outside = qvm::mat<double, 3, 3>;

Outside turn_about(int axis, double t) {
  if (axis == 1) return qvm::rotx_mat<3>(t);
  if (axis == 2) return qvm::roty_mat<3>(t);
  return qvm::rotz_mat<3>(t);
}

Outside published(const std::string& s, double a, double b, double c) {
#define DEXTRAL_SEQUENCE(D, N) \
  if (s == D) return qvm::rot_mat_##N<3>(a, b, c)
  DEXTRAL_SEQUENCE("123", xyz);
  DEXTRAL_SEQUENCE("132", xzy);
  DEXTRAL_SEQUENCE("213", yxz);
  DEXTRAL_SEQUENCE("231", yzx);
  DEXTRAL_SEQUENCE("312", zxy);
  DEXTRAL_SEQUENCE("321", zyx);
  DEXTRAL_SEQUENCE("121", xyx);
  DEXTRAL_SEQUENCE("131", xzx);
  DEXTRAL_SEQUENCE("212", yxy);
  DEXTRAL_SEQUENCE("232", yzy);
  DEXTRAL_SEQUENCE("313", zxz);
#undef DEXTRAL_SEQUENCE
  return qvm::rot_mat_zyz<3>(a, b, c);
}

Numbers flat(const Outside& m, bool transposed) {
  Numbers y(9);
  for (int i = 0; i < 9; ++i) y[i] = transposed ? m.a[i % 3][i / 3] : m.a[i / 3][i % 3];
  return y;
}

const char* kTwelve[] = {"123", "132", "213", "231", "312", "321", "121", "131", "212", "232", "313", "323"};

std::string dashed(const std::string& s) { return {s[0], '-', s[1], '-', s[2]}; }

// rot_mat_ijk of Boost.QVM 1.74 is the active moving sequence.
TEST(Sequences, AgreeWithAnOutsideLibraryInBothSensesAndUnits) {
  for (std::string s : kTwelve)
    for (bool passive : {false, true})
      for (bool degrees : {false, true}) {
        double k = degrees ? kPi / 180 : 1;
        auto m = measured(signature({1, 1, 1}, {9}),
                          [&](const Numbers& x) { return flat(published(s, x[0] * k, x[1] * k, x[2] * k), passive); });
        ASSERT_EQ(told(m), "rotation-builder") << s;
        std::string unit = degrees ? ", deg" : ", rad";
        std::string angles = ": angles " + dashed(s) + " ?A to ?B" + unit;
        EXPECT_EQ(contract(m), "p0" + angles + "; p1" + angles + "; p2" + angles +
                                   "; return: " + (passive ? "passive" : "active") + " ?A to ?B");
      }
}

TEST(Sequences, AreReadInEveryOrderOfTheAngles) {
  int order[3] = {0, 1, 2};
  do {
    auto m = measured(signature({3}, {9}), [&](const Numbers& x) {
      return flat(published("321", x[order[0]], x[order[1]], x[order[2]]), true);
    });
    ASSERT_EQ(told(m), "rotation-builder");
    const Quantity& q = m.meanings[0].contract.at(0).quantity;
    EXPECT_EQ(q.sequence, "321");
    const char* roles[] = {"yaw", "pitch", "roll"};
    for (int n = 0; n < 3; ++n) {
      if (!q.stored.empty())
        EXPECT_EQ(q.stored[order[n]], roles[n]);
      else
        EXPECT_EQ(order[n], n);
    }
  } while (std::next_permutation(order, order + 3));
}

// Fixed i j k: the first rotation stands rightmost, all about the first axes.
TEST(Sequences, FixedAreMovingOnesReversed) {
  for (std::string s : kTwelve) {
    auto m = measured(signature({1, 1, 1}, {9}), [&](const Numbers& x) {
      Outside r = qvm::operator*(turn_about(s[2] - '0', x[2]),
                                 qvm::operator*(turn_about(s[1] - '0', x[1]), turn_about(s[0] - '0', x[0])));
      return flat(r, false);
    });
    ASSERT_EQ(told(m), "rotation-builder") << s;
    EXPECT_EQ(m.meanings[0].equivalents[0], "active map of the fixed sequence " + dashed(s) + ", angles p0, p1, p2");
  }
}

TEST(Sequences, AsQuaternionsInBothStorages) {
  for (std::string s : kTwelve)
    for (bool last : {false, true}) {
      auto m = measured(signature({3}, {4}), [&](const Numbers& x) {
        Outside r = published(s, x[0], x[1], x[2]);
        qvm::quat<double> q = qvm::convert_to<qvm::quat<double>>(r);
        return last ? Numbers{q.a[1], q.a[2], q.a[3], q.a[0]} : Numbers{q.a[0], q.a[1], q.a[2], q.a[3]};
      });
      ASSERT_EQ(told(m), "rotation-builder-quaternion") << s;
      EXPECT_EQ(contract(m), "p0: angles " + dashed(s) + " ?A to ?B, rad; return: active ?A to ?B, scalar " +
                                 (last ? "last" : "first") + ", hamilton, maps by qvq*, as quaternion");
    }
}

// yaw = atan2(C12, C11), pitch = -asin(C13), roll = atan2(C23, C33): passive 3-2-1.
TEST(Sequences, ExtractionIsTheInverse) {
  auto extract = [](const Numbers& c) {
    return Numbers{std::atan2(c[5], c[8]), -std::asin(c[2]), std::atan2(c[1], c[0])};
  };
  auto m = measured(signature({9}, {3}), extract);
  ASSERT_EQ(told(m), "euler-extraction");
  EXPECT_EQ(contract(m), "return: angles 3-2-1 ?A to ?B, rad, stored roll pitch yaw; p0: passive ?A to ?B");
  EXPECT_NE(words(m).find("for rotation matrices only"), std::string::npos);
  auto three = measured(signature({9}, {1, 1, 1}), extract);
  EXPECT_EQ(told(three), "euler-extraction");
  auto off = measured(signature({9}, {3}), [&](const Numbers& c) {
    Numbers y = extract(c);
    y[1] = -y[1];
    return y;
  });
  EXPECT_EQ(contract(off), "");
  auto one_sided = measured(signature({9}, {3}), [](const Numbers& c) {
    return Numbers{std::atan(c[5] / c[8]), -std::asin(c[2]), std::atan2(c[1], c[0])};
  });
  EXPECT_EQ(told(one_sided), "nothing");
}

// Yaw 30, pitch 20, roll 10 deg (docs/algebra.md; compared with scipy and KDL).
TEST(Sequences, TheWitnessAttitudeIsTheDefinition) {
  double k = kPi / 180;
  Mat c = product(product(elementary(0, 10 * k), elementary(1, 20 * k)), elementary(2, 30 * k));
  const double want[] = {0.813797681349, 0.469846310393, -0.342020143326, -0.440969610530, 0.882564119259,
                         0.163175911167, 0.378522306370, 0.018028311236,  0.925416578398};
  for (int i = 0; i < 9; ++i) EXPECT_NEAR(c[i], want[i], 1e-12);
}

TEST(Sequences, LookAlikesAreNotTakenForTheRealThing) {
  auto right = [](const Numbers& x) { return flat(published("321", x[0], x[1], x[2]), true); };
  for (int i = 0; i < 9; ++i) {
    auto sign = measured(signature({1, 1, 1}, {9}), [&](const Numbers& x) {
      Numbers y = right(x);
      y[i] = -y[i];
      return y;
    });
    EXPECT_EQ(told(sign), "nothing") << i;
    auto single = measured_single(signature({1, 1, 1}, {9}), [&](const Numbers& x) {
      Numbers y = right(x);
      y[i] = -y[i];
      return y;
    });
    EXPECT_EQ(told(single), "nothing") << i;
    auto index = measured(signature({1, 1, 1}, {9}), [&](const Numbers& x) {
      Numbers y = right(x);
      std::swap(y[i], y[(i + 1) % 9]);
      return y;
    });
    EXPECT_EQ(told(index), "nothing") << i;
  }
  EXPECT_EQ(told(measured_single(signature({1, 1, 1}, {9}), right)), "rotation-builder");
  auto mixed = measured(signature({1, 1, 1}, {9}), [&](const Numbers& x) { return right({x[0], -x[1], x[2]}); });
  EXPECT_EQ(told(mixed), "rotation-builder");
  EXPECT_EQ(contract(mixed), "");
  EXPECT_EQ(mixed.meanings[0].formula, "R1(p2) R2(-p1) R3(p0)");
  auto approximate = measured(signature({3}, {9}), [&](const Numbers& x) {
    Mat s = skew(vec(x.data()));
    return numbers(identity() + s + 0.5 * product(s, s));
  });
  EXPECT_EQ(told(approximate), "nothing");
}

TEST(Sequences, ElementaryInSenseAndUnit) {
  for (int axis : {1, 2, 3})
    for (bool degrees : {false, true}) {
      auto m = measured(signature({1}, {9}), [&](const Numbers& x) {
        return flat(turn_about(axis, x[0] * (degrees ? kPi / 180 : 1)), true);
      });
      ASSERT_EQ(told(m), "elementary-rotation");
      EXPECT_EQ(contract(m), "p0: angles " + std::to_string(axis) + " ?A to ?B" + (degrees ? ", deg" : ", rad") +
                                 "; return: passive ?A to ?B");
    }
}

// Like the routines of ERFA that turn a matrix in place: r <- R3(psi) r.
TEST(Sequences, FurtherTurnsOfAMatrix) {
  auto m = measured(signature({1, 9}, {9}),
                    [](const Numbers& x) { return numbers(product(elementary(2, x[0]), mat(x.data() + 1))); });
  ASSERT_EQ(told(m), "further-turn");
  EXPECT_EQ(contract(m), "p1: passive ?C to ?B; p0: angles 3 ?B to ?A, rad; return: passive ?C to ?A");
  auto other = measured(signature({1, 9}, {9}),
                        [](const Numbers& x) { return numbers(product(mat(x.data() + 1), elementary(2, -x[0]))); });
  EXPECT_EQ(contract(other), "p1: passive ?B to ?A; p0: angles 3 ?B to ?C, rad; return: passive ?C to ?A");
}

// On unit vectors a half turn has the numbers of modified Rodrigues parameters.
TEST(Sequences, AHalfTurnIsNoParameterSet) {
  auto m = measured(signature({3}, {9}),
                    [](const Numbers& x) { return numbers(2.0 * outer(vec(x.data()), vec(x.data())) - identity()); });
  EXPECT_EQ(told(m), "nothing");
}

TEST(Sequences, PhrasesCanBeReadAgain) {
  for (int order : {0, 1}) {
    auto m = measured(signature({3}, {9}),
                      [&](const Numbers& x) { return flat(published("321", x[order], x[1 - order], x[2]), true); });
    ASSERT_EQ(told(m), "rotation-builder");
    for (const Term& t : m.meanings[0].contract) {
      auto again = phrase::parse(phrase::print(t.quantity));
      ASSERT_TRUE(std::holds_alternative<Quantity>(again)) << phrase::print(t.quantity);
      EXPECT_EQ(std::get<Quantity>(again), t.quantity);
    }
  }
}

TEST(Sequences, InAHomogeneousMatrix) {
  auto m = measured(signature({3}, {16}), [&](const Numbers& x) {
    Numbers r = flat(published("321", x[0], x[1], x[2]), true);
    return Numbers{r[0], r[1], r[2], 0, r[3], r[4], r[5], 0, r[6], r[7], r[8], 0, 0, 0, 0, 1};
  });
  EXPECT_EQ(told(m), "rotation-builder");
}

TEST(Sequences, RunsAndTimeAreBounded) {
  auto m =
      measured(signature({3}, {9}), [&](const Numbers& x) { return flat(published("123", x[0], x[1], x[2]), false); });
  EXPECT_LT(m.points, 150u);
  auto n = measured(signature({3}, {9}), [&](const Numbers& x) {
    Numbers y = flat(published("123", x[0], x[1], x[2]), false);
    y[0] += x[1];
    return y;
  });
  EXPECT_LT(n.points, 150u);
}

}  // namespace
}  // namespace dextral::probe
