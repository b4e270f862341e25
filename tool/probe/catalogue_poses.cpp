// Poses: [R t; 0 1] as 4x4 or [R t] as 3x4, and R with t beside it.
#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;
using Full = std::array<double, 16>;

Full full(const double* p, int n) {
  Full f{};
  f[15] = 1;
  for (int i = 0; i < n; ++i) f[i] = p[i];
  return f;
}

Full times(const Full& a, const Full& b) {
  Full f{};
  for (int i = 0; i < 16; ++i)
    for (int k = 0; k < 4; ++k) f[i] += a[4 * (i / 4) + k] * b[4 * k + i % 4];
  return f;
}

Mat turning(const double* p) { return {p[0], p[1], p[2], p[4], p[5], p[6], p[8], p[9], p[10]}; }
Vec shift(const double* p) { return {p[3], p[7], p[11]}; }

// Undefined for what is no affine map.
bool undone(const double* p, int n, double* out) {
  if (n == 16 && (p[12] != 0 || p[13] != 0 || p[14] != 0 || p[15] != 1)) return false;
  Mat r = inverse(turning(p));
  Vec t = product(r, shift(p));
  Full f = full(p, n);
  for (int i = 0; i < 3; ++i) {
    for (int j = 0; j < 3; ++j) f[4 * i + j] = r[3 * i + j];
    f[4 * i + 3] = -t[i];
  }
  for (int i = 0; i < n; ++i) out[i] = f[i];
  return true;
}

void add_size(Catalogue& c, int n) {
  c.add({.id = "pose-product",
         .in = {n, n},
         .out = {n},
         .eval =
             [n](In i, Out o) {
               Full f = times(full(i[0], n), full(i[1], n));
               for (int k = 0; k < n; ++k) o[0][k] = f[k];
               return true;
             },
         .say =
             [](const Bound& b) {
               Meaning m = meaning("pose-product", b.out[0].text + " = " + b.in[0].text + " " + b.in[1].text);
               term(m, b.in[0], map("A", "B"));
               term(m, b.in[1], map("B", "C"));
               term(m, b.out[0], map("A", "C"));
               return m;
             }});
  c.add({.id = "pose-inverse",
         .in = {n},
         .out = {n},
         .eval = [n](In i, Out o) { return undone(i[0], n, o[0]); },
         .say =
             [](const Bound& b) {
               Meaning m = meaning("pose-inverse", b.out[0].text + " = " + b.in[0].text + "^-1");
               term(m, b.in[0], map("A", "B"));
               term(m, b.out[0], map("B", "A"));
               return m;
             }});
  for (bool point : {true, false})
    for (bool back : {false, true})
      c.add({.id = "pose-apply",
             .in = {n, 3},
             .out = {3},
             .eval =
                 [=](In i, Out o) {
                   Vec t = point ? shift(i[0]) : Vec{};
                   Mat r = turning(i[0]);
                   return put(back ? product(inverse(r), vec(i[1]) - t) : product(r, vec(i[1])) + t, o[0]), true;
                 },
             .say =
                 [=](const Bound& b) {
                   Meaning m = meaning(point ? "pose-apply-point" : "pose-apply-direction",
                                       b.out[0].text + " = " + b.in[0].text + (back ? "^-1" : "") + " applied to the " +
                                           (point ? "point " : "direction ") + b.in[1].text);
                   term(m, b.in[0], back ? map("B", "A") : map("A", "B"));
                   term(m, b.in[1], in("B"));
                   term(m, b.out[0], in("A"));
                   return m;
                 }});
}

void add_copy(Catalogue& c) {
  for (int n : {12, 16})
    c.add({.id = "copy",
           .in = {n},
           .out = {n},
           .eval =
               [n](In i, Out o) {
                 for (int k = 0; k < n; ++k) o[0][k] = i[0][k];
                 return true;
               },
           .say = [](const Bound& b) { return meaning("copy", b.out[0].text + " = " + b.in[0].text); }});
  c.add({.id = "transpose",
         .in = {16},
         .out = {16},
         .eval =
             [](In i, Out o) {
               for (int k = 0; k < 16; ++k) o[0][k] = i[0][4 * (k % 4) + k / 4];
               return true;
             },
         .say = [](const Bound& b) { return meaning("transpose", b.out[0].text + " = " + b.in[0].text + "^T"); }});
}

// R v + t, R (v + t), R^T (v - t) ... with R and t apart.
void add_apart(Catalogue& c) {
  for (bool transposed : {false, true})
    for (bool inside : {false, true})
      for (int sign : {1, -1})
        c.add({.id = "turn-and-shift",
               .in = {9, 3, 3},
               .out = {3},
               .eval =
                   [=](In i, Out o) {
                     Mat m = transposed ? transpose(mat(i[0])) : mat(i[0]);
                     Vec t = double(sign) * vec(i[2]);
                     return put(inside ? product(m, vec(i[1]) + t) : product(m, vec(i[1])) + t, o[0]), true;
                   },
               .say =
                   [=](const Bound& b) {
                     std::string r = b.in[0].text + (transposed ? "^T" : ""),
                                 t = (sign > 0 ? " + " : " - ") + b.in[2].text;
                     Meaning m = meaning(
                         "turn-and-shift",
                         b.out[0].text + " = " + r + (inside ? " (" + b.in[1].text + t + ")" : " " + b.in[1].text + t));
                     term(m, b.in[0], transposed ? map("B", "A") : map("A", "B"));
                     term(m, b.in[1], in("B"));
                     term(m, b.in[2], in(inside ? "B" : "A"));
                     term(m, b.out[0], in("A"));
                     return m;
                   }});
}

}  // namespace

void add_poses(Catalogue& c) {
  add_size(c, 12);
  add_size(c, 16);
  add_copy(c);
  add_apart(c);
}

}  // namespace dextral::probe
