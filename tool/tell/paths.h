// Paths as reports say them: relative to the working folder where below it,
// and as URIs for programs.
#pragma once

#include <string>

namespace dextral::tell {

// A path below the root without it.
std::string relative(const std::string& path, const std::string& root);

// Everything but letters, digits, "-._~" and "/" percent-encoded.
std::string percent_encoded(const std::string& path);

// "file:///..." of an absolute path.
std::string file_uri(const std::string& path);

}  // namespace dextral::tell
