#include "project/scope.h"

#include <algorithm>
#include <filesystem>
#include <system_error>

#include "project/project.h"

namespace dextral::project {

namespace fs = std::filesystem;

namespace {

std::vector<std::string> components(const std::string& path) {
  std::vector<std::string> list;
  std::size_t start = 0;
  while (start <= path.size()) {
    std::size_t end = std::min(path.find('/', start), path.size());
    if (std::string part = path.substr(start, end - start); !part.empty() && part != ".") list.push_back(part);
    start = end + 1;
  }
  return list;
}

// One component. On a mismatch the last star takes one character more.
bool fits(const std::string& glob, const std::string& text) {
  std::size_t g = 0, t = 0, star = std::string::npos, taken = 0;
  while (t < text.size()) {
    if (g < glob.size() && glob[g] == '*') {
      star = g++;
      taken = t;
    } else if (g < glob.size() && (glob[g] == '?' || glob[g] == text[t])) {
      ++g;
      ++t;
    } else if (star != std::string::npos) {
      g = star + 1;
      t = ++taken;
    } else {
      return false;
    }
  }
  while (g < glob.size() && glob[g] == '*') ++g;
  return g == glob.size();
}

// reached[j]: the components of the glob so far fit the first j of the path.
bool covers(const std::vector<std::string>& glob, const std::vector<std::string>& path) {
  std::vector<bool> reached(path.size() + 1, false);
  reached[0] = true;
  for (const std::string& part : glob) {
    std::vector<bool> next(path.size() + 1, false);
    for (std::size_t j = 0; j <= path.size(); ++j) {
      if (part == "**")
        next[j] = reached[j] || (j > 0 && next[j - 1]);
      else if (j > 0)
        next[j] = reached[j - 1] && fits(part, path[j - 1]);
    }
    reached = std::move(next);
  }
  return std::find(reached.begin(), reached.end(), true) != reached.end();
}

const std::vector<std::string>& system_folders() {
  static const std::vector<std::string> list = {
      "/usr/include", "/usr/local/include", "/usr/lib", "/usr/lib64", "/usr/lib32", "/lib", "/lib64"};
  return list;
}

bool is_system(const std::string& path, const std::string& root) {
  return std::any_of(system_folders().begin(), system_folders().end(),
                     [&](const std::string& folder) { return is_below(path, folder) && !is_below(root, folder); });
}

}  // namespace

std::string wrong_glob(const std::string& glob) {
  if (components(glob).empty() && glob != ".") return "a glob names files or folders";
  if (glob[0] == '/') return "a glob starts at the folder of the project file";
  if (glob.find('\\') != std::string::npos) return "a glob has slashes, no backslashes";
  if (glob.find_first_of("{}[]!") != std::string::npos) return "a glob knows only *, ** and ?";
  for (const std::string& part : components(glob)) {
    if (part == "..") return "a glob stays below the folder of the project file";
    if (part != "**" && part.find("**") != std::string::npos) return "** stands alone between slashes";
  }
  return "";
}

bool covers(const std::string& glob, const std::string& path) { return covers(components(glob), components(path)); }

bool is_below(const std::string& path, const std::string& folder) {
  if (folder == "/") return !path.empty() && path[0] == '/';
  return path.compare(0, folder.size(), folder) == 0 && (path.size() == folder.size() || path[folder.size()] == '/');
}

std::string normal(const std::string& path, const std::string& folder) {
  std::string text = (fs::path(folder) / path).lexically_normal().string();
  while (text.size() > 1 && text.back() == '/') text.pop_back();
  return text;
}

std::string real(const std::string& path) {
  std::error_code error;
  fs::path found = fs::weakly_canonical(path, error);
  return error ? normal(path, "/") : normal(found.string(), "/");
}

// Paths that do not even look like ours cost no look at the disk; the others
// count where they really lie.
bool ProjectFile::in_scope(const std::string& absolute_path) const {
  std::string path = normal(absolute_path, root);
  const std::string home = real_root.empty() ? real(root) : real_root;
  if (!is_below(path, normal(root, "/")) && !is_below(path, home)) return false;
  path = real(path);
  if (!is_below(path, home) || is_system(path, home)) return false;
  std::string relative = path.substr(std::min(path.size(), home == "/" ? 1 : home.size() + 1));
  auto any = [&](const std::vector<std::string>& globs) {
    return std::any_of(globs.begin(), globs.end(), [&](const std::string& glob) { return covers(glob, relative); });
  };
  return (scope.empty() || any(scope)) && !any(outside);
}

}  // namespace dextral::project
