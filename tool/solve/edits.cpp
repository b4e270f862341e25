#include "solve/edits.h"

namespace dextral::solve {

bool is_primary(const std::string& text) {
  int depth = 0;
  for (char c : text) {
    if (c == '(' || c == '[') ++depth;
    if (c == ')' || c == ']') --depth;
    if (depth == 0 && (c == ' ' || c == '*' || c == '+')) return false;
  }
  return !text.empty() && text.find("->*") == std::string::npos && text[0] != '-' && text[0] != '*';
}

std::string in_brackets(const std::string& text) { return is_primary(text) ? text : "(" + text + ")"; }

std::string inverted(const std::string& form, const std::string& text) {
  const std::size_t hole = form.find("{}");
  if (hole == std::string::npos) return "";
  return form.substr(0, hole) + in_brackets(text) + form.substr(hole + 2);
}

}  // namespace dextral::solve
