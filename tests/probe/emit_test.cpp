// From source to IR: just what the candidates reach, and how they are called.
#include "probe/emit.h"

#include <llvm/IR/Function.h>
#include <llvm/IR/Module.h>

#include "tests/probe/source.h"

namespace dextral::probe {
namespace {

std::vector<std::string> defined(const Kit& kit) {
  std::vector<std::string> names;
  for (const llvm::Function& function : *kit.module)
    if (!function.isDeclaration()) names.push_back(function.getName().str());
  std::sort(names.begin(), names.end());
  return names;
}

TEST(Emit, OnlyWhatIsReached) {
  SourceFile source("kit.c", R"(
    static double helper(double x) { return x * x; }
    double norm(double x, double y) { return helper(x) + helper(y); }
    void log_it(const char* s) { }
    const char* name(void) { return "kit"; }
  )");
  const Kit kit = emit(source.unit(), source.project, {"norm", {}}, source.files);
  ASSERT_TRUE(kit.module);
  EXPECT_EQ(defined(kit), (std::vector<std::string>{"helper", "norm"}));
}

TEST(Emit, BodiesOfTemplatesAndLibrariesAreThere) {
  SourceFile source("eigen.cpp", R"(
    #include <Eigen/Dense>
    Eigen::Vector3d map(const Eigen::Matrix3d& m, const Eigen::Vector3d& v) { return m.transpose() * v; }
  )", eigen());
  const Kit kit = emit(source.unit(), source.project, {}, source.files);
  ASSERT_TRUE(kit.module);
  for (const llvm::Function& function : *kit.module) {
    if (function.isDeclaration() && !function.isIntrinsic()) EXPECT_FALSE(function.getName().contains("Eigen")) << function.getName().str();
  }
}

TEST(Emit, BodiesParsedLateFindBuiltins) {
  SourceFile source("late.cpp", R"(
    template <class T> T root(T x) { return __builtin_sqrt(x); }
    double f(double x) { return root(x); }
  )");
  EXPECT_EQ(emit(source.unit(), source.project, {}, source.files).candidates.size(), 2u);
}

TEST(Emit, ClassesOfArguments) {
  SourceFile source("pass.c", R"(
    struct two { double a, b; };
    struct four { float w, x, y, z; };
    struct nine { double m[9]; };
    struct two f(struct two t, struct four q, struct nine m) { return t; }
    struct nine g(struct nine* m) { return *m; }
  )");
  const Kit kit = emit(source.unit(), source.project, {}, source.files);
  ASSERT_EQ(kit.candidates.size(), 2u);
  const Candidate& f = kit.candidates[0];
  EXPECT_EQ(f.refusal, "");
  EXPECT_EQ(f.formals[0].passing.pieces.size(), 2u);
  EXPECT_EQ(f.formals[1].passing.pieces.size(), 2u);
  EXPECT_EQ(f.formals[2].passing.kind, Passing::Kind::address);
  EXPECT_EQ(f.result->passing.kind, Passing::Kind::pieces);
  EXPECT_EQ(kit.candidates[1].result->passing.kind, Passing::Kind::address);
}

TEST(Emit, ErrorsElsewhereDoNoHarm) {
  SourceFile source("broken.cpp", R"(
    #include "missing.h"
    double right(double x) { return 2 * x; }
    double wrong(double x) { return unknown(x); }
    double calls_wrong(double x) { return wrong(x); }
  )");
  const Kit kit = emit(source.unit(), source.project, {}, source.files);
  ASSERT_TRUE(kit.module);
  ASSERT_EQ(kit.candidates.size(), 3u);
  EXPECT_EQ(kit.candidates[0].refusal, "");
  EXPECT_EQ(kit.candidates[1].refusal, "does not compile");
  EXPECT_EQ(kit.candidates[2].refusal, "");
  EXPECT_TRUE(kit.module->getFunction(kit.candidates[1].symbol) == nullptr ||
              kit.module->getFunction(kit.candidates[1].symbol)->isDeclaration());
}

TEST(Emit, ConstantsAreFixed) {
  SourceFile source("globals.cpp", R"(
    double gain = 2;
    double make();
    const double fixed = make();
    double f(double x) { return gain * fixed * x; }
  )");
  const Kit kit = emit(source.unit(), source.project, {}, source.files);
  EXPECT_EQ(kit.fixed, (std::set<std::string>{"_ZL5fixed"}));
}

}  // namespace
}  // namespace dextral::probe
