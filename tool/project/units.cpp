#include "project/units.h"

#include <algorithm>
#include <filesystem>
#include <map>
#include <system_error>
#include <tuple>

#include "project/compile_commands.h"
#include "project/flags.h"
#include "project/scope.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

using Fits = bool (*)(const std::string&);

std::string here() {
  std::error_code error;
  return normal(fs::current_path(error).string(), "/");
}

// Hidden folders and trees of a build are not read.
bool is_skipped(const fs::path& folder) {
  std::error_code error;
  std::string name = folder.filename().string();
  return name[0] == '.' || name == "CMakeFiles" || fs::exists(folder / "CMakeCache.txt", error);
}

std::vector<std::string> files_below(const std::string& folder, Fits fits) {
  std::vector<std::string> files;
  std::error_code error;
  fs::recursive_directory_iterator at(folder, fs::directory_options::skip_permission_denied, error), end;
  for (; !error && at != end; at.increment(error)) {
    std::error_code unreadable;
    if (at->is_directory(unreadable)) {
      if (is_skipped(at->path())) at.disable_recursion_pending();
    } else if (at->is_regular_file(unreadable) && fits(at->path().string())) {
      files.push_back(at->path().string());
    }
  }
  std::sort(files.begin(), files.end());
  return files;
}

// How like two paths are: the same folder part, then the same name without its ending.
std::tuple<std::size_t, bool> likeness(const std::string& a, const std::string& b) {
  fs::path left = fs::path(a).parent_path(), right = fs::path(b).parent_path();
  auto split = std::mismatch(left.begin(), left.end(), right.begin(), right.end());
  return {std::size_t(std::distance(left.begin(), split.first)), fs::path(a).stem() == fs::path(b).stem()};
}

class Chooser {
 public:
  Chooser(Project& project, const Request& request, const std::string& start)
      : project_(project), request_(request), start_(start) {}

  void run() {
    read_database();
    if (request_.paths.empty()) folder(project_.file.root);
    for (const std::string& path : request_.paths) add(normal(path, here()));
    for (auto& [file, unit] : chosen_) project_.units.push_back(std::move(unit));
    if (project_.units.empty() && project_.problems.empty()) nothing_to_read();
  }

 private:
  // Given: in the call, else in the project file. Else searched upwards, and
  // taken only where it names a file of ours.
  void read_database() {
    bool given = true;
    std::string path;
    if (!request_.compile_commands.empty())
      path = normal(request_.compile_commands, here());
    else if (!project_.file.compile_commands.empty())
      path = normal(project_.file.compile_commands, project_.file.root);
    else if (request_.flags.empty())
      given = false, path = upwards(start_, {"compile_commands.json", "build/compile_commands.json"});
    std::error_code error;
    if (fs::is_directory(path, error)) path = normal("compile_commands.json", path);
    if (!path.empty())
      for (Unit& unit : read_compile_commands(path, project_.problems, project_.notes))
        known_.emplace(unit.file, std::move(unit));
    bool ours =
        std::any_of(known_.begin(), known_.end(), [&](const auto& k) { return project_.file.in_scope(k.first); });
    if (!path.empty() && !ours && project_.problems.empty())
      project_.notes.push_back(path + " names no file of this project's scope");
    if (!given && !ours) known_.clear();
    if (!path.empty() || !request_.flags.empty()) return;
    project_.notes.push_back(
        "no compile_commands.json was found: flags are guessed; give it with --compile-commands, or flags behind --");
  }

  void add(const std::string& path) {
    std::error_code error;
    fs::file_status status = fs::status(path, error);
    if (fs::is_directory(status)) return folder(path);
    if (!fs::is_regular_file(status)) {
      project_.problems.push_back({path, 0, 0, "there is no such file or folder", "check the path"});
    } else if (!is_source(path) && !is_header(path)) {
      project_.problems.push_back(
          {path, 0, 0, "this is no C or C++ file by its name", "name sources, headers or folders"});
    } else {
      if (!project_.file.in_scope(path))
        project_.notes.push_back(path + " is outside the scope: nothing in it is judged");
      file(path);
    }
  }

  void folder(const std::string& path) {
    std::size_t before = chosen_.size();
    for (const auto& [file, unit] : known_)
      if (is_below(file, path) && project_.file.in_scope(file)) chosen_.emplace(file, unit);
    if (chosen_.size() == before) below(path, is_source);
    if (chosen_.size() == before) below(path, is_header);
  }

  void below(const std::string& path, Fits fits) {
    for (const std::string& found : files_below(path, fits))
      if (project_.file.in_scope(found)) file(found);
  }

  void file(const std::string& path) {
    if (const Unit* unit = commanded(path))
      chosen_.emplace(unit->file, *unit);
    else
      chosen_.emplace(path, guessed(path));
  }

  // The same file may be named by another path, through a link.
  const Unit* commanded(const std::string& path) const {
    if (auto found = known_.find(path); found != known_.end()) return &found->second;
    for (const auto& [file, unit] : known_)
      if (fs::path(file).filename() == fs::path(path).filename() && real(file) == real(path)) return &unit;
    return nullptr;
  }

  Unit guessed(const std::string& path) const {
    Unit unit{path, here(), {}};
    std::vector<std::string> missing;
    if (!request_.flags.empty()) {
      std::vector<std::string> flags = clean_flags(request_.flags, unit.directory, missing);
      bool said = std::any_of(flags.begin(), flags.end(), [](const std::string& f) { return f.rfind("-x", 0) == 0; });
      unit.arguments = said ? flags : settle_language(std::move(flags), path, language_of(path));
    } else if (const Unit* like = most_like(path)) {
      unit.directory = like->directory;
      unit.arguments = settle_language(like->arguments, path, language_beside(path, *like));
    } else {
      unit.arguments = default_flags(path, project_.file.root);
    }
    return unit;
  }

  // A .h that does not show its language has the one of its unit.
  static Language language_beside(const std::string& path, const Unit& like) {
    if (is_source(path) || fs::path(path).extension() != ".h") return language_of(path);
    bool forced = std::find(like.arguments.begin(), like.arguments.end(), "-xc++") != like.arguments.end();
    return forced ? Language::cxx : std::max(language_of(path), language_of(like.file));
  }

  const Unit* most_like(const std::string& path) const {
    const Unit* best = nullptr;
    std::tuple<std::size_t, bool> most;
    for (const auto& [other, unit] : known_) {
      auto now = likeness(path, other);
      if (best && now <= most) continue;
      most = now;
      best = &unit;
    }
    return best;
  }

  void nothing_to_read() {
    std::string where = request_.paths.empty() ? start_ : normal(request_.paths[0], here());
    project_.problems.push_back({where, 0, 0, "there is no C or C++ file to read in the scope",
                                 "name other paths, or widen \"scope\" in dextral.json"});
  }

  Project& project_;
  const Request& request_;
  const std::string& start_;
  std::map<std::string, Unit> known_, chosen_;
};

}  // namespace

std::string upwards(const std::string& from, const std::vector<std::string>& names) {
  std::error_code error;
  fs::path folder = fs::is_directory(from, error) ? fs::path(from) : fs::path(from).parent_path();
  for (;; folder = folder.parent_path()) {
    for (const std::string& name : names)
      if (fs::is_regular_file(folder / name, error)) return (folder / name).string();
    if (folder == folder.parent_path()) return "";
  }
}

void choose_units(Project& project, const Request& request, const std::string& start) {
  Chooser(project, request, start).run();
}

}  // namespace dextral::project
