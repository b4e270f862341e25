// Vectors, matrices and quaternions: each by its definition, and look-alikes.
#include "recognise_support.h"

namespace dextral::probe {
namespace {

Mat m(const Numbers& x, int at) { return mat(x.data() + at); }
Vec v(const Numbers& x, int at) { return vec(x.data() + at); }

TEST(Matrices, ProductsInAllVariants) {
  for (int variant = 0; variant < 8; ++variant) {
    auto f = [variant](const Numbers& x) {
      Mat a = m(x, 0), b = m(x, 9);
      if (variant & 1) a = transpose(a);
      if (variant & 2) b = transpose(b);
      return numbers(variant & 4 ? product(b, a) : product(a, b));
    };
    std::string a = variant & 1 ? "p0^T" : "p0", b = variant & 2 ? "p1^T" : "p1";
    for (auto result : {measured(signature({9, 9}, {9}), f), measured_single(signature({9, 9}, {9}), f)}) {
      ASSERT_EQ(told(result), "matrix-product");
      EXPECT_EQ(words(result), "return = " + (variant & 4 ? b + " " + a : a + " " + b));
    }
  }
}

TEST(Matrices, ContractOfAProduct) {
  auto r =
      measured(signature({9, 9}, {9}), [](const Numbers& x) { return numbers(product(m(x, 0), transpose(m(x, 9)))); });
  EXPECT_EQ(contract(r), "p0: passive ?B to ?A; p1: passive ?B to ?C; return: passive ?C to ?A");
}

TEST(Matrices, FlatOnesAreReadByRowsAndTellTheOtherReading) {
  auto f = [](const Numbers& x) { return numbers(product(m(x, 0), m(x, 9))); };
  auto r = measured(signature({9, 9}, {9}, false), f);
  ASSERT_EQ(told(r), "matrix-product");
  EXPECT_EQ(words(r), "return = p0 p1");
  ASSERT_EQ(r.meanings[0].equivalents.size(), 1u);
  EXPECT_EQ(r.meanings[0].equivalents[0], "stored by columns: return = p1 p0");
  Signature s = signature({9, 9}, {9});
  for (auto* list : {&s.inputs, &s.outputs})
    for (Group& g : *list) g.column_major = true;
  EXPECT_EQ(words(measured(s, f)), "return = p1 p0");
}

TEST(Matrices, UnaryFunctions) {
  auto one = [](auto f) {
    return measured(signature({9}, {9}), [f](const Numbers& x) { return numbers(f(m(x, 0))); });
  };
  EXPECT_EQ(told(one([](const Mat& a) { return a; })), "copy");
  EXPECT_EQ(told(one([](const Mat& a) { return transpose(a); })), "transpose");
  EXPECT_EQ(told(one([](const Mat& a) { return inverse(a); })), "inverse");
  EXPECT_EQ(told(one([](const Mat& a) {
              Mat b = transpose(a);
              b[5] = -b[5];
              return b;
            })),
            "nothing");
  auto scaled = one([](const Mat& a) { return determinant(a) * inverse(a); });
  EXPECT_EQ(told(scaled), "transpose");
  EXPECT_EQ(words(scaled), "return = p0^T; for rotation matrices only");
  auto number = [](auto f) {
    return measured(signature({9}, {1}), [f](const Numbers& x) { return Numbers{f(m(x, 0))}; });
  };
  EXPECT_EQ(told(number([](const Mat& a) { return determinant(a); })), "determinant");
  EXPECT_EQ(told(number([](const Mat& a) { return a[0] + a[4] + a[8]; })), "trace");
  EXPECT_EQ(told(number([](const Mat& a) { return std::abs(determinant(a) - 1); })), "nothing");
}

TEST(Matrices, AndVectors) {
  auto f = [](const Numbers& x) { return numbers(product(transpose(m(x, 3)), v(x, 0))); };
  auto r = measured(signature({3, 9}, {3}), f);
  ASSERT_EQ(told(r), "matrix-vector-product");
  EXPECT_EQ(contract(r), "p1: passive ?A to ?B; p0: in ?B; return: in ?A");
  EXPECT_EQ(r.meanings[0].equivalents[0], "row vector: return = p0 p1");
  auto wrong = measured(signature({3, 9}, {3}), [&](const Numbers& x) {
    Numbers y = f(x);
    y[1] -= 2 * x[8] * x[2];
    return y;
  });
  EXPECT_EQ(told(wrong), "nothing");
}

TEST(Vectors, PairsAndSingles) {
  auto pair = [](auto f) {
    return measured(signature({3, 3}, {3}), [f](const Numbers& x) { return numbers(f(v(x, 0), v(x, 3))); });
  };
  EXPECT_EQ(words(pair([](Vec a, Vec b) { return a + b; })), "return = p0 + p1");
  EXPECT_EQ(words(pair([](Vec a, Vec b) { return b - a; })), "return = p1 - p0");
  EXPECT_EQ(words(pair([](Vec a, Vec b) { return cross(a, b); })), "return = p0 x p1");
  EXPECT_EQ(words(pair([](Vec a, Vec b) { return -1.0 * cross(a, b); })), "return = p1 x p0");
  EXPECT_EQ(told(pair([](Vec a, Vec b) {
              Vec c = cross(a, b);
              c[1] = -c[1];
              return c;
            })),
            "nothing");
  EXPECT_EQ(told(pair([](Vec a, Vec b) {
              Vec c = a + b;
              c[2] = a[2] - b[2];
              return c;
            })),
            "nothing");
  auto single = [](auto f) {
    return measured(signature({3}, {3}), [f](const Numbers& x) { return numbers(f(v(x, 0))); });
  };
  EXPECT_EQ(told(single([](Vec a) { return unit(a); })), "normalise");
  EXPECT_EQ(told(single([](Vec a) { return (kPi / 180) * a; })), "degrees-to-radians");
  EXPECT_EQ(words(single([](Vec a) { return Vec{a[1], a[0], -a[2]}; })),
            "return = (p0[1], p0[0], -p0[2]), determinant +1");
  EXPECT_EQ(words(single([](Vec a) { return Vec{a[0], a[1], -a[2]}; })),
            "return = (p0[0], p0[1], -p0[2]), determinant -1, changes hand");
  EXPECT_EQ(told(single([](Vec a) { return Vec{a[1], a[1], a[2]}; })), "nothing");
}

TEST(Vectors, AsSeparateNumbers) {
  auto f = [](const Numbers& x) { return numbers(cross(v(x, 0), v(x, 3))); };
  auto r = measured(signature({1, 1, 1, 1, 1, 1}, {1, 1, 1}), f);
  ASSERT_EQ(told(r), "cross");
  EXPECT_EQ(words(r), "(o0, o1, o2) = (p0, p1, p2) x (p3, p4, p5)");
}

TEST(Vectors, WithPaddingAsTheFourthNumber) {
  auto r = measured(signature({4, 4}, {4}), [](const Numbers& x) {
    Vec c = cross(v(x, 0), v(x, 4));
    return Numbers{c[0], c[1], c[2], 0};
  });
  EXPECT_EQ(told(r), "cross");
}

TEST(Skew, SignsAreKept) {
  auto of = [](auto f) { return measured(signature({3}, {9}), [f](const Numbers& x) { return numbers(f(v(x, 0))); }); };
  EXPECT_EQ(told(of([](Vec a) { return skew(a); })), "skew");
  EXPECT_EQ(told(of([](Vec a) { return transpose(skew(a)); })), "negative-skew");
  EXPECT_EQ(told(of([](Vec a) {
              Mat s = skew(a);
              s[5] = -s[5];
              return s;
            })),
            "nothing");
  EXPECT_EQ(told(of([](Vec a) { return identity() - skew(a); })), "small-angle-matrix");
  auto un = measured(signature({9}, {3}), [](const Numbers& x) { return numbers(unskew(m(x, 0))); });
  EXPECT_EQ(told(un), "unskew");
}

Quat q(const Numbers& x, int at, bool last = false) { return quat(x.data() + at, last); }
Numbers stored(const Quat& a, bool last) {
  Numbers y(4);
  put(a, last, y.data());
  return y;
}

TEST(Quaternions, ProductsInBothStoragesAndOrders) {
  for (bool last : {false, true})
    for (bool swapped : {false, true})
      for (int conjugated = 0; conjugated < 4; ++conjugated) {
        auto r = measured(signature({4, 4}, {4}), [=](const Numbers& x) {
          Quat a = q(x, 0, last), b = q(x, 4, last);
          if (conjugated & 1) a = conjugate(a);
          if (conjugated & 2) b = conjugate(b);
          return stored(swapped ? product(b, a) : product(a, b), last);
        });
        ASSERT_EQ(told(r), "quaternion-product");
        std::string a = conjugated & 1 ? "p0*" : "p0", b = conjugated & 2 ? "p1*" : "p1";
        EXPECT_EQ(words(r), "return = " + (swapped ? b + " " + a : a + " " + b) + ", hamilton, scalar " +
                                (last ? "last" : "first"));
      }
}

TEST(Quaternions, LookAlikesOfTheProduct) {
  for (int i = 0; i < 4; ++i)
    for (int a = 0; a < 4; ++a) {
      auto r = measured(signature({4, 4}, {4}), [=](const Numbers& x) {
        Numbers y = stored(product(q(x, 0), q(x, 4)), false);
        static const int other[4][4] = {{0, 1, 2, 3}, {1, 0, 3, 2}, {2, 3, 0, 1}, {3, 2, 1, 0}};
        Quat e{};
        e[a] = x[a];
        Quat f{};
        f[other[i][a]] = x[4 + other[i][a]];
        y[i] -= 2 * product(e, f)[i];
        return y;
      });
      EXPECT_EQ(told(r), "nothing") << i << a;
    }
}

TEST(Quaternions, ConversionToMatrixAndBack) {
  for (bool last : {false, true})
    for (bool passive : {false, true}) {
      auto f = [=](const Numbers& x) {
        Quat a = q(x, 0, last);
        Vec u = vector_part(a);
        Mat r = identity() + 2.0 * product(skew(u), skew(u)) + (passive ? -2 : 2) * a[0] * skew(u);
        return numbers(r);
      };
      std::string place = last ? "last" : "first";
      auto r = measured(signature({4}, {9}), f);
      ASSERT_EQ(told(r), "quaternion-to-matrix");
      EXPECT_EQ(words(r), std::string("return maps a vector by ") + (passive ? "q* v q" : "q v q*") +
                              " (hamilton), q = p0, scalar " + place + "; for unit quaternions only");
      EXPECT_EQ(contract(r), "p0: active ?A to ?B, scalar " + place +
                                 ", hamilton, maps by qvq*, as quaternion; return: " +
                                 (passive ? "passive" : "active") + " ?A to ?B");
      for (int i = 0; i < 9; ++i) {
        auto wrong = measured(signature({4}, {9}), [&](const Numbers& x) {
          Numbers y = f(x);
          y[i] += i % 4 ? (passive ? 4 : -4) * q(x, 0, last)[0] * skew(vector_part(q(x, 0, last)))[i] : 0.1;
          return y;
        });
        EXPECT_EQ(told(wrong), "nothing") << i;
      }
      auto back = measured(signature({9}, {4}), [=](const Numbers& x) {
        Mat a = passive ? transpose(m(x, 0)) : m(x, 0);
        double w = std::sqrt(std::max(0.0, 1 + a[0] + a[4] + a[8])) / 2;
        return stored({w, (a[7] - a[5]) / (4 * w), (a[2] - a[6]) / (4 * w), (a[3] - a[1]) / (4 * w)}, last);
      });
      ASSERT_EQ(told(back), "matrix-to-quaternion");
      for (const Term& t : back.meanings[0].contract) {
        auto again = phrase::parse(phrase::print(t.quantity));
        ASSERT_TRUE(std::holds_alternative<Quantity>(again)) << phrase::print(t.quantity);
        EXPECT_EQ(std::get<Quantity>(again), t.quantity);
      }
      auto doubled = measured(signature({9}, {4}), [=](const Numbers& x) {
        Mat a = passive ? transpose(m(x, 0)) : m(x, 0);
        double w = std::sqrt(std::max(0.0, 1 + a[0] + a[4] + a[8])) / 2;
        return stored(2.0 * Quat{w, (a[7] - a[5]) / (4 * w), (a[2] - a[6]) / (4 * w), (a[3] - a[1]) / (4 * w)}, last);
      });
      EXPECT_EQ(told(doubled), "nothing");
      EXPECT_EQ(back.meanings[0].contract[0].quantity.scalar, last ? ScalarPlace::last : ScalarPlace::first);
    }
}

TEST(Quaternions, TurnVectors) {
  for (bool last : {false, true})
    for (bool inverse : {false, true}) {
      auto r = measured(signature({4, 3}, {3}), [=](const Numbers& x) {
        Quat a = inverse ? conjugate(q(x, 0, last)) : q(x, 0, last);
        return numbers(vector_part(product(product(a, pure(v(x, 4))), conjugate(a))));
      });
      EXPECT_EQ(told(r), inverse ? "rotate-by-inverse-quaternion" : "rotate-by-quaternion");
    }
}

TEST(Quaternions, ConjugateInverseNormalise) {
  auto one = [](auto f) {
    return measured(signature({4}, {4}), [f](const Numbers& x) { return stored(f(q(x, 0)), false); });
  };
  EXPECT_EQ(told(one([](Quat a) { return conjugate(a); })), "quaternion-conjugate");
  EXPECT_EQ(told(one([](Quat a) { return (1 / dot(a, a)) * conjugate(a); })), "quaternion-inverse");
  EXPECT_EQ(told(one([](Quat a) { return unit(a); })), "normalise");
  EXPECT_EQ(told(one([](Quat a) { return Quat{a[1], a[2], a[3], a[0]}; })), "quaternion-reorder");
  EXPECT_EQ(told(one([](Quat a) { return Quat{a[0], -a[1], -a[2], a[3]}; })), "nothing");
}

TEST(Quaternions, Interpolation) {
  auto slerp = [](const Quat& a, Quat b, double t) {
    double d = dot(a, b);
    if (d < 0) b = -1.0 * b, d = -d;
    double h = std::acos(d);
    return (std::sin((1 - t) * h) / std::sin(h)) * a + (std::sin(t * h) / std::sin(h)) * b;
  };
  auto r = measured(signature({4, 4, 1}, {4}),
                    [&](const Numbers& x) { return stored(slerp(q(x, 0), q(x, 4), x[8]), false); });
  ASSERT_EQ(told(r), "interpolation");
  EXPECT_EQ(words(r).substr(0, 45), "return from p0 (0) to p1 (1) at p2, slerp by ");
  auto s = measured(signature({4, 4, 1}, {4}),
                    [&](const Numbers& x) { return stored(slerp(q(x, 4), q(x, 0), x[8]), false); });
  EXPECT_EQ(words(s).substr(0, 27), "return from p1 (0) to p0 (1");
}

// One sign or two places wrong, of an input or of an output, in double and in
// single precision: none of these functions has such a symmetry.
void no_mutant_is_known(const Signature& s, const Plain& f) {
  auto try_one = [&](const Plain& g, std::size_t i, std::size_t j) {
    EXPECT_EQ(told(measured(s, g)), "nothing") << i << " " << j;
    EXPECT_EQ(told(measured_single(s, g)), "nothing") << i << " " << j;
  };
  std::size_t in = 0, out = s.outputs[0].count;
  for (const Group& g : s.inputs) in += g.count;
  for (std::size_t i = 0; i < std::max(in, out); ++i)
    for (std::size_t j = i; j < std::max(in, out); ++j) {
      auto change = [i, j](Numbers x) {
        if (i == j)
          x[i] = -x[i];
        else
          std::swap(x[i], x[j]);
        return x;
      };
      if (j < out) try_one([&](const Numbers& x) { return change(f(x)); }, i, j);
      if (j < in) try_one([&](const Numbers& x) { return f(change(x)); }, i, j);
    }
}

TEST(LookAlikes, WithOneSignOrTwoPlacesWrong) {
  no_mutant_is_known(signature({9, 3}, {3}), [](const Numbers& x) { return numbers(product(m(x, 0), v(x, 9))); });
  no_mutant_is_known(signature({9, 9}, {9}), [](const Numbers& x) { return numbers(product(m(x, 0), m(x, 9))); });
  no_mutant_is_known(signature({9}, {9}), [](const Numbers& x) { return numbers(inverse(m(x, 0))); });
  no_mutant_is_known(signature({9, 3}, {9}), [](const Numbers& x) { return numbers(product(m(x, 0), skew(v(x, 9)))); });
  no_mutant_is_known(signature({4, 4}, {4}), [](const Numbers& x) { return numbers(product(q(x, 0), q(x, 4))); });
  no_mutant_is_known(signature({4, 3}, {4}),
                     [](const Numbers& x) { return numbers(0.5 * product(q(x, 0), pure(v(x, 4)))); });
  no_mutant_is_known(signature({3}, {9}), [](const Numbers& x) { return numbers(rotation(v(x, 0))); });
  no_mutant_is_known(signature({3}, {9}), [](const Numbers& x) { return numbers(rotation(mrp_quaternion(v(x, 0)))); });
}

}  // namespace
}  // namespace dextral::probe
