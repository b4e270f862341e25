// The frames of a project file, beyond what is wrong with them.
#include "project/frames.h"

#include "project/project_file.h"
#include "support.h"

namespace dextral::project {
namespace {

struct Read {
  ProjectFile file;
  std::vector<Problem> problems;
  std::vector<std::string> notes;
};

Read read_text(const std::string& text) {
  Folder folder;
  Read read;
  read.file = read_project_file(folder.put("dextral.json", text), read.problems, read.notes);
  for (std::string& note : read.notes)
    if (std::size_t at = note.find(folder.path()); at != std::string::npos)
      note.replace(at, folder.path().size(), "FOLDER");
  return read;
}

std::optional<SignedPermutation> map(const ProjectFile& file, const std::string& to, const std::string& from) {
  return file.frames.map({to, "", false, false, ""}, {from, "", false, false, ""});
}

TEST(Frames, OrderInTheFileDoesNotMatter) {
  Read read = read_text(
      R"({"frames": {"a": {"alias of": "b"}, "c": {"parallel to": "b"}, "b": {"axes": ["east", "north", "up"]}}})");
  EXPECT_EQ(lines(read.problems), Lines{});
  EXPECT_EQ(read.file.frames.canonical({"a", "", false, false, ""}).name, "b");
  EXPECT_EQ(map(read.file, "c", "enu"), SignedPermutation{});
  EXPECT_EQ(read.file.declared_frames, (Lines{"a", "c", "b"}));
}

TEST(Frames, ABuiltInFrameKeepsWhatIsNotSaidAnew) {
  Read read = read_text(
      R"({"frames": {"ned": {"about": "ours"}, "body": {"axes": ["forward", "right", "down"]}, "camera": {"axes": []}}})");
  EXPECT_EQ(lines(read.problems), Lines{});
  EXPECT_EQ(read.file.frames.find("ned")->about, "ours");
  EXPECT_TRUE(read.file.frames.find("ned")->axes.has_value());
  EXPECT_EQ(map(read.file, "body", "frd"), SignedPermutation{});
  EXPECT_FALSE(read.file.frames.find("camera")->axes.has_value());
}

TEST(Frames, ABuiltInFrameMadeParallelTakesTheOthersAxes) {
  Read read = read_text(R"({"frames": {"camera": {"parallel to": "frd"}}})");
  EXPECT_EQ(lines(read.problems), Lines{});
  EXPECT_EQ(map(read.file, "camera", "frd"), SignedPermutation{});
}

TEST(Frames, ParallelFramesAgree) {
  EXPECT_EQ(
      lines(read_text(R"({"frames": {"a": {"axes": ["east", "north", "up"], "parallel to": "ned"}}})").problems),
      Lines{"1:67: \"a\" has other axes than \"ned\", to which it is parallel; take \"axes\" or \"parallel to\" out"});
  EXPECT_EQ(lines(read_text(R"({"frames": {"a": {"hand": "left", "parallel to": "ned"}}})").problems),
            Lines{"1:50: \"a\" has another hand than \"ned\", to which it is parallel; say the hand of \"ned\" alone"});
  EXPECT_EQ(
      lines(read_text(R"({"frames": {"a": {"axes": ["north", "east", "down"], "parallel to": "ned"}}})").problems),
      Lines{});
}

TEST(Frames, NamesThatAPhraseCanSay) {
  for (const char* name : {"body", "b", "_x", "left_wheel", "Wheel3"}) EXPECT_TRUE(is_frame_name(name)) << name;
  for (const char* name : {"", "to", "in", "own", "?A", "body@k", "a b", "3d", "a,deg", "frame"})
    EXPECT_FALSE(is_frame_name(name)) << name;
}

TEST(Frames, AnUnknownFrameIsHintedAtWhereAKnownOneIsNear) {
  Read read = read_text(
      "{\"frames\": {\"gimbal\": {}},\n \"contracts\": {\"f\": \"in gimbals\", \"g\": \"in turret\", \"h\": {\"x\": "
      "\"active nedd to body\"}}}");
  EXPECT_EQ(lines(read.problems), Lines{});
  EXPECT_EQ(read.notes, (Lines{"FOLDER/dextral.json:2:25: no frame \"gimbals\" is declared; did you mean \"gimbal\"?",
                               "FOLDER/dextral.json:2:72: no frame \"nedd\" is declared; did you mean \"ned\"?"}));
  EXPECT_EQ(read.file.contracts.size(), 3u);
}

TEST(Frames, OnlyDeclaredFramesMakesItAProblem) {
  Read read =
      read_text(R"({"only declared frames": true, "contracts": {"g": "in turret", "h": "in body", "k": "in ?A"}})");
  EXPECT_EQ(lines(read.problems), Lines{"1:55: no frame \"turret\" is declared; declare it under \"frames\""});
  EXPECT_TRUE(read.file.only_declared_frames);
  EXPECT_EQ(read.file.contracts.size(), 2u);
}

TEST(Frames, ContractsKeepTheirPlaces) {
  Read read =
      read_text("{\"contracts\": {\n\"nav::f\": {\"v\": \"in ned\", \"return\": \"in body\"},\n\"nav::g\": \"none\"}}");
  ASSERT_EQ(read.file.contracts.size(), 2u);
  EXPECT_EQ(read.file.contracts[0].line, 2u);
  EXPECT_EQ(read.file.contracts[0].phrases[1], (std::pair<std::string, std::string>{"return", "in body"}));
  EXPECT_EQ(read.file.contracts[1].phrases[0].first, "");
}

}  // namespace
}  // namespace dextral::project
