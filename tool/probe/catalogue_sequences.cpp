// Sequences: a matrix or quaternion from angles about axes, and back.
//
// Every matrix of three angles is a product Ri(s1 x) Rj(s2 y) Rk(s3 z) of
// passive elementary rotations with i != j != k. Twelve axis triples, six orders
// of the arguments, eight sign patterns and two units are all of them: fixed
// sequences are moving ones reversed, and active ones have the signs exchanged.
//   all signs +: passive map of the moving sequence k j i with angles z, y, x;
//   all signs -: active map of the moving sequence i j k with angles x, y, z.
// Mixed signs have no phrase and are told in words only.
#include <algorithm>

#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

enum class Target { matrix, scalar_first, scalar_last };

// The product of `count` elementary rotations; angle n is argument order[n].
struct Chain {
  signed char axis[3], order[3], sign[3];
  int count = 3;
  bool degrees = false;
  Target target = Target::matrix;
};

double angle(const Chain& c, int n, double x) { return c.sign[n] * x * (c.degrees ? kPi / 180 : 1); }

// Axes of a product of matrices; those of quaternions with rotation(q) alike.
void build(const Chain& c, const double* x, double* out) {
  if (c.target == Target::matrix) {
    Mat m = elementary(c.axis[0], angle(c, 0, x[c.order[0]]));
    for (int n = 1; n < c.count; ++n) m = product(m, elementary(c.axis[n], angle(c, n, x[c.order[n]])));
    return put(m, out);
  }
  Quat q = elementary_quaternion(c.axis[0], angle(c, 0, x[c.order[0]]));
  for (int n = 1; n < c.count; ++n) q = product(q, elementary_quaternion(c.axis[n], angle(c, n, x[c.order[n]])));
  put(q, c.target == Target::scalar_last, out);
}

std::string digits(const std::vector<int>& axes) {
  std::string text;
  for (int a : axes) text += (text.empty() ? "" : "-") + std::to_string(a + 1);
  return text;
}

struct Reading {
  bool plus = true, minus = true;
  std::vector<int> axes, arguments;  // of the moving sequence
};

Reading read(const Chain& c) {
  Reading r;
  for (int n = 0; n < c.count; ++n) {
    r.plus &= c.sign[n] > 0;
    r.minus &= c.sign[n] < 0;
    r.axes.push_back(c.axis[n]);
    r.arguments.push_back(c.order[n]);
  }
  if (r.minus) return r;
  std::reverse(r.axes.begin(), r.axes.end());
  std::reverse(r.arguments.begin(), r.arguments.end());
  return r;
}

// The role words of the angles in memory; nothing where the order is the
// sequence's own, no phrase where an axis comes twice.
bool stored(const Reading& r, Quantity& angles) {
  static const char* kRole[] = {"roll", "pitch", "yaw"};
  if (std::is_sorted(r.arguments.begin(), r.arguments.end())) return true;
  if (r.axes.size() == 3 && r.axes[0] == r.axes[2]) return false;
  angles.stored.resize(r.axes.size());
  for (std::size_t n = 0; n < r.axes.size(); ++n) angles.stored[r.arguments[n]] = kRole[r.axes[n]];
  return true;
}

std::string listed(const std::vector<int>& arguments, const std::vector<std::string>& names) {
  std::string text;
  for (int a : arguments) text += (text.empty() ? "" : ", ") + names[a];
  return text;
}

std::vector<std::string> names(const Bound& b) {
  if (b.in.size() == 1) return b.in[0].parts;
  std::vector<std::string> list;
  for (const Named& n : b.in) list.push_back(n.text);
  return list;
}

std::string formula(const Chain& c, const std::vector<std::string>& names) {
  std::string text;
  for (int n = 0; n < c.count; ++n)
    text +=
        (n ? " R" : "R") + std::to_string(c.axis[n] + 1) + "(" + (c.sign[n] < 0 ? "-" : "") + names[c.order[n]] + ")";
  return text;
}

std::string id(const Chain& c, bool backward) {
  if (backward) return c.target == Target::matrix ? "euler-extraction" : "euler-from-quaternion";
  std::string kind = c.count == 1 ? "elementary-rotation" : "rotation-builder";
  return c.target == Target::matrix ? kind : kind + "-quaternion";
}

void add_terms(Meaning& m, const Chain& c, const Bound& b, const Reading& r) {
  Quantity angles{.kind = Kind::angles, .first = variable("A"), .second = variable("B")};
  for (int a : r.axes) angles.sequence += std::to_string(a + 1);
  angles.unit = c.degrees ? Unit::deg : Unit::rad;
  if (!(r.plus || r.minus) || !stored(r, angles)) return;
  Quantity sense = r.plus ? passive("A", "B") : active("A", "B");
  if (c.target != Target::matrix) sense = quaternion_of(sense, c.target == Target::scalar_last);
  for (const Named& n : b.in) term(m, n, angles);
  term(m, b.out[0], sense);
}

void add_equivalents(Meaning& m, const Chain& c, const Reading& r, const std::vector<std::string>& names) {
  if (!(r.plus || r.minus)) return;
  std::string sense = r.plus ? "passive" : "active";
  std::vector<int> axes(r.axes.rbegin(), r.axes.rend()), arguments(r.arguments.rbegin(), r.arguments.rend());
  if (c.count > 1)
    m.equivalents.push_back(sense + " map of the fixed sequence " + digits(axes) + ", angles " +
                            listed(arguments, names));
  m.equivalents.push_back(std::string(r.plus ? "active" : "passive") +
                          " ?B to ?A, where the angles lead from ?A to ?B");
  if (c.target != Target::matrix) m.equivalents.push_back("shuster product with maps by q*vq: the same numbers");
}

