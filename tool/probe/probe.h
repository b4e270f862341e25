// Measures the functions of one unit: emit, link, drive, recognise.
#pragma once

#include <vector>

#include "core/measured.h"
#include "probe/candidates.h"
#include "probe/link.h"

namespace dextral::probe {

struct Report {
  std::vector<Measurement> measurements;  // in the order of the text
  std::string refusal;                    // why the unit could not be read
};

Report measure(const project::Unit&, const project::Project&, const Wanted&, const Elsewhere&, FileTable&);

}  // namespace dextral::probe
