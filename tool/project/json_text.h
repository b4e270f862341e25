// JSON with comments, read so that each key and value keeps its place.
//
// A hand-written reader, because a message about a project file needs the line
// and column of the key or of the word inside a text that is wrong. It reads
// RFC 8259 JSON with // and /* */ comments. Limits: numbers are doubles; a text
// that is not JSON gives one problem and no node.
#pragma once

#include <cstdint>
#include <string>
#include <utility>
#include <vector>

#include "project/model.h"

namespace dextral::project {

struct JsonMember;

struct JsonNode {
  enum class Kind { null, boolean, number, text, list, object } kind = Kind::null;
  bool truth = false;
  double number = 0;
  std::string text;
  std::vector<JsonNode> items;      // of a list
  std::vector<JsonMember> members;  // of an object, in order
  std::uint32_t line = 0, column = 0;
  // Of a text with escapes: behind this many bytes, so many more columns.
  std::vector<std::pair<std::uint32_t, std::uint32_t>> escapes;

  const JsonNode* find(const std::string& key) const;
  // The column of the byte `offset` of a text.
  std::uint32_t column_of(std::size_t offset) const;
};

struct JsonMember {
  JsonNode key;  // a text
  JsonNode value;
};

// A problem where the text is no JSON; then the node is null.
JsonNode read_json(const std::string& file, const std::string& text, std::vector<Problem>& problems);

inline constexpr std::uintmax_t kMostBytes = 16u << 20;
inline constexpr std::uintmax_t kMostBytesGenerated = 512u << 20;  // of files that a build system writes

// The whole file, or a problem: not there, a folder, unreadable, empty, binary, too large.
bool read_file(const std::string& file, std::string& text, std::vector<Problem>& problems,
               std::uintmax_t most_bytes = kMostBytes);

// "did you mean ...?" where a known word is near, else the list of them.
std::string word_remedy(const std::string& word, const std::vector<std::string>& known);

// The checks that every file of ours needs, with place and remedy.
class JsonChecker {
 public:
  JsonChecker(std::string file, std::string page, std::vector<Problem>& problems)
      : file_(std::move(file)), page_(std::move(page)), problems_(problems) {}

  void problem(const JsonNode& at, const std::string& message, const std::string& remedy);
  void problem_inside(const JsonNode& text, std::size_t offset, const std::string& message, const std::string& remedy);
  bool is(const JsonNode&, JsonNode::Kind, const std::string& what);
  // Each key that is not known is a problem.
  void keys(const JsonNode&, const std::vector<std::string>& known);
  // The value of the key where it is there and of the kind; else nothing.
  const JsonNode* get(const JsonNode&, const char* key, JsonNode::Kind, const std::string& what);
  std::string text(const JsonNode&, const char* key, const std::string& what = "a text");

 private:
  std::string file_, page_;
  std::vector<Problem>& problems_;
};

}  // namespace dextral::project
