// Any text is phrases or errors; what is read prints, and reads again alike.
#include <cstdlib>

#include "phrase/phrase.h"

extern "C" int LLVMFuzzerTestOneInput(const unsigned char* data, std::size_t size) {
  using namespace dextral;
  const std::string input(reinterpret_cast<const char*>(data), size);
  phrase::parse_items(input, {"wrong-order", "frame-clash"});
  auto said = phrase::parse(input);
  if (auto* quantity = std::get_if<Quantity>(&said)) {
    auto again = phrase::parse(phrase::print(*quantity));
    if (!std::holds_alternative<Quantity>(again) || !(std::get<Quantity>(again) == *quantity)) std::abort();
  }
  return 0;
}
