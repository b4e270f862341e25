// Quaternions: products, conversions, turning vectors, interpolation.
//
// All is said in one convention: ij = k, and q maps a vector by q v q*. A
// quaternion of the other product or of the other map has the same numbers
// under another name; the equivalents tell it.
#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

std::string place(bool last) { return last ? ", scalar last" : ", scalar first"; }
Quantity quaternion_map(const char* rows, const char* columns, bool last) {
  return quaternion_of(active(rows, columns), last);
}
Quantity turned_map(const char* rows, const char* columns, bool conjugated, bool last) {
  return conjugated ? quaternion_map(columns, rows, last) : quaternion_map(rows, columns, last);
}
Quat turned(const double* p, bool conjugated, bool last) {
  return conjugated ? conjugate(quat(p, last)) : quat(p, last);
}
std::string text(const Named& n, bool conjugated) { return n.text + (conjugated ? "*" : ""); }

void add_products(Catalogue& c, bool last) {
  for (bool s : {false, true})
    for (bool t : {false, true})
      c.add({.id = "quaternion-product",
             .in = {4, 4},
             .out = {4},
             .eval =
                 [s, t, last](In i, Out o) {
                   return put(product(turned(i[0], s, last), turned(i[1], t, last)), last, o[0]), true;
                 },
             .say =
                 [s, t, last](const Bound& b) {
                   Meaning m = meaning("quaternion-product", b.out[0].text + " = " + text(b.in[0], s) + " " +
                                                                 text(b.in[1], t) + ", hamilton" + place(last));
                   term(m, b.in[0], turned_map("A", "B", s, last));
                   term(m, b.in[1], turned_map("B", "C", t, last));
                   term(m, b.out[0], quaternion_map("A", "C", last));
                   m.equivalents.push_back("shuster " + text(b.in[1], t) + " " + text(b.in[0], s));
                   return m;
                 }});
}

void add_unary(Catalogue& c, bool last) {
  auto one = [&](std::string id, std::string before, std::string after, bool swaps, int rank, auto f) {
    c.add({.id = id,
           .in = {4},
           .out = {4},
           .eval = [=](In i, Out o) { return put(f(quat(i[0], last)), last, o[0]), true; },
           .say =
               [=](const Bound& b) {
                 Meaning m = meaning(id, b.out[0].text + " = " + before + b.in[0].text + after + place(last));
                 term(m, b.in[0], quaternion_map("A", "B", last));
                 term(m, b.out[0], swaps ? quaternion_map("B", "A", last) : quaternion_map("A", "B", last));
                 return m;
               },
           .rank = rank});
  };
  one("quaternion-conjugate", "", "*", true, 0, [](const Quat& q) { return conjugate(q); });
  one("quaternion-conjugate", "-", "*", true, 2, [](const Quat& q) { return -1.0 * conjugate(q); });
  one("quaternion-inverse", "", "^-1", true, 1, [](const Quat& q) { return (1 / dot(q, q)) * conjugate(q); });
  c.add({.id = "quaternion-reorder",
         .in = {4},
         .out = {4},
         .eval = [last](In i, Out o) { return put(quat(i[0], last), !last, o[0]), true; },
         .say =
             [last](const Bound& b) {
               Meaning m = meaning("quaternion-reorder",
                                   b.out[0].text + " = " + b.in[0].text + " from" +
                                       (last ? " scalar last to scalar first" : " scalar first to scalar last"));
               term(m, b.in[0], quaternion_map("A", "B", last));
               term(m, b.out[0], quaternion_map("A", "B", !last));
               return m;
             }});
}

// These do not tell the place of the scalar.
void add_placeless(Catalogue& c) {
  auto one = [&](std::string id, std::string before, std::string after, int n, auto f) {
    c.add({.id = id,
           .in = {4},
           .out = {n},
           .eval = [=](In i, Out o) { return f(quat(i[0], false), o[0]), true; },
           .say = [=](const Bound& b) { return meaning(id, b.out[0].text + " = " + before + b.in[0].text + after); }});
  };
  one("copy", "", "", 4, [](const Quat& q, double* o) { put(q, o); });
  one("negative", "-", "", 4, [](const Quat& q, double* o) { put(-1.0 * q, o); });
  one("normalise", "", " / length", 4, [](const Quat& q, double* o) { put(unit(q), o); });
  one("norm", "length of ", "", 1, [](const Quat& q, double* o) { *o = norm(q); });
  one("norm-squared", "squared length of ", "", 1, [](const Quat& q, double* o) { *o = dot(q, q); });
  c.add(
      {.id = "dot",
       .in = {4, 4},
       .out = {1},
       .eval = [](In i, Out o) { return o[0][0] = dot(quat(i[0], false), quat(i[1], false)), true; },
       .say =
           [](const Bound& b) { return meaning("dot", b.out[0].text + " = " + b.in[0].text + " . " + b.in[1].text); }});
  for (int sign : {1, -1})
    c.add(
        {.id = "quaternion-sum",
         .in = {4, 4},
         .out = {4},
         .eval = [sign](In i, Out o) { return put(quat(i[0], false) + double(sign) * quat(i[1], false), o[0]), true; },
         .say =
             [sign](const Bound& b) {
               return meaning("quaternion-sum",
                              b.out[0].text + " = " + b.in[0].text + (sign > 0 ? " + " : " - ") + b.in[1].text);
             }});
  c.add({.id = "quaternion-scale",
         .in = {4, 1},
         .out = {4},
         .eval = [](In i, Out o) { return put(i[1][0] * quat(i[0], false), o[0]), true; },
         .say =
             [](const Bound& b) {
               return meaning("quaternion-scale", b.out[0].text + " = " + b.in[1].text + " " + b.in[0].text);
             }});
}

