#include "project/project.h"

#include <algorithm>
#include <filesystem>
#include <map>

#include "project/flags.h"
#include "project/json_text.h"
#include "project/project_file.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

std::string absolute(const std::string& path) {
  std::error_code error;
  fs::path given = fs::absolute(path, error).lexically_normal();
  std::string text = given.string();
  while (text.size() > 1 && text.back() == '/') text.pop_back();
  return text;
}

std::string upwards(std::string from, const std::vector<std::string>& names) {
  std::error_code error;
  if (!fs::is_directory(from, error)) from = fs::path(from).parent_path().string();
  for (fs::path folder = from;; folder = folder.parent_path()) {
    for (const std::string& name : names)
      if (fs::is_regular_file(folder / name, error)) return (folder / name).string();
    if (folder == folder.parent_path()) return "";
  }
}

std::string models_folder(const Request& request) {
  std::error_code error;
  if (!request.models_folder.empty()) return request.models_folder;
  fs::path self = fs::read_symlink("/proc/self/exe", error);
  fs::path installed = self.parent_path().parent_path() / "share" / "dextral" / "libraries";
  if (fs::is_directory(installed, error)) return installed.string();
  return DEXTRAL_LIBRARIES;
}

void load_model(Project& project, const std::string& path) {
  std::string text;
  if (read_file(path, text, project.problems)) project.models.add(read_model(path, text, project.problems));
}

void load_models(Project& project, const Request& request) {
  std::error_code error;
  std::vector<std::string> files;
  std::string folder = models_folder(request);
  if (!fs::is_directory(folder, error)) {
    project.problems.push_back({folder, 0, 0, "the folder of the library models is not there", "give it with --models"});
    return;
  }
  for (const auto& entry : fs::directory_iterator(folder, error))
    if (entry.path().extension() == ".json") files.push_back(entry.path().string());
  std::sort(files.begin(), files.end());
  for (const std::string& file : files) load_model(project, file);
  for (const std::string& model : project.file.models) load_model(project, (fs::path(project.file.root) / model).lexically_normal().string());
}

std::vector<std::string> sources_below(const std::string& folder) {
  std::vector<std::string> files;
  std::error_code error;
  for (auto it = fs::recursive_directory_iterator(folder, fs::directory_options::skip_permission_denied, error); it != fs::recursive_directory_iterator(); it.increment(error)) {
    if (error) break;
    std::string name = it->path().filename().string();
    if (it->is_directory(error) && name[0] == '.') it.disable_recursion_pending();
    else if (it->is_regular_file(error) && is_source(it->path().string())) files.push_back(it->path().string());
  }
  return files;
}

class Units {
 public:
  Units(Project& project, const Request& request) : project_(project), request_(request) {}

  void run() {
    std::string start = request_.paths.empty() ? absolute(".") : absolute(request_.paths[0]);
    std::string database = request_.compile_commands;
    std::error_code error;
    if (!database.empty() && fs::is_directory(database, error)) database += "/compile_commands.json";
    if (database.empty() && !project_.file.compile_commands.empty()) database = (fs::path(project_.file.root) / project_.file.compile_commands).string();
    if (database.empty() && request_.flags.empty()) database = upwards(start, {"compile_commands.json", "build/compile_commands.json"});
    if (!database.empty())
      for (Unit& unit : read_compile_commands(absolute(database), project_.problems, project_.notes)) known_.try_emplace(unit.file, unit);
    else if (request_.flags.empty())
      project_.notes.push_back("no compile_commands.json was found: default flags are used");
    if (request_.paths.empty()) whole(start);
    for (const std::string& path : request_.paths) add_path(absolute(path));
    for (auto& [file, unit] : chosen_) project_.units.push_back(unit);
  }

 private:
  void whole(const std::string& folder) {
    for (const auto& [file, unit] : known_)
      if (project_.file.in_scope(file)) chosen_.emplace(file, unit);
    if (known_.empty()) add_path(folder);
  }

  void add_path(const std::string& path) {
    std::error_code error;
    if (fs::is_directory(path, error)) {
      bool any = false;
      for (const auto& [file, unit] : known_)
        if (file.rfind(path + "/", 0) == 0) chosen_.emplace(file, unit), any = true;
      if (!any)
        for (const std::string& file : sources_below(path))
          if (project_.file.in_scope(file)) add_file(file);
      return;
    }
    if (!fs::is_regular_file(path, error)) {
      project_.problems.push_back({path, 0, 0, "there is no such file or folder", "check the path"});
      return;
    }
    add_file(path);
  }

  void add_file(const std::string& file) {
    auto found = known_.find(file);
    if (found != known_.end()) {
      chosen_.emplace(file, found->second);
      return;
    }
    Unit unit{file, absolute("."), {}};
    if (!request_.flags.empty()) unit.arguments = clean_flags(request_.flags, unit.directory);
    else if (const Unit* near = nearest(file)) unit.arguments = near->arguments, unit.directory = near->directory;
    else unit.arguments = default_flags(file, project_.file.root);
    chosen_.emplace(file, std::move(unit));
  }

  // A header is read as a unit with the flags of the unit whose path is most like its own.
  const Unit* nearest(const std::string& file) const {
    const Unit* best = nullptr;
    std::size_t most = 0;
    for (const auto& [other, unit] : known_) {
      std::size_t same = 0;
      while (same < file.size() && same < other.size() && file[same] == other[same]) ++same;
      if (same > most) most = same, best = &unit;
    }
    return best;
  }

  Project& project_;
  const Request& request_;
  std::map<std::string, Unit> known_, chosen_;
};

}  // namespace

Project read(const Request& request) {
  Project project;
  std::string start = request.paths.empty() ? absolute(".") : absolute(request.paths[0]);
  std::string file = request.project_file.empty() ? upwards(start, {"dextral.json"}) : absolute(request.project_file);
  std::error_code error;
  project.file.root = absolute(".");
  if (!file.empty()) project.file = read_project_file(file, project.problems);
  else if (start.rfind(project.file.root, 0) != 0) project.file.root = fs::is_directory(start, error) ? start : fs::path(start).parent_path().string();
  load_models(project, request);
  Units(project, request).run();
  return project;
}

}  // namespace dextral::project
