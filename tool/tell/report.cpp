#include "tell/report.h"

#include <algorithm>
#include <tuple>

namespace dextral::tell {

const char* const kCaution = "An aid, not a proof: certification rules and the responsible engineers decide.";

void sort(std::vector<Finding>& findings, const FileTable& files) {
  auto less = [&](const Finding& a, const Finding& b) {
    return std::tie(files.name(a.span.file), a.span.begin, a.span.end, a.rule, a.sentence) <
           std::tie(files.name(b.span.file), b.span.begin, b.span.end, b.rule, b.sentence);
  };
  std::stable_sort(findings.begin(), findings.end(), less);
  auto same = [](const Finding& a, const Finding& b) {
    return a.span == b.span && a.rule == b.rule && (a.span.valid() || a.sentence == b.sentence);
  };
  findings.erase(std::unique(findings.begin(), findings.end(), same), findings.end());
}

}  // namespace dextral::tell
