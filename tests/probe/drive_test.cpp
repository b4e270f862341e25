// Candidates as functions of numbers: what is read, what is written, how it is
// called, and why it cannot be.
#include "probe/drive.h"

#include "probe/drive_constants.h"
#include "probe/drive_globals.h"
#include "tests/probe/source.h"

namespace dextral::probe {
namespace {

std::string said(const std::vector<Group>& groups) {
  std::string text;
  for (const Group& group : groups) {
    text += (text.empty() ? "" : " ") + group.formal + ":" + std::to_string(group.count);
    if (group.rows) text += "=" + std::to_string(group.rows) + "x" + std::to_string(group.columns);
  }
  return text;
}

class Kept {
 public:
  Kept(const std::string& name, const std::string& text, const std::string& function, std::vector<std::string> flags = {},
       const std::vector<Selected>& selected = {})
      : source_(name, text, std::move(flags)), kit_(emit(source_.unit(), source_.project, {function, {}}, source_.files)) {
    fix_constants(kit_);
    expose_globals(kit_);
    if (kit_.candidates.size() != 1) {
      refusal = std::to_string(kit_.candidates.size()) + " candidates; " + kit_.refusal;
      return;
    }
    refusal = kit_.candidates[0].refusal;
    if (!refusal.empty()) return;
    auto driven = drive(std::make_shared<Stage>(kit_, kit_.candidates[0]), selected);
    if (auto* why = std::get_if<Refusal>(&driven)) refusal = why->why;
    else driven_ = std::move(std::get<Driven>(driven));
    signature = said(driven_.signature.inputs) + " -> " + said(driven_.signature.outputs);
  }

  Numbers operator()(const Numbers& numbers) const {
    if (!driven_.run) {
      ADD_FAILURE() << refusal;
      return {};
    }
    auto results = driven_.run(numbers);
    if (auto* why = std::get_if<Refusal>(&results)) {
      ADD_FAILURE() << why->why;
      return {};
    }
    return std::get<Numbers>(results);
  }

  std::string refusal_at(const Numbers& numbers) const {
    auto results = driven_.run(numbers);
    auto* why = std::get_if<Refusal>(&results);
    return why ? why->why : "";
  }

  std::string refusal;
  std::string signature;

