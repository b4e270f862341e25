#include "run/deliver.h"

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <iostream>
#include <iterator>

#include "tell/repairs.h"

namespace dextral::run {

namespace {

namespace fs = std::filesystem;

bool complain(const std::string& message) {
  std::cerr << "dextral: " << message << "\n";
  return false;
}

std::optional<std::string> contents(const std::string& path) {
  std::error_code error;
  if (fs::is_directory(path, error)) return std::nullopt;
  std::ifstream in(path, std::ios::binary);
  if (!in) return std::nullopt;
  return std::string(std::istreambuf_iterator<char>(in), {});
}

// Whole or not at all: a ledger that is cut off would let findings through.
bool replace(const std::string& path, const std::string& text) {
  const std::string beside = path + ".dextral-new";
  std::ofstream out(beside, std::ios::binary);
  out << text;
  out.close();
  std::error_code error;
  if (out) fs::rename(beside, path, error);
  const bool written = out && !error;
  if (!written) fs::remove(beside, error);
  return written;
}

std::vector<Finding> certain(std::vector<Finding> findings) {
  std::erase_if(findings, [](const Finding& finding) { return finding.certainty != Certainty::certain; });
  return findings;
}

tell::InScope in_scope(const project::Project& project) {
  return [&project](const std::string& path) { return project.file.in_scope(path); };
}

}  // namespace

std::string told_root(const project::Project& project) {
  return project.file.path.empty() ? fs::current_path().string() : project.file.root;
}

std::optional<std::vector<tell::Known>> read_known(const Lint& asked) {
  const bool update = !asked.update_known.empty();
  const std::string path = asked.known.empty() ? asked.update_known : asked.known;
  if (path.empty()) return std::vector<tell::Known>{};
  std::error_code error;
  if (update && !fs::exists(path, error)) return std::vector<tell::Known>{};
  const std::optional<std::string> text = contents(path);
  if (!text) {
    complain(path + " cannot be read; --update-known " + path + " writes a new one");
    return std::nullopt;
  }
  auto ledger = tell::read_ledger(*text);
  if (const auto* problem = std::get_if<tell::LedgerProblem>(&ledger)) {
    std::string place = path;
    if (problem->line) place += ":" + std::to_string(problem->line) + ":" + std::to_string(problem->column);
    std::cerr << place << ": error: " << problem->message << "\n";
    return std::nullopt;
  }
  return std::get<std::vector<tell::Known>>(ledger);
}

std::optional<tell::SetAside> settle(const Lint& asked, std::vector<Finding> sorted, std::vector<tell::Known> before,
                                     const FileTable& files, const std::string& root,
                                     const std::set<FileId>& settled) {
  std::set<std::string> names;
  for (FileId id : settled) names.insert(tell::relative(files.name(id), root));
  const tell::LookedAt looked_at = [&](const std::string& file) {
    return names.contains(file) || !fs::exists(fs::path(root) / file);
  };
  if (!asked.update_known.empty()) {
    before = tell::updated(before, sorted, files, root, looked_at);
    if (!replace(asked.update_known, tell::write_ledger(before))) {
      complain(asked.update_known + " cannot be written; is its folder there, and yours to write?");
      return std::nullopt;
    }
  }
  return tell::set_aside(std::move(sorted), before, files, root, looked_at);
}

bool deliver(const Lint& asked, const std::string& report) {
  if (asked.output.empty()) return bool(std::cout << report << std::flush);
  std::ofstream out(asked.output, std::ios::binary);
  if (out << report << std::flush) return true;
  return complain(asked.output + " cannot be written; is its folder there, and yours to write?");
}

bool write_repairs(const Lint& asked, const std::vector<Finding>& findings, const FileTable& files,
                   const project::Project& project) {
  if (!asked.write_repairs) return true;
  const std::vector<tell::RepairProblem> problems = tell::apply(certain(findings), files, in_scope(project));
  for (const tell::RepairProblem& problem : problems) {
    std::cerr << tell::relative(problem.file, told_root(project));
    if (problem.place.line) std::cerr << ":" << problem.place.line << ":" << problem.place.column;
    std::cerr << ": not repaired: " << problem.message << "\n";
  }
  return problems.empty();
}

std::string repairs_as_diff(const std::vector<Finding>& findings, const FileTable& files,
                            const project::Project& project) {
  return tell::diff(certain(findings), files, told_root(project), in_scope(project));
}

}  // namespace dextral::run
