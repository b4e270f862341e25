// A source text written to a folder of its own, and read as a project.
#pragma once

#include <gtest/gtest.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <string>

#include "probe/emit.h"
#include "project/project.h"

namespace dextral::probe {

class SourceFile {
 public:
  SourceFile(const std::string& name, const std::string& text, std::vector<std::string> flags = {}) {
    char folder[] = "/tmp/dextral-probe-XXXXXX";
    folder_ = mkdtemp(folder);
    write(name, text);
    project::Request request;
    request.paths = {folder_ + "/" + name};
    request.flags = std::move(flags);
    request.models_folder = DEXTRAL_SOURCE "/rules/libraries";
    project = project::read(request);
  }
  ~SourceFile() { std::filesystem::remove_all(folder_); }
  SourceFile(const SourceFile&) = delete;

  // One more unit, with the flags of the first.
  const project::Unit& add(const std::string& name, const std::string& text) {
    write(name, text);
    project.units.push_back(project.units.front());
    project.units.back().file = folder_ + "/" + name;
    return project.units.back();
  }
  const std::string& folder() const { return folder_; }

  void write(const std::string& name, const std::string& text) const { std::ofstream(folder_ + "/" + name) << text; }
  const project::Unit& unit() const { return project.units.at(0); }

  project::Project project;
  FileTable files;

 private:
  std::string folder_;
};

inline std::vector<std::string> eigen() { return {"-std=c++17", "-isystem", "/usr/include/eigen3"}; }

}  // namespace dextral::probe