 private:
  SourceFile source_;
  Kit kit_;
  Driven driven_;
};

const Numbers kMatrix{1, 2, 3, 4, 5, 6, 7, 8, 10};
const Numbers kTransposed{1, 4, 7, 2, 5, 8, 3, 6, 10};

TEST(Drive, ArraysOfArrays) {
  Kept f("a.c", "void t(const double a[3][3], double b[3][3]) { for (int i = 0; i < 3; ++i) for (int j = 0; j < 3; ++j) b[i][j] = a[j][i]; }", "t");
  EXPECT_EQ(f.signature, "p0:9=3x3 -> p1:9=3x3");
  EXPECT_EQ(f(kMatrix), kTransposed);
}

TEST(Drive, PlainPointersCountAsFarAsTheyAreTouched) {
  Kept f("a.c", "void f(double* out, double* v, double (*m)[3]) { for (int i = 0; i < 3; ++i) out[i] = m[i][0] * v[0] + m[i][1] * v[1] + m[i][2] * v[2]; }", "f");
  EXPECT_EQ(f.signature, "p1:3 p2:9=3x3 -> p0:3");
  EXPECT_EQ(f({1, 0, 1, 1, 2, 3, 4, 5, 6, 7, 8, 10}), (Numbers{4, 10, 17}));
}

TEST(Drive, InPlace) {
  Kept f("a.cpp", "#include <cmath>\nvoid unit(double* q) { double n = std::sqrt(q[0]*q[0] + q[1]*q[1]); q[0] /= n; q[1] /= n; }", "unit");
  EXPECT_EQ(f.signature, "p0:2 -> p0:2");
  EXPECT_EQ(f({3, 4}), (Numbers{0.6, 0.8}));
}

TEST(Drive, WhatIsPartlyWrittenKeepsTheRest) {
  Kept f("a.c", "void f(double a, double m[2][2]) { m[0][1] = a; if (a > 0) m[1][1] = a; }", "f");
  EXPECT_EQ(f.signature, "p0:1 p1:4=2x2 -> p1:4=2x2");
  EXPECT_EQ(f({-1, 5, 6, 7, 8}), (Numbers{5, -1, 7, 8}));
}

TEST(Drive, StructsByValueAndInRegisters) {
  Kept two("a.c", "struct two { double a, b; }; struct two f(struct two t) { struct two r = {t.b, -t.a}; return r; }", "f");
  EXPECT_EQ(two.signature, "p0:2 -> return:2");
  EXPECT_EQ(two({1, 2}), (Numbers{2, -1}));
  Kept four("a.c", "struct q { float w, x, y, z; }; struct q f(struct q t) { t.x = -t.x; t.z = 2 * t.z; return t; }", "f");
  EXPECT_EQ(four({1, 2, 3, 4}), (Numbers{1, -2, 3, 8}));
  Kept three("a.c", "struct v { float x, y, z; }; struct v f(struct v a, float s) { a.z *= s; return a; }", "f");
  EXPECT_EQ(three({1, 2, 3, 4}), (Numbers{1, 2, 12}));
  Kept big("a.c", "struct m { double e[9]; }; struct m f(struct m a) { a.e[8] = 0; return a; }", "f");
  EXPECT_EQ(big(kMatrix), (Numbers{1, 2, 3, 4, 5, 6, 7, 8, 0}));
  Kept pointer("a.c", "struct p { double R[2][2]; double t[2]; }; void f(const struct p* a, struct p* b) { b->t[0] = a->R[1][0]; b->t[1] = a->R[0][1]; }", "f");
  EXPECT_EQ(pointer.signature, "p0.R:4=2x2 -> p1.t:2");
  EXPECT_EQ(pointer({1, 2, 3, 4}), (Numbers{3, 2}));
}

TEST(Drive, Members) {
  const char* text = R"(
    class Dcm {
      double m_[2][2];
     public:
      Dcm(double a) { m_[0][0] = a; m_[0][1] = m_[1][0] = 0; m_[1][1] = 1; }
      Dcm transposed() const { Dcm r(0); for (int i = 0; i < 2; ++i) for (int j = 0; j < 2; ++j) r.m_[i][j] = m_[j][i]; return r; }
      Dcm& operator*=(double s) { for (auto& row : m_) for (double& e : row) e *= s; return *this; }
      const double& operator()(int i, int j) const { return m_[i][j]; }
      operator double() const { return m_[0][0] + m_[1][1]; }
    };
    static double g(double a, const Dcm& d) { return a * double(d); }
  )";
  Kept made("a.cpp", text, "Dcm::Dcm");
  EXPECT_EQ(made.signature, "p0:1 -> this:4=2x2");
  EXPECT_EQ(made({7}), (Numbers{7, 0, 0, 1}));
  Kept transposed("a.cpp", text, "transposed");
  EXPECT_EQ(transposed({1, 2, 3, 4}), (Numbers{1, 3, 2, 4}));
  Kept scaled("a.cpp", text, "operator*=");
  EXPECT_EQ(scaled.signature, "this:4=2x2 p0:1 -> this:4=2x2");
  EXPECT_EQ(scaled({1, 2, 3, 4, 2}), (Numbers{2, 4, 6, 8}));
  Kept element("a.cpp", text, "operator()", {}, {{"p0", 0}, {"p1", 1}});
  EXPECT_EQ(element.signature, "this:4=2x2 -> return:1");
  EXPECT_EQ(element({1, 2, 3, 4}), (Numbers{2}));
  Kept trace("a.cpp", text, "operator double");
  EXPECT_EQ(trace({1, 2, 3, 4}), (Numbers{5}));
  Kept free("a.cpp", text, "g");
  EXPECT_EQ(free({2, 1, 2, 3, 4}), (Numbers{10}));
}

TEST(Drive, OverridesOfVirtualFunctions) {
  const char* text = R"(
    struct Map { virtual ~Map() {} virtual double f(double x) const = 0; };
    struct Twice : Map { double k = 2; double f(double x) const override { return k * x; } };
  )";
  Kept f("a.cpp", text, "Twice::f");
  EXPECT_EQ(f.signature, "this.k:1 p0:1 -> return:1");
  EXPECT_EQ(f({3, 4}), (Numbers{12}));
}

TEST(Drive, LibraryTypes) {
  Kept reference("a.cpp", "#include <Eigen/Dense>\nEigen::Matrix3d f(const Eigen::Matrix3d& a) { return a.transpose(); }", "f", eigen());
  EXPECT_EQ(reference(kMatrix), kTransposed);
  Kept value("a.cpp", "#include <Eigen/Dense>\nEigen::Vector3d f(Eigen::Matrix3d a, const Eigen::Vector3d& v) { return a * v; }", "f", eigen());
  EXPECT_EQ(value({1, 2, 3, 4, 5, 6, 7, 8, 10, 1, 0, 0}), (Numbers{1, 2, 3}));  // its numbers lie column by column
  Kept array("a.cpp", "#include <array>\nstd::array<double, 3> f(const std::array<double, 3>& a) { return {a[1], a[0], -a[2]}; }", "f");
  EXPECT_EQ(array({1, 2, 3}), (Numbers{2, 1, -3}));
  Kept out("a.cpp", "#include <Eigen/Dense>\nvoid f(const Eigen::Vector3d& a, Eigen::Vector3d& b) { b = -a; }", "f", eigen());
  EXPECT_EQ(out.signature, "p0:3 -> p1:3");
  Kept crtp("a.cpp", "#include <Eigen/Dense>\ntemplate <class D> double f(const Eigen::MatrixBase<D>& a) { return a(0); }\ndouble g(const Eigen::Vector3d& v) { return f(v); }", "f", eigen());
  EXPECT_EQ(crtp.signature, "p0:3 -> return:1");
}

