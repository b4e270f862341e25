#include "run/accept.h"

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

Accepted accept(std::vector<Finding> findings, const std::vector<AcceptanceAt>& acceptances, bool all_read) {
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
  for (std::size_t i = 0; all_read && i < acceptances.size(); ++i)
    if (!used[i]) result.stale.push_back(stale(acceptances[i]));
  return result;
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
