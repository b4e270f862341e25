// What functions measure as, as it is told.
#include "tell/measured.h"

#include <gtest/gtest.h>

#include <nlohmann/json.hpp>

namespace dextral::tell {
namespace {

struct Told : testing::Test {
  Told() {
    Measurement transpose;
    transpose.key = "c:@F@t";
    transpose.name = "t";
    transpose.span = {files.add("/p/kit.c"), {3, 6}, {3, 7}};
    Group in{"p0", "m", 4, 2, 2}, out{"p1", "out", 4, 2, 2};
    in.column_major = true;
    transpose.signature = {{in}, {out}, false};
    transpose.meanings = {{"transpose", "out is the transpose of m", "", {}, {"the inverse, of a rotation"}}};
    transpose.trials = {{{1, 2, 3, 4}, {1, 2, 3, 4}}};
    transpose.points = 40;
    transpose.steps = 267;
    transpose.worst = 1e-16;
    Measurement refused;
    refused.name = "log\x1b";
    refused.span = {files.add("/p/kit.c"), {1, 6}, {1, 7}};
    refused.refusal = "calls printf";
    Group sequence{"p0", "seq", 0, 0, 0, true};
    refused.signature.inputs = {sequence};
    refused.selected = {{"p0", 321}};
    list = {transpose, refused};
    sort(list, files);
    style.root = "/p";
  }
  FileTable files;
  std::vector<Measurement> list;
  Style style;
};

TEST_F(Told, InWords) {
  EXPECT_EQ(text(list, files, style),
            "kit.c:1:6: log\\x1b with seq = 321\n"
            "  not measured: calls printf\n"
            "kit.c:3:6: t\n"
            "  out is the transpose of m\n"
            "    which is also the inverse, of a rotation\n"
            "    takes m (2 x 2); gives out (2 x 2)\n"
            "    run at 40 points, worst disagreement 1.0e-16, at most 267 steps\n"
            "    by hand: given\n"
            "      m = 1 3; 2 4\n"
            "    it gives\n"
            "      out = 1 2; 3 4\n");
}

TEST_F(Told, AsATable) {
  EXPECT_EQ(table(list, files, style),
            "kit.c:1:6: log\\x1b with seq = 321: not measured: calls printf\n"
            "kit.c:3:6: t: out is the transpose of m\n"
            "2 functions, 2 measurements: 1 known, 0 open between several, 0 nothing that is known, 1 refused\n");
}

TEST_F(Told, ValuesThatGiveTheSameShareALine) {
  list.insert(list.begin(), list[0]);
  list[1].selected[0].value = 322;
  EXPECT_NE(table(list, files, style).find("log\\x1b with seq = 321 (and 1 more): not measured"), std::string::npos);
}

TEST_F(Told, SeveralAreToldAsOpen) {
  list[1].meanings.push_back({"copy", "out is m", "", {}, {}});
  EXPECT_NE(table(list, files, style).find("t: one of 2 that cannot be told apart: out is the transpose of m; or out is m"), std::string::npos);
}

TEST_F(Told, AsJson) {
  const auto json = nlohmann::json::parse(tell::json(list, files, style));
  ASSERT_EQ(json["functions"].size(), 2u);
  EXPECT_EQ(json["functions"][0]["refusal"], "calls printf");
  EXPECT_EQ(json["functions"][0]["selected"][0]["value"], 321);
  EXPECT_EQ(json["functions"][1]["file"], "kit.c");
  EXPECT_EQ(json["functions"][1]["meanings"][0]["id"], "transpose");
  EXPECT_EQ(json["functions"][1]["trials"][0]["given"].size(), 4u);
}

}  // namespace
}  // namespace dextral::tell
