// Vectors: sums, products, lengths, copies and constant maps.
#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

Meaning same_frame(const std::string& id, const std::string& words, const Bound& b) {
  Meaning m = meaning(id, words);
  for (const Named& n : b.in)
    if (n.parts.size() == 3) term(m, n, in("A"));
  for (const Named& n : b.out)
    if (n.parts.size() == 3) term(m, n, in("A"));
  return m;
}

void add_pairs(Catalogue& c) {
  c.add({.id = "vector-sum",
         .in = {3, 3},
         .out = {3},
         .eval = [](In i, Out o) { return put(vec(i[0]) + vec(i[1]), o[0]), true; },
         .say =
             [](const Bound& b) {
               return same_frame("vector-sum", b.out[0].text + " = " + b.in[0].text + " + " + b.in[1].text, b);
             }});
  c.add({.id = "vector-difference",
         .in = {3, 3},
         .out = {3},
         .eval = [](In i, Out o) { return put(vec(i[0]) - vec(i[1]), o[0]), true; },
         .say =
             [](const Bound& b) {
               return same_frame("vector-difference", b.out[0].text + " = " + b.in[0].text + " - " + b.in[1].text, b);
             }});
  c.add({.id = "cross",
         .in = {3, 3},
         .out = {3},
         .eval = [](In i, Out o) { return put(cross(vec(i[0]), vec(i[1])), o[0]), true; },
         .say =
             [](const Bound& b) {
               Meaning m = same_frame("cross", b.out[0].text + " = " + b.in[0].text + " x " + b.in[1].text, b);
               m.equivalents.push_back(b.out[0].text + " = -(" + b.in[1].text + " x " + b.in[0].text + ")");
               return m;
             }});
  c.add({.id = "dot",
         .in = {3, 3},
         .out = {1},
         .eval = [](In i, Out o) { return o[0][0] = dot(vec(i[0]), vec(i[1])), true; },
         .say =
             [](const Bound& b) {
               return same_frame("dot", b.out[0].text + " = " + b.in[0].text + " . " + b.in[1].text, b);
             }});
  c.add({.id = "distance",
         .in = {3, 3},
         .out = {1},
         .eval = [](In i, Out o) { return o[0][0] = norm(vec(i[0]) - vec(i[1])), true; },
         .say =
             [](const Bound& b) {
               return same_frame("distance", b.out[0].text + " = |" + b.in[0].text + " - " + b.in[1].text + "|", b);
             }});
  c.add({.id = "outer-product",
         .in = {3, 3},
         .out = {9},
         .eval = [](In i, Out o) { return put(outer(vec(i[0]), vec(i[1])), o[0]), true; },
         .say =
             [](const Bound& b) {
               return meaning("outer-product", b.out[0].text + " = " + b.in[0].text + " " + b.in[1].text + "^T");
             }});
  c.add({.id = "triple-product",
         .in = {3, 3, 3},
         .out = {1},
         .eval = [](In i, Out o) { return o[0][0] = dot(vec(i[0]), cross(vec(i[1]), vec(i[2]))), true; },
         .say =
             [](const Bound& b) {
               return same_frame(
                   "triple-product",
                   b.out[0].text + " = " + b.in[0].text + " . (" + b.in[1].text + " x " + b.in[2].text + ")", b);
             }});
}

