#include "project/json_text.h"

#include <algorithm>
#include <cctype>
#include <charconv>
#include <cmath>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <optional>
#include <set>
#include <system_error>

#include "core/frame.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

constexpr int kMostDepth = 64;

bool is_digit(char c) { return c >= '0' && c <= '9'; }

// The grammar of RFC 8259, section 6.
bool is_number(const std::string& word) {
  std::size_t at = 0;
  auto digits = [&] {
    std::size_t start = at;
    while (at < word.size() && is_digit(word[at])) ++at;
    return at > start;
  };
  if (at < word.size() && word[at] == '-') ++at;
  std::size_t whole = at;
  if (!digits() || (word[whole] == '0' && at > whole + 1)) return false;
  if (at < word.size() && word[at] == '.' && (++at, !digits())) return false;
  if (at < word.size() && (word[at] == 'e' || word[at] == 'E')) {
    ++at;
    if (at < word.size() && (word[at] == '+' || word[at] == '-')) ++at;
    if (!digits()) return false;
  }
  return at == word.size();
}

void add_utf8(std::string& out, std::uint32_t code) {
  auto tail = [&](int shift) { out += char(0x80 | ((code >> shift) & 0x3f)); };
  if (code < 0x80) {
    out += char(code);
  } else if (code < 0x800) {
    out += char(0xc0 | (code >> 6));
    tail(0);
  } else if (code < 0x10000) {
    out += char(0xe0 | (code >> 12));
    tail(6);
    tail(0);
  } else {
    out += char(0xf0 | (code >> 18));
    tail(12);
    tail(6);
    tail(0);
  }
}

class Reader {
 public:
  Reader(const std::string& file, const std::string& text, std::vector<Problem>& problems)
      : file_(file), text_(text), problems_(problems) {}

  JsonNode run() {
    if (text_.compare(0, 3, "\xef\xbb\xbf") == 0) at_ = line_start_ = 3;
    space();
    if (!failed_ && at_ >= text_.size()) fail("the file has no content", "write {} for an empty object");
    JsonNode node = value(0);
    space();
    if (!failed_ && at_ < text_.size()) fail("something stands behind the end", "remove it");
    return failed_ ? JsonNode{} : std::move(node);
  }

 private:
  void fail(const std::string& message, const std::string& remedy) {
    if (!failed_) problems_.push_back({file_, line_, column(), message, remedy});
    failed_ = true;
  }
  std::uint32_t column() const { return std::uint32_t(at_ - line_start_ + 1); }
  char peek() const { return at_ < text_.size() ? text_[at_] : '\0'; }
  bool ahead(const char* word) const { return text_.compare(at_, std::char_traits<char>::length(word), word) == 0; }
  void next() {
    if (peek() == '\n') {
      ++line_;
      line_start_ = at_ + 1;
    }
    ++at_;
  }

  void space() {
    while (!failed_ && at_ < text_.size()) {
      if (std::isspace(static_cast<unsigned char>(peek()))) {
        next();
      } else if (ahead("//")) {
        while (at_ < text_.size() && peek() != '\n') next();
      } else if (ahead("/*")) {
        comment();
      } else {
        return;
      }
    }
  }

  void comment() {
    std::size_t end = text_.find("*/", at_ + 2);
    if (end == std::string::npos) return fail("a comment is not closed", "end it with */");
    while (at_ < end + 2) next();
  }

  JsonNode value(int depth) {
    space();
    JsonNode node;
    node.line = line_;
    node.column = column();
    if (failed_) return node;
    if (depth > kMostDepth) {
      fail("it is nested too deeply", "flatten it");
      return node;
    }
    char c = peek();
    if (c == '{') {
      object(node, depth);
    } else if (c == '[') {
      list(node, depth);
    } else if (c == '"') {
      string(node);
    } else {
      word(node);
    }
    return node;
  }

  void object(JsonNode& node, int depth) {
    node.kind = JsonNode::Kind::object;
    std::set<std::string> seen;
    next();
    space();
    while (!failed_ && peek() != '}') {
      JsonNode key = value_key();
      if (failed_) return;
      if (!seen.insert(key.text).second) {
        problems_.push_back(
            {file_, key.line, key.column, "the key \"" + key.text + "\" stands here twice", "keep one of the two"});
        failed_ = true;
        return;
      }
      JsonNode member = value(depth + 1);
      node.members.push_back({std::move(key), std::move(member)});
      separator('}');
    }
    if (!failed_) next();
  }

