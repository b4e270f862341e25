// JSON with comments, read so that each key and value keeps its place.
#pragma once

#include <memory>
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
  std::vector<JsonNode> items;                            // of a list
  std::vector<JsonMember> members;  // of an object, in order
  std::uint32_t line = 0, column = 0;

  const JsonNode* find(const std::string& key) const;
};

struct JsonMember {
  JsonNode key;  // a text
  JsonNode value;
};

// A problem where the text is no JSON; then the node is null.
JsonNode read_json(const std::string& file, const std::string& text, std::vector<Problem>& problems);

// The whole file, or a problem: not there, a folder, binary, too large.
bool read_file(const std::string& file, std::string& text, std::vector<Problem>& problems);

}  // namespace dextral::project
