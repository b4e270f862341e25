// Where something stands in a source file.
//
// Lines and columns count from 1; columns count bytes. `end` is one past the
// last byte. File names are kept once, in a FileTable; a Span holds an index.
#pragma once

#include <compare>
#include <cstdint>
#include <map>
#include <string>
#include <vector>

namespace dextral {

enum class FileId : std::uint32_t { none = 0xffffffff };

struct Position {
  std::uint32_t line = 0;
  std::uint32_t column = 0;
  auto operator<=>(const Position&) const = default;
};

struct Span {
  FileId file = FileId::none;
  Position begin;
  Position end;
  bool valid() const { return file != FileId::none && begin.line != 0; }
  auto operator<=>(const Span&) const = default;
};

// File names, absolute and normalised, each once.
class FileTable {
 public:
  FileId add(const std::string& name) {
    auto [place, fresh] = index_.try_emplace(name, FileId(names_.size()));
    if (fresh) names_.push_back(name);
    return place->second;
  }
  const std::string& name(FileId id) const {
    static const std::string unknown = "<unknown>";
    return id == FileId::none ? unknown : names_.at(std::size_t(id));
  }
  const std::vector<std::string>& names() const { return names_; }

 private:
  std::vector<std::string> names_;
  std::map<std::string, FileId> index_;
};

}  // namespace dextral
