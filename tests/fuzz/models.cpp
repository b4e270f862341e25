// Any text is a library model or problems with a place.
#include "project/model.h"

extern "C" int LLVMFuzzerTestOneInput(const unsigned char* data, std::size_t size) {
  std::vector<dextral::project::Problem> problems;
  dextral::project::ModelTable table;
  table.add(dextral::project::read_model("m.json", std::string(reinterpret_cast<const char*>(data), size), problems));
  return 0;
}
