#include "probe/probe.h"

#include <algorithm>

#include "probe/drive.h"
#include "probe/drive_constants.h"
#include "probe/drive_globals.h"

namespace dextral::probe {

namespace {

constexpr std::size_t kMostSteps = 1'000'000'000;  // for the functions of one unit

Measurement named(const Candidate& candidate, Measurement measurement) {
  measurement.key = candidate.key;
  measurement.name = candidate.name;
  measurement.span = candidate.span;
  return measurement;
}

Measurement refused(const Candidate& candidate, const std::string& why) {
  Measurement measurement;
  measurement.refusal = why;
  return named(candidate, std::move(measurement));
}

// A selector takes no number of a trial, but has a name for people.
void add_selectors(const Candidate& candidate, Measurement& measurement) {
  for (const Formal& formal : candidate.formals)
    for (const Bundle& bundle : formal.object.bundles)
      for (const Selected& one : measurement.selected)
        if (bundle.group.integer && one.formal == bundle.group.formal) {
          measurement.signature.inputs.push_back(bundle.group);
          measurement.signature.inputs.back().count = 0;
        }
}

Measurement measure_one(const std::shared_ptr<Stage>& stage, const std::vector<Selected>& selected, std::size_t& steps) {
  const Candidate& candidate = stage->candidate();
  std::variant<Driven, Refusal> driven = drive(stage, selected);
  Measurement measurement;
  if (const auto* refusal = std::get_if<Refusal>(&driven)) {
    measurement = refused(candidate, refusal->why);
  } else {
    const Driven& ready = std::get<Driven>(driven);
    measurement = named(candidate, recognise(ready.signature, ready.run));
    measurement.signature = ready.signature;
    measurement.steps = ready.effort->longest;
    steps += ready.effort->total;
  }
  if (const std::string called = "calls "; measurement.refusal.starts_with(called))
    if (stage->kit().missing.contains(measurement.refusal.substr(called.size()))) measurement.refusal += ", defined elsewhere";
  measurement.selected = selected;
  add_selectors(candidate, measurement);
  return measurement;
}

bool is_refused(const Measurement& measurement) { return !measurement.refusal.empty(); }

// Of values that a function does not take nothing is told, where it takes others.
std::vector<Measurement> measure_all(const Kit& kit, const Candidate& candidate, std::size_t& steps) {
  if (!candidate.refusal.empty()) return {refused(candidate, candidate.refusal)};
  if (steps > kMostSteps) return {refused(candidate, "comes after " + std::to_string(kMostSteps) + " steps in the same file")};
  std::vector<Measurement> list;
  auto stage = std::make_shared<Stage>(kit, candidate);
  for (const std::vector<Selected>& selected : selections(*stage)) list.push_back(measure_one(stage, selected, steps));
  if (std::all_of(list.begin(), list.end(), is_refused)) list.resize(std::min<std::size_t>(list.size(), 1));
  else std::erase_if(list, is_refused);
  return list;
}

}  // namespace

Report measure(const project::Unit& unit, const project::Project& project, const Wanted& wanted, const Elsewhere& elsewhere,
               FileTable& files) {
  Kit kit = emit(unit, project, wanted, files);
  fix_constants(kit);
  link(kit, project, elsewhere);
  expose_globals(kit);
  Report report;
  report.refusal = kit.refusal;
  if (!kit.module && !kit.candidates.empty() && report.refusal.empty()) report.refusal = "Clang emits no code for it";
  std::size_t steps = 0;
  for (const Candidate& candidate : kit.candidates) {
    std::vector<Measurement> list = kit.module ? measure_all(kit, candidate, steps) : std::vector{refused(candidate, report.refusal)};
    report.measurements.insert(report.measurements.end(), list.begin(), list.end());
  }
  return report;
}

}  // namespace dextral::probe
