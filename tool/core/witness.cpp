#include "core/witness.h"

#include <algorithm>
#include <array>
#include <cmath>

namespace dextral {

namespace {

using Matrix = std::array<std::array<double, 3>, 3>;
constexpr double kDegree = 0.017453292519943295;

Matrix operator*(const Matrix& a, const Matrix& b) {
  Matrix c{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j)
      for (std::size_t k = 0; k < 3; ++k) c[i][j] += a[i][k] * b[k][j];
  return c;
}

Matrix transposed(const Matrix& a) {
  Matrix t{};
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t j = 0; j < 3; ++j) t[i][j] = a[j][i];
  return t;
}

// Passive elementary rotation about axis i.
Matrix elementary(std::size_t i, double degrees) {
  double c = std::cos(degrees * kDegree), s = std::sin(degrees * kDegree);
  std::size_t j = (i + 1) % 3, k = (i + 2) % 3;
  Matrix m{};
  m[i][i] = 1;
  m[j][j] = m[k][k] = c;
  m[j][k] = s;
  m[k][j] = -s;
  return m;
}

Matrix attitude(double yaw, double pitch, double roll) { return elementary(0, roll) * elementary(1, pitch) * elementary(2, yaw); }

double angle(const Matrix& m) { return std::acos(std::clamp((m[0][0] + m[1][1] + m[2][2] - 1) / 2, -1.0, 1.0)) / kDegree; }

}  // namespace

double degrees_of_missing_inverse() {
  Matrix r = attitude(30, 20, 10);
  return angle(r * r);
}

double degrees_of_wrong_order() {
  Matrix a = attitude(30, 20, 10), b = attitude(-40, 15, 25);
  return angle(transposed(a * b) * (b * a));
}

double degrees_of_wrong_frame() { return angle(attitude(30, 20, 10)); }

}  // namespace dextral
