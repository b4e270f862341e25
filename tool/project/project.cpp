#include "project/project.h"

#include <algorithm>
#include <filesystem>
#include <system_error>

#include "project/json_text.h"
#include "project/project_file.h"
#include "project/scope.h"
#include "project/units.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

std::string here() {
  std::error_code error;
  return normal(fs::current_path(error).string(), "/");
}

std::string folder_of(const std::string& path) {
  std::error_code error;
  return fs::is_directory(path, error) ? path : fs::path(path).parent_path().string();
}

// Without a project file: the working folder where it holds all that is asked
// for, else the deepest folder that does.
std::string root_of(const std::vector<std::string>& paths) {
  std::string root = paths.empty() ? here() : folder_of(normal(paths[0], here()));
  for (const std::string& path : paths)
    while (!is_below(normal(path, here()), root)) root = fs::path(root).parent_path().string();
  return is_below(root, here()) ? here() : root;
}

std::string models_folder(const Request& request) {
  std::error_code error;
  if (!request.models_folder.empty()) return normal(request.models_folder, here());
  std::string program = fs::read_symlink("/proc/self/exe", error).string();
  std::string installed = normal("../share/dextral/libraries", fs::path(program).parent_path().string());
  return fs::is_directory(installed, error) ? installed : DEXTRAL_LIBRARIES;
}

void load_model(Project& project, const std::string& path) {
  std::string text;
  if (read_file(path, text, project.problems)) project.models.add(read_model(path, text, project.problems));
}

// Those that came with the program in the order of their names, then the
// project's own: what is added later counts first.
void load_models(Project& project, const Request& request) {
  std::error_code error;
  std::string folder = models_folder(request);
  std::vector<std::string> files;
  for (fs::directory_iterator at(folder, error), end; !error && at != end; at.increment(error))
    if (at->path().extension() == ".json") files.push_back(at->path().string());
  if (files.empty())
    project.problems.push_back({folder, 0, 0, "there are no library models in this folder",
                                "give the folder with --models, or install the program anew"});
  std::sort(files.begin(), files.end());
  for (const std::string& file : files) load_model(project, file);
  for (const std::string& model : project.file.models) load_model(project, normal(model, project.file.root));
}

}  // namespace

Project read(const Request& request) {
  Project project;
  std::string start = request.paths.empty() ? here() : normal(request.paths[0], here());
  std::string file =
      request.project_file.empty() ? upwards(start, {"dextral.json"}) : normal(request.project_file, here());
  if (!file.empty()) {
    project.file = read_project_file(file, project.problems, project.notes);
  } else {
    project.file.root = root_of(request.paths);
    project.file.real_root = real(project.file.root);
  }
  load_models(project, request);
  choose_units(project, request, request.paths.empty() ? project.file.root : start);
  return project;
}

}  // namespace dextral::project
