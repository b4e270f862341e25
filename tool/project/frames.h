// The section "frames" of the project file.
//
// Frames are declared first, then aliases, then what is parallel to what, so
// that their order in the file does not matter. A built-in frame that is named
// again keeps what is not said anew.
#pragma once

#include "project/json_text.h"
#include "project/project.h"

namespace dextral::project {

void read_frames(const JsonNode& frames, ProjectFile& file, JsonChecker& check);

// Can a phrase name a frame so?
bool is_frame_name(const std::string& name);

}  // namespace dextral::project