void add_conversion(Catalogue& c, bool last) {
  for (bool inverse : {false, true}) {
    c.add({.id = "quaternion-to-matrix",
           .in = {4},
           .out = {9},
           .eval =
               [last, inverse](In i, Out o) {
                 Mat m = rotation(quat(i[0], last));
                 return put(inverse ? transpose(m) : m, o[0]), true;
               },
           .say =
               [last, inverse](const Bound& b) {
                 Meaning m = meaning(b.backward ? "matrix-to-quaternion" : "quaternion-to-matrix",
                                     b.out[0].text + " maps a vector by " + (inverse ? "q* v q" : "q v q*") +
                                         " (hamilton), q = " + b.in[0].text + place(last));
                 term(m, b.in[0], quaternion_map("A", "B", last));
                 term(m, b.out[0], inverse ? passive("A", "B") : active("A", "B"));
                 m.equivalents.push_back(std::string("shuster ") + (inverse ? "q v q*" : "q* v q"));
                 return m;
               },
           .backward = true});
    c.add({.id = "rotate-by-quaternion",
           .in = {4, 3},
           .out = {3},
           .eval =
               [last, inverse](In i, Out o) {
                 Mat m = rotation(quat(i[0], last));
                 return put(product(inverse ? transpose(m) : m, vec(i[1])), o[0]), true;
               },
           .say =
               [last, inverse](const Bound& b) {
                 const std::string &q = b.in[0].text, &v = b.in[1].text;
                 Meaning m =
                     meaning(inverse ? "rotate-by-inverse-quaternion" : "rotate-by-quaternion",
                             b.out[0].text + " = " + (inverse ? q + "* " + v + " " + q : q + " " + v + " " + q + "*") +
                                 ", hamilton" + place(last));
                 term(m, b.in[0], inverse ? quaternion_map("B", "A", last) : quaternion_map("A", "B", last));
                 term(m, b.in[1], in("B"));
                 term(m, b.out[0], in("A"));
                 m.equivalents.push_back("shuster " + (inverse ? q + " " + v + " " + q + "*" : q + "* " + v + " " + q));
                 return m;
               }});
  }
}

// Along the great circle; `shorter` takes the nearer of b and -b.
Quat great_circle(const Quat& a, Quat b, double t, bool shorter) {
  double d = dot(a, b);
  if (shorter && d < 0) b = -1.0 * b, d = -d;
  double angle = std::acos(d), s = std::sin(angle);
  return (std::sin((1 - t) * angle) / s) * a + (std::sin(t * angle) / s) * b;
}

void add_interpolation(Catalogue& c) {
  for (int kind = 0; kind < 4; ++kind)
    c.add({.id = "interpolation",
           .in = {4, 4, 1},
           .out = {4},
           .eval =
               [kind](In i, Out o) {
                 Quat a = quat(i[0], false), b = quat(i[1], false);
                 double t = i[2][0];
                 if (kind < 2) return put(great_circle(unit(a), unit(b), t, kind == 0), o[0]), true;
                 Quat mixed = (1 - t) * a + (kind == 2 && dot(a, b) < 0 ? -t : t) * b;
                 return put(unit(mixed), o[0]), true;
               },
           .say =
               [kind](const Bound& b) {
                 static const char* kHow[] = {", slerp by the shorter way", ", slerp as given",
                                              ", normalised blend by the shorter way", ", normalised blend as given"};
                 return meaning("interpolation", b.out[0].text + " from " + b.in[0].text + " (0) to " + b.in[1].text +
                                                     " (1) at " + b.in[2].text + kHow[kind]);
               },
           .sameness = Sameness::up_to_sign});
}

}  // namespace

void add_quaternions(Catalogue& c) {
  for (bool last : {false, true}) {
    add_products(c, last);
    add_unary(c, last);
    add_conversion(c, last);
  }
  add_placeless(c);
  add_interpolation(c);
}

}  // namespace dextral::probe
