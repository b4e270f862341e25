#include "run/answers.h"

#include <algorithm>
#include <cstdlib>
#include <filesystem>
#include <iostream>

#include "gather/gather.h"
#include "probe/probe.h"
#include "rules/rule.h"
#include "run/deliver.h"
#include "run/pages.h"
#include "run/unread.h"
#include "tell/measured.h"

namespace dextral::run {

std::string program_path() {
  std::error_code error;
  return std::filesystem::read_symlink("/proc/self/exe", error).string();
}

std::string text(const project::Problem& problem) {
  std::string line = problem.file.empty() ? "dextral" : problem.file;
  if (problem.line) line += ":" + std::to_string(problem.line) + ":" + std::to_string(std::max(problem.column, 1u));
  line += ": error: " + problem.message;
  return problem.remedy.empty() ? line : line + "; " + problem.remedy;
}

bool tell_project(const project::Project& project) {
  for (const project::Problem& problem : project.problems) std::cerr << text(problem) << "\n";
  for (const std::string& note : project.notes) std::cerr << "dextral: " << note << "\n";
  return project.problems.empty();
}

ReadUnit reader(const project::Project& project) {
  std::vector<std::string> ids;
  for (const Rule& rule : rules()) ids.push_back(rule.id);
  return [&project, ids](const project::Unit& unit) { return gather::gather(unit, project, ids); };
}

Status answer(const Answered& answered) {
  std::cout << answered.output;
  std::cerr << answered.error;
  return answered.status;
}

Status answer(const ShowRules& asked) {
  if (asked.id.empty()) {
    std::cout << rule_list(rules());
    return Status::clean;
  }
  const Page page = rule_page(asked.id, rules(), page_folders(program_path()));
  if (page.found) {
    std::cout << page.text;
    return Status::clean;
  }
  std::cerr << "dextral: " << page.text;
  return Status::wrong_call;
}

Status answer(const ShowFacts& asked) {
  const project::Project project = project::read(asked.request);
  if (!tell_project(project)) return Status::wrong_call;
  std::vector<Facts> units = read_all(project.units, reader(project), asked.limits);
  const std::vector<Unread> not_read = unread(units);
  tell_unread(not_read);
  const Facts facts = join(std::move(units));
  std::vector<const Function*> functions;
  for (const Function& function : facts.functions) functions.push_back(&function);
  auto by_place = [](const Function* a, const Function* b) {
    return std::tie(a->span, a->key) < std::tie(b->span, b->key);
  };
  std::sort(functions.begin(), functions.end(), by_place);
  for (const Function* function : functions) std::cout << print(*function, facts.files) << "\n";
  return not_read.empty() ? Status::clean : Status::not_read;
}

namespace {

// A folder of this run, gone at its end.
class RunFolder {
 public:
  RunFolder() {
    std::error_code error;
    std::string name = (std::filesystem::temp_directory_path(error) / "dextral-XXXXXX").string();
    if (!error && mkdtemp(name.data())) path_ = name;
  }
  ~RunFolder() {
    std::error_code error;
    if (!path_.empty()) std::filesystem::remove_all(path_, error);
  }
  RunFolder(const RunFolder&) = delete;
  RunFolder& operator=(const RunFolder&) = delete;
  const std::string& path() const { return path_; }

 private:
  std::string path_;
};

ReadUnit prober(const project::Project& project, const std::string& name, const probe::Elsewhere& elsewhere) {
  return [&project, name, &elsewhere](const project::Unit& unit) {
    Facts facts;
    facts.unit = unit.file;
    probe::Report report = probe::measure(unit, project, {name, {}}, elsewhere, facts.files);
    facts.measurements = std::move(report.measurements);
    facts.not_read_because = std::move(report.refusal);
    facts.read = facts.not_read_because.empty();
    return facts;
  };
}

// Who defines what can only be asked where there are several units.
probe::Elsewhere elsewhere_in(const project::Project& project, const Limits& limits, const std::string& folder) {
  if (project.units.size() < 2) return {};
  probe::Elsewhere elsewhere = probe::elsewhere(read_all(project.units, reader(project), limits));
  elsewhere.folder = folder;
  return elsewhere;
}

}  // namespace

void add_measurements(std::vector<Facts>& units, const project::Project& project, const Limits& limits) {
  const RunFolder folder;
  probe::Elsewhere elsewhere = project.units.size() < 2 ? probe::Elsewhere{} : probe::elsewhere(units);
  elsewhere.folder = folder.path();
  for (Facts& measured : read_all(project.units, prober(project, "", elsewhere), limits))
    if (measured.read) units.push_back(std::move(measured));
}

Status answer(const Probe& asked) {
  const project::Project project = project::read(asked.request);
  if (!tell_project(project)) return Status::wrong_call;
  const RunFolder folder;
  const probe::Elsewhere elsewhere = elsewhere_in(project, asked.limits, folder.path());
  std::vector<Facts> units = read_all(project.units, prober(project, asked.name, elsewhere), asked.limits);
  const std::vector<Unread> not_read = unread(units);
  tell_unread(not_read);
  Facts facts = join(std::move(units));
  tell::sort(facts.measurements, facts.files);
  const bool json = asked.format == Format::json;
  const tell::Style style{json ? told_root(project) : std::filesystem::current_path().string()};
  std::cout << (json        ? tell::json(facts.measurements, facts.files, style)
                : asked.all ? tell::table(facts.measurements, facts.files, style)
                            : tell::text(facts.measurements, facts.files, style));
  if (facts.measurements.empty() && !asked.all) {
    std::cerr << "dextral: no function `" << asked.name << "` with a body is in the scope\n";
    return Status::wrong_call;
  }
  return not_read.empty() ? Status::clean : Status::not_read;
}

}  // namespace dextral::run
