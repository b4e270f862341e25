// Name patterns: which names say what.
#include "project/names.h"

#include <gtest/gtest.h>

#include "phrase/phrase.h"
#include "project/project.h"

namespace dextral::project {
namespace {

ProjectFile file() {
  ProjectFile file;
  FrameFacts mast;
  mast.name = "mast";
  file.frames.declare(mast);
  file.letters = {{"n", "ned"}, {"b", "body"}, {"c", "camera"}, {"bc", "imu"}};
  file.patterns = {{"C_{to}{from}", "passive {from} to {to}"},
                   {"R_{a}_{a}", "active in {a}"},
                   {"omega_{b}_{a}", "rate of {b} against {a} in {b}"},
                   {"{any}_{f}", "in {f}"}};
  return file;
}

std::string says(const std::string& name) {
  auto quantity = named(file(), name);
  return quantity ? phrase::print(*quantity) : "nothing";
}

TEST(Names, LettersAndWholeFrames) {
  EXPECT_EQ(says("C_bn"), "passive ned to body");
  EXPECT_EQ(says("C_bodyned"), "passive ned to body");
  EXPECT_EQ(says("C_mastn"), "passive ned to mast");
  EXPECT_EQ(says("omega_b_ned"), "rate of body against ned in body");
}

TEST(Names, TheLongestWordIsTriedFirstAndTakenBack) {
  EXPECT_EQ(says("C_bcn"), "passive ned to imu");     // bc, n
  EXPECT_EQ(says("C_bc"), "passive camera to body");  // bc leaves nothing for {from}
  EXPECT_EQ(says("C_bbc"), "passive imu to body");
}

TEST(Names, DecorationIsTakenOff) {
  for (const char* name : {"C_bn_", "m_C_bn", "_C_bn", "m_C_bn_", "__C_bn__"})
    EXPECT_EQ(says(name), "passive ned to body") << name;
}

TEST(Names, TheWholeNameMustFit) {
  for (const char* name : {"C_bnx", "xC_bn", "C_q", "C_", "c_bn", "C_BN", "", "_", "m_"})
    EXPECT_EQ(says(name), "nothing") << name;
}

TEST(Names, AnyPart) {
  EXPECT_EQ(says("velocity_n"), "in ned");
  EXPECT_EQ(says("gravity_model_b"), "in body");
  EXPECT_EQ(says("_n"), "nothing");  // {any} is at least one character
}

TEST(Names, OnePlaceholderIsOneFrame) {
  EXPECT_EQ(says("R_b_b"), "active in body");
  EXPECT_EQ(says("R_b_body"), "active in body");
  EXPECT_EQ(says("R_b_n"), "in ned");  // not this pattern, but the last
}

TEST(Names, TheFirstPatternCounts) {
  ProjectFile both = file();
  both.patterns.insert(both.patterns.begin(), {"C_{x}{y}", "active {x} to {y}"});
  EXPECT_EQ(phrase::print(*named(both, "C_bn")), "active body to ned");
}

TEST(Names, PartsOfPatterns) {
  auto parts = pattern_parts("a{b}{c}d");
  ASSERT_TRUE(parts);
  ASSERT_EQ(parts->size(), 4u);
  EXPECT_EQ((*parts)[2].text, "c");
  EXPECT_EQ((*parts)[2].offset, 4u);
  for (const char* text : {"{", "}", "a{}", "{a b}", "a}b", "{a{b}}"}) EXPECT_FALSE(pattern_parts(text)) << text;
}

TEST(Names, LongNamesEndQuickly) {
  ProjectFile slow = file();
  slow.patterns = {{"{any}_{any}_{f}{g}", "passive {f} to {g}"}};
  std::string name;
  for (int i = 0; i < 60; ++i) name += "b_";
  EXPECT_FALSE(named(slow, name + "q"));
}

}  // namespace
}  // namespace dextral::project
