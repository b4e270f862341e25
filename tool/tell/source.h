// Source text as reports quote it.
//
// What stands in an analysed file may be anything: broken UTF-8, control
// characters, letters that turn the direction of writing around, lines of a
// megabyte. Everything quoted passes through here, so that a report shows what
// is there and a terminal obeys none of it.
//
// Limits: the width of a letter is taken from a short table (combining marks
// 0, East Asian letters and pictographs 2, all others 1), not from the terminal.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "core/span.h"

namespace dextral::tell {

// One code point at `at`, or nothing where the bytes are no UTF-8.
struct CodePoint {
  char32_t value = 0;
  std::size_t length = 1;
};
std::optional<CodePoint> code_point(const std::string& text, std::size_t at);
bool is_utf8(const std::string& text);

// Control characters, turns of the writing direction and broken UTF-8 are
// written out: "\x1b", "\u202e", "\xff".
std::string escaped(const std::string& text);

// A line of source, shortened around the bytes [begin, end), and the columns
// under which a marker for them stands.
struct Quoted {
  std::string text;
  std::size_t column = 0;  // from 0
  std::size_t width = 1;
};
Quoted quoted_line(const std::string& line, std::size_t begin, std::size_t end, std::size_t widest);

// Files, each read once. A file that cannot be read has no lines.
class Source {
 public:
  // Without its end; empty where there is none. Lines count from 1.
  const std::string& line(const std::string& file, std::uint32_t number);
  // The column of a position in UTF-16 code units, from 1.
  std::uint32_t utf16_column(const std::string& file, Position);
  // Nothing for an empty line, or a place that is nowhere.
  std::optional<Quoted> quote(const std::string& file, const Span&, std::size_t widest);

 private:
  std::map<std::string, std::vector<std::string>> files_;
};

}  // namespace dextral::tell