  JsonNode value_key() {
    JsonNode key;
    key.line = line_;
    key.column = column();
    if (peek() != '"') {
      fail("a key in double quotes was expected", "quote the key");
      return key;
    }
    string(key);
    space();
    if (peek() == ':')
      next();
    else
      fail("a colon was expected behind the key", "write \"" + key.text + "\": ...");
    return key;
  }

  void list(JsonNode& node, int depth) {
    node.kind = JsonNode::Kind::list;
    next();
    space();
    while (!failed_ && peek() != ']') {
      node.items.push_back(value(depth + 1));
      separator(']');
    }
    if (!failed_) next();
  }

  void separator(char end) {
    space();
    if (failed_ || peek() == end) return;
    if (peek() != ',')
      return fail(std::string("a comma or ") + end + " was expected", "put a comma between the entries");
    next();
    space();
    if (peek() == end) fail("a comma stands before the closing bracket", "take the last comma out");
  }

  void string(JsonNode& node) {
    node.kind = JsonNode::Kind::text;
    next();
    while (at_ < text_.size() && peek() != '"') {
      if (static_cast<unsigned char>(peek()) < 0x20)
        return fail(peek() == '\n' ? "a text is not closed on its line" : "a text holds a control character",
                    peek() == '\n' ? "end it with a double quote" : "write \\t for a tabulator");
      if (peek() == '\\') {
        escape(node);
        if (failed_) return;
      } else {
        node.text += peek();
        next();
      }
    }
    if (at_ >= text_.size()) return fail("a text is not closed", "end it with a double quote");
    next();
  }

  void escape(JsonNode& node) {
    std::size_t source = at_, size = node.text.size();
    next();
    static constexpr std::pair<char, char> kPlain[] = {{'n', '\n'}, {'t', '\t'}, {'r', '\r'},  {'b', '\b'},
                                                       {'f', '\f'}, {'"', '"'},  {'\\', '\\'}, {'/', '/'}};
    const auto* plain = std::find_if(std::begin(kPlain), std::end(kPlain), [&](auto p) { return p.first == peek(); });
    if (plain != std::end(kPlain)) {
      node.text += plain->second;
      next();
    } else if (!unicode(node.text)) {
      at_ = source;
      return fail("this escape is unknown", "use \\n, \\t, \\\", \\\\ or \\u with four hexadecimal digits");
    }
    std::size_t read = at_ - source, made = node.text.size() - size;
    std::uint32_t before = node.escapes.empty() ? 0 : node.escapes.back().second;
    node.escapes.emplace_back(std::uint32_t(node.text.size()), before + std::uint32_t(read - std::min(read, made)));
  }

  std::optional<std::uint32_t> unit() {
    std::uint32_t code = 0;
    if (peek() != 'u' || at_ + 5 > text_.size()) return std::nullopt;
    const char *from = text_.data() + at_ + 1, *to = from + 4;
    if (auto [end, error] = std::from_chars(from, to, code, 16); error != std::errc() || end != to) return std::nullopt;
    at_ += 5;
    return code;
  }

  bool unicode(std::string& out) {
    auto high = unit();
    if (!high || *high == 0 || (*high >= 0xdc00 && *high < 0xe000)) return false;
    if (*high < 0xd800 || *high >= 0xe000) return add_utf8(out, *high), true;
    if (peek() != '\\') return false;
    next();
    auto low = unit();
    if (!low || *low < 0xdc00 || *low >= 0xe000) return false;
    add_utf8(out, 0x10000 + ((*high - 0xd800) << 10) + (*low - 0xdc00));
    return true;
  }

  void word(JsonNode& node) {
    std::string word;
    std::size_t end = at_;
    while (end < text_.size() && (std::isalnum(static_cast<unsigned char>(text_[end])) || text_[end] == '-' ||
                                  text_[end] == '+' || text_[end] == '.'))
      word += text_[end++];
    if (word == "true" || word == "false") {
      node.kind = JsonNode::Kind::boolean;
      node.truth = word == "true";
    } else if (is_number(word)) {
      node.kind = JsonNode::Kind::number;
      node.number = std::strtod(word.c_str(), nullptr);
      if (!std::isfinite(node.number)) return fail("this number is too large", "write a smaller one");
    } else if (word != "null") {
      return fail(word.empty() ? "a value was expected" : "\"" + word + "\" is no value",
                  "write a text in double quotes, a number, a list or an object");
    }
    at_ = end;
  }

