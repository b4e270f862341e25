// Every phrase of docs/phrases.md, as the page shows it: it parses, what it
// prints parses to the same quantity, and its frames are those of the page.
#include <gtest/gtest.h>

#include <fstream>
#include <regex>

#include "phrase/phrase.h"

namespace dextral::phrase {
namespace {

struct Row {
  std::vector<std::string> examples;  // of the first cell
  std::string meaning;
};

std::vector<std::string> backticked(const std::string& cell) {
  std::vector<std::string> list;
  const std::regex code("`([^`]*)`");
  for (std::sregex_iterator it(cell.begin(), cell.end(), code), end; it != end; ++it) list.push_back((*it)[1]);
  return list;
}

// The rows of the table under a heading.
std::vector<Row> table(const std::string& heading) {
  std::ifstream page(DEXTRAL_SOURCE "/docs/phrases.md");
  std::vector<Row> rows;
  bool inside = false;
  for (std::string line; std::getline(page, line);) {
    if (line.rfind("## ", 0) == 0) inside = line == "## " + heading;
    if (!inside || line.rfind("| `", 0) != 0) continue;
    const std::size_t second = line.find(" | ");
    rows.push_back({backticked(line.substr(0, second)), line.substr(second + 3)});
  }
  return rows;
}

// `geodetic latitude` (`longitude`, `height`): a lone word stands for the last word of the first example.
std::vector<std::string> whole(const Row& row) {
  std::vector<std::string> list;
  for (const std::string& example : row.examples) {
    const bool alternative = !list.empty() && (example == "longitude" || example == "height");
    list.push_back(alternative ? list[0].substr(0, list[0].rfind(' ') + 1) + example : example);
  }
  return list;
}

Quantity of(const std::string& text) {
  auto parsed = parse(text);
  auto* error = std::get_if<Error>(&parsed);
  EXPECT_EQ(error, nullptr) << text << ": " << (error ? error->message : "");
  return error ? Quantity{} : std::get<Quantity>(parsed);
}

void goes_round(const std::string& text) {
  const Quantity quantity = of(text);
  EXPECT_TRUE(of(print(quantity)) == quantity) << text << " printed as " << print(quantity);
}

TEST(Page, EveryPhraseGoesRound) {
  const std::vector<Row> rows = table("All phrases");
  ASSERT_GE(rows.size(), 24u);
  int phrases = 0;
  for (const Row& row : rows)
    for (const std::string& example : whole(row)) {
      if (example.rfind("accept ", 0) == 0) continue;
      goes_round(example);
      EXPECT_EQ(print(of(example)), example);
      ++phrases;
    }
  EXPECT_GE(phrases, 26);
}

// "M[A,B]" and "[F]" in the meaning are rows, and columns where there are two.
TEST(Page, TheFramesAreThoseOfTheMeaning) {
  const std::regex two("`M\\[(\\w+),(\\w+)\\]`"), one("`v?\\[(\\w+)\\]`");
  int told = 0;
  for (const Row& row : table("All phrases")) {
    const std::string& example = row.examples.at(0);
    if (example.rfind("accept ", 0) == 0) continue;
    const Frames f = frames(of(example));
    std::smatch match;
    if (std::regex_search(row.meaning, match, two) && f.columns.known()) {
      EXPECT_EQ(text(f.rows), match[1]) << example;
      EXPECT_EQ(text(f.columns), match[2]) << example;
      ++told;
    } else if (std::regex_search(row.meaning, match, one)) {
      EXPECT_EQ(text(f.rows), match[1]) << example;
      EXPECT_FALSE(f.columns.known()) << example;
      ++told;
    }
  }
  EXPECT_GE(told, 11);
}

TEST(Page, EveryQualifierGoesRound) {
  const std::vector<Row> rows = table("Qualifiers");
  ASSERT_GE(rows.size(), 11u);
  for (const Row& row : rows)
    for (const std::string& qualifier : row.examples) {
      if (qualifier.rfind("//|", 0) == 0) continue;
      goes_round("passive ned to body, " + qualifier);
      EXPECT_EQ(print(of("passive ned to body, " + qualifier)), "passive ned to body, " + qualifier);
    }
}

// Each against the fact it states, so that none stands for another.
TEST(Page, EachQualifierSetsItsOwnField) {
  const Quantity plain = of("passive ned to body");
  std::vector<std::string> seen;
  for (const Row& row : table("Qualifiers"))
    for (const std::string& qualifier : row.examples) {
      if (qualifier.rfind("//|", 0) == 0) continue;
      const Quantity said = of("passive ned to body, " + qualifier);
      EXPECT_FALSE(said == plain) << qualifier;
      for (const std::string& other : seen)
        EXPECT_FALSE(said == of("passive ned to body, " + other)) << qualifier << ", " << other;
      seen.push_back(qualifier);
    }
}

TEST(Page, SynonymsAreReadAsTheirTerm) {
  auto alike = [](const std::string& a, const std::string& b) { EXPECT_TRUE(of(a) == of(b)) << a << ", " << b; };
  const std::string angles = "angles 3-2-1 ned to body, ";
  alike(angles + "intrinsic", angles + "moving");
  alike(angles + "body-fixed", angles + "moving");
  alike(angles + "extrinsic", angles + "fixed");
  alike(angles + "space-fixed", angles + "fixed");
  alike("rate of body relative to ned in body", "rate of body against ned in body");
  alike("velocity of hull relative to ecef in ned", "velocity of hull against ecef in ned");
  alike("passive ned to body, jpl", "passive ned to body, shuster");
  alike("pose of mast in body", "passive mast to body");
  alike("angles zyx ned to body, moving", "angles 3-2-1 ned to body, moving");
  alike("angles Z-Y-X ned to body, fixed", "angles 3-2-1 ned to body, fixed");
  alike("angles 321 ned to body", "angles 3-2-1 ned to body");
}

TEST(Page, TheTwelveSequencesAndNoOther) {
  int right = 0;
  for (int code = 0; code < 27; ++code) {
    const std::string sequence = {char('1' + code / 9), '-', char('1' + code / 3 % 3), '-', char('1' + code % 3)};
    right += std::holds_alternative<Quantity>(parse("angles " + sequence + " ned to body"));
  }
  EXPECT_EQ(right, 12);
  goes_round("angles 3 ned to body");
  goes_round("angles 3-1 ned to body");
  EXPECT_TRUE(std::holds_alternative<Error>(parse("angles 3-3 ned to body")));
}

TEST(Page, EveryDirectionIsAnAxis) {
  for (int i = 0; i < 18; ++i) {
    goes_round("along " + text(Direction(i)));
    goes_round("angle from " + text(Direction(i)) + " toward up");
  }
}

// A phrase and what it prints are one, for every kind with every qualifier.
TEST(Page, KindsAndQualifiersGoTogether) {
  std::vector<std::string> phrases, qualifiers;
  for (const Row& row : table("All phrases"))
    for (const std::string& example : whole(row))
      if (example.rfind("accept ", 0) != 0) phrases.push_back(example);
  for (const Row& row : table("Qualifiers"))
    for (const std::string& qualifier : row.examples)
      if (qualifier.rfind("//|", 0) != 0) qualifiers.push_back(qualifier);
  for (const std::string& phrase : phrases)
    for (const std::string& qualifier : qualifiers) goes_round(phrase + ", " + qualifier);
}

TEST(Page, TagsOwnFramesAndVariablesGoRound) {
  for (const char* text : {"in body@k", "in own body", "in own body@prev", "in ?A", "passive own body to ?B",
                           "passive body@k to body@k1", "covariance of rate of body@k against ?A in own imu"})
    EXPECT_EQ(print(of(text)), text);
}

TEST(Mentioned, AreAllFramesOfAPhrase) {
  auto names = [](const std::string& phrase) {
    std::string list;
    for (const Frame& f : mentioned(of(phrase))) list += text(f) + " ";
    return list;
  };
  EXPECT_EQ(names("passive ned to body@k"), "ned body@k ");
  EXPECT_EQ(names("rate of body against ned in mast, seen from ecef"), "mast ned body ecef ");
  EXPECT_EQ(names("covariance of in body"), "body ");
  EXPECT_EQ(names("along up"), "");
}

}  // namespace
}  // namespace dextral::phrase
