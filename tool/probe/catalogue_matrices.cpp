// Matrices of 3x3: products in all transpose variants, inverse, parts, skew.
// M[A,B] takes components in B and gives components in A.
#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

Mat turned(const double* p, bool transposed) { return transposed ? transpose(mat(p)) : mat(p); }

std::string text(const Named& n, bool transposed) { return n.text + (transposed ? "^T" : ""); }

Quantity turned_map(const char* rows, const char* columns, bool transposed) {
  return transposed ? map(columns, rows) : map(rows, columns);
}

void add_products(Catalogue& c) {
  for (bool s : {false, true})
    for (bool t : {false, true})
      c.add({.id = "matrix-product",
             .in = {9, 9},
             .out = {9},
             .eval = [s, t](In i, Out o) { return put(product(turned(i[0], s), turned(i[1], t)), o[0]), true; },
             .say =
                 [s, t](const Bound& b) {
                   Meaning m =
                       meaning("matrix-product", b.out[0].text + " = " + text(b.in[0], s) + " " + text(b.in[1], t));
                   term(m, b.in[0], turned_map("A", "B", s));
                   term(m, b.in[1], turned_map("B", "C", t));
                   term(m, b.out[0], map("A", "C"));
                   return m;
                 }});
  for (bool s : {false, true}) {
    c.add({.id = "matrix-vector-product",
           .in = {9, 3},
           .out = {3},
           .eval = [s](In i, Out o) { return put(product(turned(i[0], s), vec(i[1])), o[0]), true; },
           .say =
               [s](const Bound& b) {
                 Meaning m =
                     meaning("matrix-vector-product", b.out[0].text + " = " + text(b.in[0], s) + " " + b.in[1].text);
                 term(m, b.in[0], turned_map("A", "B", s));
                 term(m, b.in[1], in("B"));
                 term(m, b.out[0], in("A"));
                 m.equivalents.push_back("row vector: " + b.out[0].text + " = " + b.in[1].text + " " +
                                         text(b.in[0], !s));
                 return m;
               }});
    c.add({.id = "tensor-transform",
           .in = {9, 9},
           .out = {9},
           .eval =
               [s](In i, Out o) {
                 Mat a = turned(i[0], s);
                 return put(product(product(a, mat(i[1])), transpose(a)), o[0]), true;
               },
           .say =
               [s](const Bound& b) {
                 Meaning m = meaning("tensor-transform", b.out[0].text + " = " + text(b.in[0], s) + " " + b.in[1].text +
                                                             " " + text(b.in[0], !s));
                 term(m, b.in[0], turned_map("A", "B", s));
                 term(m, b.in[1], {.kind = Kind::tensor, .in = variable("B")});
                 term(m, b.out[0], {.kind = Kind::tensor, .in = variable("A")});
                 return m;
               }});
  }
}

void add_chains(Catalogue& c) {
  for (int bits = 0; bits < 8; ++bits)
    c.add({.id = "matrix-product",
           .in = {9, 9, 9},
           .out = {9},
           .eval =
               [bits](In i, Out o) {
                 return put(product(product(turned(i[0], bits & 1), turned(i[1], bits & 2)), turned(i[2], bits & 4)),
                            o[0]),
                        true;
               },
           .say =
               [bits](const Bound& b) {
                 Meaning m = meaning("matrix-product", b.out[0].text + " = " + text(b.in[0], bits & 1) + " " +
                                                           text(b.in[1], bits & 2) + " " + text(b.in[2], bits & 4));
                 term(m, b.in[0], turned_map("A", "B", bits & 1));
                 term(m, b.in[1], turned_map("B", "C", bits & 2));
                 term(m, b.in[2], turned_map("C", "D", bits & 4));
                 term(m, b.out[0], map("A", "D"));
                 return m;
               }});
}

Meaning alike(const std::string& id, const std::string& words, const Bound& b) {
  Meaning m = meaning(id, words);
  for (const auto* list : {&b.in, &b.out})
    for (const Named& n : *list)
      if (n.parts.size() == 9) term(m, n, map("A", "B"));
  return m;
}

void add_sums(Catalogue& c) {
  for (int sign : {1, -1})
    c.add({.id = "matrix-sum",
           .in = {9, 9},
           .out = {9},
           .eval = [sign](In i, Out o) { return put(mat(i[0]) + double(sign) * mat(i[1]), o[0]), true; },
           .say =
               [sign](const Bound& b) {
                 return alike(sign > 0 ? "matrix-sum" : "matrix-difference",
                              b.out[0].text + " = " + b.in[0].text + (sign > 0 ? " + " : " - ") + b.in[1].text, b);
               }});
  c.add({.id = "matrix-scale",
         .in = {9, 1},
         .out = {9},
         .eval = [](In i, Out o) { return put(i[1][0] * mat(i[0]), o[0]), true; },
         .say =
             [](const Bound& b) {
               return alike("matrix-scale", b.out[0].text + " = " + b.in[1].text + " " + b.in[0].text, b);
             }});
}