TEST(Drive, ReferencesAsResults) {
  Kept returned("a.c", "double* neg(const double a[3], double b[3]) { for (int i = 0; i < 3; ++i) b[i] = -a[i]; return b; }", "neg");
  EXPECT_EQ(returned.signature, "p0:3 -> p1:3");
  Kept field("a.cpp", "struct V { double x, y, z; }; class S { int n; V p, v; public: const V& velocity() const { return v; } };", "velocity");
  EXPECT_EQ(field.signature, "this.v:3 -> return:3");
  EXPECT_EQ(field({1, 2, 3}), (Numbers{1, 2, 3}));
}

TEST(Drive, ConstantsThatAreMade) {
  Kept f("a.cpp", "#include <Eigen/Dense>\nstatic const Eigen::Vector3d down(0, 0, 1);\ndouble f(const Eigen::Vector3d& v) { return v.dot(down); }", "f", eigen());
  EXPECT_EQ(f({1, 2, 3}), (Numbers{3}));
  Kept scaled("a.cpp", "double twice(double x) { return 2 * x; }\nconst double k = twice(3), m = twice(k);\ndouble f(double x) { return m * x; }", "f");
  EXPECT_EQ(scaled({2}), (Numbers{24}));
  Kept unknown("a.cpp", "double other(double);\nconst double k = other(3);\ndouble f(double x) { return k * x; }", "f");
  EXPECT_EQ(unknown.signature, "p0:1 global k:1 -> return:1");
  EXPECT_EQ(unknown({2, 5}), (Numbers{10}));
}

TEST(Drive, GlobalsAreInputs) {
  Kept read("a.c", "double R[2][2]; extern double gain; double f(double x) { return gain * (R[1][0] + x); }", "f");
  EXPECT_EQ(read.signature, "p0:1 global R:4=2x2 global gain:1 -> return:1");
  EXPECT_EQ(read({1, 2, 3, 4, 5, 10}), (Numbers{50}));
  Kept written("a.c", "static double last; double f(double x) { last = x; return 2 * x; }", "f");
  EXPECT_EQ(written.refusal, "writes to the global last");
  Kept seldom("a.c", "static double odd; double f(double x) { return x > 50 ? odd : x; } void g(double x) { odd = x; }", "f");
  EXPECT_EQ(seldom.signature, "p0:1 -> return:1");
  EXPECT_EQ(seldom.refusal_at({60}), "reads a global only here and there");
}

TEST(Drive, SelectorsAsked) {
  SourceFile source("a.c", "double f(int axis, const double* v) { switch (axis) { case 0: return v[0]; case 2: return v[2]; } return v[1]; }");
  const Kit kit = emit(source.unit(), source.project, {}, source.files);
  ASSERT_EQ(kit.candidates.size(), 1u);
  Stage stage(kit, kit.candidates[0]);
  const auto list = selections(stage);
  ASSERT_EQ(list.size(), 2u);
  EXPECT_EQ(list[1][0].value, 2);
}

std::string refusal(const std::string& name, const std::string& text) { return Kept(name, text, "f").refusal; }

TEST(Drive, BadInputIsRefused) {
  EXPECT_EQ(refusal("a.c", "double f(double x) { while (x < 1e9) x -= 1; return x; }"), "runs on past 2000000 steps");
  EXPECT_NE(refusal("a.c", "double f(double x) { return x + f(x + 1); }"), "");
  EXPECT_NE(refusal("a.c", "#include <stdlib.h>\ndouble f(double x) { double* p = malloc(1u << 30); p[0] = x; return p[0]; }"), "");
  EXPECT_NE(refusal("a.c", "double f(double x) { double* p = (double*)8; return *p + x; }"), "");
  EXPECT_EQ(refusal("a.c", "int z; double f(double x) { return x + 1 / (z - z); }"), "reads the global z, whose value is not known");
  EXPECT_NE(refusal("a.c", "double f(double x) { double y; return x + y; }"), "");
  EXPECT_EQ(refusal("a.c", "double f(double x) { __asm__(\"nop\"); return x; }"), "uses inline assembly");
  EXPECT_NE(refusal("a.c", "#include <stdio.h>\ndouble f(double x) { printf(\"%g\", x); return x; }").find("printf"), std::string::npos);
  EXPECT_NE(refusal("a.c", "double other(double); double f(double x) { return other(x); }").find("other"), std::string::npos);
  EXPECT_NE(refusal("a.c", "double f(double x) { static double kept; kept += x; return kept; }"), "");
  EXPECT_NE(refusal("a.cpp", "#include <stdexcept>\ndouble f(double x) { throw std::runtime_error(\"no\"); return x; }"), "");
  EXPECT_NE(refusal("a.c", "#include <assert.h>\ndouble f(double x) { assert(x > 5); return x; }"), "");
  EXPECT_NE(refusal("a.cpp", "#include <thread>\ndouble f(double x) { std::thread t([&] { x = 1; }); t.join(); return x; }"), "");
}

}  // namespace
}  // namespace dextral::probe
