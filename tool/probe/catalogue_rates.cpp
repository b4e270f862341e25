// Kinematics: derivatives from angular velocity, of quaternions, matrices,
// rotation vectors and modified Rodrigues parameters. R = M[A,B] active, w the
// rate of B against A: R' = R [w_B x] = [w_A x] R; q' = q w_B / 2 = w_A q / 2.
#include "probe/catalogue.h"
#include "probe/catalogue_numbers.h"

namespace dextral::probe {

namespace {

using In = const double* const*;
using Out = double* const*;

std::string minus(int sign) { return sign < 0 ? "-" : ""; }

// The rate whose terms stand on the left or right of M[A,B], with its sign.
Quantity rate_of(bool left, int sign) {
  const char* in = left ? "A" : "B";
  return sign > 0 ? rate("B", "A", in) : rate("A", "B", in);
}

void add_quaternion(Catalogue& c, bool last, bool left, int sign, bool half) {
  c.add({.id = "quaternion-derivative",
         .in = {4, 3},
         .out = {4},
         .eval =
             [=](In i, Out o) {
               Quat q = quat(i[0], last), w = pure(vec(i[1]));
               return put((sign * (half ? 0.5 : 1.0)) * (left ? product(w, q) : product(q, w)), last, o[0]), true;
             },
         .say =
             [=](const Bound& b) {
               const std::string &q = b.in[0].text, &w = b.in[1].text;
               std::string body = left ? w + " " + q : q + " " + w;
               Meaning m = meaning(half ? "quaternion-derivative" : "quaternion-vector-product",
                                   b.out[0].text + " = " + minus(sign) + (half ? "1/2 " : "") + body + ", hamilton" +
                                       (last ? ", scalar last" : ", scalar first"));
               if (!half) return m;
               term(m, b.in[0], quaternion_of(active("A", "B"), last));
               term(m, b.in[1], rate_of(left, sign));
               m.equivalents.push_back("shuster " + minus(sign) + "1/2 " + (left ? q + " " + w : w + " " + q));
               return m;
             }});
}

void add_matrix(Catalogue& c, bool transposed, bool left, int sign) {
  c.add({.id = "matrix-derivative",
         .in = {9, 3},
         .out = {9},
         .eval =
             [=](In i, Out o) {
               Mat m = transposed ? transpose(mat(i[0])) : mat(i[0]), w = double(sign) * skew(vec(i[1]));
               return put(left ? product(w, m) : product(m, w), o[0]), true;
             },
         .say =
             [=](const Bound& b) {
               std::string matrix = b.in[0].text + (transposed ? "^T" : ""), w = "[" + b.in[1].text + " x]";
               Meaning m = meaning("matrix-derivative",
                                   b.out[0].text + " = " + minus(sign) + (left ? w + " " + matrix : matrix + " " + w));
               term(m, b.in[0], transposed ? map("B", "A") : map("A", "B"));
               term(m, b.in[1], rate_of(left, sign));
               return m;
             }});
}

void add_turn_rate(Catalogue& c, int sign) {
  c.add({.id = "rotation-vector-derivative",
         .in = {3, 3},
         .out = {3},
         .eval =
             [sign](In i, Out o) {
               Vec p = vec(i[0]), w = vec(i[1]);
               double f = norm(p), k = (1 - f * std::sin(f) / (2 * (1 - std::cos(f)))) / (f * f);
               return put(w + (sign * 0.5) * cross(p, w) + k * cross(p, cross(p, w)), o[0]), true;
             },
         .say =
             [sign](const Bound& b) {
               Meaning m =
                   meaning("rotation-vector-derivative", b.out[0].text + " = derivative of the rotation vector " +
                                                             b.in[0].text + " from the rate " + b.in[1].text +
                                                             (sign > 0 ? " in carried axes" : " in axes at the start"));
               term(m, b.in[0], turn("A", "B", Form::rotation_vector));
               term(m, b.in[1], rate("B", "A", sign > 0 ? "B" : "A"));
               return m;
             }});
  c.add({.id = "mrp-derivative",
         .in = {3, 3},
         .out = {3},
         .eval =
             [sign](In i, Out o) {
               Vec s = vec(i[0]), w = vec(i[1]);
               return put(0.25 * ((1 - dot(s, s)) * w + (2.0 * sign) * cross(s, w) + (2 * dot(s, w)) * s), o[0]), true;
             },
         .say =
             [sign](const Bound& b) {
               Meaning m =
                   meaning("mrp-derivative", b.out[0].text + " = derivative of the modified Rodrigues parameters " +
                                                 b.in[0].text + " from the rate " + b.in[1].text +
                                                 (sign > 0 ? " in carried axes" : " in axes at the start"));
               term(m, b.in[0], turn("A", "B", Form::mrp));
               term(m, b.in[1], rate("B", "A", sign > 0 ? "B" : "A"));
               return m;
             }});
}

void add_composition(Catalogue& c, Form form) {
  bool is_mrp = form == Form::mrp;
  c.add({.id = "turn-composition",
         .in = {3, 3},
         .out = {3},
         .eval =
             [is_mrp](In i, Out o) {
               Quat a = is_mrp ? mrp_quaternion(vec(i[0])) : quaternion(vec(i[0]));
               Quat b = is_mrp ? mrp_quaternion(vec(i[1])) : quaternion(vec(i[1]));
               Quat q = product(a, b);
               if (is_mrp) return put(mrp(q), o[0]), true;
               if (q[0] < 0) q = -1.0 * q;
               Vec v = vector_part(q);
               return put((2 * std::atan2(norm(v), q[0]) / norm(v)) * v, o[0]), true;
             },
         .say =
             [is_mrp, form](const Bound& b) {
               Meaning m = meaning(is_mrp ? "mrp-composition" : "rotation-vector-composition",
                                   b.out[0].text + ": R(" + b.out[0].text + ") = R(" + b.in[0].text + ") R(" +
                                       b.in[1].text + "), active");
               term(m, b.in[0], turn("A", "B", form));
               term(m, b.in[1], turn("B", "C", form));
               term(m, b.out[0], turn("A", "C", form));
               return m;
             },
         .sameness = is_mrp ? Sameness::up_to_shadow : Sameness::plain});
}

void add_rate_from(Catalogue& c, bool left, int sign) {
  for (bool last : {false, true})
    c.add({.id = "rate-from-quaternion-derivative",
           .in = {4, 4},
           .out = {3},
           .eval =
               [=](In i, Out o) {
                 Quat q = conjugate(quat(i[0], last)), d = quat(i[1], last);
                 return put((2.0 * sign) * vector_part(left ? product(d, q) : product(q, d)), o[0]), true;
               },
           .say =
               [=](const Bound& b) {
                 std::string q = b.in[0].text + "*", d = b.in[1].text;
                 Meaning m = meaning("rate-from-quaternion-derivative",
                                     b.out[0].text + " = " + minus(sign) + "2 " + (left ? d + " " + q : q + " " + d) +
                                         (last ? ", scalar last" : ", scalar first"));
                 term(m, b.in[0], quaternion_of(active("A", "B"), last));
                 term(m, b.out[0], rate_of(left, sign));
                 return m;
               }});
}

}  // namespace

void add_rates(Catalogue& c) {
  for (bool left : {false, true})
    for (int sign : {1, -1}) {
      for (bool other : {false, true}) {
        for (bool half : {true, false}) add_quaternion(c, other, left, sign, half);
        add_matrix(c, other, left, sign);
      }
      add_rate_from(c, left, sign);
    }
  for (int sign : {1, -1}) add_turn_rate(c, sign);
  add_composition(c, Form::mrp);
  add_composition(c, Form::rotation_vector);
}

}  // namespace dextral::probe
