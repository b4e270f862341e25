// Library models: what is read, and what is said of wrong ones.
#include "project/model.h"

#include "project/json_text.h"
#include "support.h"

namespace dextral::project {
namespace {

namespace fs = std::filesystem;

LibraryModel read_text(const std::string& text, std::vector<Problem>& problems) {
  return read_model("m.json", text, problems);
}

Lines wrong(const std::string& text) {
  std::vector<Problem> problems;
  read_text(text, problems);
  return lines(problems);
}

// The problems of one function; columns count from its brace.
Lines wrong_function(const std::string& text) {
  std::vector<Problem> problems;
  LibraryModel model = read_text(
      "{\"library\": \"l\", \"types\": [{\"name\": \"Vec\", \"shape\": \"vector\"}], \"functions\": [\n" + text + "]}",
      problems);
  EXPECT_FALSE(problems.empty()) << text;
  return lines(problems);
}

TEST(Model, TypesAndFunctions) {
  std::vector<Problem> problems;
  LibraryModel model = read_text(R"({"library": "kit", "about": "x", "check": {"anything": [1]},
    "types": [{"name": ["k::V", "k::W"], "shape": "vector", "inverse": "-{}", "element": 0},
              {"name": "k::M", "rows": "R", "columns": "C"}, {"name": "k::T", "rows argument": 1, "columns argument": 2}],
    "functions": [{"name": ["k::f", "k::g"], "given": ["matrix", "k::V"], "object": "pose", "is": "product", "of": [1, 2], "transposed": [1],
                   "into": 0, "also returned": true},
                  {"name": "k::e", "is": "build", "sequence": "321", "sense": "active", "turning": "moving", "unit": "deg", "angles": [1, 2, 3], "into": "result"},
                  {"name": "k::x", "is": "element", "order": "wxyz", "base": 1, "index": 2}]})",
                                 problems);
  EXPECT_EQ(lines(problems), Lines{});
  EXPECT_EQ(model.library, "kit");
  ASSERT_EQ(model.types.size(), 4u);
  EXPECT_EQ(model.types[1].name, "k::W");
  EXPECT_EQ(model.types[1].shape, Shape::vector);
  EXPECT_EQ(model.types[1].inverse_form, "-{}");
  EXPECT_EQ(model.types[1].element, 0);
  EXPECT_EQ(model.types[2].rows, "R");
  EXPECT_EQ(model.types[2].element, -1);
  EXPECT_EQ(model.types[3].rows_argument, 1);
  ASSERT_EQ(model.functions.size(), 4u);
  const FunctionModel& g = model.functions[1];
  EXPECT_EQ(g.name, "k::g");
  EXPECT_EQ(g.given, (Lines{"matrix", "k::V"}));
  EXPECT_EQ(g.object, "pose");
  EXPECT_EQ(g.of, (std::vector<int>{1, 2}));
  EXPECT_EQ(g.transposed, std::vector<int>{1});
  EXPECT_EQ(g.into, 0);
  EXPECT_TRUE(g.also_returned);
  EXPECT_EQ(model.functions[2].into, kReturn);
  EXPECT_EQ(model.functions[2].sequence, "321");
  EXPECT_EQ(model.functions[2].angles.size(), 3u);
  EXPECT_EQ(model.functions[3].base, 1);
  EXPECT_EQ(model.functions[3].index, 2);
}

TEST(Model, AllShapes) {
  const std::pair<const char*, Shape> shapes[] = {{"unknown", Shape::unknown},       {"number", Shape::number},
                                                  {"vector", Shape::vector},         {"row", Shape::row},
                                                  {"matrix", Shape::matrix},         {"rotation", Shape::rotation},
                                                  {"quaternion", Shape::quaternion}, {"pose", Shape::pose},
                                                  {"object", Shape::object},         {"container", Shape::container}};
  for (auto [word, shape] : shapes) {
    std::vector<Problem> problems;
    LibraryModel model = read_text(
        std::string("{\"library\": \"l\", \"types\": [{\"name\": \"T\", \"shape\": \"") + word + "\"}]}", problems);
    ASSERT_EQ(model.types.size(), 1u);
    EXPECT_EQ(model.types[0].shape, shape) << word;
  }
}

