// The table of the algebra, derived from numbers: a law is what survives when
// every frame is exchanged for another one.
//
// Each frame of an operation gets a random rotation Q that carries its old axes
// to new ones; a value M[A,B] becomes Q_A M Q_B^T and a vector v[A] becomes
// Q_A v. Where frames are equal as the law says, the operation must give the
// re-expressed result. With any one agreement left out it must not. The
// matrices are Eigen's; the rule of change is the definition of components
// (docs/algebra.md).
#include "core/algebra.h"

#include <gtest/gtest.h>

#include <eigen3/Eigen/Dense>
#include <functional>
#include <random>

namespace dextral {
namespace {

using Eigen::Matrix3d;
using Eigen::MatrixXd;
using Eigen::Vector3d;

// A matrix, a vector (one column), a number; or a pose with its translation.
struct Thing {
  MatrixXd m;
  Vector3d t = Vector3d::Zero();
};

enum class Is { map, vector, number, pose, skewed };

struct Case {
  OperationKind kind;
  std::vector<Is> operands;
  Is result;
  std::function<Thing(const std::vector<Thing>&)> apply;
  bool axes_stay = false;  // it names an axis of the columns (or rows), which is another axis in other frames
};

class Random {
 public:
  double number() { return uniform_(engine_); }
  Vector3d vector() { return {number(), number(), number()}; }
  Matrix3d matrix() {
    Matrix3d m;
    m << vector(), vector(), vector();
    return m;
  }
  Matrix3d rotation() {
    return Eigen::Quaterniond(1.5 + number(), number(), number(), number()).normalized().toRotationMatrix();
  }

 private:
  std::mt19937 engine_{20240601};
  std::uniform_real_distribution<double> uniform_{-1, 1};
};

Matrix3d cross_matrix(const Vector3d& v) {
  Matrix3d m;
  m << 0, -v.z(), v.y(), v.z(), 0, -v.x(), -v.y(), v.x(), 0;
  return m;
}

Thing instance(Is is, Random& random) {
  switch (is) {
    case Is::map:
      return {random.matrix()};
    case Is::vector:
      return {random.vector()};
    case Is::number:
      return {MatrixXd::Constant(1, 1, random.number())};
    case Is::pose:
      return {random.rotation(), random.vector()};
    case Is::skewed:
      return {cross_matrix(random.vector())};
  }
  return {};
}

Thing in_other_frames(const Thing& x, Is is, const Matrix3d& rows, const Matrix3d& columns) {
  if (is == Is::number) return x;
  if (is == Is::vector) return {rows * x.m};
  return {rows * x.m * columns.transpose(), rows * x.t};
}

bool has(Is is, Slot slot) { return is != Is::number && (is != Is::vector || slot == Slot::rows); }

// Slots of an operation, and which of them are one frame.
class Frames {
 public:
  Frames(std::size_t operands, const std::vector<Agreement>& law) : class_(2 * (operands + 1)) {
    for (std::size_t i = 0; i < class_.size(); ++i) class_[i] = i;
    for (const Agreement& a : law) {
      const std::size_t from = of(a.left), to = of(a.right);
      std::replace(class_.begin(), class_.end(), from, to);
    }
  }
  std::size_t of(SlotOf s) const { return class_.at(2 * std::size_t(s.operand + 1) + (s.slot == Slot::columns)); }

