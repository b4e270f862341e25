// The project: what to read, how to compile it, and what it declares.
//
// `dextral.json` (found upwards from the first path, or given) declares frames,
// aliases, name patterns, contracts, the scope and extra models; comments are
// allowed in it. `compile_commands.json` gives the flags. Either may be absent.
// docs/project-file.md is the user's page; tool/project/dextral.schema.json the
// published schema.
#pragma once

#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "core/frame.h"
#include "core/quantity.h"
#include "project/model.h"

namespace dextral::project {

// "C_{to}{from}" -> "passive {from} to {to}". Letters are looked up in `letters`.
struct NamePattern {
  std::string pattern;
  std::string phrase;
};

struct Contract {
  std::string entity;  // qualified name: function, field, variable, type alias
  // Parameter name, "return", or "" for the entity itself; and its phrase text.
  std::vector<std::pair<std::string, std::string>> phrases;
  std::uint32_t line = 0;
};

struct ProjectFile {
  std::string path;       // empty: none
  std::string root;       // its folder, else the working folder
  std::string real_root;  // the root with all links followed; empty: found when needed
  FrameCatalogue frames = FrameCatalogue::builtin();
  std::vector<std::string> declared_frames;
  bool only_declared_frames = false;  // a frame that is neither declared nor built in is an error
  std::vector<std::pair<std::string, std::string>> letters;  // "b" -> "body"
  std::vector<NamePattern> patterns;
  std::vector<Contract> contracts;
  std::vector<std::string> scope;    // globs relative to root; empty: everything below root
  std::vector<std::string> outside;  // globs taken out of the scope
  std::vector<std::string> models;   // paths relative to root
  std::string compile_commands;      // path relative to root, or empty
  bool in_scope(const std::string& absolute_path) const;
};

// What a name says by the project's patterns, or nothing. First match wins.
std::optional<Quantity> named(const ProjectFile&, const std::string& name);

struct Unit {
  std::string file;                    // absolute
  std::string directory;               // where its command runs
  std::vector<std::string> arguments;  // for Clang, without program name and file, cleaned
};

struct Request {
  std::vector<std::string> paths;  // files or folders; empty: the whole compile database
  std::vector<std::string> flags;  // after "--"
  std::string project_file;        // given, or empty: search upwards
  std::string compile_commands;    // given, or empty: search upwards
  std::string models_folder;       // rules/libraries, or empty: beside the program
};

struct Project {
  ProjectFile file;
  ModelTable models;
  std::vector<Unit> units;         // sorted, each file once
  std::vector<Problem> problems;   // any: the run ends with status 2
  std::vector<std::string> notes;  // told, but no fault: "no compile_commands.json found; default flags"
};

Project read(const Request&);

}  // namespace dextral::project