void add_unary(Catalogue& c) {
  auto one = [&](std::string id, std::string before, std::string after, bool swaps, int rank, auto f) {
    c.add({.id = id,
           .in = {9},
           .out = {9},
           .eval = [f](In i, Out o) { return put(f(mat(i[0])), o[0]), true; },
           .say =
               [=](const Bound& b) {
                 Meaning m = meaning(id, b.out[0].text + " = " + before + b.in[0].text + after);
                 term(m, b.in[0], map("A", "B"));
                 term(m, b.out[0], swaps ? map("B", "A") : map("A", "B"));
                 return m;
               },
           .rank = rank});
  };
  one("copy", "", "", false, 0, [](const Mat& m) { return m; });
  one("negative", "-", "", false, 0, [](const Mat& m) { return -1.0 * m; });
  one("transpose", "", "^T", true, 0, [](const Mat& m) { return transpose(m); });
  one("negative-transpose", "-", "^T", true, 0, [](const Mat& m) { return -1.0 * transpose(m); });
  one("inverse", "", "^-1", true, 1, [](const Mat& m) { return inverse(m); });
  one("inverse-transpose", "", "^-T", false, 1, [](const Mat& m) { return transpose(inverse(m)); });
  auto number = [&](std::string id, auto f) {
    c.add({.id = id,
           .in = {9},
           .out = {1},
           .eval = [f](In i, Out o) { return o[0][0] = f(mat(i[0])), true; },
           .say = [id](const Bound& b) { return meaning(id, b.out[0].text + " = " + id + " of " + b.in[0].text); }});
  };
  number("determinant", [](const Mat& m) { return determinant(m); });
  number("trace", [](const Mat& m) { return m[0] + m[4] + m[8]; });
}

void add_skews(Catalogue& c) {
  for (int sign : {1, -1}) {
    c.add({.id = "skew",
           .in = {3},
           .out = {9},
           .eval = [sign](In i, Out o) { return put(double(sign) * skew(vec(i[0])), o[0]), true; },
           .say =
               [sign](const Bound& b) {
                 Meaning m = meaning(sign > 0 ? "skew" : "negative-skew",
                                     b.out[0].text + " = " + (sign > 0 ? "" : "-") + "[" + b.in[0].text + " x]");
                 term(m, b.in[0], in("A"));
                 term(m, b.out[0], {.kind = Kind::skew, .in = variable("A")});
                 if (sign < 0) m.equivalents.push_back("[" + b.in[0].text + " x]^T");
                 return m;
               }});
    for (int form = 0; form < 3; ++form)
      c.add({.id = "unskew",
             .in = {9},
             .out = {3},
             .eval =
                 [sign, form](In i, Out o) {
                   Mat m = mat(i[0]);
                   Vec low{m[7], m[2], m[3]}, high{m[5], m[6], m[1]};
                   Vec v = form == 0 ? unskew(m) : form == 1 ? low : -1.0 * high;
                   return put(double(sign) * v, o[0]), true;
                 },
             .say =
                 [sign](const Bound& b) {
                   Meaning m =
                       meaning(sign > 0 ? "unskew" : "negative-unskew",
                               b.out[0].text + " = " + (sign > 0 ? "" : "-") + "v, where [v x] = " + b.in[0].text);
                   term(m, b.in[0], {.kind = Kind::skew, .in = variable("A")});
                   term(m, b.out[0], in("A"));
                   return m;
                 }});
  }
}

void add_parts(Catalogue& c) {
  for (int k = 0; k < 3; ++k)
    for (bool row : {false, true})
      c.add({.id = row ? "matrix-row" : "matrix-column",
             .in = {9},
             .out = {3},
             .eval =
                 [k, row](In i, Out o) {
                   for (int j = 0; j < 3; ++j) o[0][j] = row ? i[0][3 * k + j] : i[0][3 * j + k];
                   return true;
                 },
             .say =
                 [k, row](const Bound& b) {
                   Meaning m = meaning(row ? "matrix-row" : "matrix-column",
                                       b.out[0].text + " = " + (row ? "row " : "column ") + std::to_string(k + 1) +
                                           " of " + b.in[0].text);
                   term(m, b.in[0], map("A", "B"));
                   term(m, b.out[0], in(row ? "B" : "A"));
                   return m;
                 }});
  c.add({.id = "identity",
         .in = {},
         .out = {9},
         .eval = [](In, Out o) { return put(identity(), o[0]), true; },
         .say = [](const Bound& b) { return meaning("identity", b.out[0].text + " = identity matrix"); }});
}

}  // namespace

void add_matrices(Catalogue& c) {
  add_products(c);
  add_chains(c);
  add_sums(c);
  add_unary(c);
  add_skews(c);
  add_parts(c);
}

}  // namespace dextral::probe
