// Flags, cleaned for Clang.
//
// A command was written for some compiler. What decides the meaning of the
// source is kept: include paths, macros, the language and its standard, the
// target, the sysroot. Everything else is dropped quietly, so that no flag of
// another compiler stops Clang: the table in flags.cpp says what is known.
// Limits: commands in the style of cl (/I, /D) give no flags.
#pragma once

#include <string>
#include <vector>

namespace dextral::project {

enum class Language { c, cxx };

// A command line of a shell into its words.
std::vector<std::string> split_command(const std::string& command);

// The compiler's name in a command line: launchers such as ccache skipped.
std::string compiler_of(const std::vector<std::string>& words);

// The words without compiler, launchers, outputs and the file; paths absolute.
// Response files that are not there are appended to `missing`.
std::vector<std::string> clean_flags(const std::vector<std::string>& words, const std::string& directory,
                                     std::vector<std::string>& missing);

// The same flags for a file of this language: -x where the name of the file
// does not say it, and no standard of the other language.
std::vector<std::string> settle_language(std::vector<std::string> flags, const std::string& file, Language);

// Flags for a file that no command names.
std::vector<std::string> default_flags(const std::string& file, const std::string& root);

bool is_source(const std::string& path);
bool is_header(const std::string& path);

// By the name; of a .h by what stands in it, then by the sources beside it.
Language language_of(const std::string& file);
// Does the text of a .h say that it is C++?
bool looks_like_cxx(const std::string& text);

}  // namespace dextral::project
