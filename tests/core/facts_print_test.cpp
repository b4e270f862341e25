// The printed form of a function.
#include <gtest/gtest.h>

#include "core/facts.h"

namespace dextral {
namespace {

TEST(FactsPrint, OneLineForEachValueAndOperation) {
  FileTable files;
  FileId file = files.add("/p/nav.cpp");
  auto at = [&](std::uint32_t line, std::uint32_t column) { return Span{file, {line, column}, {line, column + 1}}; };
  Function f{.key = "k", .name = "nav::to_body", .span = at(12, 1), .body = true};
  f.parameter_names = {"C_bn", "v"};
  f.values = {{Shape::matrix, true, "C_bn", "", at(12, 30)},
              {Shape::vector, false, "v", "", at(12, 45)},
              {Shape::vector, false, "C_bn * v", "", at(13, 10)}};
  f.holds = {{.source = Source::declared, .said = "in ned", .subject = "v", .contract = true}};
  f.operations = {{.kind = OperationKind::hold, .operands = {{ValueId(1), {}, ""}}, .item = 0, .span = at(12, 45)},
                  {.kind = OperationKind::product,
                   .result = ValueId(2),
                   .operands = {{ValueId(0), {}, "C_bn"}, {ValueId(1), {}, "v"}},
                   .span = at(13, 10)},
                  {.kind = OperationKind::call, .item = 0, .span = at(14, 3)}};
  auto imu = std::make_shared<const Snapshot>(Snapshot{"this.imu", 1, {{"R", ValueId(0)}}});
  f.calls = {{"g", "nav::g", false, {{"this", Snapshot{"this", 2, {{"imu", imu}}}, ValueId::none, {}, "*this"}}}};
  f.readings = {{"p1", 0, ValueId(1)}};
  f.exits = {{"return", ValueId(2)}};
  EXPECT_EQ(print(f, files),
            "nav::to_body(C_bn, v)  /p/nav.cpp:12:1\n"
            "  v0: matrix, a rotation \"C_bn\"  at 12:30\n"
            "  v1: vector \"v\"  at 12:45\n"
            "  v2: vector \"C_bn * v\"  at 13:10\n"
            "  hold v1: in ned, declared, contract, said of v  at 12:45\n"
            "  v2 = product v0 \"C_bn\", v1 \"v\"  at 13:10\n"
            "  call nav::g(this = this#2{imu: this.imu#1{R: v0}} \"*this\")  at 14:3\n"
            "  p1#0 reads as v1\n"
            "  at the end return: v2\n");
}

TEST(FactsPrint, ADeclarationSaysThatItHasNoBody) {
  EXPECT_EQ(print(Function{.name = "f", .template_instance = true}, FileTable{}),
            "f(), from a template, declared only\n");
}

}  // namespace
}  // namespace dextral
