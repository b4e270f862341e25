#include "run/accept.h"

#include <algorithm>
#include <string>
#include <utility>

namespace dextral::run {

namespace {

bool covers(const AcceptanceAt& a, const Finding& finding) {
  return a.acceptance.rule == finding.rule && a.span.file == finding.span.file &&
         a.from.line <= finding.span.begin.line && finding.span.begin.line <= a.to.line;
}

solve::Clash stale(const AcceptanceAt& a) {
  solve::Clash clash;
  clash.kind = solve::ClashKind::stale;
  clash.span = a.span;
  clash.wrong = a.acceptance.rule;
  clash.message = a.acceptance.reason;
  return clash;
}

}  // namespace

Accepted accept(std::vector<Finding> findings, const std::vector<AcceptanceAt>& acceptances,
                const std::set<FileId>& settled) {
  Accepted result;
  std::vector<bool> used(acceptances.size(), false);
  for (Finding& finding : findings) {
    bool accepted = false;
    for (std::size_t i = 0; i < acceptances.size(); ++i) {
      if (!covers(acceptances[i], finding)) continue;
      used[i] = accepted = true;
    }
    (accepted ? result.set_aside : result.findings).push_back(std::move(finding));
  }
  for (std::size_t i = 0; i < acceptances.size(); ++i)
    if (!used[i] && settled.contains(acceptances[i].span.file)) result.stale.push_back(stale(acceptances[i]));
  return result;
}

std::set<FileId> settled_files(const Facts& joined, const std::vector<project::Unit>& units, bool whole_project) {
  if (!joined.read || std::any_of(joined.complaints.begin(), joined.complaints.end(), about_reading)) return {};
  std::set<std::string> asked;
  for (const project::Unit& unit : units) asked.insert(unit.file);
  std::set<FileId> settled;
  for (std::size_t i = 0; i < joined.files.names().size(); ++i)
    if (whole_project || asked.contains(joined.files.names()[i])) settled.insert(FileId(i));
  return settled;
}

bool about_reading(const Complaint& complaint) {
  return complaint.kind == ComplaintKind::compile_error || complaint.kind == ComplaintKind::missing_header;
}

std::vector<solve::Clash> wrong_phrases(const std::vector<Complaint>& complaints) {
  std::vector<solve::Clash> clashes;
  for (const Complaint& complaint : complaints) {
    if (about_reading(complaint)) continue;
    solve::Clash clash;
    clash.kind = solve::ClashKind::phrase;
    clash.span = complaint.span;
    clash.wrong = complaint.wrong;
    clash.message = complaint.message;
    clash.nearest = complaint.nearest;
    clashes.push_back(std::move(clash));
  }
  return clashes;
}

}  // namespace dextral::run
