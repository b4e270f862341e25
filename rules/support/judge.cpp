// Each clash goes to the first rule, in the order of rank, that says it is its own.
#include <algorithm>

#include "rules/rule.h"

namespace dextral {

namespace {

std::string says(const Frame& frame, const std::string& points) { return frame.known() ? text(frame) : points; }

}  // namespace

std::vector<Finding> judge(const solve::Solution& solution) {
  std::vector<const Rule*> order;
  for (const Rule& rule : rules()) order.push_back(&rule);
  std::sort(order.begin(), order.end(), [](const Rule* a, const Rule* b) { return std::tie(a->rank, a->id) < std::tie(b->rank, b->id); });
  std::vector<Finding> findings;
  for (const solve::Clash& clash : solution.clashes) {
    auto rule = std::find_if(order.begin(), order.end(), [&](const Rule* r) { return r->fits(clash); });
    if (rule == order.end()) continue;
    Finding finding;
    finding.rule = (*rule)->id;
    finding.certainty = clash.certainty;
    finding.span = clash.span;
    finding.function = clash.function;
    finding.sentence = (*rule)->sentence(clash);
    finding.left = clash.left_proof;
    finding.right = clash.right_proof;
    finding.left_says = says(clash.left, clash.left_points);
    finding.right_says = says(clash.right, clash.right_points);
    finding.repairs = clash.repairs;
    if ((*rule)->witness) finding.witness = (*rule)->witness(clash);
    findings.push_back(std::move(finding));
  }
  return findings;
}

}  // namespace dextral