TEST(Model, WrongFrameOfAFile) {
  EXPECT_EQ(wrong("[]"), Lines{"1:1: a library model, an object was expected here; see docs/library-models.md"});
  EXPECT_EQ(wrong("{}"), Lines{"1:1: the key \"library\" is missing; name the library"});
  EXPECT_EQ(wrong(R"({"library": "l", "function": []})"),
            Lines{"1:18: the key \"function\" is unknown; did you mean \"functions\"?"});
  EXPECT_EQ(wrong(R"({"library": "l", "types": {}})"),
            Lines{"1:27: a list of objects was expected here; see docs/library-models.md"});
  EXPECT_EQ(wrong("{"), Lines{"1:2: a key in double quotes was expected; quote the key"});
}

TEST(Model, WrongTypes) {
  auto type = [](const std::string& text) { return wrong("{\"library\": \"l\", \"types\": [\n" + text + "]}"); };
  EXPECT_EQ(type(R"({"shape": "vector"})"), Lines{"2:1: the key \"name\" is missing; give the qualified name"});
  EXPECT_EQ(type(R"({"name": "T", "shape": "vectr"})"), Lines{"2:24: \"vectr\" is no shape; did you mean \"vector\"?"});
  EXPECT_EQ(type(R"({"name": "T", "inverse": ".t"})"), Lines{"2:26: the inverse has no place for its operand; write {} "
                                                             "where the operand stands, as in \"{}.transpose()\""});
  EXPECT_EQ(type(R"({"name": "T", "element": -1})"),
            Lines{"2:26: a whole number from 0 on was expected; 0 is the object or the first of what is counted"});
  EXPECT_EQ(type(R"({"name": ["T", 1]})"),
            Lines{"2:16: a qualified name was expected here; see docs/library-models.md"});
  EXPECT_EQ(type(R"({"name": ""})"), Lines{"2:10: a name cannot be empty; give the qualified name"});
}

TEST(Model, WrongOperations) {
  EXPECT_EQ(wrong_function(R"({"name": "f"})"), Lines{"2:1: the key \"is\" is missing; say the operation"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "produkt"})"),
            Lines{"2:21: \"produkt\" is no operation; did you mean \"product\"?"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "copy", "if": 1})"),
            Lines{"2:29: the key \"if\" is unknown; did you mean \"is\"?"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "copy", "given": ["vektor", "any", "Vec"]})"),
            Lines{"2:39: \"vektor\" is no shape and no type of this file; did you mean \"vector\"?"});
  EXPECT_EQ(wrong_function("{\"name\": \"f\", \"is\": \"copy\"},\n{\"name\": \"f\", \"is\": \"skew\"}"),
            Lines{"3:1: \"f\" stands twice with the same conditions; take one of the two out"});
}

TEST(Model, WrongArguments) {
  EXPECT_EQ(wrong_function(R"({"name": "f", "given": ["vector"], "is": "product", "of": [1, 2]})"),
            Lines{"2:63: there is no argument 2: \"given\" lists 1; 0 is the object, 1 the first argument"});
  EXPECT_EQ(
      wrong_function(R"({"name": "f", "is": "product", "of": [1]})"),
      Lines{
          "2:38: the operation product takes 2 to 8 operands, not 1; list the arguments in the order of the algebra"});
  EXPECT_EQ(
      wrong_function(R"({"name": "f", "is": "transpose", "of": [1, 2]})"),
      Lines{"2:40: the operation transpose takes 1 operand, not 2; list the arguments in the order of the algebra"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "product", "of": [1, 2], "transposed": [3]})"),
            Lines{"2:60: argument 3 is transposed but no operand; list it in \"of\" too"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "copy", "of": [0.5]})"),
            Lines{"2:36: a whole number from 0 on was expected; 0 is the object or the first of what is counted"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "copy", "into": "argument"})"),
            Lines{"2:37: \"argument\" is no place for a result; write \"result\" or an argument number"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "given": [], "is": "literal", "into": 1})"),
            Lines{"2:53: there is no argument 1: \"given\" lists 0; 0 is the object, 1 the first argument"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "copy", "also returned": true})"),
            Lines{"2:46: nothing is written that could be returned too; say \"into\""});
}

