#include "tell/source.h"

#include <algorithm>
#include <array>
#include <fstream>

namespace dextral::tell {

namespace {

constexpr std::size_t kTab = 4;

struct Range {
  char32_t from, to;
};

template <std::size_t N>
bool within(char32_t c, const std::array<Range, N>& ranges) {
  return std::any_of(ranges.begin(), ranges.end(), [c](Range r) { return r.from <= c && c <= r.to; });
}

// C0, DEL and C1, invisible signs, line separators, turns of direction.
constexpr std::array<Range, 8> kHidden{{{0x00, 0x1f},
                                        {0x7f, 0x9f},
                                        {0xad, 0xad},
                                        {0x61c, 0x61c},
                                        {0x200b, 0x200f},
                                        {0x2028, 0x202e},
                                        {0x2060, 0x206f},
                                        {0xfeff, 0xfeff}}};
constexpr std::array<Range, 3> kCombining{{{0x300, 0x36f}, {0x20d0, 0x20ff}, {0xfe00, 0xfe0f}}};
constexpr std::array<Range, 8> kWide{{{0x1100, 0x115f},
                                      {0x2e80, 0xa4cf},
                                      {0xac00, 0xd7a3},
                                      {0xf900, 0xfaff},
                                      {0xfe30, 0xfe6f},
                                      {0xff00, 0xff60},
                                      {0x1f300, 0x1faff},
                                      {0x20000, 0x3fffd}}};

std::size_t width_of(char32_t c) { return within(c, kCombining) ? 0 : within(c, kWide) ? 2 : 1; }

std::string hex(std::uint32_t value, std::size_t digits) {
  std::string text;
  for (; digits; --digits) text += "0123456789abcdef"[(value >> (4 * (digits - 1))) & 15];
  return text;
}

std::string written_out(char32_t c) {
  if (c == '\n') return "\\n";
  if (c == '\r') return "\\r";
  if (c == '\t') return "\\t";
  return c < 0x80 ? "\\x" + hex(c, 2) : "\\u" + hex(c, 4);
}

// One letter as it is shown.
struct Cell {
  std::size_t byte = 0;
  std::string text;
  std::size_t width = 1;
};

Cell cell_at(const std::string& line, std::size_t& at, std::size_t column) {
  Cell cell{at, "", 1};
  const auto point = code_point(line, at);
  if (!point) {
    cell.text = "\\x" + hex(static_cast<unsigned char>(line[at]), 2);
    cell.width = cell.text.size();
  } else if (point->value == '\t') {
    cell.width = kTab - column % kTab;
    cell.text = std::string(cell.width, ' ');
  } else if (within(point->value, kHidden)) {
    cell.text = written_out(point->value);
    cell.width = cell.text.size();
  } else {
    cell.text = line.substr(at, point->length);
    cell.width = width_of(point->value);
  }
  at += point ? point->length : 1;
  return cell;
}

std::vector<Cell> cells(const std::string& line, std::size_t from, std::size_t to) {
  std::vector<Cell> list;
  std::size_t column = 0;
  for (std::size_t at = from; at < to;) {
    list.push_back(cell_at(line, at, column));
    column += list.back().width;
  }
  return list;
}

// The start of the letter that covers this byte.
std::size_t letter_start(const std::string& line, std::size_t at) {
  for (std::size_t back = 0; back < 4 && at > 0 && (static_cast<unsigned char>(line[at]) & 0xc0) == 0x80; ++back) --at;
  return at;
}

}  // namespace

std::optional<CodePoint> code_point(const std::string& text, std::size_t at) {
  const auto byte = [&](std::size_t i) { return static_cast<unsigned char>(text[i]); };
  const unsigned char first = byte(at);
  if (first < 0x80) return CodePoint{first, 1};
  const std::size_t length = first >= 0xf0 ? 4 : first >= 0xe0 ? 3 : 2;
  if (first < 0xc2 || first > 0xf4 || at + length > text.size()) return std::nullopt;
  char32_t value = first & (0xff >> (length + 1));
  for (std::size_t i = at + 1; i < at + length; ++i) {
    if ((byte(i) & 0xc0) != 0x80) return std::nullopt;
    value = value << 6 | (byte(i) & 0x3f);
  }
  const bool overlong = (length == 3 && value < 0x800) || (length == 4 && value < 0x10000);
  if (overlong || (value >= 0xd800 && value <= 0xdfff) || value > 0x10ffff) return std::nullopt;
  return CodePoint{value, length};
}

bool is_utf8(const std::string& text) {
  for (std::size_t at = 0; at < text.size();) {
    const auto point = code_point(text, at);
    if (!point) return false;
    at += point->length;
  }
  return true;
}

std::string escaped(const std::string& text) {
  std::string out;
  for (std::size_t at = 0; at < text.size();) {
    const auto point = code_point(text, at);
    if (!point)
      out += "\\x" + hex(static_cast<unsigned char>(text[at]), 2);
    else if (within(point->value, kHidden))
      out += written_out(point->value);
    else
      out.append(text, at, point->length);
    at += point ? point->length : 1;
  }
  return out;
}

Quoted quoted_line(const std::string& line, std::size_t begin, std::size_t end, std::size_t widest) {
  begin = letter_start(line, std::min(begin, line.empty() ? 0 : line.size() - 1));
  end = std::clamp(end, begin, line.size());
  std::size_t from = std::min(line.find_first_not_of(" \t"), begin);
  const bool cut_front = begin - from > widest / 2;
  if (cut_front) from = letter_start(line, begin - widest / 4);
  const std::size_t to = std::min(line.size(), from + 4 * widest);
  Quoted quoted;
  std::size_t shown = 0, marked = 0;
  if (cut_front) quoted.text = "... ";
  bool cut_back = to < line.size();
  for (const Cell& cell : cells(line, from, to)) {
    if (shown + cell.width > widest) {
      cut_back = true;
      break;
    }
    if (cell.byte < begin) quoted.column += cell.width;
    if (cell.byte >= begin && cell.byte < end) marked += cell.width;
    quoted.text += cell.text;
    shown += cell.width;
  }
  if (cut_front) quoted.column += 4;
  if (cut_back) quoted.text += " ...";
  quoted.width = std::max<std::size_t>(1, marked);
  return quoted;
}

const std::string& Source::line(const std::string& file, std::uint32_t number) {
  static const std::string none;
  auto [found, fresh] = files_.try_emplace(file);
  if (fresh) {
    std::ifstream in(file, std::ios::binary);
    for (std::string line; std::getline(in, line);) {
      if (!line.empty() && line.back() == '\r') line.pop_back();
      found->second.push_back(std::move(line));
    }
  }
  return number && number <= found->second.size() ? found->second[number - 1] : none;
}

std::uint32_t Source::utf16_column(const std::string& file, Position position) {
  const std::string& text = line(file, position.line);
  const std::size_t bytes = position.column ? position.column - 1 : 0;
  std::size_t units = 0, at = 0;
  while (at < bytes && at < text.size()) {
    const auto point = code_point(text, at);
    units += point && point->value > 0xffff ? 2 : 1;
    at += point ? point->length : 1;
  }
  return std::uint32_t(units + (bytes > at ? bytes - at : 0) + 1);
}

std::optional<Quoted> Source::quote(const std::string& file, const Span& span, std::size_t widest) {
  if (!span.valid()) return std::nullopt;
  const std::string& text = line(file, span.begin.line);
  if (text.empty()) return std::nullopt;
  const std::size_t begin = span.begin.column ? span.begin.column - 1 : 0;
  const bool one_line = span.end.line == span.begin.line && span.end.column > span.begin.column;
  return quoted_line(text, begin,
                     one_line                          ? span.end.column - 1
                     : span.end.line > span.begin.line ? text.size()
                                                       : begin + 1,
                     widest);
}

}  // namespace dextral::tell
