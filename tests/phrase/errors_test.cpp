// What is said of a text that is no phrase: the wrong word, its place, what was
// expected and the nearest right word.
#include <gtest/gtest.h>

#include "phrase/phrase.h"

namespace dextral::phrase {
namespace {

struct Wrong {
  const char* text;
  const char* word;
  const char* expected;  // a part of the message
  const char* nearest;
};

class WrongWord : public testing::TestWithParam<Wrong> {};

TEST_P(WrongWord, NameTheWordItsPlaceAndTheRemedy) {
  const Wrong& want = GetParam();
  const auto parsed = parse(want.text);
  const Error* e = std::get_if<Error>(&parsed);
  ASSERT_NE(e, nullptr) << want.text;
  EXPECT_EQ(e->wrong, want.word);
  EXPECT_NE(e->message.find(want.expected), std::string::npos) << e->message;
  EXPECT_EQ(e->nearest, want.nearest);
  EXPECT_EQ(e->length, std::string(want.word).size());
  EXPECT_EQ(std::string(want.text).substr(e->offset, e->length), want.word);
}

INSTANTIATE_TEST_SUITE_P(
    Words, WrongWord,
    testing::Values(Wrong{"pasive ned to body", "pasive", "this begins no phrase", "passive"},
                    Wrong{"xyzzy ned to body", "xyzzy", "this begins no phrase", ""},
                    Wrong{"passive ned too body", "too", "`to` was expected", "to"},
                    Wrong{"passive to body", "to", "name of a frame", "to"},
                    Wrong{"in 2body", "2body", "name of a frame", ""}, Wrong{"in body@", "body@", "a tag such as", ""},
                    Wrong{"in body@k-1", "body@k-1", "a tag such as", ""},
                    Wrong{"in own from", "from", "name of a frame", ""},
                    Wrong{"from to to mast in body", "to", "name of a point", ""},
                    Wrong{"from hull to 3 in body", "3", "name of a point", ""},
                    Wrong{"from hull to mast at body", "at", "`in` was expected", ""},
                    Wrong{"rate of body agianst ned in body", "agianst", "`against` was expected", "against"},
                    Wrong{"rate of body relative two ned in body", "two", "`to` was expected", "to"},
                    Wrong{"velocity off hull against ned in body", "off", "`of` was expected", "of"},
                    Wrong{"specific farce in body", "farce", "`force` was expected", "force"},
                    Wrong{"torque about in in body", "in", "name of a point", ""},
                    Wrong{"angles 3-2-4 ned to body", "3-2-4", "a sequence such as 3-2-1", "3-2-1"},
                    Wrong{"angles zyx ned to body", "zyx", "add `, moving` or `, fixed`", ""},
                    Wrong{"angle rates zyx ned to body", "zyx", "add `, moving` or `, fixed`", ""},
                    Wrong{"angle of north toward east", "of", "`from` was expected", ""},
                    Wrong{"angle from nroth toward east", "nroth", "a direction such as", "north"},
                    Wrong{"along sideways", "sideways", "a direction such as", ""},
                    Wrong{"geodetic latitud", "latitud", "latitude, longitude or height", "latitude"},
                    Wrong{"covariance in body", "in", "`of` was expected", ""},
                    Wrong{"covariance of pasive ned to body", "pasive", "this begins no phrase", "passive"},
                    Wrong{"in frame named bye kind", "bye", "`by` was expected", "by"},
                    Wrong{"pose of mast inn body", "inn", "`in` was expected", "in"},
                    Wrong{"in ned deg", "deg", "a comma or the end", ""},
                    Wrong{"in ned, degs", "degs", "no qualifier", "deg"},
                    Wrong{"in ned, scalar frist", "frist", "first or last", "first"},
                    Wrong{"in ned, maps by qvq", "qvq", "qvq* or q*vq", "qvq*"},
                    Wrong{"in ned, maps with qvq*", "with", "`by` was expected", ""},
                    Wrong{"in ned, stored role pitch yaw", "role", "roll, pitch and yaw", "roll"},
                    Wrong{"in ned, as quaternoin", "quaternoin", "rotation vector, mrp or quaternion", "quaternion"},
                    Wrong{"in ned, as rotation vectr", "vectr", "`vector` was expected", "vector"},
                    Wrong{"in ned, row vector", "vector", "`vectors` was expected", "vectors"},
                    Wrong{"in ned, seen form ecef", "form", "`from` was expected", "from"}));

// A macro or a project file holds phrases alone.
TEST(Errors, AnAcceptanceIsNoPhrase) {
  EXPECT_TRUE(std::holds_alternative<Error>(parse("accept wrong-order because x")));
}

// Every phrase cut after each of its words is an error at the end, or a shorter phrase.
TEST(Cut, PhrasesEndTooEarly) {
  for (std::string text :
       {"from hull to mast in body", "passive ned to body", "active ned to body", "turn ned to body",
        "angles 3-2-1 ned to body", "rate of body against ned in body", "specific force in body",
        "velocity of hull against ecef in ned", "torque about hull in body", "angle from north toward east",
        "geodetic latitude", "linear body to ned", "tensor in body, scalar last", "in ned, maps by qvq*",
        "in ned, seen from ecef", "in ned, as rotation vector", "pose of mast in body"})
    for (std::size_t space = text.find(' '); space != std::string::npos; space = text.find(' ', space + 1)) {
      const std::string cut = text.substr(0, space);
      const auto parsed = parse(cut);
      if (const Error* e = std::get_if<Error>(&parsed)) {
        EXPECT_EQ(e->offset, cut.size()) << cut;
        EXPECT_EQ(e->length, 0u) << cut;
        EXPECT_NE(e->message.find("ends too early"), std::string::npos) << cut << ": " << e->message;
      } else {
        EXPECT_EQ(cut.find(','), std::string::npos) << cut;
      }
    }
}

const std::vector<std::string> kRules = {"missing-inverse", "wrong-order"};

TEST(Items, NothingBehindTheBarIsAnError) {
  for (const char* text : {"", "  ", " ;", "\n"}) {
    const Items items = parse_items(text, kRules);
    ASSERT_EQ(items.errors.size(), 1u) << text;
    EXPECT_EQ(items.errors[0].message, "a phrase is missing behind the bar");
  }
}

TEST(Items, OneWrongItemLeavesTheOthers) {
  const std::string text = "a: in ned; b: inn body; c: in mast";
  const Items items = parse_items(text, kRules);
  ASSERT_EQ(items.errors.size(), 1u);
  EXPECT_EQ(items.errors[0].wrong, "inn");
  EXPECT_EQ(text.substr(items.errors[0].offset, items.errors[0].length), "inn");
  ASSERT_EQ(items.items.size(), 2u);
  EXPECT_EQ(items.items[1].names, std::vector<std::string>{"c"});
  EXPECT_EQ(text.substr(items.items[1].offset, items.items[1].length), "c: in mast");
}

TEST(Items, ANameWithoutAPhraseIsAnError) {
  const Items items = parse_items("v:", kRules);
  ASSERT_EQ(items.errors.size(), 1u);
  EXPECT_EQ(items.errors[0].message, "a phrase is missing");
  EXPECT_EQ(items.errors[0].offset, 2u);
}

TEST(Items, LinesEndAPhraseWhereANewOneBegins) {
  const Items items = parse_items("v: in ned\nC: passive ned to body\n  , scalar last\n", kRules);
  EXPECT_TRUE(items.errors.empty());
  ASSERT_EQ(items.items.size(), 2u);
  EXPECT_EQ(print(std::get<Quantity>(items.items[1].says)), "passive ned to body, scalar last");
}

TEST(Items, AQualifierOnTheNextLineBelongsToThePhrase) {
  const Items items = parse_items("passive ned to\n body,\n scalar last", kRules);
  EXPECT_TRUE(items.errors.empty());
  EXPECT_EQ(items.items.size(), 1u);
}

TEST(Items, AnAcceptanceKeepsItsReasonWhole) {
  const Items items = parse_items("accept missing-inverse because the rig, by design: turned", kRules);
  ASSERT_EQ(items.items.size(), 1u);
  const Acceptance& acceptance = std::get<Acceptance>(items.items[0].says);
  EXPECT_EQ(acceptance.rule, "missing-inverse");
  EXPECT_EQ(acceptance.reason, "the rig, by design: turned");
  EXPECT_EQ(print(acceptance), "accept missing-inverse because the rig, by design: turned");
}

TEST(Items, AnAcceptanceNeedsAKnownRuleAndAReason) {
  auto error = [](const char* text) { return parse_items(text, kRules).errors.at(0); };
  EXPECT_EQ(error("accept missing-invers because x").nearest, "missing-inverse");
  EXPECT_EQ(error("accept").message, "the phrase ends too early: the id of a rule was expected");
  EXPECT_EQ(error("accept wrong-order becuase x").nearest, "because");
  EXPECT_EQ(error("accept wrong-order because").message, "the phrase ends too early: a reason was expected");
}

}  // namespace
}  // namespace dextral::phrase
