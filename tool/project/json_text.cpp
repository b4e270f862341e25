#include "project/json_text.h"

#include <cmath>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <sstream>

namespace dextral::project {

namespace {

constexpr std::uintmax_t kMostBytes = 16u << 20;
constexpr int kMostDepth = 64;

class Reader {
 public:
  Reader(const std::string& file, const std::string& text, std::vector<Problem>& problems)
      : file_(file), text_(text), problems_(problems) {}

  JsonNode run() {
    JsonNode node = value(0);
    space();
    if (!failed_ && at_ < text_.size()) fail("something stands behind the end", "remove it");
    return failed_ ? JsonNode{} : node;
  }

 private:
  void fail(const std::string& message, const std::string& remedy) {
    if (!failed_) problems_.push_back({file_, line_, column(), message, remedy});
    failed_ = true;
  }
  std::uint32_t column() const { return std::uint32_t(at_ - line_start_ + 1); }
  char peek() const { return at_ < text_.size() ? text_[at_] : '\0'; }
  void next() {
    if (peek() == '\n') ++line_, line_start_ = at_ + 1;
    ++at_;
  }

  void space() {
    while (at_ < text_.size()) {
      if (std::isspace(static_cast<unsigned char>(peek()))) {
        next();
      } else if (text_.compare(at_, 2, "//") == 0) {
        while (at_ < text_.size() && peek() != '\n') next();
      } else if (text_.compare(at_, 2, "/*") == 0) {
        while (at_ < text_.size() && text_.compare(at_, 2, "*/") != 0) next();
        if (at_ >= text_.size()) return fail("a comment is not closed", "end it with */");
        next();
        next();
      } else {
        return;
      }
    }
  }

  JsonNode value(int depth) {
    space();
    JsonNode node;
    node.line = line_;
    node.column = column();
    if (depth > kMostDepth) return fail("it is nested too deeply", "flatten it"), node;
    char c = peek();
    if (c == '{') object(node, depth);
    else if (c == '[') list(node, depth);
    else if (c == '"') node.kind = JsonNode::Kind::text, node.text = string();
    else word(node);
    return node;
  }

  void object(JsonNode& node, int depth) {
    node.kind = JsonNode::Kind::object;
    next();
    for (space(); !failed_ && peek() != '}'; space()) {
      if (peek() != '"') return fail("a key in double quotes was expected", "quote the key");
      JsonNode key;
      key.kind = JsonNode::Kind::text;
      key.line = line_;
      key.column = column();
      key.text = string();
      if (node.find(key.text)) return fail("the key \"" + key.text + "\" stands here twice", "keep one of the two");
      space();
      if (peek() != ':') return fail("a colon was expected behind the key", "write \"" + key.text + "\": ...");
      next();
      JsonNode member = value(depth + 1);
      node.members.push_back({std::move(key), std::move(member)});
      if (!separator('}')) return;
    }
    if (!failed_) next();
  }

  void list(JsonNode& node, int depth) {
    node.kind = JsonNode::Kind::list;
    next();
    for (space(); !failed_ && peek() != ']'; space()) {
      node.items.push_back(value(depth + 1));
      if (!separator(']')) return;
    }
    if (!failed_) next();
  }

  bool separator(char end) {
    space();
    if (failed_) return false;
    if (peek() == ',') return next(), true;
    if (peek() == end) return true;
    fail(std::string("a comma or ") + end + " was expected", "put a comma between the entries");
    return false;
  }

  std::string string() {
    std::string out;
    next();
    while (at_ < text_.size() && peek() != '"') {
      if (peek() == '\n') return fail("a text is not closed on its line", "end it with a double quote"), out;
      if (peek() == '\\') {
        next();
        escape(out);
      } else {
        out += peek();
        next();
      }
    }
    if (at_ >= text_.size()) return fail("a text is not closed", "end it with a double quote"), out;
    next();
    return out;
  }

  void escape(std::string& out) {
    static const std::pair<char, char> plain[] = {{'n', '\n'}, {'t', '\t'}, {'r', '\r'}, {'b', '\b'}, {'f', '\f'}, {'"', '"'}, {'\\', '\\'}, {'/', '/'}};
    for (auto [from, to] : plain)
      if (peek() == from) {
        out += to;
        return next();
      }
    if (peek() != 'u' || at_ + 4 >= text_.size()) return fail("this escape is unknown", "use \\n, \\t, \\\" or \\u with four digits");
    unsigned code = unsigned(std::strtoul(text_.substr(at_ + 1, 4).c_str(), nullptr, 16));
    for (int i = 0; i < 5; ++i) next();
    if (code < 0x80) out += char(code);
    else if (code < 0x800) out += char(0xc0 | (code >> 6)), out += char(0x80 | (code & 0x3f));
    else out += char(0xe0 | (code >> 12)), out += char(0x80 | ((code >> 6) & 0x3f)), out += char(0x80 | (code & 0x3f));
  }

  void word(JsonNode& node) {
    std::string word;
    while (at_ < text_.size() && (std::isalnum(static_cast<unsigned char>(peek())) || peek() == '-' || peek() == '+' || peek() == '.')) word += peek(), next();
    if (word == "true" || word == "false") node.kind = JsonNode::Kind::boolean, node.truth = word == "true";
    else if (word == "null") node.kind = JsonNode::Kind::null;
    else {
      char* end = nullptr;
      node.number = std::strtod(word.c_str(), &end);
      node.kind = JsonNode::Kind::number;
      if (word.empty() || *end != '\0' || !std::isfinite(node.number)) fail("a value was expected", "write a text in quotes, a number, a list or an object");
    }
  }

  const std::string& file_;
  const std::string& text_;
  std::vector<Problem>& problems_;
  std::size_t at_ = 0, line_start_ = 0;
  std::uint32_t line_ = 1;
  bool failed_ = false;
};

}  // namespace

const JsonNode* JsonNode::find(const std::string& key) const {
  for (const JsonMember& member : members)
    if (member.key.text == key) return &member.value;
  return nullptr;
}

JsonNode read_json(const std::string& file, const std::string& text, std::vector<Problem>& problems) { return Reader(file, text, problems).run(); }

bool read_file(const std::string& file, std::string& text, std::vector<Problem>& problems) {
  std::error_code error;
  auto fail = [&](const std::string& message, const std::string& remedy) {
    problems.push_back({file, 0, 0, message, remedy});
    return false;
  };
  if (!std::filesystem::is_regular_file(file, error)) return fail("there is no such file", "check the path");
  if (std::filesystem::file_size(file, error) > kMostBytes) return fail("the file is larger than 16 MiB", "check that it is the right file");
  std::ifstream in(file, std::ios::binary);
  if (!in) return fail("the file cannot be opened", "check its permissions");
  std::stringstream buffer;
  buffer << in.rdbuf();
  text = buffer.str();
  if (text.find('\0') != std::string::npos) return fail("the file is binary", "check that it is the right file");
  return true;
}

}  // namespace dextral::project
