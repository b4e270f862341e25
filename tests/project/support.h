// A folder of its own for a test, and files in it.
#pragma once

#include <gtest/gtest.h>
#include <unistd.h>

#include <filesystem>
#include <fstream>
#include <string>
#include <vector>

#include "project/project.h"

namespace dextral::project {

class Folder {
 public:
  Folder() {
    std::string name = (std::filesystem::temp_directory_path() / "dextral-test-XXXXXX").string();
    path_ = std::filesystem::canonical(mkdtemp(name.data())).string();
  }
  ~Folder() {
    std::error_code error;
    std::filesystem::remove_all(path_, error);
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;

  std::string operator/(const std::string& name) const { return path_ + "/" + name; }
  const std::string& path() const { return path_; }

  // Writes the file, its folders too; gives its path.
  std::string put(const std::string& name, const std::string& text) const {
    std::filesystem::path file = *this / name;
    std::filesystem::create_directories(file.parent_path());
    std::ofstream(file, std::ios::binary) << text;
    return file.string();
  }

 private:
  std::string path_;
};

// "LINE:COLUMN: message; remedy" of each, the folder written as FOLDER.
inline std::vector<std::string> lines(const std::vector<Problem>& problems, const std::string& folder = "") {
  std::vector<std::string> list;
  for (const Problem& problem : problems) {
    std::string line = std::to_string(problem.line) + ":" + std::to_string(problem.column) + ": " + problem.message +
                       "; " + problem.remedy;
    for (std::size_t at; !folder.empty() && (at = line.find(folder)) != std::string::npos;)
      line.replace(at, folder.size(), "FOLDER");
    list.push_back(line);
  }
  return list;
}

using Lines = std::vector<std::string>;

}  // namespace dextral::project
