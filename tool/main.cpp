// dextral: the order of the steps, and nothing else. Each step takes what the
// step before gave; no step calls the next (docs/architecture.md).
#include <algorithm>
#include <filesystem>
#include <iterator>
#include <optional>
#include <set>
#include <type_traits>

#include "core/facts.h"
#include "project/project.h"
#include "rules/rule.h"
#include "run/accept.h"
#include "run/answers.h"
#include "run/commands.h"
#include "run/deliver.h"
#include "run/unread.h"
#include "run/workers.h"
#include "solve/solve.h"
#include "tell/report.h"

namespace dextral {

namespace {

tell::Summary summary_of(const Facts& facts, const solve::Solution& solution, std::size_t units,
                         const std::vector<run::Unread>& unread) {
  tell::Summary summary{units - unread.size(), unread.size(), {}, solution.rotations, solution.rotations_known};
  std::set<std::string> missing;
  for (const Complaint& complaint : facts.complaints)
    if (complaint.kind == ComplaintKind::missing_header) missing.insert(complaint.wrong);
  summary.missing_headers.assign(missing.begin(), missing.end());
  for (const run::Unread& unit : unread) summary.unread.push_back({unit.unit, unit.lost, unit.why});
  return summary;
}

std::vector<Certainty> certainties(const std::vector<Finding>& findings) {
  std::vector<Certainty> all;
  for (const Finding& finding : findings) all.push_back(finding.certainty);
  return all;
}

// Paths for people are told from where they stand, those for programs from the
// project's root.
std::string report(const run::Lint& asked, const std::vector<Finding>& findings, const FileTable& files,
                   const tell::Summary& summary, const std::string& root) {
  const std::string from = asked.format == run::Format::text ? std::filesystem::current_path().string() : root;
  const tell::Style style{from, asked.fail_on, run::colored(asked), DEXTRAL_VERSION};
  switch (asked.format) {
    case run::Format::json:
      return tell::json(findings, files, summary, style);
    case run::Format::sarif:
      return tell::sarif(findings, files, summary, style);
    case run::Format::text:
      break;
  }
  return tell::text(findings, files, summary, style);
}

run::Status lint(const run::Lint& asked) {
  // What to read, how it compiles, what it declares. Where the project file is
  // wrong, all that follows would rest on guesses: it ends here.
  const project::Project project = project::read(asked.request);
  if (!run::tell_project(project)) return run::Status::wrong_call;
  std::optional<std::vector<tell::Known>> known = run::read_known(asked);
  if (!known) return run::Status::wrong_call;

  // Each file in a worker process, since Clang may crash or hang on any of them
  // and must not take the others along.
  std::vector<Facts> units = run::read_all(project.units, run::reader(project), asked.limits);
  const std::vector<run::Unread> unread = run::unread(units);

  // What home-grown functions really do.
  if (asked.probe) run::add_measurements(units, project, asked.limits);

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
  const std::set<FileId> settled = run::settled_files(facts, project.units, asked.request.paths.empty());
  run::Accepted accepted = run::accept(std::move(findings), facts.acceptances, settled);
  solution.clashes = std::move(accepted.stale);
  std::ranges::move(judge(solution), std::back_inserter(accepted.findings));

  // A fixed order, whatever the number of workers; then what the ledger knows
  // is set aside.
  tell::sort(accepted.findings, facts.files);
  const std::string root = run::told_root(project);
  std::optional<tell::SetAside> told =
      run::settle(asked, std::move(accepted.findings), std::move(*known), facts.files, root, settled);
  if (!told) return run::Status::wrong_call;
  std::erase_if(told->fresh, [&](const Finding& finding) { return !run::shows(asked, finding.certainty); });

  // The words, and what is left behind.
  tell::Summary summary = summary_of(facts, solution, project.units.size(), unread);
  summary.accepted = accepted.set_aside.size();
  summary.known = told->known;
  summary.gone = told->gone;
  const std::string words = asked.dry_run ? run::repairs_as_diff(told->fresh, facts.files, project)
                                          : report(asked, told->fresh, facts.files, summary, root);
  if (asked.dry_run || !asked.output.empty()) run::tell_unread(unread);
  const bool delivered = run::deliver(asked, words);
  if (!delivered || !run::write_repairs(asked, told->fresh, facts.files, project)) return run::Status::wrong_call;
  return run::status(asked, unread.empty(), certainties(told->fresh));
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
