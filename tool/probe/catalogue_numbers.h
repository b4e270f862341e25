// The definitions that the catalogue is computed from.
//
// Row-major matrices act on columns. R1, R2, R3 are the passive elementary
// rotations: they give the components of a fixed vector in axes that have been
// turned. Quaternions are scalar first here, with ij = k; rotation(q) turns a
// vector by q v q*. Angles are radians.
#pragma once

#include <array>
#include <cmath>

namespace dextral::probe {

using Vec = std::array<double, 3>;
using Mat = std::array<double, 9>;
using Quat = std::array<double, 4>;

inline constexpr double kPi = 3.14159265358979323846;

inline Vec vec(const double* p) { return {p[0], p[1], p[2]}; }
inline Mat mat(const double* p) { return {p[0], p[1], p[2], p[3], p[4], p[5], p[6], p[7], p[8]}; }
inline Quat quat(const double* p, bool scalar_last) {
  return scalar_last ? Quat{p[3], p[0], p[1], p[2]} : Quat{p[0], p[1], p[2], p[3]};
}

template <std::size_t N>
void put(const std::array<double, N>& value, double* out) {
  for (std::size_t i = 0; i < N; ++i) out[i] = value[i];
}
inline void put(const Quat& q, bool scalar_last, double* out) {
  put(scalar_last ? Quat{q[1], q[2], q[3], q[0]} : q, out);
}

template <std::size_t N>
std::array<double, N> operator+(std::array<double, N> a, const std::array<double, N>& b) {
  for (std::size_t i = 0; i < N; ++i) a[i] += b[i];
  return a;
}
template <std::size_t N>
std::array<double, N> operator-(std::array<double, N> a, const std::array<double, N>& b) {
  for (std::size_t i = 0; i < N; ++i) a[i] -= b[i];
  return a;
}
template <std::size_t N>
std::array<double, N> operator*(double s, std::array<double, N> a) {
  for (double& x : a) x *= s;
  return a;
}
template <std::size_t N>
double dot(const std::array<double, N>& a, const std::array<double, N>& b) {
  double sum = 0;
  for (std::size_t i = 0; i < N; ++i) sum += a[i] * b[i];
  return sum;
}
template <std::size_t N>
double norm(const std::array<double, N>& a) {
  return std::sqrt(dot(a, a));
}
template <std::size_t N>
std::array<double, N> unit(const std::array<double, N>& a) {
  return (1 / norm(a)) * a;
}

Vec cross(const Vec& a, const Vec& b);
Mat identity();
Mat skew(const Vec& v);    // skew(v) u = v x u
Vec unskew(const Mat& m);  // of the skew part
Mat outer(const Vec& a, const Vec& b);
Mat transpose(const Mat& m);
Mat product(const Mat& a, const Mat& b);
Vec product(const Mat& a, const Vec& v);
double determinant(const Mat& m);
Mat inverse(const Mat& m);

// Passive, about axis 0, 1 or 2.
Mat elementary(int axis, double angle);
// The active rotation by |v| about v: cos I + (1 - cos) u u^T + sin skew(u).
Mat rotation(const Vec& v);
Mat rotation(const Quat& q);  // of the normalised quaternion

Quat product(const Quat& a, const Quat& b);  // ij = k
Quat conjugate(const Quat& q);
Quat quaternion(const Vec& v);                       // of the active rotation by v
Quat elementary_quaternion(int axis, double angle);  // rotation() of it is elementary()
Quat pure(const Vec& v);
inline Vec vector_part(const Quat& q) { return {q[1], q[2], q[3]}; }
Quat mrp_quaternion(const Vec& s);
Vec mrp(const Quat& q);

}  // namespace dextral::probe
