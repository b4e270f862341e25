// Globs: which paths are ours.
//
// A glob is a path of components, from the folder of the project file. In a
// component `*` stands for any characters and `?` for one; `**` as a whole
// component stands for any number of folders. A glob that names a folder covers
// everything below it.
#pragma once

#include <string>
#include <vector>

namespace dextral::project {

// What is wrong with it, or nothing.
std::string wrong_glob(const std::string& glob);

// Does the glob cover this relative path?
bool covers(const std::string& glob, const std::string& path);

// Is it the folder, or below it? Both absolute and normal.
bool is_below(const std::string& path, const std::string& folder);

// Without `.`, `..` and a slash at the end; relative paths from `folder`.
std::string normal(const std::string& path, const std::string& folder);

// Where it really lies: links followed as far as the path exists.
std::string real(const std::string& path);

}  // namespace dextral::project