  const std::string& file_;
  const std::string& text_;
  std::vector<Problem>& problems_;
  std::size_t at_ = 0, line_start_ = 0;
  std::uint32_t line_ = 1;
  bool failed_ = false;
};

std::string list_of(const std::vector<std::string>& words) {
  std::string text;
  for (const std::string& word : words) text += (text.empty() ? "" : ", ") + word;
  return text;
}

}  // namespace

const JsonNode* JsonNode::find(const std::string& key) const {
  for (const JsonMember& member : members)
    if (member.key.text == key) return &member.value;
  return nullptr;
}

std::uint32_t JsonNode::column_of(std::size_t offset) const {
  std::uint32_t more = 0;
  for (auto [behind, extra] : escapes)
    if (offset >= behind) more = extra;
  return column + 1 + std::uint32_t(offset) + more;
}

JsonNode read_json(const std::string& file, const std::string& text, std::vector<Problem>& problems) {
  return Reader(file, text, problems).run();
}

bool read_file(const std::string& file, std::string& text, std::vector<Problem>& problems, std::uintmax_t most_bytes) {
  auto fail = [&](const std::string& message, const std::string& remedy) {
    problems.push_back({file, 0, 0, message, remedy});
    return false;
  };
  std::error_code error;
  fs::file_status status = fs::status(file, error);
  if (status.type() == fs::file_type::not_found) return fail("there is no such file", "check the path");
  if (fs::is_directory(status)) return fail("this is a folder, not a file", "name a file in it");
  if (!error && !fs::is_regular_file(status)) return fail("this is no ordinary file", "name a file");
  std::uintmax_t size = error ? 0 : fs::file_size(file, error);
  if (size > most_bytes)
    return fail("the file is larger than " + std::to_string(most_bytes >> 20) + " MiB",
                "check that it is the right file");
  std::ifstream in(file, std::ios::binary);
  if (!in) return fail("the file cannot be opened", "check its permissions");
  text.assign(std::istreambuf_iterator<char>(in), {});
  if (in.bad()) return fail("the file cannot be read to its end", "check the disk");
  if (text.empty()) return fail("the file is empty", "write {} for an empty object, or take the file away");
  if (text.find('\0') != std::string::npos)
    return fail("the file is binary or not in UTF-8", "check that it is the right file");
  return true;
}

std::string word_remedy(const std::string& word, const std::vector<std::string>& known) {
  auto near = nearest_word(word, known);
  return near ? "did you mean \"" + *near + "\"?" : "known here: " + list_of(known);
}

void JsonChecker::problem(const JsonNode& at, const std::string& message, const std::string& remedy) {
  problems_.push_back({file_, at.line, at.column, message, remedy});
}

void JsonChecker::problem_inside(const JsonNode& text, std::size_t offset, const std::string& message,
                                 const std::string& remedy) {
  problems_.push_back({file_, text.line, text.column_of(offset), message, remedy});
}

bool JsonChecker::is(const JsonNode& node, JsonNode::Kind kind, const std::string& what) {
  if (node.kind == kind) return true;
  problem(node, what + " was expected here", "see " + page_);
  return false;
}

void JsonChecker::keys(const JsonNode& node, const std::vector<std::string>& known) {
  for (const JsonMember& member : node.members)
    if (std::find(known.begin(), known.end(), member.key.text) == known.end())
      problem(member.key, "the key \"" + member.key.text + "\" is unknown", word_remedy(member.key.text, known));
}

const JsonNode* JsonChecker::get(const JsonNode& node, const char* key, JsonNode::Kind kind, const std::string& what) {
  const JsonNode* found = node.find(key);
  return found && is(*found, kind, what) ? found : nullptr;
}

std::string JsonChecker::text(const JsonNode& node, const char* key, const std::string& what) {
  const JsonNode* found = get(node, key, JsonNode::Kind::text, what);
  return found ? found->text : "";
}

}  // namespace dextral::project
