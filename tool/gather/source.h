// Places and texts of source code.
#pragma once

#include "core/span.h"
#include "gather/clang.h"

namespace dextral::gather {

class Source {
 public:
  Source(clang::SourceManager& manager, const clang::LangOptions& language, FileTable& files)
      : manager_(manager), language_(language), files_(files) {}

  Span span(clang::SourceRange) const;    // macros: where they are used
  bool in_macro(clang::SourceRange) const;
  std::string text(clang::SourceRange) const;   // whole
  std::string brief(clang::SourceRange) const;  // one line, shortened
  std::string file_of(clang::SourceLocation) const;  // absolute; empty: no file
  clang::SourceManager& manager() const { return manager_; }
  const clang::LangOptions& language() const { return language_; }
  FileTable& files() const { return files_; }

 private:
  clang::SourceManager& manager_;
  const clang::LangOptions& language_;
  FileTable& files_;
};

std::string shortened(const std::string&);

// Function::key: the same in every unit.
std::string key_of(const clang::FunctionDecl*);

}  // namespace dextral::gather
