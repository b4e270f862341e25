// compile_commands.json, the open format of build systems (JSON Compilation
// Database Format Specification, clang.llvm.org/docs/JSONCompilationDatabase).
#pragma once

#include <string>
#include <vector>

#include "project/project.h"

namespace dextral::project {

// One unit per C or C++ file that exists; the first entry of a file counts.
// Entries that cannot be used are problems; what is merely absent is a note.
std::vector<Unit> read_compile_commands(const std::string& path, std::vector<Problem>& problems,
                                        std::vector<std::string>& notes);

}  // namespace dextral::project
