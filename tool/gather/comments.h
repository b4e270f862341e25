// Bar comments: where they stand and what they say.
//
// `//| ...` to the end of the line and `/*| ... */` inline. Lexed from the file
// itself, so they survive precompiled headers. Bar lines that stand alone one
// below the other, or below a trailing one in its column, are one comment.
#pragma once

#include <string>
#include <vector>

#include "gather/clang.h"

namespace dextral::gather {

struct BarComment {
  std::string text;         // behind the bar; lines joined by '\n'
  unsigned offset = 0;      // of the first bar comment in the file
  unsigned text_offset = 0; // of the first character of the text
  unsigned end = 0;
  unsigned line = 0, last_line = 0;
  bool alone = false;       // nothing else on its line
  bool is_inline = false;   // /*| */
  unsigned code_line = 0;   // of the code that it speaks of: its own, or the next one
  unsigned code_end_line = 0;  // where that statement ends
};

std::vector<BarComment> bar_comments(clang::FileID, const clang::SourceManager&, const clang::LangOptions&);

}  // namespace dextral::gather
