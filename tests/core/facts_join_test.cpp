// The facts of several units joined.
#include <gtest/gtest.h>

#include <algorithm>

#include "core/facts.h"

namespace dextral {
namespace {

Facts unit(const std::string& file) {
  Facts facts;
  facts.unit = file;
  facts.read = true;
  facts.files.add("/p/zz.h");
  facts.files.add(file);
  return facts;
}

Function function(const std::string& key, FileId file, bool body, std::size_t operations = 0) {
  Function f{.key = key, .name = key, .span = {file, {1, 1}, {1, 9}}, .body = body};
  f.values = {{.text = "v", .span = {file, {2, 1}, {2, 2}}}};
  f.operations.resize(operations);
  return f;
}

constexpr FileId kHeader{0}, kSource{1};

std::vector<std::string> keys(const Facts& facts) {
  std::vector<std::string> list;
  for (const Function& f : facts.functions) list.push_back(f.key);
  return list;
}

TEST(FactsJoin, NumbersFilesAnewInTheOrderOfTheirNames) {
  Facts a = unit("/p/b.cpp"), b = unit("/p/a.cpp");
  a.functions = {function("f", kSource, true)};
  b.functions = {function("g", kHeader, true)};
  Facts joined = join({a, b});
  EXPECT_EQ(joined.files.names(), (std::vector<std::string>{"/p/a.cpp", "/p/b.cpp", "/p/zz.h"}));
  EXPECT_EQ(keys(joined), (std::vector<std::string>{"f", "g"}));
  EXPECT_EQ(joined.files.name(joined.functions[0].span.file), "/p/b.cpp");
  EXPECT_EQ(joined.files.name(joined.functions[0].values[0].span.file), "/p/b.cpp");
  EXPECT_EQ(joined.files.name(joined.functions[1].span.file), "/p/zz.h");
}

TEST(FactsJoin, ABodyWinsOverADeclaration) {
  Facts a = unit("/p/a.cpp"), b = unit("/p/b.cpp");
  a.functions = {function("f", kHeader, false)};
  b.functions = {function("f", kSource, true)};
  Facts joined = join({a, b});
  ASSERT_EQ(joined.functions.size(), 1u);
  EXPECT_TRUE(joined.functions[0].body);
}

TEST(FactsJoin, OfOneBodyInTwoUnitsTheFullerStaysAndTwoBodiesOfOneNameAreToldApart) {
  Facts a = unit("/p/a.cpp"), b = unit("/p/b.cpp"), c = unit("/p/c.cpp");
  a.functions = {function("inline", kHeader, true, 1)};
  b.functions = {function("inline", kHeader, true, 3), function("twice", kSource, true)};
  c.functions = {function("twice", kSource, true, 5)};
  Facts joined = join({c, b, a});
  ASSERT_EQ(joined.functions.size(), 3u);
  EXPECT_EQ(joined.functions[0].operations.size(), 3u);
  EXPECT_EQ(joined.functions[1].key, "twice");
  EXPECT_EQ(joined.files.name(joined.functions[1].span.file), "/p/b.cpp");
  EXPECT_EQ(joined.functions[2].key, "twice in /p/c.cpp");
  EXPECT_EQ(joined.functions[2].operations.size(), 5u);
}

TEST(FactsJoin, KeepsFieldsComplaintsAndAcceptancesOnce) {
  Facts a = unit("/p/a.cpp"), b = unit("/p/b.cpp");
  for (Facts* facts : {&a, &b}) {
    facts->fields = {{"S::R", "R", {kHeader, {3, 1}, {3, 2}}, true, facts == &b}};
    facts->complaints = {{ComplaintKind::phrase, {kHeader, {4, 1}, {4, 2}}, "nde", "no frame", "ned"}};
    facts->acceptances = {{{"wrong-order", "why"}, {kHeader, {5, 1}, {5, 2}}, {5, 1}, {6, 1}}};
  }
  b.complaints.push_back({ComplaintKind::phrase, {kSource, {4, 1}, {4, 2}}, "nde", "no frame", "ned"});
  Facts joined = join({a, b});
  ASSERT_EQ(joined.fields.size(), 1u);
  EXPECT_TRUE(joined.fields[0].known);
  EXPECT_EQ(joined.complaints.size(), 2u);
  EXPECT_EQ(joined.acceptances.size(), 1u);
}

TEST(FactsJoin, IsReadWhereAllUnitsWere) {
  Facts a = unit("/p/a.cpp"), b = unit("/p/b.cpp");
  EXPECT_TRUE(join({a, b}).read);
  b.read = false;
  EXPECT_FALSE(join({a, b}).read);
  EXPECT_TRUE(join({}).read);
}

TEST(FactsJoin, TheOrderOfTheUnitsDoesNotMatter) {
  std::vector<Facts> units;
  for (std::string name : {"/p/a.cpp", "/p/b.cpp", "/p/c.cpp"}) {
    Facts facts = unit(name);
    facts.functions = {function("shared", kHeader, true, 2), function("f" + name, kSource, true)};
    facts.functions[0].name = "seen from " + name;
    facts.complaints = {{ComplaintKind::phrase, {kHeader, {4, 1}, {4, 2}}, name, "m", ""}};
    units.push_back(facts);
  }
  const std::string expected = encode(join(units));
  std::vector<std::size_t> order{0, 1, 2};
  do {
    EXPECT_EQ(encode(join({units[order[0]], units[order[1]], units[order[2]]})), expected);
  } while (std::next_permutation(order.begin(), order.end()));
}

}  // namespace
}  // namespace dextral
