#include "gather/source.h"

#include <llvm/Support/Path.h>

namespace dextral::gather {

using namespace clang;

namespace {
constexpr std::size_t kBrief = 72;
}

std::string shortened(const std::string& text) {
  std::string line;
  for (char c : text) {
    bool space = c == '\n' || c == '\t' || c == '\r' || c == ' ';
    if (space && (line.empty() || line.back() == ' ')) continue;
    line += space ? ' ' : c;
  }
  if (line.size() <= kBrief) return line;
  std::size_t cut = kBrief - 4;
  while (cut > 0 && (static_cast<unsigned char>(line[cut]) & 0xc0) == 0x80) --cut;
  return line.substr(0, cut) + " ...";
}

std::string key_of(const FunctionDecl* function) {
  llvm::SmallString<128> usr;
  if (index::generateUSRForDecl(function, usr)) return function->getQualifiedNameAsString();
  return std::string(usr);
}

bool Source::in_macro(SourceRange range) const { return range.getBegin().isMacroID() || range.getEnd().isMacroID(); }

std::string Source::file_of(SourceLocation location) const {
  FileID id = manager_.getFileID(manager_.getExpansionLoc(location));
  OptionalFileEntryRef entry = manager_.getFileEntryRefForID(id);
  if (!entry) return "";
  llvm::SmallString<256> path(entry->getFileEntry().tryGetRealPathName());
  if (path.empty()) path = entry->getName();
  manager_.getFileManager().makeAbsolutePath(path);
  llvm::sys::path::remove_dots(path, true);
  return std::string(path);
}

Span Source::span(SourceRange range) const {
  if (range.isInvalid()) return {};
  CharSourceRange file = manager_.getExpansionRange(range);
  SourceLocation begin = file.getBegin();
  SourceLocation end = file.isTokenRange() ? Lexer::getLocForEndOfToken(file.getEnd(), 0, manager_, language_) : file.getEnd();
  if (begin.isInvalid()) return {};
  if (end.isInvalid() || manager_.getFileID(end) != manager_.getFileID(begin)) end = begin;
  std::string name = file_of(begin);
  if (name.empty()) return {};
  Span span;
  span.file = files_.add(name);
  span.begin = {manager_.getSpellingLineNumber(begin), manager_.getSpellingColumnNumber(begin)};
  span.end = {manager_.getSpellingLineNumber(end), manager_.getSpellingColumnNumber(end)};
  return span;
}

std::string Source::text(SourceRange range) const {
  if (range.isInvalid()) return "";
  CharSourceRange file = manager_.getExpansionRange(range);
  return Lexer::getSourceText(file, manager_, language_).str();
}

std::string Source::brief(SourceRange range) const { return shortened(text(range)); }

}  // namespace dextral::gather
