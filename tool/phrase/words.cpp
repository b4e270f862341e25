#include "phrase/words.h"

#include <cctype>

namespace dextral::phrase {

std::vector<Word> words(const std::string& text, std::size_t offset) {
  std::vector<Word> list;
  for (std::size_t i = 0; i < text.size();) {
    char c = text[i];
    if (std::isspace(static_cast<unsigned char>(c))) {
      ++i;
      continue;
    }
    std::size_t start = i++;
    if (c != ',' && c != ':' && c != ';')
      while (i < text.size() && !std::isspace(static_cast<unsigned char>(text[i])) && text[i] != ',' && text[i] != ':' && text[i] != ';') ++i;
    list.push_back({text.substr(start, i - start), offset + start});
  }
  return list;
}

}  // namespace dextral::phrase
