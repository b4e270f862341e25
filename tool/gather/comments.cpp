#include "gather/comments.h"

namespace dextral::gather {

using namespace clang;

namespace {

struct CodeToken {
  unsigned line;
  bool ends;  // ; { }
};

std::string behind_bar(llvm::StringRef comment) {
  llvm::StringRef text = comment.drop_front(3);
  if (comment.starts_with("/*")) text.consume_back("*/");
  else text = text.take_front(text.find("//"));  // an ordinary comment behind the phrase
  return text.rtrim("\r\n").str();
}

// A bar line that goes on with the one above.
bool continues(const BarComment& above, const BarComment& next, unsigned column_above, unsigned column_next) {
  if (above.is_inline || next.is_inline || next.line != above.last_line + 1 || !next.alone) return false;
  return above.alone || column_above == column_next;
}

void find_code(BarComment& comment, const std::vector<CodeToken>& code) {
  unsigned from = comment.alone ? comment.last_line + 1 : comment.line;
  for (const CodeToken& token : code) {
    if (token.line < from) continue;
    if (!comment.code_line) comment.code_line = token.line;
    comment.code_end_line = token.line;
    if (token.ends) return;
  }
}

}  // namespace

std::vector<BarComment> bar_comments(FileID file, const SourceManager& manager, const LangOptions& language) {
  std::vector<BarComment> list;
  std::optional<llvm::StringRef> buffer = manager.getBufferDataOrNone(file);
  if (!buffer || (buffer->find("//|") == llvm::StringRef::npos && buffer->find("/*|") == llvm::StringRef::npos)) return list;
  LangOptions options = language;
  options.LineComment = true;
  Lexer lexer(manager.getLocForStartOfFile(file), options, buffer->begin(), buffer->begin(), buffer->end());
  lexer.SetCommentRetentionState(true);
  std::vector<CodeToken> code;
  std::vector<unsigned> columns;
  Token token;
  for (bool more = true; more;) {
    more = !lexer.LexFromRawLexer(token) && token.isNot(tok::eof);
    if (token.is(tok::eof)) break;
    unsigned offset = manager.getFileOffset(token.getLocation());
    unsigned line = manager.getLineNumber(file, offset);
    if (token.isNot(tok::comment)) {
      code.push_back({line, token.isOneOf(tok::semi, tok::l_brace, tok::r_brace)});
      continue;
    }
    llvm::StringRef text = buffer->substr(offset, token.getLength());
    const bool bar = text.starts_with("//|") || text.starts_with("/*|");
    if (!bar || text.substr(3).starts_with("|")) continue;  // `/*|| b < 1*/` is code set aside
    BarComment comment;
    comment.text = behind_bar(text);
    comment.offset = offset;
    comment.text_offset = offset + 3;
    comment.end = offset + token.getLength();
    comment.line = line;
    comment.last_line = manager.getLineNumber(file, comment.end ? comment.end - 1 : 0);
    llvm::StringRef before = buffer->substr(0, offset);
    before = before.substr(before.rfind('\n') == llvm::StringRef::npos ? 0 : before.rfind('\n') + 1);
    llvm::StringRef after = buffer->substr(comment.end).split('\n').first;
    // Behind a whole declaration `/*| */` speaks of all its names, as `//|` does.
    const bool behind = before.trim().empty() || before.trim().ends_with(";");
    const bool last = after.trim().empty() || after.trim().starts_with("//") || after.trim().starts_with("/*");
    comment.is_inline = text.starts_with("/*|") && !(behind && last);
    comment.alone = before.trim().empty() && (text.starts_with("//|") || last);
    unsigned column = manager.getColumnNumber(file, offset);
    if (!list.empty() && continues(list.back(), comment, columns.back(), column)) {
      list.back().text += "\n" + comment.text;
      list.back().last_line = comment.last_line;
      list.back().end = comment.end;
      continue;
    }
    list.push_back(std::move(comment));
    columns.push_back(column);
  }
  for (BarComment& comment : list) find_code(comment, code);
  return list;
}

}  // namespace dextral::gather
