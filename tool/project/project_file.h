// dextral.json: read, checked key by key, every problem with place and remedy.
#pragma once

#include "project/project.h"

namespace dextral::project {

ProjectFile read_project_file(const std::string& path, std::vector<Problem>& problems);

}  // namespace dextral::project