Meaning say(const Chain& c, const Bound& b) {
  std::vector<std::string> n = names(b);
  Reading r = read(c);
  std::string words =
      b.out[0].text + (c.target == Target::matrix ? "" : ", as quaternion with map qvq*,") + " = " + formula(c, n);
  if (c.degrees) words += ", deg";
  if (c.target != Target::matrix) words += c.target == Target::scalar_last ? ", scalar last" : ", scalar first";
  if (r.plus || r.minus)
    words += std::string(": ") + (r.plus ? "passive" : "active") + " map of the moving sequence " + digits(r.axes) +
             ", angles " + listed(r.arguments, n);
  else
    words += ": angles with signs of their own, no plain sequence";
  Meaning m = meaning(id(c, b.backward), words);
  m.formula = formula(c, n);
  add_terms(m, c, b, r);
  add_equivalents(m, c, r, n);
  return m;
}

void add_chain(Catalogue& catalogue, const Chain& c, std::vector<int> in) {
  bool matrix = c.target == Target::matrix;
  bool single = in.size() == 1;
  catalogue.add({.id = "rotation-builder",
                 .in = in,
                 .out = {matrix ? 9 : 4},
                 .eval =
                     [c, single](In i, Out o) {
                       if (single) return build(c, i[0], o[0]), true;
                       double x[2] = {i[0][0], i[1][0]};
                       return build(c, x, o[0]), true;
                     },
                 .say = [c](const Bound& b) { return say(c, b); },
                 .sameness = matrix ? Sameness::plain : Sameness::up_to_sign,
                 .backward = c.count == 3});
}

template <typename Do>
void each_variant(int count, Do act) {
  for (int signs = 0; signs < (1 << count); ++signs)
    for (bool degrees : {false, true})
      for (Target target : {Target::matrix, Target::scalar_first, Target::scalar_last}) {
        Chain c{.count = count, .degrees = degrees, .target = target};
        for (int n = 0; n < count; ++n) c.sign[n] = (signs >> n) & 1 ? -1 : 1;
        act(c);
      }
}

template <typename Do>
void each_order(Do act) {
  int order[3] = {0, 1, 2};
  do act(order);
  while (std::next_permutation(order, order + 3));
}

void add_three(Catalogue& catalogue) {
  for (int i = 0; i < 3; ++i)
    for (int j = 0; j < 3; ++j)
      for (int k = 0; k < 3; ++k) {
        if (i == j || j == k) continue;
        each_variant(3, [&](Chain c) {
          c.axis[0] = i, c.axis[1] = j, c.axis[2] = k;
          each_order([&](const int* order) {
            for (int n = 0; n < 3; ++n) c.order[n] = order[n];
            add_chain(catalogue, c, {3});
          });
        });
      }
}

// A matrix turned further about one axis, from the left or from the right.
void add_further(Catalogue& catalogue, int axis, int sign, bool degrees, bool left) {
  double k = sign * (degrees ? kPi / 180 : 1);
  catalogue.add({.id = "further-turn",
                 .in = {9, 1},
                 .out = {9},
                 .eval =
                     [=](In i, Out o) {
                       Mat e = elementary(axis, k * i[1][0]), m = mat(i[0]);
                       return put(left ? product(e, m) : product(m, e), o[0]), true;
                     },
                 .say =
                     [=](const Bound& b) {
                       std::string e =
                           "R" + std::to_string(axis + 1) + "(" + (sign < 0 ? "-" : "") + b.in[1].text + ")";
                       std::string formula = left ? e + " " + b.in[0].text : b.in[0].text + " " + e;
                       Meaning m = meaning("further-turn", b.out[0].text + " = " + formula + (degrees ? ", deg" : "") +
                                                               (sign < 0 ? ", active" : ", passive"));
                       m.formula = formula;
                       // The elementary rotation is M[A,B] on the left, M[B,C] on the right.
                       std::string rows = left ? "A" : "B", columns = left ? "B" : "C";
                       std::string from = sign > 0 ? columns : rows, to = sign > 0 ? rows : columns;
                       term(m, b.in[0], left ? map("B", "C") : map("A", "B"));
                       term(m, b.in[1],
                            {.kind = Kind::angles,
                             .first = variable(from),
                             .second = variable(to),
                             .sequence = std::to_string(axis + 1),
                             .unit = degrees ? Unit::deg : Unit::rad});
                       term(m, b.out[0], map("A", "C"));
                       return m;
                     }});
}

}  // namespace

void add_sequences(Catalogue& catalogue) {
  add_three(catalogue);
  for (int axis = 0; axis < 3; ++axis)
    for (int sign : {1, -1})
      for (bool degrees : {false, true})
        for (bool left : {false, true}) add_further(catalogue, axis, sign, degrees, left);
  for (int i = 0; i < 3; ++i) {
    each_variant(1, [&](Chain c) {
      c.axis[0] = i, c.order[0] = 0;
      add_chain(catalogue, c, {1});
    });
    for (int j = 0; j < 3; ++j)
      if (i != j)
        each_variant(2, [&](Chain c) {
          c.axis[0] = i, c.axis[1] = j, c.order[0] = 0, c.order[1] = 1;
          add_chain(catalogue, c, {1, 1});
        });
  }
}

}  // namespace dextral::probe
