// Compile commands and flags, cleaned for Clang.
#pragma once

#include <string>
#include <vector>

#include "project/project.h"

namespace dextral::project {

// A command line of a shell into its words.
std::vector<std::string> split_command(const std::string& command);

// Keeps what decides the meaning of the source (include paths, macros,
// language, target word size, sysroot); drops the rest quietly. The compiler,
// launchers before it, outputs and the file itself are taken off.
std::vector<std::string> clean_flags(const std::vector<std::string>& words, const std::string& directory);

// Flags for a file that no command names.
std::vector<std::string> default_flags(const std::string& file, const std::string& root);

// Units of a compile_commands.json.
std::vector<Unit> read_compile_commands(const std::string& path, std::vector<Problem>&, std::vector<std::string>& notes);

bool is_source(const std::string& path);
bool is_header(const std::string& path);

}  // namespace dextral::project