 private:
  std::vector<std::size_t> class_;
};

Is kind_of(const Case& c, int operand) { return operand == kResult ? c.result : c.operands.at(std::size_t(operand)); }

// How far the operation is from giving the re-expressed result.
double error_of(const Case& c, const std::vector<Agreement>& law, Random& random) {
  const Frames frames(c.operands.size(), law);
  std::vector<Matrix3d> turn;
  for (std::size_t i = 0; i < 2 * (c.operands.size() + 1); ++i) turn.push_back(random.rotation());
  auto turned = [&](const Thing& x, int i) {
    const std::size_t rows = frames.of({i, Slot::rows}), columns = frames.of({i, Slot::columns});
    const bool fixed_rows = c.axes_stay && c.kind == OperationKind::row && i == 0;
    const bool fixed_columns = c.axes_stay && c.kind == OperationKind::column && i == 0;
    return in_other_frames(x, kind_of(c, i), fixed_rows ? Matrix3d::Identity() : turn[rows],
                           fixed_columns ? Matrix3d::Identity() : turn[columns]);
  };
  std::vector<Thing> before, after;
  for (std::size_t i = 0; i < c.operands.size(); ++i) {
    before.push_back(instance(c.operands[i], random));
    after.push_back(turned(before.back(), int(i)));
  }
  const Thing want = turned(c.apply(before), kResult), got = c.apply(after);
  return (want.m - got.m).norm() + (want.t - got.t).norm();
}

bool real(const Case& c, const Agreement& a) {
  return has(kind_of(c, a.left.operand), a.left.slot) && has(kind_of(c, a.right.operand), a.right.slot);
}

std::vector<Agreement> real_law(const Case& c) {
  std::vector<Agreement> table = law(c.kind, c.operands.size());
  std::erase_if(table, [&](const Agreement& a) { return !real(c, a); });
  return table;
}

Thing number(double x) { return {MatrixXd::Constant(1, 1, x)}; }
Vector3d third(const MatrixXd& m) { return m.col(0).head<3>(); }

const std::vector<Case>& cases() {
  using enum OperationKind;
  using T = std::vector<Thing>;
  static const std::vector<Case> all = {
      {product, {Is::map, Is::map}, Is::map, [](const T& x) { return Thing{x[0].m * x[1].m}; }},
      {product, {Is::map, Is::vector}, Is::vector, [](const T& x) { return Thing{x[0].m * x[1].m}; }},
      {transpose, {Is::map}, Is::map, [](const T& x) { return Thing{x[0].m.transpose()}; }},
      {inverse, {Is::map}, Is::map, [](const T& x) { return Thing{x[0].m.inverse()}; }},
      {copy, {Is::map}, Is::map, [](const T& x) { return Thing{-2.5 * x[0].m}; }},
      {copy, {Is::vector}, Is::vector, [](const T& x) { return Thing{x[0].m / x[0].m.norm()}; }},
      {sum,
       {Is::vector, Is::vector, Is::vector},
       Is::vector,
       [](const T& x) { return Thing{x[0].m + x[1].m + 3 * x[2].m}; }},
      {sum, {Is::map, Is::map}, Is::map, [](const T& x) { return Thing{x[0].m + x[1].m}; }},
      {difference, {Is::map, Is::map}, Is::map, [](const T& x) { return Thing{x[0].m - x[1].m}; }},
      {cross,
       {Is::vector, Is::vector},
       Is::vector,
       [](const T& x) { return Thing{third(x[0].m).cross(third(x[1].m))}; }},
      {dot, {Is::vector, Is::vector}, Is::number, [](const T& x) { return number(third(x[0].m).dot(third(x[1].m))); }},
      {skew, {Is::vector}, Is::map, [](const T& x) { return Thing{cross_matrix(third(x[0].m))}; }},
      {unskew,
       {Is::skewed},
       Is::vector,
       [](const T& x) { return Thing{Vector3d(x[0].m(2, 1), x[0].m(0, 2), x[0].m(1, 0))}; }},
      {translation, {Is::pose}, Is::vector, [](const T& x) { return Thing{x[0].t}; }},
      {pose, {Is::map, Is::vector}, Is::pose, [](const T& x) { return Thing{x[0].m, third(x[1].m)}; }},
      {column, {Is::map}, Is::vector, [](const T& x) { return Thing{x[0].m.col(1)}; }, true},
      {row, {Is::map}, Is::vector, [](const T& x) { return Thing{x[0].m.row(2).transpose()}; }, true},
      {transform, {Is::map, Is::map}, Is::map, [](const T& x) { return Thing{x[0].m * x[1].m * x[0].m.transpose()}; }},
  };
  return all;
}

TEST(Algebra, EachLawSurvivesAChangeOfEveryFrame) {
  Random random;
  for (const Case& c : cases())
    for (int i = 0; i < 20; ++i) EXPECT_LT(error_of(c, real_law(c), random), 1e-7) << text(c.kind);
}

TEST(Algebra, NoAgreementCanBeLeftOut) {
  Random random;
  for (const Case& c : cases()) {
    const std::vector<Agreement> table = real_law(c);
    for (std::size_t left_out = 0; left_out < table.size(); ++left_out) {
      std::vector<Agreement> rest = table;
      rest.erase(rest.begin() + std::ptrdiff_t(left_out));
      EXPECT_GT(error_of(c, rest, random), 1e-3) << text(c.kind) << " without agreement " << left_out;
    }
  }
}

// x_A = R x_B + t: composed poses map like the product of their maps.
TEST(Algebra, PosesFollowTheLawOfTheProduct) {
  Random random;
  const Matrix3d qa = random.rotation(), qb = random.rotation(), qc = random.rotation();
  auto compose = [](const Thing& x, const Thing& y) { return Thing{x.m * y.m, x.m * y.t + x.t}; };
  const Thing ab = instance(Is::pose, random), bc = instance(Is::pose, random);
  const Thing want = in_other_frames(compose(ab, bc), Is::pose, qa, qc);
  const Thing got = compose(in_other_frames(ab, Is::pose, qa, qb), in_other_frames(bc, Is::pose, qb, qc));
  EXPECT_LT((want.m - got.m).norm() + (want.t - got.t).norm(), 1e-12);
}

TEST(Algebra, KindsThatNeedMoreThanATableHaveNone) {
  for (OperationKind kind : {OperationKind::shuffle, OperationKind::join, OperationKind::hold, OperationKind::call})
    EXPECT_TRUE(law(kind, 1).empty()) << text(kind);
}

TEST(Algebra, EveryKindHasAWordOfItsOwn) {
  std::vector<std::string> words;
  for (int kind = 0; kind <= int(OperationKind::call); ++kind) words.push_back(text(OperationKind(kind)));
  EXPECT_EQ(words.front(), "product");
  EXPECT_EQ(words.back(), "call");
  std::sort(words.begin(), words.end());
  EXPECT_EQ(std::adjacent_find(words.begin(), words.end()), words.end());
  EXPECT_FALSE(std::binary_search(words.begin(), words.end(), "unknown"));
}

TEST(Algebra, TheOtherSlotIsTheOther) {
  EXPECT_EQ(other(Slot::rows), Slot::columns);
  EXPECT_EQ(other(Slot::columns), Slot::rows);
}

}  // namespace
}  // namespace dextral
