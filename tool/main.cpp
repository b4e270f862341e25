// dextral: the order of the steps, and nothing else. Each step takes what the
// step before gave; no step calls the next (docs/architecture.md).
#include <algorithm>
#include <filesystem>
#include <fstream>
#include <iostream>
#include <iterator>
#include <set>
#include <type_traits>

#include "core/facts.h"
#include "project/project.h"
#include "rules/rule.h"
#include "run/accept.h"
#include "run/answers.h"
#include "run/commands.h"
#include "run/unread.h"
#include "run/workers.h"
#include "solve/solve.h"
#include "tell/report.h"

namespace dextral {

namespace {

// What is not built yet is refused, never half done.
bool not_yet(const run::Lint& asked) {
  return asked.format == run::Format::sarif || asked.write_repairs || asked.dry_run || !asked.known.empty() || !asked.update_known.empty();
}

tell::Summary summary_of(const Facts& facts, const solve::Solution& solution, std::size_t units, std::size_t unread, std::size_t accepted) {
  tell::Summary summary{units - unread, unread, {}, solution.rotations, solution.rotations_known, accepted};
  std::set<std::string> missing;
  for (const Complaint& complaint : facts.complaints)
    if (complaint.kind == ComplaintKind::missing_header) missing.insert(complaint.wrong);
  summary.missing_headers.assign(missing.begin(), missing.end());
  return summary;
}

bool write(const std::string& path, const std::string& text) {
  if (path.empty()) return bool(std::cout << text);
  std::ofstream out(path, std::ios::binary);
  if (out << text) return true;
  std::cerr << "dextral: " << path << " cannot be written\n";
  return false;
}

run::Status lint(const run::Lint& asked) {
  if (not_yet(asked)) {
    std::cerr << "dextral: --format sarif, --known, --update-known, --write-repairs and --dry-run do not work yet\n";
    return run::Status::wrong_call;
  }

  // What to read, how it compiles, what it declares. Where the project file is
  // wrong, all that follows would rest on guesses: it ends here.
  const project::Project project = project::read(asked.request);
  if (!run::tell_project(project)) return run::Status::wrong_call;

  // Each file in a worker process, since Clang may crash or hang on any of them
  // and must not take the others along.
  std::vector<Facts> units = run::read_all(project.units, run::reader(project), asked.limits);
  const std::vector<run::Unread> unread = run::unread(units);

  // One program of many units: frames travel through calls from file to file.
  const Facts facts = join(std::move(units));

  // The frames of every value, and the places where two facts contradict.
  run::raise_stack();
  solve::Solution solution = solve::solve(facts, project.file.frames);

  // Phrases that do not parse are contradictions of another kind; they are told
  // like any other, so that a misspelt contract is not taken for a clean one.
  std::ranges::move(run::wrong_phrases(facts.complaints), std::back_inserter(solution.clashes));

  // Each contradiction to the rule that names it.
  std::vector<Finding> findings = judge(solution);

  // `accept RULE` names rules, so it is met after judging; what accepted
  // nothing is itself a finding.
  const bool whole = asked.request.paths.empty();
  const std::size_t told = findings.size();
  run::Accepted accepted =
      run::accept(std::move(findings), facts.acceptances, run::settled_files(facts, project.units, whole));
  const std::size_t set_aside = told - accepted.findings.size();
  solution.clashes = std::move(accepted.stale);
  std::ranges::move(judge(solution), std::back_inserter(accepted.findings));

  std::erase_if(accepted.findings, [&](const Finding& finding) { return !run::shows(asked, finding.certainty); });
  // The words, in a fixed order whatever the number of workers.
  tell::sort(accepted.findings, facts.files);
  const tell::Style style{std::filesystem::current_path().string(), asked.fail_on, run::colored(asked)};
  const tell::Summary summary = summary_of(facts, solution, project.units.size(), unread.size(), set_aside);
  const bool as_json = asked.format == run::Format::json;
  if (!write(asked.output, as_json ? tell::json(accepted.findings, facts.files, summary, style)
                                   : tell::text(accepted.findings, facts.files, summary, style)))
    return run::Status::wrong_call;
  for (const run::Unread& unit : unread) std::cerr << text(unit) << "\n";
  std::vector<Certainty> certainties;
  for (const Finding& finding : accepted.findings) certainties.push_back(finding.certainty);
  return run::status(asked, unread.empty(), certainties);
}

}  // namespace

}  // namespace dextral

int main(int argc, char** argv) {
  using namespace dextral;
  const run::Command command = run::parse({argv + 1, argv + argc});
  return int(std::visit(
      [](const auto& asked) {
        if constexpr (std::is_same_v<std::decay_t<decltype(asked)>, run::Lint>) {
          return lint(asked);
        } else {
          return run::answer(asked);
        }
      },
      command));
}
