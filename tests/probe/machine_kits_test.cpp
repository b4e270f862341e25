// Home-grown maths in C and C++, compiled and run in the machine; each value is
// compared with the same sources, or the same formula, run natively.
#include <cmath>

#include "machine_support.h"

namespace dextral::probe {
namespace {

using test::Program;

class Kits : public ::testing::TestWithParam<const char*> {};
INSTANTIATE_TEST_SUITE_P(Levels, Kits, ::testing::Values("-O0", "-O1", "-O2"));

const char* const c_kit = R"(
#include <math.h>
#include <stdlib.h>
#include <string.h>
typedef struct { double x, y, z; } vec;
typedef struct { float w, x, y, z; } quat;
void mxm_in_place(double a[3][3], double b[3][3]) {
  double t[3][3];
  for (int i = 0; i < 3; i++) for (int j = 0; j < 3; j++) {
    t[i][j] = 0;
    for (int k = 0; k < 3; k++) t[i][j] += a[i][k] * b[k][j];
  }
  memcpy(a, t, sizeof t);
}
void build(double angle, double m[9]) {
  double s = sin(angle), c = cos(angle);
  m[0] = 1; m[1] = 0; m[2] = 0; m[3] = 0; m[4] = c; m[5] = s; m[6] = 0; m[7] = -s; m[8] = c;
}
double norm(const vec* v) { return sqrt(v->x * v->x + v->y * v->y + v->z * v->z); }
vec cross(vec a, vec b) {
  vec r = {a.y * b.z - a.z * b.y, a.z * b.x - a.x * b.z, a.x * b.y - a.y * b.x};
  return r;
}
void cross_to(const vec* a, const vec* b, vec* r) { *r = cross(*a, *b); }
quat conjugate(quat q) { quat r = {q.w, -q.x, -q.y, -q.z}; return r; }
void conjugate_to(const quat* q, quat* r) { *r = conjugate(*q); }
double pick(int which, double a) {
  switch (which) { case 1: return sin(a); case 2: return cos(a); case 7: return tan(a); default: return 0; }
}
int fib(int n) { return n < 2 ? n : fib(n - 1) + fib(n - 2); }
double heap_sum(int n) {
  double* p = malloc(n * sizeof(double));
  for (int i = 0; i < n; i++) p[i] = i * 0.5;
  double s = 0;
  for (int i = 0; i < n; i++) s += p[i];
  free(p);
  return s;
}
static double twice(double x) { return 2 * x; }
static double half(double x) { return x / 2; }
double (*const table[])(double) = {twice, half};
double through(int i, double x) { return table[i](x); }
double one_based(const double* v) { const double* a = v - 1; return a[1] + 10 * a[2] + 100 * a[3]; }
float narrow(float a, float b) { return a * b + sinf(a) / 3.0f; }
)";

TEST_P(Kits, C) {
  Program program = Program::compiled(c_kit, "c", GetParam());
  const Address a = program.object<double>({1, 2, 3, 4, 5, 6, 7, 8, 10}),
                b = program.object<double>({2, 0, 1, 1, 3, 0, 0, 1, 1});
  program.value<std::uint64_t>("mxm_in_place", {a, b});
  EXPECT_EQ(program.read<double>(a, 9), (std::vector<double>{4, 9, 4, 13, 21, 10, 22, 34, 17}));
  const auto traffic = program.machine().traffic(b);
  EXPECT_EQ(traffic.read, std::vector<bool>(72, true));
  EXPECT_EQ(traffic.written, std::vector<bool>(72, false));
  const Address m = program.room<double>(9);
  program.bits("build", {0.3, m});
  EXPECT_EQ(program.read<double>(m, 9),
            (std::vector<double>{1, 0, 0, 0, std::cos(0.3), std::sin(0.3), 0, -std::sin(0.3), std::cos(0.3)}));
  EXPECT_EQ(program.machine().traffic(m).read, std::vector<bool>(72, false));
  EXPECT_EQ(program.machine().traffic(m).written, std::vector<bool>(72, true));
  EXPECT_EQ(program.number("norm", {program.object<double>({2, 3, 6})}), 7.0);
  const Address r = program.room<double>(3);
  program.bits("cross_to", {program.object<double>({1, 2, 3}), program.object<double>({4, 5, 7}), r});
  EXPECT_EQ(program.read<double>(r, 3), (std::vector<double>{-1, 5, -3}));
  const Address q = program.room<float>(4);
  program.bits("conjugate_to", {program.object<float>({1, 2, 3, 4}), q});
  EXPECT_EQ(program.read<float>(q, 4), (std::vector<float>{1, -2, -3, -4}));
  EXPECT_EQ(program.number("pick", {std::uint64_t{2}, 0.7}), std::cos(0.7));
  EXPECT_EQ(program.number("pick", {std::uint64_t{7}, 0.7}), std::tan(0.7));
  EXPECT_EQ(program.number("pick", {std::uint64_t{3}, 0.7}), 0.0);
  EXPECT_EQ(program.bits("fib", {std::uint64_t{15}}), 610u);
  EXPECT_EQ(program.number("heap_sum", {std::uint64_t{10}}), 22.5);
  EXPECT_EQ(program.number("through", {std::uint64_t{0}, 3.0}), 6.0);
  EXPECT_EQ(program.number("through", {std::uint64_t{1}, 3.0}), 1.5);
  EXPECT_EQ(program.number("one_based", {program.object<double>({1, 2, 3})}), 321.0);
  EXPECT_EQ(program.value<float>("narrow", {1.1f, 0.7f}), 1.1f * 0.7f + std::sin(1.1f) / 3.0f);
}

const char* const cpp_kit = R"(
#include <array>
#include <cmath>
#include <vector>
#include <Eigen/Dense>
using Matrix = std::array<std::array<double, 3>, 3>;
Matrix transpose(const Matrix& m) {
  Matrix t;
  for (int i = 0; i < 3; ++i) for (int j = 0; j < 3; ++j) t[i][j] = m[j][i];
  return t;
}
struct Base { virtual ~Base() = default; virtual double f(double x) const = 0; };
struct Square : Base { double f(double x) const override { return x * x; } };
const Eigen::Matrix3d& identity() { static const Eigen::Matrix3d made = Eigen::Matrix3d::Identity(); return made; }
extern "C" {
void transposed(const Matrix* m, Matrix* t) { *t = transpose(*m); }
void product(const double* a, const double* b, double* c) {
  Eigen::Matrix3d x = Eigen::Map<const Eigen::Matrix3d>(a), y = Eigen::Map<const Eigen::Matrix3d>(b);
  Eigen::Map<Eigen::Matrix3d>{c} = x * y;
}
void quaternion(const double* q, double* m) {
  Eigen::Map<Eigen::Matrix3d>{m} = Eigen::Quaterniond(q[0], q[1], q[2], q[3]).normalized().toRotationMatrix();
}
void axis_angle(double angle, double* m) {
  Eigen::Map<Eigen::Matrix3d>{m} = Eigen::AngleAxisd(angle, Eigen::Vector3d::UnitZ()).toRotationMatrix();
}
double determinant(const double* a) { return (Eigen::Map<const Eigen::Matrix3d>(a) * identity()).determinant(); }
double vector_sum(int n) {
  std::vector<double> v;
  for (int i = 0; i < n; ++i) v.push_back(i);
  double s = 0;
  for (double x : v) s += x;
  return s;
}
double virtual_call(double x) { Base* b = new Square; double y = b->f(x); delete b; return y; }
double throws(double x) { if (x < 0) throw 1; return x; }
double checked(int i) { std::vector<double> v(3); return v.at(i); }
}
)";

