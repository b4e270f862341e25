#include "tell/repairs.h"

#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <cstdlib>
#include <cstring>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <map>
#include <optional>
#include <tuple>

#include "tell/report.h"

namespace dextral::tell {

namespace {

constexpr std::size_t kContext = 3;

// A replacement of the bytes [begin, end).
struct Change {
  std::size_t begin = 0, end = 0;
  std::string text;
  auto operator<=>(const Change&) const = default;
};

bool overlap(const Change& a, const Change& b) {
  return (a.begin < b.end && b.begin < a.end) || (a.begin == b.begin && (a.begin == a.end) == (b.begin == b.end));
}

struct File {
  std::string path;  // without links
  std::string text;
  std::vector<std::size_t> starts;  // of its lines; the last is the end
  std::vector<Change> changes;      // sorted, apart from each other
  std::string problem;

  std::size_t lines() const { return starts.size() - 1; }
};

std::vector<std::size_t> line_starts(const std::string& text) {
  std::vector<std::size_t> starts{0};
  for (std::size_t i = 0; i < text.size(); ++i)
    if (text[i] == '\n') starts.push_back(i + 1);
  if (starts.back() != text.size()) starts.push_back(text.size());
  return starts;
}

File load(const std::string& name, const InScope& in_scope) {
  File file;
  std::error_code error;
  file.path = std::filesystem::canonical(name, error).string();
  if (error) file.problem = "cannot be found: " + error.message();
  else if (!in_scope(name) || !in_scope(file.path)) file.problem = "is outside the scope; repair it by hand";
  if (!file.problem.empty()) return file;
  std::ifstream in(file.path, std::ios::binary);
  file.text.assign(std::istreambuf_iterator<char>(in), {});
  if (!in.is_open() || in.bad()) file.problem = std::string("cannot be read: ") + std::strerror(errno);
  file.starts = line_starts(file.text);
  return file;
}

std::optional<std::size_t> offset(const File& file, Position at) {
  if (at.line == 0 || at.column == 0 || at.line > file.starts.size()) return std::nullopt;
  const std::size_t start = file.starts[at.line - 1];
  std::size_t end = at.line < file.starts.size() ? file.starts[at.line] : start;
  while (end > start && (file.text[end - 1] == '\n' || file.text[end - 1] == '\r')) --end;
  if (at.column - 1 > end - start) return std::nullopt;
  return start + at.column - 1;
}

bool has_crlf(const File& file, std::size_t line) {
  const std::size_t end = file.starts[std::min(line, file.lines())];
  return end >= 2 && file.text.compare(end - 2, 2, "\r\n") == 0;
}

std::string with_line_ends(const std::string& text, bool crlf) {
  std::string out;
  for (std::size_t i = 0; i < text.size(); ++i) {
    if (crlf && text[i] == '\n' && (i == 0 || text[i - 1] != '\r')) out += '\r';
    out += text[i];
  }
  return out;
}

std::optional<Change> change(const File& file, const solve::Edit& edit) {
  const auto begin = offset(file, edit.span.begin), end = offset(file, edit.span.end);
  if (!begin || !end || *begin > *end) return std::nullopt;
  return Change{*begin, *end, with_line_ends(edit.text, has_crlf(file, edit.span.begin.line))};
}

class Plan {
 public:
  Plan(const std::vector<Finding>& findings, const FileTable& files, const InScope& in_scope)
      : names_(files), in_scope_(in_scope) {
    for (const Finding& finding : findings)
      for (const solve::Repair& repair : finding.repairs)
        if (!repair.edits.empty()) {
          take(repair);
          break;
        }
  }

  std::map<std::string, File> files;  // by the path without links
  std::vector<RepairProblem> problems;

