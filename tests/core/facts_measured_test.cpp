// Measurements on the way between a worker and its parent, and every shape in words.
#include <gtest/gtest.h>

#include "core/facts.h"

namespace dextral {
namespace {

Span span(FileId file, std::uint32_t line) { return {file, {line, 2}, {line, 9}}; }

Measurement measurement(FileId file) {
  Quantity map;
  map.kind = Kind::passive;
  map.first = {"A", "", false, true, ""};
  map.second = {"B", "", false, true, ""};
  Measurement m;
  m.key = "mxm";
  m.name = "nav::mxm";
  m.span = span(file, 7);
  m.signature.inputs = {{"p0", "a", 9, 3, 3, false, false, true}, {"p1", "mode", 1, 0, 0, true, false, false}};
  m.signature.outputs = {{"return", "", 4, 0, 0, false, true, false}};
  m.signature.single_precision = true;
  m.selected = {{"p1", -3}};
  m.meanings = {{"product", "a product", "a b", {{"p0", false, map}, {"return", true, map}}, {"the same, transposed"}}};
  m.refusal = "a loop without an end";
  m.trials = {{{1.5, -2.25}, {0.125}}};
  m.points = 40;
  m.steps = 900;
  m.worst = 1e-13;
  return m;
}

Facts measured_facts(const std::string& file) {
  Facts facts;
  facts.unit = file;
  facts.files.add("/p/zz.h");
  facts.measurements = {measurement(facts.files.add(file))};
  return facts;
}

TEST(FactsMeasured, ComeBackAsTheyWere) {
  const std::string bytes = encode(measured_facts("/p/a.c"));
  const std::optional<Facts> back = decode(bytes);
  ASSERT_TRUE(back);
  EXPECT_EQ(encode(*back), bytes);
  ASSERT_EQ(back->measurements.size(), 1u);
  const Measurement& m = back->measurements[0];
  EXPECT_EQ(m.signature.inputs.at(0).count, 9u);
  EXPECT_TRUE(m.signature.inputs[0].column_major);
  EXPECT_TRUE(m.signature.inputs.at(1).integer);
  EXPECT_TRUE(m.signature.outputs.at(0).quaternion);
  EXPECT_EQ(m.selected.at(0).value, -3);
  EXPECT_EQ(m.meanings.at(0).contract.at(1).quantity, measurement(FileId(1)).meanings[0].contract[1].quantity);
  EXPECT_EQ(m.trials.at(0).input, (std::vector<double>{1.5, -2.25}));
  EXPECT_EQ(m.worst, 1e-13);
  EXPECT_EQ(m.refusal, "a loop without an end");
}

TEST(FactsMeasured, OfTwoUnitsAreKeptOnceAtTheirFiles) {
  const Facts joined = join({measured_facts("/p/b.c"), measured_facts("/p/a.c"), measured_facts("/p/a.c")});
  ASSERT_EQ(joined.measurements.size(), 2u);
  EXPECT_EQ(joined.files.name(joined.measurements[0].span.file), "/p/a.c");
  EXPECT_EQ(joined.files.name(joined.measurements[1].span.file), "/p/b.c");
}

TEST(FactsJoin, FilesAreNumberedAnewInEverythingThatHasAPlace) {
  Facts facts;
  facts.files.add("/p/z.h");
  const FileId source = facts.files.add("/p/a.cpp");
  Function f{.key = "f", .name = "f", .span = span(source, 1), .body = true};
  f.values = {{Shape::vector, false, "v", "", span(source, 2)}};
  f.operations = {
      {.kind = OperationKind::copy, .operands = {{ValueId(0), span(source, 3), "v"}}, .span = span(source, 3)}};
  f.holds = {{.phrase = span(source, 4)}};
  f.calls = {{"g", "g", false, {{.formal = "p0", .span = span(source, 5)}}}};
  f.declarations = {{ValueId(0), "v", span(source, 6), false}};
  facts.functions = {f};
  const Facts joined = join({facts});
  const Function& g = joined.functions.at(0);
  for (const Span& s : {g.span, g.values[0].span, g.operations[0].span, g.operations[0].operands[0].span,
                        g.holds[0].phrase, g.calls[0].bindings[0].span, g.declarations[0].span})
    EXPECT_EQ(joined.files.name(s.file), "/p/a.cpp") << s.begin.line;
}

TEST(FactsPrint, EveryShapeHasItsWord) {
  Function f{.name = "f", .body = true};
  for (int shape = 0; shape <= int(Shape::container); ++shape) f.values.push_back({.shape = Shape(shape)});
  EXPECT_EQ(
      print(f, FileTable{}),
      "f()\n  v0: unknown\n  v1: number\n  v2: vector\n  v3: row\n  v4: matrix\n  v5: rotation\n  v6: quaternion\n"
      "  v7: pose\n  v8: object\n  v9: container\n");
}

TEST(FactsFiles, AnUnknownFileHasAName) { EXPECT_EQ(FileTable{}.name(FileId::none), "<unknown>"); }

}  // namespace
}  // namespace dextral
