#include "probe/catalogue_numbers.h"

namespace dextral::probe {

Vec cross(const Vec& a, const Vec& b) {
  return {a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]};
}

Mat identity() { return {1, 0, 0, 0, 1, 0, 0, 0, 1}; }

Mat skew(const Vec& v) { return {0, -v[2], v[1], v[2], 0, -v[0], -v[1], v[0], 0}; }

Vec unskew(const Mat& m) { return {(m[7] - m[5]) / 2, (m[2] - m[6]) / 2, (m[3] - m[1]) / 2}; }

Mat outer(const Vec& a, const Vec& b) {
  Mat m{};
  for (int i = 0; i < 9; ++i) m[i] = a[i / 3] * b[i % 3];
  return m;
}

Mat transpose(const Mat& m) { return {m[0], m[3], m[6], m[1], m[4], m[7], m[2], m[5], m[8]}; }

Mat product(const Mat& a, const Mat& b) {
  Mat m{};
  for (int i = 0; i < 3; ++i)
    for (int j = 0; j < 3; ++j) m[3 * i + j] = a[3 * i] * b[j] + a[3 * i + 1] * b[3 + j] + a[3 * i + 2] * b[6 + j];
  return m;
}

Vec product(const Mat& a, const Vec& v) {
  Vec r{};
  for (int i = 0; i < 3; ++i) r[i] = a[3 * i] * v[0] + a[3 * i + 1] * v[1] + a[3 * i + 2] * v[2];
  return r;
}

double determinant(const Mat& m) { return dot(Vec{m[0], m[1], m[2]}, cross({m[3], m[4], m[5]}, {m[6], m[7], m[8]})); }

Mat inverse(const Mat& m) {
  Vec a{m[0], m[1], m[2]}, b{m[3], m[4], m[5]}, c{m[6], m[7], m[8]};
  Vec x = cross(b, c), y = cross(c, a), z = cross(a, b);
  return (1 / determinant(m)) * Mat{x[0], y[0], z[0], x[1], y[1], z[1], x[2], y[2], z[2]};
}

Mat elementary(int axis, double angle) {
  double c = std::cos(angle), s = std::sin(angle);
  int j = (axis + 1) % 3, k = (axis + 2) % 3;
  Mat m{};
  m[3 * axis + axis] = 1;
  m[3 * j + j] = m[3 * k + k] = c;
  m[3 * j + k] = s;
  m[3 * k + j] = -s;
  return m;
}

Mat rotation(const Vec& v) {
  double angle = norm(v);
  if (angle == 0) return identity();
  Vec u = (1 / angle) * v;
  return std::cos(angle) * identity() + (1 - std::cos(angle)) * outer(u, u) + std::sin(angle) * skew(u);
}

Mat rotation(const Quat& q) {
  Quat n = unit(q);
  Vec v = vector_part(n);
  return (n[0] * n[0] - dot(v, v)) * identity() + 2.0 * outer(v, v) + (2 * n[0]) * skew(v);
}

Quat product(const Quat& a, const Quat& b) {
  Vec u = vector_part(a), v = vector_part(b);
  Vec w = a[0] * v + b[0] * u + cross(u, v);
  return {a[0] * b[0] - dot(u, v), w[0], w[1], w[2]};
}

Quat conjugate(const Quat& q) { return {q[0], -q[1], -q[2], -q[3]}; }

Quat quaternion(const Vec& v) {
  double angle = norm(v);
  double s = angle == 0 ? 0.5 : std::sin(angle / 2) / angle;
  return {std::cos(angle / 2), s * v[0], s * v[1], s * v[2]};
}

Quat elementary_quaternion(int axis, double angle) {
  Quat q{std::cos(angle / 2), 0, 0, 0};
  q[1 + axis] = -std::sin(angle / 2);
  return q;
}

Quat pure(const Vec& v) { return {0, v[0], v[1], v[2]}; }

Quat mrp_quaternion(const Vec& s) {
  double square = dot(s, s), scale = 1 / (1 + square);
  return {(1 - square) * scale, 2 * s[0] * scale, 2 * s[1] * scale, 2 * s[2] * scale};
}

Vec mrp(const Quat& q) { return (1 / (1 + q[0])) * vector_part(q); }

}  // namespace dextral::probe
