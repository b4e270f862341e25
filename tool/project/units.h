// Which files are read, and with which flags.
//
// Paths given: these files, and the units below these folders. None given: the
// whole compile database, as far as it is in the scope. Without a database:
// every source below the folder, with default flags; where a folder has headers
// alone, the headers. A header, or a source that no command names, takes the
// flags of the unit most like it.
#pragma once

#include "project/project.h"

namespace dextral::project {

// Fills units, problems and notes; `start` is the folder or file to begin at.
void choose_units(Project& project, const Request& request, const std::string& start);

// The first file of these names in the folder or above it, or nothing.
std::string upwards(const std::string& from, const std::vector<std::string>& names);

}  // namespace dextral::project
