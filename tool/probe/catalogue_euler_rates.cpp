// Rates of Euler angles and angular velocity, for the twelve sequences.
//
// Moving sequence i j k with angles a1 a2 a3 from A to B. The angular velocity
// of B against A is the sum of the three turns: in B
//   a1' Rk(a3) Rj(a2) e_i + a2' Rk(a3) e_j + a3' e_k,
// in A  a1' e_i + a2' Ri(a1)^T e_j + a3' Ri(a1)^T Rj(a2)^T e_k.
// The first depends on a2 and a3 alone, the second on a1 and a2.
#include <algorithm>

#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

struct Rates {
  int axis[3];
  int order[3];  // where the rate of angle n stands in the triple
  bool space, inverse, degrees;
};

Mat columns(const Vec& a, const Vec& b, const Vec& c) { return {a[0], b[0], c[0], a[1], b[1], c[1], a[2], b[2], c[2]}; }

Vec axis(int n) {
  Vec e{};
  return e[n] = 1, e;
}

// The matrix from the triple of rates to the angular velocity, or its inverse.
Mat matrix(const Rates& r, double first, double second) {
  double k = r.degrees ? kPi / 180 : 1, x = first * k, y = second * k;
  Vec e[3];
  if (r.space) {
    Mat a = transpose(elementary(r.axis[0], x)), b = product(a, transpose(elementary(r.axis[1], y)));
    e[0] = axis(r.axis[0]), e[1] = product(a, axis(r.axis[1])), e[2] = product(b, axis(r.axis[2]));
  } else {
    Mat a = elementary(r.axis[2], y), b = product(a, elementary(r.axis[1], x));
    e[0] = product(b, axis(r.axis[0])), e[1] = product(a, axis(r.axis[1])), e[2] = axis(r.axis[2]);
  }
  Vec placed[3];
  for (int n = 0; n < 3; ++n) placed[r.order[n]] = e[n];
  Mat m = columns(placed[0], placed[1], placed[2]);
  return r.inverse ? inverse(m) : m;
}

std::string sequence(const Rates& r, const char* dash) {
  return std::to_string(r.axis[0] + 1) + dash + std::to_string(r.axis[1] + 1) + dash + std::to_string(r.axis[2] + 1);
}

std::string how(const Rates& r, const Bound& b) {
  std::string angles = "moving " + sequence(r, "-") + (r.space ? ", a1 = " : ", a2 = ") + b.in[0].text +
                       (r.space ? ", a2 = " : ", a3 = ") + b.in[1].text;
  std::string order;
  for (int slot = 0; slot < 3; ++slot)
    for (int n = 0; n < 3; ++n)
      if (r.order[n] == slot) order += (order.empty() ? "a" : ", a") + std::to_string(n + 1) + "'";
  return angles + (r.degrees ? ", deg" : "") + "; rates in the order " + order +
         (r.space ? "; angular velocity in the axes at the start" : "; angular velocity in the carried axes");
}

std::optional<Quantity> rates_phrase(const Rates& r) {
  static const char* kRole[] = {"roll", "pitch", "yaw"};
  Quantity q{.kind = Kind::angle_rates, .first = variable("A"), .second = variable("B"), .sequence = sequence(r, "")};
  if (std::is_sorted(r.order, r.order + 3)) return q;
  if (r.axis[0] == r.axis[2]) return std::nullopt;
  q.stored.resize(3);
  for (int n = 0; n < 3; ++n) q.stored[r.order[n]] = kRole[r.axis[n]];
  return q;
}

Meaning say_product(const Rates& r, const Bound& b) {
  Meaning m = meaning(r.inverse ? "euler-rates-from-rate" : "rate-from-euler-rates",
                      b.out[0].text + " from " + b.in[2].text + ": " + how(r, b));
  auto rates = rates_phrase(r);
  if (!rates) return m;
  Quantity omega = rate("B", "A", r.space ? "A" : "B");
  term(m, b.in[2], r.inverse ? omega : *rates);
  term(m, b.out[0], r.inverse ? *rates : omega);
  return m;
}

void add_one(Catalogue& c, const Rates& r) {
  c.add({.id = "euler-rates",
         .in = {1, 1, 3},
         .out = {3},
         .eval = [r](In i, Out o) { return put(product(matrix(r, i[0][0], i[1][0]), vec(i[2])), o[0]), true; },
         .say = [r](const Bound& b) { return say_product(r, b); }});
  c.add({.id = "euler-rate-matrix",
         .in = {1, 1},
         .out = {9},
         .eval = [r](In i, Out o) { return put(matrix(r, i[0][0], i[1][0]), o[0]), true; },
         .say =
             [r](const Bound& b) {
               return meaning(r.inverse ? "inverse-euler-rate-matrix" : "euler-rate-matrix",
                              b.out[0].text + ": matrix " +
                                  (r.inverse ? "from angular velocity to rates" : "from rates to angular velocity") +
                                  ": " + how(r, b));
             }});
}

}  // namespace

void add_euler_rates(Catalogue& c) {
  for (int i = 0; i < 3; ++i)
    for (int j = 0; j < 3; ++j)
      for (int k = 0; k < 3; ++k) {
        if (i == j || j == k) continue;
        int order[3] = {0, 1, 2};
        do
          for (int bits = 0; bits < 8; ++bits)
            add_one(c, {{i, j, k}, {order[0], order[1], order[2]}, bool(bits & 1), bool(bits & 2), bool(bits & 4)});
        while (std::next_permutation(order, order + 3));
      }
}

}  // namespace dextral::probe