TEST_P(Kits, Cpp) {
  Program program = Program::compiled(cpp_kit, "cpp", GetParam());
  const Address m = program.object<double>({1, 2, 3, 4, 5, 6, 7, 8, 10}), t = program.room<double>(9);
  program.bits("transposed", {m, t});
  EXPECT_EQ(program.read<double>(t, 9), (std::vector<double>{1, 4, 7, 2, 5, 8, 3, 6, 10}));
  program.bits("product", {m, program.object<double>({2, 0, 1, 1, 3, 0, 0, 1, 1}), t});
  EXPECT_EQ(program.read<double>(t, 9), (std::vector<double>{9, 12, 16, 13, 17, 21, 11, 13, 16}));
  program.bits("quaternion", {program.object<double>({1, 1, 1, 1}), t});
  const std::vector<double> turned = program.read<double>(t, 9), expected{0, 1, 0, 0, 0, 1, 1, 0, 0};
  for (int i = 0; i < 9; ++i) EXPECT_NEAR(turned[i], expected[i], 1e-15);
  program.bits("axis_angle", {0.4, t});
  EXPECT_EQ(program.read<double>(t, 9)[1], std::sin(0.4));
  EXPECT_NEAR(program.number("determinant", {m}), -3.0, 1e-14);
  EXPECT_NEAR(program.number("determinant", {m}), -3.0, 1e-14);
  EXPECT_EQ(program.machine().globals_read().size(), 0u);
  EXPECT_EQ(program.number("vector_sum", {std::uint64_t{20}}), 190.0);
  EXPECT_EQ(program.number("virtual_call", {3.0}), 9.0);
  EXPECT_EQ(program.number("throws", {3.0}), 3.0);
  EXPECT_EQ(program.refusal("throws", {-3.0}), "throws");
  EXPECT_EQ(program.number("checked", {std::uint64_t{2}}), 0.0);
  EXPECT_EQ(program.refusal("checked", {std::uint64_t{3}}), "throws");
}

}  // namespace
}  // namespace dextral::probe
