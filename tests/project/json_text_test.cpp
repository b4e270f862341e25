// JSON with comments: values, places, and what is said of broken texts.
#include "project/json_text.h"

#include "support.h"

namespace dextral::project {
namespace {

JsonNode good(const std::string& text) {
  std::vector<Problem> problems;
  JsonNode node = read_json("f.json", text, problems);
  EXPECT_TRUE(problems.empty()) << text << " -> " << lines(problems).front();
  return node;
}

Lines wrong(const std::string& text) {
  std::vector<Problem> problems;
  JsonNode node = read_json("f.json", text, problems);
  EXPECT_EQ(node.kind, JsonNode::Kind::null);
  return lines(problems);
}

TEST(JsonText, ReadsAllKindsOfValues) {
  JsonNode node = good(R"({"a": [true, false, null, -1.5e2, "x"], "b": {}})");
  const JsonNode& list = *node.find("a");
  ASSERT_EQ(list.items.size(), 5u);
  EXPECT_TRUE(list.items[0].truth);
  EXPECT_EQ(list.items[2].kind, JsonNode::Kind::null);
  EXPECT_EQ(list.items[3].number, -150);
  EXPECT_EQ(list.items[4].text, "x");
  EXPECT_EQ(node.find("b")->kind, JsonNode::Kind::object);
  EXPECT_EQ(node.find("c"), nullptr);
}

TEST(JsonText, SkipsCommentsAndKeepsPlaces) {
  JsonNode node = good("// one\n/* two\n three */ {\n  \"key\": /* in between */ \"// no comment\" // end\n}");
  EXPECT_EQ(node.line, 3u);
  EXPECT_EQ(node.members[0].key.line, 4u);
  EXPECT_EQ(node.members[0].key.column, 3u);
  EXPECT_EQ(node.members[0].value.column, 27u);
  EXPECT_EQ(node.members[0].value.text, "// no comment");
}

TEST(JsonText, ReadsEscapes) {
  EXPECT_EQ(good(R"("\n\t\"\\\/\u0041\u00e9\u20ac\ud83d\ude80")").text,
            "\n\t\"\\/A\xc3\xa9\xe2\x82\xac\xf0\x9f\x9a\x80");
}

TEST(JsonText, FindsPlacesBehindEscapes) {
  JsonNode node = good(R"(  "a\u0041b\nc")");
  EXPECT_EQ(node.text, "aAb\nc");
  EXPECT_EQ(node.column_of(0), 4u);   // a
  EXPECT_EQ(node.column_of(2), 11u);  // b
  EXPECT_EQ(node.column_of(4), 14u);  // c
}

TEST(JsonText, ReadsAByteOrderMark) { EXPECT_EQ(good("\xef\xbb\xbf{}").kind, JsonNode::Kind::object); }

TEST(JsonText, TellsWhereATextBreaks) {
  EXPECT_EQ(wrong("{\n  \"a\" 1}"), Lines{"2:7: a colon was expected behind the key; write \"a\": ..."});
  EXPECT_EQ(wrong("{a: 1}"), Lines{"1:2: a key in double quotes was expected; quote the key"});
  EXPECT_EQ(wrong("[1 2]"), Lines{"1:4: a comma or ] was expected; put a comma between the entries"});
  EXPECT_EQ(wrong("[1,]"), Lines{"1:4: a comma stands before the closing bracket; take the last comma out"});
  EXPECT_EQ(wrong("{} x"), Lines{"1:4: something stands behind the end; remove it"});
  EXPECT_EQ(wrong("/* x"), Lines{"1:1: a comment is not closed; end it with */"});
  EXPECT_EQ(wrong("\"ab\ncd\""), Lines{"1:4: a text is not closed on its line; end it with a double quote"});
  EXPECT_EQ(wrong("\"ab"), Lines{"1:4: a text is not closed; end it with a double quote"});
  EXPECT_EQ(wrong("[\"a\\q\"]"),
            Lines{"1:4: this escape is unknown; use \\n, \\t, \\\", \\\\ or \\u with four hexadecimal digits"});
  EXPECT_EQ(wrong("  // only a comment"), Lines{"1:20: the file has no content; write {} for an empty object"});
}

TEST(JsonText, RefusesWhatIsNoNumberOrWord) {
  for (const char* text : {"01", "1.", ".5", "+1", "1e", "--1", "nan", "True", "0x10"})
    EXPECT_EQ(wrong(text), Lines{std::string("1:1: \"") + text +
                                 "\" is no value; write a text in double quotes, a number, a list or an object"});
  EXPECT_EQ(wrong("1e999"), Lines{"1:1: this number is too large; write a smaller one"});
  EXPECT_EQ(wrong("\"\\ud800\"").size(), 1u);
  EXPECT_EQ(wrong("\"\\u00g0\"").size(), 1u);
}

TEST(JsonText, EndsWithDeepNesting) {
  EXPECT_EQ(wrong(std::string(100000, '[')), Lines{"1:66: it is nested too deeply; flatten it"});
}

TEST(JsonText, FilesThatCannotBeRead) {
  Folder folder;
  std::vector<Problem> problems;
  std::string text;
  EXPECT_FALSE(read_file(folder / "none.json", text, problems));
  EXPECT_FALSE(read_file(folder.path(), text, problems));
  EXPECT_FALSE(read_file("/dev/null", text, problems));
  EXPECT_FALSE(read_file(folder.put("empty.json", ""), text, problems));
  EXPECT_FALSE(read_file(folder.put("binary.json", std::string("{\0}", 3)), text, problems));
  EXPECT_FALSE(read_file(folder.put("large.json", "123456"), text, problems, 5));
  EXPECT_EQ(lines(problems),
            (Lines{"0:0: there is no such file; check the path", "0:0: this is a folder, not a file; name a file in it",
                   "0:0: this is no ordinary file; name a file",
                   "0:0: the file is empty; write {} for an empty object, or take the file away",
                   "0:0: the file is binary or not in UTF-8; check that it is the right file",
                   "0:0: the file is larger than 0 MiB; check that it is the right file"}));
}

TEST(JsonText, LimitIs16MiB) {
  Folder folder;
  std::vector<Problem> problems;
  std::string text, path = folder.put("f.json", "{}");
  std::filesystem::resize_file(path, (16u << 20) + 1);
  EXPECT_FALSE(read_file(path, text, problems));
  EXPECT_EQ(problems[0].message, "the file is larger than 16 MiB");
}

TEST(JsonText, UnreadableFile) {
  Folder folder;
  std::vector<Problem> problems;
  std::string text, path = folder.put("f.json", "{}");
  std::filesystem::permissions(path, std::filesystem::perms::none);
  bool read = read_file(path, text, problems);
  // The superuser reads everything.
  if (geteuid() == 0)
    EXPECT_TRUE(read);
  else
    EXPECT_EQ(lines(problems), Lines{"0:0: the file cannot be opened; check its permissions"});
}

}  // namespace
}  // namespace dextral::project
