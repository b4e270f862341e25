// Every reason why a run ends, in its words.
#include "machine_support.h"

namespace dextral::probe {
namespace {

using test::Program;

std::string why(const std::string& body, const std::vector<Word>& arguments = {}) {
  return Program::ir(body).refusal("f", arguments);
}

TEST(MachineRefusals, Arithmetic) {
  EXPECT_EQ(why("define i32 @f(i32 %a) { %r = sdiv i32 1, %a\n ret i32 %r }", {std::uint64_t{0}}), "divides by zero");
  EXPECT_EQ(why("define i32 @f(i32 %a) { %r = urem i32 1, %a\n ret i32 %r }", {std::uint64_t{0}}), "divides by zero");
  EXPECT_EQ(why("define i32 @f(i32 %a) { %r = add nsw i32 2147483647, %a\n ret i32 %r }", {std::uint64_t{1}}),
            "overflows an integer");
  EXPECT_EQ(why("define i32 @f(i32 %a) { %r = sdiv i32 -2147483648, %a\n ret i32 %r }", {std::uint64_t{0xffffffff}}),
            "overflows an integer");
  EXPECT_EQ(why("define i32 @f(i32 %a) { %r = shl i32 1, %a\n ret i32 %r }", {std::uint64_t{32}}),
            "shifts by too many bits");
  EXPECT_EQ(why("define i32 @f(double %a) { %r = fptosi double %a to i32\n ret i32 %r }", {1e10}),
            "converts a number that does not fit");
  EXPECT_EQ(why("define i32 @f() { %r = add i32 undef, 1\n ret i32 %r }"), "uses an undefined value");
  EXPECT_EQ(why("define i32 @f() { %r = freeze i32 poison\n ret i32 %r }"), "uses an undefined value");
  EXPECT_EQ(why("define i32 @f(i32 %a) {\n %r = add nsw i32 2147483647, %a\n %c = icmp slt i32 %r, 0\n"
                " br i1 %c, label %x, label %x\nx:\n ret i32 0 }",
                {std::uint64_t{1}}),
            "overflows an integer");
}

TEST(MachineRefusals, Memory) {
  EXPECT_EQ(why("define i32 @f() { %p = alloca i32\n %r = load i32, ptr %p\n ret i32 %r }"), "uses an undefined value");
  EXPECT_EQ(why("define i32 @f() { %r = load i32, ptr null\n ret i32 %r }"), "reads through a null pointer");
  EXPECT_EQ(why("define void @f() { store i32 1, ptr null\n ret void }"), "writes through a null pointer");
  EXPECT_EQ(why("define i32 @f(ptr %p) { %r = load i32, ptr %p\n ret i32 %r }", {std::uint64_t{0x7fff12345678}}),
            "reads through a wild pointer");
  EXPECT_EQ(why("define void @f(ptr %p) { store i8 1, ptr %p\n ret void }", {std::uint64_t{0x7fff12345678}}),
            "writes through a wild pointer");
  EXPECT_EQ(why("define i32 @f(i64 %i) { %p = alloca [4 x i32]\n %q = getelementptr i32, ptr %p, i64 %i\n"
                " %r = load i32, ptr %q\n ret i32 %r }",
                {std::uint64_t{4}}),
            "reads outside an object");
  EXPECT_EQ(why("define void @f(i64 %i) { %p = alloca [4 x i32]\n %q = getelementptr i32, ptr %p, i64 %i\n"
                " store i32 1, ptr %q\n ret void }",
                {~std::uint64_t{0}}),
            "writes outside an object");
  EXPECT_EQ(why("define i32 @f(i64 %i) { %p = alloca [4 x i32]\n %q = getelementptr i32, ptr %p, i64 %i\n"
                " %r = load i32, ptr %q\n ret i32 %r }",
                {std::uint64_t{1} << 40}),
            "computes a wild pointer");
  EXPECT_EQ(why("define ptr @g() { %p = alloca i32\n store i32 1, ptr %p\n ret ptr %p }\n"
                "define i32 @f() { %p = call ptr @g()\n %r = load i32, ptr %p\n ret i32 %r }"),
            "reads memory after its release");
  EXPECT_EQ(why("declare ptr @malloc(i64)\ndeclare void @free(ptr)\ndefine void @f() { %p = call ptr @malloc(i64 8)\n"
                " call void @free(ptr %p)\n store i8 1, ptr %p\n ret void }"),
            "writes memory after its release");
  EXPECT_EQ(why("declare ptr @malloc(i64)\ndeclare void @free(ptr)\ndefine void @f() { %p = call ptr @malloc(i64 8)\n"
                " call void @free(ptr %p)\n call void @free(ptr %p)\n ret void }"),
            "releases memory twice");
  EXPECT_EQ(why("declare void @free(ptr)\ndefine void @f() { %p = alloca i32\n call void @free(ptr %p)\n ret void }"),
            "releases what was not allocated");
  EXPECT_EQ(why("define i8 @f() { %r = load i8, ptr @f\n ret i8 %r }"), "reads through a pointer to a function");
  EXPECT_EQ(why("define i32 @f() { %p = alloca i32\n %r = load volatile i32, ptr %p\n ret i32 %r }"),
            "reads a volatile value");
  EXPECT_EQ(why("define void @f() { %p = alloca i32\n store volatile i32 1, ptr %p\n ret void }"),
            "writes a volatile value");
  EXPECT_EQ(why("define void @f() { fence seq_cst\n ret void }"), "uses atomic operations");
  EXPECT_EQ(
      why("define i32 @f(ptr %p) { %r = load atomic i32, ptr %p seq_cst, align 4\n ret i32 %r }", {std::uint64_t{0}}),
      "uses atomic operations");
}

TEST(MachineRefusals, Globals) {
  EXPECT_EQ(why("@g = global i32 1\ndefine void @f() { store i32 2, ptr @g\n ret void }"), "writes to the global g");
  EXPECT_EQ(why("@g = constant i32 1\ndefine void @f() { store i32 2, ptr @g\n ret void }"),
            "writes to the constant g");
  EXPECT_EQ(why("@g = external global i32\ndefine i32 @f() { %r = load i32, ptr @g\n ret i32 %r }"),
            "reads the global g, whose value is not known");
  EXPECT_EQ(why("@g = thread_local global i32 1\ndefine i32 @f() { %r = load i32, ptr @g\n ret i32 %r }"),
            "uses a value that belongs to a thread");
}

TEST(MachineRefusals, Calls) {
  EXPECT_EQ(
      why("declare i32 @printf(ptr, ...)\ndefine i32 @f() { %r = call i32 (ptr, ...) @printf(ptr null)\n ret i32 %r }"),
      "calls printf");
  EXPECT_EQ(why("declare void @_ZN5Light2onEd(double)\ndefine void @f() { call void @_ZN5Light2onEd(double 1.0)\n ret "
                "void }"),
            "calls Light::on(double)");
  EXPECT_EQ(why("declare double @sin(float)\ndefine double @f() { %r = call double @sin(float 1.0)\n ret double %r }"),
            "calls sin with arguments of other types");
  EXPECT_EQ(why("declare void @__assert_fail(ptr, ptr, i32, ptr)\n"
                "define void @f() { call void @__assert_fail(ptr null, ptr null, i32 1, ptr null)\n unreachable }"),
            "asserts");
  EXPECT_EQ(why("declare void @abort()\ndefine void @f() { call void @abort()\n unreachable }"), "asserts");
  EXPECT_EQ(why("declare void @_ZSt9terminatev()\ndefine void @f() { call void @_ZSt9terminatev()\n unreachable }"),
            "asserts");
  EXPECT_EQ(why("declare void @llvm.trap()\ndefine void @f() { call void @llvm.trap()\n unreachable }"), "asserts");
  EXPECT_EQ(why("declare void @exit(i32)\ndefine void @f() { call void @exit(i32 0)\n unreachable }"),
            "ends the program");
  EXPECT_EQ(why("declare void @_ZSt20__throw_length_errorPKc(ptr)\n"
                "define void @f() { call void @_ZSt20__throw_length_errorPKc(ptr null)\n unreachable }"),
            "throws");
  EXPECT_EQ(why("define void @f() { call void asm sideeffect \"nop\", \"\"()\n ret void }"), "uses inline assembly");
  EXPECT_EQ(why("define void @f() { unreachable }"), "reaches a place that must not be reached");
  EXPECT_EQ(why("define void @f(ptr %p) { call void %p()\n ret void }", {std::uint64_t{0}}),
            "calls through a null pointer");
  EXPECT_EQ(why("define void @f(ptr %p) { call void %p()\n ret void }", {std::uint64_t{77}}),
            "calls through a wild pointer");
  EXPECT_EQ(why("define void @g(i32 %a) { ret void }\ndefine void @f() { call void @g(i64 1)\n ret void }"),
            "calls g with arguments of other types");
  EXPECT_EQ(why("define i32 @f(...) { ret i32 0 }"), "takes a variable number of arguments");
  EXPECT_EQ(why("define void @f(i32 %a) { ret void }", {1.0}), "is called with other arguments than it takes");
  EXPECT_EQ(why("define void @f(i32 %a) { ret void }"), "is called with other arguments than it takes");
}

TEST(MachineRefusals, Bounds) {
  EXPECT_EQ(why("define void @f() { br label %x\nx:\n br label %x }"), "runs on past 2000000 steps");
  EXPECT_EQ(why("define void @f() { call void @f()\n ret void }"), "calls deeper than 200");
  EXPECT_EQ(why("declare ptr @malloc(i64)\ndefine ptr @f() { %p = call ptr @malloc(i64 17000000)\n ret ptr %p }"),
            "needs more than 16777216 bytes");
  EXPECT_EQ(why("define void @f() { br label %x\nx:\n %p = alloca [1000 x double]\n br label %x }"),
            "needs more than 16777216 bytes");
  EXPECT_EQ(why("define void @f(i64 %n) { %p = alloca double, i64 %n\n ret void }", {std::uint64_t{1} << 62}),
            "needs more than 16777216 bytes");
  EXPECT_EQ(
      why("declare void @llvm.memset.p0.i64(ptr, i8, i64, i1)\ndefine void @f() { %p = alloca [8000000 x i8]\n"
          " br label %x\nx:\n call void @llvm.memset.p0.i64(ptr %p, i8 0, i64 8000000, i1 false)\n br label %x }"),
      "runs on past 2000000 steps");
}

TEST(MachineRefusals, Types) {
  EXPECT_EQ(why("define void @f(ptr %p) { %a = load [1024 x [1024 x [1024 x [1024 x {}]]]], ptr %p\n ret void }",
                {std::uint64_t{0}}),
            "no refusal");
  EXPECT_EQ(why("define void @f(ptr %p) { %a = load [2000 x i8], ptr %p\n ret void }", {std::uint64_t{0}}),
            "handles a value of more than 1024 parts");
  EXPECT_EQ(why("define void @f(double %a) { %b = fpext double %a to x86_fp80\n ret void }", {1.0}),
            "uses long double");
  EXPECT_EQ(why("define void @f(i64 %a) { %b = zext i64 %a to i128\n ret void }", {std::uint64_t{1}}),
            "uses integers of 128 bits");
  EXPECT_EQ(why("define void @f(float %a) { %b = fptrunc float %a to half\n ret void }", {1.0f}),
            "uses numbers of half precision");
}

}  // namespace
}  // namespace dextral::probe
