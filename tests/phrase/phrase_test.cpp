// Phrases: what parses, how it prints, and what is said of what does not.
#include <gtest/gtest.h>

#include "phrase/phrase.h"

namespace dextral::phrase {
namespace {

const std::vector<std::string> kRules = {"missing-inverse", "wrong-order"};

Quantity of(const std::string& text) {
  auto parsed = parse(text);
  auto* error = std::get_if<Error>(&parsed);
  EXPECT_EQ(error, nullptr) << text << ": " << (error ? error->message : "");
  return error ? Quantity{} : std::get<Quantity>(parsed);
}

Error wrong(const std::string& text) {
  auto parsed = parse(text);
  EXPECT_TRUE(std::holds_alternative<Error>(parsed)) << text;
  return std::holds_alternative<Error>(parsed) ? std::get<Error>(parsed) : Error{};
}

TEST(Phrase, PrintsWhatItReads) {
  for (const char* text :
       {"in ned", "from hull to mast in body", "passive ned to body", "active ned to body", "active in body",
        "turn body@est to body, small", "turn ned to body, as mrp", "angles 3-2-1 ned to body, deg, fixed",
        "angle rates 3-1-3 ned to body", "rate of body against ned in body", "velocity of mast against ned in body",
        "acceleration of mast against eci in body, seen from eci", "specific force in body", "torque about hull in body",
        "along up", "angle from north toward east, deg", "geodetic latitude, rad", "tensor in body about hull", "tensor in body",
        "covariance of from hull to mast in body", "linear body to ned", "skew in body", "in frame named by kind", "none", "deg",
        "passive own body to ?A, scalar last, shuster, maps by q*vq", "in ned, row vectors, column-major, left-handed",
        "angles 3-2-1 ned to body, stored roll pitch yaw", "angles 3-2 ned to body", "in body, as quaternion, increment"})
    EXPECT_EQ(print(of(text)), text);
}

TEST(Phrase, ReadsSynonymsAndPrintsTheTerm) {
  EXPECT_EQ(print(of("angles zyx ned to body, intrinsic")), "angles 3-2-1 ned to body, moving");
  EXPECT_EQ(print(of("rate of body relative to ned in body")), "rate of body against ned in body");
  EXPECT_EQ(print(of("pose of mast in body")), "passive mast to body");
  EXPECT_EQ(print(of("passive ned to body, jpl")), "passive ned to body, shuster");
}

// Passive A to B takes components in A and gives components in B; active A to B
// is its transpose (the definitions of docs/phrases.md).
TEST(Phrase, GivesTheFramesOfRowsAndColumns) {
  auto pair = [](const std::string& text) {
    Frames f = frames(of(text));
    return dextral::text(f.rows) + "<-" + dextral::text(f.columns);
  };
  EXPECT_EQ(pair("passive ned to body"), "body<-ned");
  EXPECT_EQ(pair("active ned to body"), "ned<-body");
  EXPECT_EQ(pair("active in ned"), "ned<-ned");
  EXPECT_EQ(pair("linear body to ned"), "ned<-body");
  EXPECT_EQ(pair("tensor in body"), "body<-body");
  EXPECT_EQ(pair("covariance of in ned"), "ned<-ned");
  EXPECT_EQ(pair("in ned"), "ned<-");
  EXPECT_EQ(pair("turn ned to body"), "<-");
}

TEST(Phrase, SaysTheWrongWordAndTheNearestRightOne) {
  Error e = wrong("pasive ned to body");
  EXPECT_EQ(e.wrong, "pasive");
  EXPECT_EQ(e.nearest, "passive");
  EXPECT_EQ(e.offset, 0u);
  e = wrong("passive ned body");
  EXPECT_EQ(e.wrong, "body");
  EXPECT_EQ(e.offset, 12u);
  EXPECT_EQ(wrong("angles 3-2-1 ned to body, movin").nearest, "moving");
  EXPECT_EQ(wrong("along upp").nearest, "up");
  EXPECT_EQ(wrong("angles zyx ned to body").wrong, "zyx");
  EXPECT_EQ(wrong("angles 3-2-2 ned to body").wrong, "3-2-2");
}

TEST(Phrase, IsNeverHalfAFact) {
  for (const char* cut : {"", "in", "passive ned", "passive ned to", "from a to b", "rate of body against", "angles 3-2-1 ned to body,", "covariance of"})
    EXPECT_FALSE(wrong(cut).message.empty()) << cut;
}

TEST(Items, AreSplitAndNamed) {
  Items items = parse_items(" v: in ned; roll, pitch, yaw: angles 3-2-1 ned to body;\n return: in body", kRules);
  ASSERT_TRUE(items.errors.empty());
  ASSERT_EQ(items.items.size(), 3u);
  EXPECT_EQ(items.items[1].names, (std::vector<std::string>{"roll", "pitch", "yaw"}));
  EXPECT_EQ(items.items[2].names, std::vector<std::string>{"return"});
}

TEST(Items, GoOnOverLines) {
  Items items = parse_items(" rate of body against ned\n in body\n , rad", kRules);
  EXPECT_TRUE(items.errors.empty());
  EXPECT_EQ(items.items.size(), 1u);
}

TEST(Items, AcceptNamesARuleAndAReason) {
  Items items = parse_items("accept wrong-order because the bench is mirrored", kRules);
  ASSERT_EQ(items.items.size(), 1u);
  EXPECT_EQ(std::get<Acceptance>(items.items[0].says).reason, "the bench is mirrored");
  EXPECT_EQ(parse_items("accept wrong-ordr because x", kRules).errors.at(0).nearest, "wrong-order");
  EXPECT_EQ(parse_items("accept wrong-order", kRules).errors.size(), 1u);
}

}  // namespace
}  // namespace dextral::phrase
