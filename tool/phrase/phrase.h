// Phrases: text to quantities and back.
//
// A phrase states what a declaration holds, in a few words (docs/phrases.md):
// "passive ned to body", "in ned", "angles 3-2-1 ned to body, deg". One comment
// may hold several items, each with the names it speaks of: "v: in ned; return:
// in body". Synonyms are read and never printed.
#pragma once

#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "core/frame.h"
#include "core/quantity.h"

namespace dextral::phrase {

// Why a text is no phrase: the wrong word with its place in the text, what was
// expected, and the nearest right word (or empty).
struct Error {
  std::size_t offset = 0;
  std::size_t length = 0;
  std::string wrong;
  std::string message;
  std::string nearest;
};

struct Item {
  std::vector<std::string> names;  // empty: the declaration that it stands on
  std::variant<Quantity, Acceptance> says;
  std::size_t offset = 0, length = 0;  // of the item in the text
};

struct Items {
  std::vector<Item> items;
  std::vector<Error> errors;
};

// The text behind the bar, one or several items. `rules` are the ids that
// `accept` may name.
Items parse_items(const std::string& text, const std::vector<std::string>& rules);

// One phrase alone: the macro, the project file.
std::variant<Quantity, Error> parse(const std::string& text);

// The canonical text. parse(print(q)) == q.
std::string print(const Quantity&);
std::string print(const Acceptance&);

// All frame names that the quantity mentions.
std::vector<Frame> mentioned(const Quantity&);

}  // namespace dextral::phrase
