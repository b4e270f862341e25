// The words of a phrase text, each with its place.
#pragma once

#include <string>
#include <vector>

namespace dextral::phrase {

struct Word {
  std::string text;
  std::size_t offset = 0;
};

// Commas, colons and semicolons are words of their own.
std::vector<Word> words(const std::string& text, std::size_t offset = 0);

}  // namespace dextral::phrase
