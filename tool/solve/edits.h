// Text of repairs: expressions put into other expressions.
#pragma once

#include <string>

namespace dextral::solve {

// Does the text stand as one operand, without brackets around it?
bool is_primary(const std::string& text);

// The text, in brackets where it needs them.
std::string in_brackets(const std::string& text);

// The form with the text for its `{}`; empty where the form has none.
std::string inverted(const std::string& form, const std::string& text);

}  // namespace dextral::solve