 private:
  File& file(const std::string& name) {
    auto [key, fresh] = keys_.try_emplace(name, name);
    if (fresh) {
      File loaded = load(name, in_scope_);
      if (!loaded.path.empty()) key->second = loaded.path;
      auto [place, first] = files.try_emplace(key->second, loaded);
      if (!first && place->second.problem.empty()) place->second.problem = loaded.problem;
    }
    return files[key->second];
  }

  // Why not, or nothing.
  std::string fault(const solve::Edit& edit, std::vector<std::pair<File*, Change>>& fresh) {
    if (!edit.span.valid()) return "the repair has no place; repair it by hand";
    File& file = this->file(names_.name(edit.span.file));
    if (!file.problem.empty()) return "the file " + file.problem;
    const auto wanted = change(file, edit);
    if (!wanted) return "the file has no such place any more; run the check again";
    for (const Change& other : file.changes) {
      if (other == *wanted) return "";
      if (overlap(other, *wanted)) return "another repair changes the same text; apply again after a new check";
    }
    for (const auto& [where, other] : fresh)
      if (where == &file && overlap(other, *wanted)) return "the repair contradicts itself; repair it by hand";
    fresh.emplace_back(&file, *wanted);
    return "";
  }

  void take(const solve::Repair& repair) {
    std::vector<std::pair<File*, Change>> fresh;
    for (const solve::Edit& edit : repair.edits)
      if (const std::string why = fault(edit, fresh); !why.empty()) {
        problems.push_back({names_.name(edit.span.file), edit.span.begin, why});
        return;
      }
    for (auto& [file, wanted] : fresh) {
      file->changes.push_back(wanted);
      std::sort(file->changes.begin(), file->changes.end());
    }
  }

  const FileTable& names_;
  const InScope& in_scope_;
  std::map<std::string, std::string> keys_;
};

// The bytes [from, to) after the changes inside.
std::string changed(const File& file, std::size_t from, std::size_t to) {
  std::string out;
  for (const Change& change : file.changes) {
    if (change.begin < from || change.end > to) continue;
    out += file.text.substr(from, change.begin - from) + change.text;
    from = change.end;
  }
  return out + file.text.substr(from, to - from);
}

// Lines [first, last) that change, from 0.
struct Block {
  std::size_t first = 0, last = 0;
};

std::size_t line_of(const File& file, std::size_t at) {
  return std::size_t(std::upper_bound(file.starts.begin(), file.starts.end() - 1, at) - file.starts.begin()) - 1;
}

std::vector<Block> blocks(const File& file) {
  std::vector<Block> list;
  for (const Change& change : file.changes) {
    const Block block{line_of(file, change.begin), std::min(line_of(file, change.end) + 1, file.lines())};
    if (!list.empty() && block.first < list.back().last) list.back().last = std::max(list.back().last, block.last);
    else list.push_back(block);
  }
  return list;
}

struct Hunk {
  std::string text;
  std::size_t old_lines = 0, new_lines = 0;

