// Turns, rates, poses, maps of the Earth, and how candidates may misbehave.
#include "recognise_support.h"

namespace dextral::probe {
namespace {

Mat m(const Numbers& x, int at) { return mat(x.data() + at); }
Vec v(const Numbers& x, int at) { return vec(x.data() + at); }
Quat q(const Numbers& x, int at) { return quat(x.data() + at, false); }

TEST(Turns, RotationVectorInBothSenses) {
  for (bool passive : {false, true}) {
    auto r = measured(signature({3}, {9}), [=](const Numbers& x) {
      return numbers(passive ? transpose(rotation(v(x, 0))) : rotation(v(x, 0)));
    });
    ASSERT_EQ(told(r), "rotation-vector-to-matrix");
    EXPECT_EQ(contract(r), std::string("p0: turn ?A to ?B, as rotation vector; return: ") +
                               (passive ? "passive" : "active") + " ?A to ?B");
    auto back = measured(signature({9}, {3}), [=](const Numbers& x) {
      Mat a = passive ? transpose(m(x, 0)) : m(x, 0);
      double angle = std::acos((a[0] + a[4] + a[8] - 1) / 2);
      return numbers((angle / std::sin(angle)) * unskew(a));
    });
    EXPECT_EQ(told(back), "matrix-to-rotation-vector");
  }
}

// (0.4, -0.3, 0.9), active; computed with scipy and Eigen.
TEST(Turns, RodriguesFormulaAtAPublishedPoint) {
  const double want[] = {0.588371774564,  -0.804101183137, -0.085087849741, 0.694333656354, 0.556356245919,
                         -0.456473987518, 0.414390430090,  0.209497052256,  0.885658826268};
  Mat r = rotation(Vec{0.4, -0.3, 0.9});
  for (int i = 0; i < 9; ++i) EXPECT_NEAR(r[i], want[i], 1e-12);
}

TEST(Turns, AxisAndAngle) {
  auto f = [](const Vec& u, double t) {
    return std::cos(t) * identity() + (1 - std::cos(t)) * outer(u, u) + std::sin(t) * skew(u);
  };
  auto r = measured(signature({3, 1}, {9}), [&](const Numbers& x) { return numbers(f(v(x, 0), x[3])); });
  ASSERT_EQ(told(r), "axis-angle-to-matrix");
  EXPECT_NE(words(r).find("active matrix"), std::string::npos);
  auto degrees = measured(signature({1, 3}, {9}),
                          [&](const Numbers& x) { return numbers(transpose(f(unit(v(x, 1)), x[0] * kPi / 180))); });
  ASSERT_EQ(told(degrees), "axis-angle-to-matrix");
  EXPECT_NE(words(degrees).find("passive matrix"), std::string::npos);
  EXPECT_NE(words(degrees).find("deg"), std::string::npos);
  auto wrong = measured(signature({3, 1}, {9}), [&](const Numbers& x) {
    Mat a = f(v(x, 0), x[3]);
    a[1] = 2 * (1 - std::cos(x[3])) * x[0] * x[1] - a[1];
    return numbers(a);
  });
  EXPECT_EQ(told(wrong), "nothing");
}

TEST(Turns, ModifiedRodriguesParameters) {
  auto r = measured(signature({3}, {9}), [](const Numbers& x) {
    Vec s = v(x, 0);
    double n = dot(s, s), k = 1 / ((1 + n) * (1 + n));
    Mat w = skew(s);
    return numbers(identity() + (8 * k) * product(w, w) - (4 * (1 - n) * k) * w);
  });
  ASSERT_EQ(told(r), "mrp-to-matrix");
  EXPECT_EQ(contract(r), "p0: turn ?A to ?B, as mrp; return: passive ?A to ?B");
  auto composed = measured(signature({3, 3}, {3}), [](const Numbers& x) {
    Vec a = v(x, 0), b = v(x, 3);
    double n = dot(a, a), o = dot(b, b);
    return numbers((1 / (1 + n * o - 2 * dot(a, b))) * ((1 - o) * a + (1 - n) * b + 2.0 * cross(a, b)));
  });
  EXPECT_EQ(told(composed), "mrp-composition");
}

TEST(Rates, OfQuaternions) {
  auto f = [](bool space, double k) {
    return measured(signature({4, 3}, {4}), [=](const Numbers& x) {
      Quat w = pure(v(x, 4));
      return numbers(k * (space ? product(w, q(x, 0)) : product(q(x, 0), w)));
    });
  };
  EXPECT_EQ(
      contract(f(false, 0.5)),
      "p0: active ?A to ?B, scalar first, hamilton, maps by qvq*, as quaternion; p1: rate of ?B against ?A in ?B");
  EXPECT_EQ(
      contract(f(true, 0.5)),
      "p0: active ?A to ?B, scalar first, hamilton, maps by qvq*, as quaternion; p1: rate of ?B against ?A in ?A");
  EXPECT_EQ(told(f(true, 1)), "quaternion-vector-product");
  EXPECT_EQ(told(f(true, 0.25)), "nothing");
}

TEST(Rates, OfMatrices) {
  auto r = measured(signature({9, 3}, {9}),
                    [](const Numbers& x) { return numbers(-1.0 * product(skew(v(x, 9)), m(x, 0))); });
  ASSERT_EQ(told(r), "matrix-derivative");
  EXPECT_EQ(contract(r), "p0: passive ?B to ?A; p1: rate of ?A against ?B in ?A");
}

// p = phi' - psi' sin th ... of 3-2-1 (the usual formulas of flight mechanics, from memory).
TEST(Rates, OfEulerAngles) {
  auto f = [](const Numbers& x) {
    double ph = x[0], th = x[1], dph = x[3], dth = x[4], dps = x[5];
    return Numbers{dph - dps * std::sin(th), dth * std::cos(ph) + dps * std::cos(th) * std::sin(ph),
                   -dth * std::sin(ph) + dps * std::cos(th) * std::cos(ph)};
  };
  auto r = measured(signature({3, 3}, {3}), f);
  ASSERT_EQ(told(r), "rate-from-euler-rates");
  EXPECT_EQ(contract(r), "p1: angle rates 3-2-1 ?A to ?B, stored roll pitch yaw; return: rate of ?B against ?A in ?B");
  auto wrong = measured(signature({3, 3}, {3}), [&](const Numbers& x) {
    Numbers y = f(x);
    y[0] += 2 * x[5] * std::sin(x[1]);
    return y;
  });
  EXPECT_EQ(told(wrong), "nothing");
  auto back = measured(signature({3, 3}, {3}), [](const Numbers& x) {
    double ph = x[0], th = x[1], p = x[3], q = x[4], r = x[5], s = q * std::sin(ph) + r * std::cos(ph);
    return Numbers{p + s * std::tan(th), q * std::cos(ph) - r * std::sin(ph), s / std::cos(th)};
  });
  ASSERT_EQ(told(back), "euler-rates-from-rate");
  auto matrix = measured(signature({1, 1}, {9}), [](const Numbers& x) {
    double ph = x[0], th = x[1];
    return Numbers{1,
                   0,
                   -std::sin(th),
                   0,
                   std::cos(ph),
                   std::cos(th) * std::sin(ph),
                   0,
                   -std::sin(ph),
                   std::cos(th) * std::cos(ph)};
  });
  EXPECT_EQ(told(matrix), "euler-rate-matrix");
}

// w1 = a1' sin a2 sin a3 + a2' cos a3 ... of 3-1-3.
TEST(Rates, OfProperEulerAngles) {
  auto r = measured(signature({3, 3}, {3}), [](const Numbers& x) {
    double s2 = std::sin(x[1]), c2 = std::cos(x[1]), s3 = std::sin(x[2]), c3 = std::cos(x[2]);
    return Numbers{x[3] * s2 * s3 + x[4] * c3, x[3] * s2 * c3 - x[4] * s3, x[3] * c2 + x[5]};
  });
  EXPECT_EQ(contract(r), "p1: angle rates 3-1-3 ?A to ?B; return: rate of ?B against ?A in ?B");
}

// Rows north, east, down; compared with GeographicLib and ERFA at 47.4 N 8.5 E.
TEST(Earth, LocalAxes) {
  auto ned = [](double p, double l) {
    double sp = std::sin(p), cp = std::cos(p), sl = std::sin(l), cl = std::cos(l);
    return Numbers{-sp * cl, -sp * sl, cp, -sl, cl, 0, -cp * cl, -cp * sl, -sp};
  };
  auto r = measured(signature({1, 1}, {9}), [&](const Numbers& x) { return ned(x[1], x[0]); });
  ASSERT_EQ(told(r), "ecef-to-ned");
  EXPECT_EQ(contract(r), "p1: geodetic latitude, rad; p0: geodetic longitude, rad; return: passive ecef to ned");
  auto point = measured(signature({3}, {9}), [&](const Numbers& x) { return ned(x[0] * kPi / 180, x[1] * kPi / 180); });
  EXPECT_EQ(told(point), "ecef-to-ned");
  auto wrong = measured(signature({1, 1}, {9}), [&](const Numbers& x) {
    Numbers y = ned(x[0], x[1]);
    y[3] = -y[3];
    return y;
  });
  EXPECT_EQ(told(wrong), "nothing");
}

TEST(Poses, ProductInverseAndPoint) {
  auto times = [](const Numbers& x) {
    Numbers y(16, 0.0);
    for (int i = 0; i < 16; ++i)
      for (int k = 0; k < 4; ++k) y[i] += x[4 * (i / 4) + k] * x[16 + 4 * k + i % 4];
    return y;
  };
  EXPECT_EQ(words(measured(signature({16, 16}, {16}), times)), "return = p0 p1");
  auto point = [](const Numbers& x) {
    return Numbers{x[0] * x[16] + x[1] * x[17] + x[2] * x[18] + x[3], x[4] * x[16] + x[5] * x[17] + x[6] * x[18] + x[7],
                   x[8] * x[16] + x[9] * x[17] + x[10] * x[18] + x[11]};
  };
  EXPECT_EQ(told(measured(signature({16, 3}, {3}), point)), "pose-apply-point");
  auto apart = measured(signature({9, 3, 3}, {3}),
                        [](const Numbers& x) { return numbers(product(transpose(m(x, 0)), v(x, 9) - v(x, 12))); });
  ASSERT_EQ(told(apart), "turn-and-shift");
  EXPECT_EQ(words(apart), "return = p0^T (p1 - p2)");
}

TEST(Candidates, ThatMisbehaveAreRefusedOrTold) {
  auto never = recognise(signature({3}, {3}),
                         [](const Numbers&) -> std::variant<Numbers, Refusal> { return Refusal{"calls printf"}; });
  EXPECT_EQ(never.refusal, "calls printf");
  double state = 0;
  EXPECT_EQ(told(measured(signature({1}, {1}), [&](const Numbers& x) { return Numbers{x[0] + state++}; })),
            "gives different results for the same inputs");
  Signature selector = signature({1, 1}, {1});
  selector.inputs[1].integer = true;
  EXPECT_EQ(told(measured(selector, [](const Numbers& x) { return Numbers{x[1] > 0 ? x[0] : -x[0]}; })),
            "depends on the integer p1, which selects");
  EXPECT_EQ(told(measured(signature({3}, {3}), [](const Numbers&) { return Numbers{1}; })),
            "gives another count of numbers than declared");
  selector.inputs[1].integer = true;
  EXPECT_EQ(told(measured(selector, [](const Numbers& x) { return Numbers{x[1] == 3 ? -x[0] : x[0]}; })),
            "depends on the integer p1, which selects");
  auto at_times = recognise(signature({9, 9}, {9}), [&](const Numbers& x) -> std::variant<Numbers, Refusal> {
    if (std::abs(x[0]) < 0.3) return Refusal{"assert"};
    return numbers(product(m(x, 0), m(x, 9)));
  });
  EXPECT_EQ(told(at_times), "matrix-product");
}

TEST(Candidates, UnusedInputsAreTold) {
  auto r = measured(signature({3, 1, 3}, {3}), [](const Numbers& x) { return numbers(v(x, 0) + v(x, 4)); });
  ASSERT_EQ(told(r), "vector-sum");
  EXPECT_EQ(words(r), "return = p0 + p2; does not use p1");
}

TEST(Candidates, SeveralOutputsAreEachTold) {
  auto r = measured(signature({1}, {1, 1}), [](const Numbers& x) { return Numbers{std::sin(x[0]), std::cos(x[0])}; });
  EXPECT_EQ(told(r), "sine+cosine");
}

TEST(Candidates, InPlaceFormsAreTheSame) {
  Signature s = signature({9, 9}, {9});
  s.inputs[0].formal = s.inputs[0].text = s.outputs[0].formal = s.outputs[0].text = "this";
  auto r = measured(s, [](const Numbers& x) { return numbers(product(m(x, 0), m(x, 9))); });
  EXPECT_EQ(words(r), "this = this p1");
}

TEST(Candidates, UnitConstantsOfFewDigitsAreTold) {
  auto r = measured(signature({1}, {1}), [](const Numbers& x) { return Numbers{x[0] * 57.29578}; });
  ASSERT_EQ(told(r), "radians-to-degrees");
  EXPECT_NE(words(r).find("six digits only"), std::string::npos);
}

}  // namespace
}  // namespace dextral::probe
