// Instructions and intrinsics one by one; values by hand from the language reference of LLVM 19.
#include <cmath>

#include "machine_support.h"

namespace dextral::probe {
namespace {

using test::Program;

constexpr std::uint64_t minus(std::uint64_t value, unsigned width) { return (0 - value) & (~0ull >> (64 - width)); }

TEST(MachineInstructions, IntegersOfAnyWidth) {
  auto run = [](const std::string& op, const std::string& type, std::uint64_t a, std::uint64_t b) {
    return Program::ir("define " + type + " @f(" + type + " %a, " + type + " %b) { %r = " + op + " " + type +
                       " %a, %b\n ret " + type + " %r }")
        .bits("f", {a, b});
  };
  EXPECT_EQ(run("add", "i33", (1ull << 33) - 1, 2), 1u);
  EXPECT_EQ(run("sub", "i8", 1, 2), 255u);
  EXPECT_EQ(run("mul", "i64", 1ull << 63, 2), 0u);
  EXPECT_EQ(run("sdiv", "i32", minus(7, 32), 2), minus(3, 32));
  EXPECT_EQ(run("srem", "i32", minus(7, 32), 2), minus(1, 32));
  EXPECT_EQ(run("udiv", "i8", 255, 2), 127u);
  EXPECT_EQ(run("ashr", "i16", 0x8000, 15), 0xffffu);
  EXPECT_EQ(run("lshr", "i16", 0x8000, 15), 1u);
  EXPECT_EQ(run("shl", "i3", 3, 1), 6u);
  EXPECT_EQ(run("xor", "i5", 21, 31), 10u);
}

TEST(MachineInstructions, FloatsRoundAsFloats) {
  Program program = Program::ir(
      "define float @f(float %a, float %b) { %m = fmul float %a, %b\n %r = fadd float %m, %a\n ret float %r }\n"
      "define float @n(double %a) { %r = fptrunc double %a to float\n ret float %r }\n"
      "define i1 @c(double %a, double %b) { %r = fcmp olt double %a, %b\n ret i1 %r }\n"
      "define i1 @u(double %a, double %b) { %r = fcmp une double %a, %b\n ret i1 %r }\n"
      "define double @m(double %a, double %b) { %r = frem double %a, %b\n ret double %r }\n"
      "define double @s(double %a) { %r = fneg double %a\n ret double %r }\n");
  EXPECT_EQ(program.value<float>("f", {1.1f, 0.7f}), 1.1f * 0.7f + 1.1f);
  EXPECT_EQ(program.value<float>("n", {0.1}), 0.1f);
  EXPECT_EQ(program.bits("c", {1.0, 2.0}), 1u);
  EXPECT_EQ(program.bits("c", {std::nan(""), 2.0}), 0u);
  EXPECT_EQ(program.bits("u", {std::nan(""), 2.0}), 1u);
  EXPECT_EQ(program.number("m", {-7.5, 2.0}), -1.5);
  EXPECT_TRUE(std::signbit(program.number("s", {0.0})));
}

TEST(MachineInstructions, VectorsAndAggregates) {
  Program program = Program::ir(R"(
define double @v(double %a) {
  %x = insertelement <2 x double> undef, double %a, i32 0
  %y = shufflevector <2 x double> %x, <2 x double> <double 3.0, double 4.0>, <2 x i32> <i32 0, i32 3>
  %z = fmul <2 x double> %y, <double 2.0, double 0.5>
  %p = extractelement <2 x double> %z, i64 0
  %q = extractelement <2 x double> %z, i64 1
  %r = fadd double %p, %q
  ret double %r
}
define { i32, <2 x float> } @s(i32 %n) {
  %a = insertvalue { i32, <2 x float> } undef, i32 %n, 0
  %b = insertvalue { i32, <2 x float> } %a, <2 x float> <float 1.0, float 2.0>, 1
  ret { i32, <2 x float> } %b
}
define i64 @b() { %r = bitcast <2 x float> <float 1.0, float 2.0> to i64
  ret i64 %r }
define i4 @m(i32 %n) {
  %a = insertelement <4 x i32> <i32 1, i32 2, i32 3, i32 4>, i32 %n, i32 0
  %c = icmp sgt <4 x i32> %a, <i32 2, i32 2, i32 2, i32 2>
  %r = bitcast <4 x i1> %c to i4
  ret i4 %r
}
)");
  EXPECT_EQ(program.number("v", {5.0}), 12.0);
  EXPECT_EQ(program.bits("b"), 0x400000003f800000ull);
  EXPECT_EQ(program.bits("m", {std::uint64_t{9}}), 13u);
  const auto bytes = program.value<std::vector<std::byte>>("s", {std::uint64_t{7}});
  ASSERT_EQ(bytes.size(), 16u);
  EXPECT_EQ(std::to_integer<int>(bytes[0]), 7);
  EXPECT_EQ(std::to_integer<int>(bytes[15]), 0x40);
}

TEST(MachineInstructions, UndefinedBytesTravelAndDoNotHarm) {
  Program program = Program::ir(R"(
declare void @llvm.memcpy.p0.p0.i64(ptr, ptr, i64, i1)
define double @padding(double %a) {
  %p = alloca { i8, double }
  %q = alloca { i8, double }
  %x = getelementptr { i8, double }, ptr %p, i32 0, i32 1
  store double %a, ptr %x
  call void @llvm.memcpy.p0.p0.i64(ptr %q, ptr %p, i64 16, i1 false)
  %y = getelementptr { i8, double }, ptr %q, i32 0, i32 1
  %r = load double, ptr %y
  ret double %r
}
define i32 @half(i32 %a) {
  %p = alloca i64
  store i32 %a, ptr %p
  %w = load i64, ptr %p
  %r = trunc i64 %w to i32
  ret i32 %r
}
define i32 @other_half(i32 %a) {
  %p = alloca i64
  store i32 %a, ptr %p
  %w = load i64, ptr %p
  %h = lshr i64 %w, 32
  %r = trunc i64 %h to i32
  ret i32 %r
}
define i1 @masked() { %r = and i1 false, undef
  ret i1 %r }
)");
  EXPECT_EQ(program.number("padding", {2.5}), 2.5);
  EXPECT_EQ(program.bits("half", {std::uint64_t{9}}), 9u);
  EXPECT_EQ(program.refusal("other_half", {std::uint64_t{9}}), "uses an undefined value");
  EXPECT_EQ(program.bits("masked"), 0u);
}

TEST(MachineInstructions, PhiNodesMoveAtOnce) {
  Program program = Program::ir(R"(
define i32 @f(i32 %n) {
entry:
  br label %loop
loop:
  %a = phi i32 [ 1, %entry ], [ %b, %loop ]
  %b = phi i32 [ 2, %entry ], [ %a, %loop ]
  %i = phi i32 [ 0, %entry ], [ %j, %loop ]
  %j = add i32 %i, 1
  %c = icmp slt i32 %j, %n
  br i1 %c, label %loop, label %done
done:
  %s = shl i32 %a, 4
  %r = or i32 %s, %b
  ret i32 %r
}
)");
  EXPECT_EQ(program.bits("f", {std::uint64_t{1}}), 0x12u);
  EXPECT_EQ(program.bits("f", {std::uint64_t{2}}), 0x21u);
}

TEST(MachineInstructions, GlobalsReadAreTold) {
  Program program = Program::ir(
      "@g = global double 4.0\n@c = constant double 2.0\n@x = external global double\n"
      "define double @f() { %a = load double, ptr @g\n %b = load double, ptr @c\n %r = fmul double %a, %b\n ret double "
      "%r }\n"
      "define double @h() { %a = load double, ptr @x\n ret double %a }\n");
  EXPECT_EQ(program.number("f"), 8.0);
  const auto read = program.machine().globals_read();
  ASSERT_EQ(read.size(), 1u);
  const double other = 5.0;
  program.machine().write(read.at("g"), std::as_bytes(std::span(&other, 1)));
  EXPECT_EQ(program.number("f"), 10.0);
  program.refusal("h");
  program.machine().write(program.machine().globals_read().at("x"), std::as_bytes(std::span(&other, 1)));
  EXPECT_EQ(program.number("h"), 5.0);
}

TEST(MachineInstructions, Intrinsics) {
  Program program = Program::ir(R"(
declare i32 @llvm.ctlz.i32(i32, i1)
declare i32 @llvm.cttz.i32(i32, i1)
declare i16 @llvm.bswap.i16(i16)
declare i8 @llvm.fshl.i8(i8, i8, i8)
declare i8 @llvm.sadd.sat.i8(i8, i8)
declare {i8, i1} @llvm.smul.with.overflow.i8(i8, i8)
declare double @llvm.fmuladd.f64(double, double, double)
declare <2 x double> @llvm.fabs.v2f64(<2 x double>)
declare i1 @llvm.is.fpclass.f64(double, i32)
define i32 @lz(i32 %a) { %r = call i32 @llvm.ctlz.i32(i32 %a, i1 false)
  ret i32 %r }
define i32 @tz(i32 %a) { %r = call i32 @llvm.cttz.i32(i32 %a, i1 true)
  ret i32 %r }
define i16 @sw(i16 %a) { %r = call i16 @llvm.bswap.i16(i16 %a)
  ret i16 %r }
define i8 @fs(i8 %a, i8 %b) { %r = call i8 @llvm.fshl.i8(i8 %a, i8 %b, i8 4)
  ret i8 %r }
define i8 @sat(i8 %a, i8 %b) { %r = call i8 @llvm.sadd.sat.i8(i8 %a, i8 %b)
  ret i8 %r }
define i1 @over(i8 %a, i8 %b) { %p = call {i8, i1} @llvm.smul.with.overflow.i8(i8 %a, i8 %b)
  %r = extractvalue {i8, i1} %p, 1
  ret i1 %r }
define double @ma(double %a, double %b, double %c) { %r = call double @llvm.fmuladd.f64(double %a, double %b, double %c)
  ret double %r }
define double @ab(double %a) { %v = insertelement <2 x double> <double 0.0, double 0.0>, double %a, i32 1
  %w = call <2 x double> @llvm.fabs.v2f64(<2 x double> %v)
  %r = extractelement <2 x double> %w, i32 1
  ret double %r }
define i1 @nan(double %a) { %r = call i1 @llvm.is.fpclass.f64(double %a, i32 3)
  ret i1 %r }
)");
  EXPECT_EQ(program.bits("lz", {std::uint64_t{1}}), 31u);
  EXPECT_EQ(program.bits("lz", {std::uint64_t{0}}), 32u);
  EXPECT_EQ(program.refusal("tz", {std::uint64_t{0}}), "uses an undefined value");
  EXPECT_EQ(program.bits("sw", {std::uint64_t{0x1234}}), 0x3412u);
  EXPECT_EQ(program.bits("fs", {std::uint64_t{0xab}, std::uint64_t{0xcd}}), 0xbcu);
  EXPECT_EQ(program.bits("sat", {std::uint64_t{100}, std::uint64_t{100}}), 127u);
  EXPECT_EQ(program.bits("sat", {std::uint64_t{0x80}, std::uint64_t{0xff}}), 0x80u);
  EXPECT_EQ(program.bits("over", {std::uint64_t{16}, std::uint64_t{8}}), 1u);
  EXPECT_EQ(program.bits("over", {std::uint64_t{16}, std::uint64_t{7}}), 0u);
  EXPECT_EQ(program.number("ma", {2.0, 3.0, 4.0}), 10.0);
  EXPECT_EQ(program.number("ab", {-3.0}), 3.0);
  EXPECT_EQ(program.bits("nan", {std::nan("")}), 1u);
}

// The library of the host is the reference.
TEST(MachineInstructions, MathsLibrary) {
  auto one = [](const std::string& name, double x) {
    return Program::ir("declare double @" + name + "(double)\ndefine double @f(double %x) { %r = call double @" + name +
                       "(double %x)\n ret double %r }")
        .number("f", {x});
  };
  EXPECT_EQ(one("sin", 0.3), std::sin(0.3));
  EXPECT_EQ(one("acos", 0.3), std::acos(0.3));
  EXPECT_EQ(one("cbrt", 0.3), std::cbrt(0.3));
  EXPECT_EQ(one("log1p", 0.3), std::log1p(0.3));
  EXPECT_EQ(one("round", 2.5), 3.0);
  EXPECT_EQ(one("rint", 2.5), 2.0);
  Program program = Program::compiled(R"(
#define _GNU_SOURCE
#include <math.h>
#include <errno.h>
double a(double y, double x) { return atan2(y, x) + hypot(y, x) + fmod(y, x) + remainder(y, x) + pow(x, y); }
double b(double x) { double s, c, w; sincos(x, &s, &c); int e; double m = frexp(x, &e); return s + c + modf(x, &w) + w + m + e + ldexp(m, 3); }
float c(float y, float x) { return atan2f(y, x) + sqrtf(x) + fmaxf(x, y) + copysignf(x, -y); }
long d(double x) { return lround(x) + (isnan(x) ? 100 : 0) + (signbit(x) ? 1000 : 0); }
int e(void) { errno = 3; return errno; }
)",
                                      "c", "-O0");
  EXPECT_EQ(program.number("a", {1.5, 0.4}), std::atan2(1.5, 0.4) + std::hypot(1.5, 0.4) + std::fmod(1.5, 0.4) +
                                                 std::remainder(1.5, 0.4) + std::pow(0.4, 1.5));
  EXPECT_NEAR(program.number("b", {5.5}), std::sin(5.5) + std::cos(5.5) + 5.5 + 0.6875 + 3 + 5.5, 1e-14);
  EXPECT_EQ(program.value<float>("c", {1.5f, 0.4f}), std::atan2(1.5f, 0.4f) + std::sqrt(0.4f) + 1.5f + -0.4f);
  EXPECT_EQ(program.bits("d", {2.5}), 3u);
  EXPECT_EQ(program.bits("d", {-2.5}), 997u);
  EXPECT_EQ(program.bits("e"), 3u);
}

}  // namespace
}  // namespace dextral::probe