  void add(char mark, const std::string& lines) {
    for (std::size_t at = 0; at < lines.size();) {
      const std::size_t end = std::min(lines.find('\n', at), lines.size() - 1) + 1;
      const std::string line = lines.substr(at, end - at);
      text += mark + line + (line.back() == '\n' ? "" : "\n\\ No newline at end of file\n");
      old_lines += mark != '+';
      new_lines += mark != '-';
      at = end;
    }
  }
};

std::string range(std::size_t first, std::size_t count) {
  return std::to_string(count ? first + 1 : first) + "," + std::to_string(count);
}

std::string hunks(const File& file) {
  const std::vector<Block> list = blocks(file);
  const auto lines = [&](std::size_t a, std::size_t b) {
    return file.text.substr(file.starts[a], file.starts[b] - file.starts[a]);
  };
  std::string out;
  std::ptrdiff_t shift = 0;
  for (std::size_t i = 0; i < list.size();) {
    Hunk hunk;
    const std::size_t first = list[i].first - std::min(list[i].first, kContext);
    std::size_t at = first;
    do {
      hunk.add(' ', lines(at, list[i].first));
      hunk.add('-', lines(list[i].first, list[i].last));
      hunk.add('+', changed(file, file.starts[list[i].first], file.starts[list[i].last]));
      at = list[i++].last;
    } while (i < list.size() && list[i].first - at <= 2 * kContext);
    hunk.add(' ', lines(at, std::min(at + kContext, file.lines())));
    out += "@@ -" + range(first, hunk.old_lines) + " +" +
           range(std::size_t(std::ptrdiff_t(first) + shift), hunk.new_lines) + " @@\n" + hunk.text;
    shift += std::ptrdiff_t(hunk.new_lines) - std::ptrdiff_t(hunk.old_lines);
  }
  return out;
}

// A name as patches write it: quoted where it has odd letters.
std::string patch_name(const std::string& side, const std::string& path) {
  const std::string name = path.starts_with('/') ? path : side + path;
  std::string out;
  bool odd = false;
  for (unsigned char c : name) {
    const bool escape = c < 0x20 || c == 0x7f || c == '"' || c == '\\';
    odd |= escape;
    if (!escape) out += char(c);
    else out += {'\\', char('0' + (c >> 6)), char('0' + ((c >> 3) & 7)), char('0' + (c & 7))};
  }
  if (odd) return '"' + out + '"';
  return out + (out.find(' ') == std::string::npos ? "" : "\t");
}

bool write_all(int handle, const std::string& text) {
  for (std::size_t at = 0; at < text.size();) {
    const ssize_t count = ::write(handle, text.data() + at, text.size() - at);
    if (count < 0 && errno != EINTR) return false;
    if (count > 0) at += std::size_t(count);
  }
  return true;
}

// Puts the text in the place of the file, whole or not at all; why not, or nothing.
std::string replace_file(const std::string& path, const std::string& text) {
  struct stat before {};
  if (::stat(path.c_str(), &before) != 0) return std::strerror(errno);
  if (::access(path.c_str(), W_OK) != 0) return std::strerror(errno);
  std::string temporary = path + ".XXXXXX";
  const int handle = ::mkstemp(temporary.data());
  if (handle < 0) return std::strerror(errno);
  bool good = write_all(handle, text) && ::fchmod(handle, before.st_mode & 07777) == 0 && ::fsync(handle) == 0;
  int why = good ? 0 : errno;
  if (::close(handle) != 0 && good) good = false, why = errno;
  if (good && ::rename(temporary.c_str(), path.c_str()) == 0) return "";
  if (good) why = errno;
  ::unlink(temporary.c_str());
  return std::strerror(why);
}

}  // namespace

std::string diff(const std::vector<Finding>& findings, const FileTable& files, const std::string& root,
                 const InScope& in_scope) {
  const Plan plan(findings, files, in_scope);
  std::string out;
  for (const auto& [path, file] : plan.files) {
    if (file.changes.empty() || changed(file, 0, file.text.size()) == file.text) continue;
    const std::string name = relative(path, root);
    out += "--- " + patch_name("a/", name) + "\n+++ " + patch_name("b/", name) + "\n" + hunks(file);
  }
  return out;
}

std::vector<RepairProblem> apply(const std::vector<Finding>& findings, const FileTable& files,
                                 const InScope& in_scope) {
  Plan plan(findings, files, in_scope);
  for (const auto& [path, file] : plan.files) {
    if (file.changes.empty()) continue;
    const std::string why = replace_file(path, changed(file, 0, file.text.size()));
    if (!why.empty()) plan.problems.push_back({path, {}, "the file cannot be written: " + why + "; it is unchanged"});
  }
  std::sort(plan.problems.begin(), plan.problems.end(), [](const RepairProblem& a, const RepairProblem& b) {
    return std::tie(a.file, a.place, a.message) < std::tie(b.file, b.place, b.message);
  });
  return plan.problems;
}

}  // namespace dextral::tell
