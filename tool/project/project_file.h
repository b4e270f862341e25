// dextral.json: read, checked key by key, every problem with place and remedy.
//
// The keys are those of docs/project-file.md and dextral.schema.json. What is
// right is kept, so that one run tells all that is wrong. A frame that nobody
// declared is a name of its own; a note tells it where a known name is near.
#pragma once

#include "project/project.h"

namespace dextral::project {

ProjectFile read_project_file(const std::string& path, std::vector<Problem>& problems, std::vector<std::string>& notes);

}  // namespace dextral::project