TEST(Model, WrongConventions) {
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "build", "sequence": "3-2-1"})"),
            Lines{"2:42: \"3-2-1\" is no sequence of axes; write one to three of the digits 1, 2, 3, no two alike side "
                  "by side"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "build", "sequence": "112"})").size(), 1u);
  EXPECT_EQ(
      wrong_function(R"({"name": "f", "is": "build", "sequence": "321", "angles": [1, 2]})"),
      Lines{"2:59: the sequence has 3 axes, and 2 angles are listed; list one angle for each axis, or one vector"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "build", "turning": "mowing"})"),
            Lines{"2:41: \"mowing\" is no turning; did you mean \"moving\"?"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "build", "unit": "gon"})"),
            Lines{"2:38: \"gon\" is no unit; known here: rad, deg"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "elements", "order": "xyzv"})"),
            Lines{"2:42: \"xyzv\" is no order; did you mean \"xyzw\"?"});
  EXPECT_EQ(wrong_function(R"({"name": "f", "is": "build", "sense": 1})"),
            Lines{"2:39: a word was expected here; see docs/library-models.md"});
}

TEST(Model, AWrongEntryLeavesTheOthers) {
  std::vector<Problem> problems;
  LibraryModel model =
      read_text(R"({"library": "l", "functions": [{"name": "f", "is": "x"}, {"name": "g", "is": "copy"}]})", problems);
  EXPECT_EQ(problems.size(), 1u);
  ASSERT_EQ(model.functions.size(), 1u);
  EXPECT_EQ(model.functions[0].name, "g");
}

TEST(Model, TheTableLooksUpByName) {
  std::vector<Problem> problems;
  ModelTable table;
  table.add(read_text(R"({"library": "a", "types": [{"name": "T", "shape": "row"}],
    "functions": [{"name": "f", "given": ["row"], "is": "copy"}, {"name": "f", "is": "sum"}]})",
                      problems));
  table.add(read_text(R"({"library": "b", "types": [{"name": "T", "shape": "vector"}],
    "functions": [{"name": "f", "given": ["vector"], "is": "skew"}, {"name": "f", "given": ["pose"], "is": "inverse"}]})",
                      problems));
  EXPECT_EQ(table.type("T")->shape, Shape::vector);
  EXPECT_EQ(table.type("U"), nullptr);
  EXPECT_EQ(table.functions("g"), nullptr);
  Lines order;
  for (const FunctionModel& function : *table.functions("f")) order.push_back(function.is);
  EXPECT_EQ(order, (Lines{"skew", "inverse", "copy", "sum"}));
}

TEST(Model, ThoseThatComeWithTheProgramAreRight) {
  int count = 0;
  for (const auto& entry : fs::directory_iterator(std::string(DEXTRAL_SOURCE) + "/rules/libraries")) {
    if (entry.path().extension() != ".json") continue;
    std::vector<Problem> problems;
    std::string text;
    ASSERT_TRUE(read_file(entry.path().string(), text, problems));
    LibraryModel model = read_model(entry.path().string(), text, problems);
    EXPECT_EQ(lines(problems), Lines{}) << entry.path();
    EXPECT_FALSE(model.functions.empty()) << entry.path();
    ++count;
  }
  EXPECT_GE(count, 10);
}

}  // namespace
}  // namespace dextral::project