void add_scaled(Catalogue& c) {
  c.add({.id = "vector-scale",
         .in = {3, 1},
         .out = {3},
         .eval = [](In i, Out o) { return put(i[1][0] * vec(i[0]), o[0]), true; },
         .say =
             [](const Bound& b) {
               return same_frame("vector-scale", b.out[0].text + " = " + b.in[1].text + " " + b.in[0].text, b);
             }});
  c.add({.id = "vector-scale",
         .in = {3, 1},
         .out = {3},
         .eval = [](In i, Out o) { return put((1 / i[1][0]) * vec(i[0]), o[0]), true; },
         .say =
             [](const Bound& b) {
               return same_frame("vector-scale", b.out[0].text + " = " + b.in[0].text + " / " + b.in[1].text, b);
             }});
  c.add({.id = "vector-advance",
         .in = {3, 3, 1},
         .out = {3},
         .eval = [](In i, Out o) { return put(vec(i[0]) + i[2][0] * vec(i[1]), o[0]), true; },
         .say =
             [](const Bound& b) {
               return same_frame("vector-advance",
                                 b.out[0].text + " = " + b.in[0].text + " + " + b.in[2].text + " " + b.in[1].text, b);
             }});
  c.add({.id = "vector-blend",
         .in = {3, 3, 1},
         .out = {3},
         .eval = [](In i, Out o) { return put((1 - i[2][0]) * vec(i[0]) + i[2][0] * vec(i[1]), o[0]), true; },
         .say =
             [](const Bound& b) {
               return same_frame("vector-blend",
                                 b.out[0].text + " = (1 - " + b.in[2].text + ") " + b.in[0].text + " + " +
                                     b.in[2].text + " " + b.in[1].text,
                                 b);
             }});
}

void add_single(Catalogue& c) {
  auto one = [&](std::string id, std::vector<int> out, std::string pattern, auto f) {
    c.add({.id = id,
           .in = {3},
           .out = out,
           .eval = [f](In i, Out o) { return f(vec(i[0]), o[0]), true; },
           .say =
               [id, pattern](const Bound& b) {
                 std::string words = b.out[0].text + " = " + pattern;
                 words.replace(words.rfind("#"), 1, b.in[0].text);
                 return same_frame(id, words, b);
               }});
  };
  one("copy", {3}, "#", [](const Vec& v, double* o) { put(v, o); });
  one("negative", {3}, "-#", [](const Vec& v, double* o) { put(-1.0 * v, o); });
  one("normalise", {3}, "# / length", [](const Vec& v, double* o) { put(unit(v), o); });
  one("norm", {1}, "length of #", [](const Vec& v, double* o) { *o = norm(v); });
  one("norm-squared", {1}, "squared length of #", [](const Vec& v, double* o) { *o = dot(v, v); });
}

// The signed permutations, without the identity and its negative.
void add_shuffles(Catalogue& c) {
  static constexpr int kOrders[6][3] = {{0, 1, 2}, {1, 2, 0}, {2, 0, 1}, {0, 2, 1}, {2, 1, 0}, {1, 0, 2}};
  for (int p = 0; p < 6; ++p)
    for (int signs = 0; signs < 8; ++signs) {
      if (p == 0 && (signs == 0 || signs == 7)) continue;
      auto sign = [signs](int k) { return (signs >> k) & 1 ? -1 : 1; };
      int determinant = (p < 3 ? 1 : -1) * sign(0) * sign(1) * sign(2);
      c.add({.id = "shuffle",
             .in = {3},
             .out = {3},
             .eval =
                 [p, sign](In i, Out o) {
                   for (int k = 0; k < 3; ++k) o[0][k] = sign(k) * i[0][kOrders[p][k]];
                   return true;
                 },
             .say =
                 [p, sign, determinant](const Bound& b) {
                   std::string text;
                   for (int k = 0; k < 3; ++k)
                     text += (k ? ", " : "") + std::string(sign(k) < 0 ? "-" : "") + b.in[0].parts[kOrders[p][k]];
                   Meaning m = meaning("shuffle", b.out[0].text + " = (" + text + "), determinant " +
                                                      (determinant > 0 ? "+1" : "-1, changes hand"));
                   term(m, b.in[0], in("A"));
                   term(m, b.out[0], in("B"));
                   return m;
                 }});
    }
}

}  // namespace

void add_vectors(Catalogue& c) {
  add_pairs(c);
  add_scaled(c);
  add_single(c);
  add_shuffles(c);
}

}  // namespace dextral::probe
