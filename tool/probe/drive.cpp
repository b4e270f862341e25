#include "probe/drive.h"

#include <llvm/Demangle/Demangle.h>
#include <llvm/IR/Function.h>
#include <llvm/IR/InstrTypes.h>
#include <llvm/IR/Module.h>

#include <algorithm>
#include <set>

#include "probe/drive_points.h"

namespace dextral::probe {

namespace {

constexpr std::size_t kMostInputs = 40;
constexpr std::size_t kMostOutputs = 16;
constexpr std::size_t kMostSelections = 64;
constexpr std::size_t kMostSteps = 60'000'000;  // of all runs of one selection

// One number of the signature: where it stands.
struct Slot {
  std::size_t formal = 0;
  std::size_t leaf = 0;
};

struct Plan {
  Signature signature;
  std::vector<Slot> inputs, outputs;
  Setting integers;
};

// What several runs with everything set have shown.
struct Touched {
  std::vector<std::vector<bool>> read, written, always;  // always: written in every run
  bool returns_argument = false;
  std::set<std::string> globals;
  std::size_t runs = 0;
  std::string refusal;  // of the first run that was refused
};

void merge(std::vector<std::vector<bool>>& all, const std::vector<std::vector<bool>>& one, bool both) {
  if (all.empty()) {
    all = one;
    return;
  }
  for (std::size_t i = 0; i < all.size(); ++i)
    for (std::size_t j = 0; j < all[i].size(); ++j) all[i][j] = both ? all[i][j] && one[i][j] : all[i][j] || one[i][j];
}

Touched touch(Stage& stage, const Setting& integers) {
  Touched touched;
  touched.returns_argument = true;
  for (std::size_t point = 0; point < kTouchingPoints; ++point) {
    const Outcome outcome = stage.run(touching_point(stage.candidate(), integers, point));
    touched.globals.insert(outcome.globals.begin(), outcome.globals.end());
    if (!outcome.refusal.empty()) {
      if (touched.refusal.empty()) touched.refusal = outcome.refusal;
      continue;
    }
    ++touched.runs;
    touched.returns_argument = touched.returns_argument && outcome.returns_argument;
    merge(touched.read, outcome.read, false);
    merge(touched.written, outcome.written, false);
    merge(touched.always, outcome.written, true);
  }
  return touched;
}

Setting integers_of(const Candidate& candidate, const std::vector<Selected>& selected) {
  Setting setting = empty_setting(candidate);
  for (std::size_t i = 0; i < candidate.formals.size(); ++i) {
    std::size_t leaf = 0;
    for (const Bundle& bundle : candidate.formals[i].object.bundles) {
      if (bundle.group.integer) {
        double value = bundle.values.empty() ? 0 : double(bundle.values.front());
        for (const Selected& one : selected)
          if (one.formal == bundle.group.formal) value = double(one.value);
        setting[i][leaf] = value;
      }
      leaf += bundle.leaves.size();
    }
  }
  return setting;
}

// One past the last that is touched.
std::size_t extent(const std::vector<bool>& touched, std::size_t first, std::size_t count) {
  for (std::size_t n = count; n > 0; --n)
    if (touched[first + n - 1]) return n;
  return 0;
}

bool every(const std::vector<bool>& touched, std::size_t first, std::size_t count) {
  return std::all_of(touched.begin() + std::ptrdiff_t(first), touched.begin() + std::ptrdiff_t(first + count), [](bool b) { return b; });
}

Group counted(Group group, std::size_t count, bool open) {
  group.count = count;
  if (!open || group.columns == 0) return group;
  group.rows = count % group.columns == 0 ? count / group.columns : 0;
  if (group.rows < 2 || group.columns < 2) group.rows = group.columns = 0;
  return group;
}

void append(std::vector<Slot>& slots, std::size_t formal, std::size_t first, std::size_t count) {
  for (std::size_t i = 0; i < count; ++i) slots.push_back({formal, first + i});
}

void plan_bundle(Plan& plan, const Touched& touched, const Formal& formal, std::size_t index, const Bundle& bundle, std::size_t first,
                 bool is_result) {
  const std::size_t all = bundle.leaves.size();
  const bool open = formal.object.open;
  std::size_t in = is_result ? 0 : extent(touched.read[index], first, all);
  std::size_t out = formal.behind_pointer || is_result ? extent(touched.written[index], first, all) : 0;
  if (!is_result && !formal.behind_pointer && formal.passing.kind == Passing::Kind::pieces) in = all;
  if (!open) in = in ? all : 0, out = out ? all : 0;
  if (out && !is_result && !every(touched.always[index], first, out)) in = std::max(in, out);
  if (in) {
    plan.signature.inputs.push_back(counted(bundle.group, in, open));
    append(plan.inputs, index, first, in);
  }
  if (out) {
    plan.signature.outputs.push_back(counted(bundle.group, out, open));
    append(plan.outputs, index, first, out);
  }
}

Plan plan_of(const Candidate& candidate, const Touched& touched, Setting integers) {
  Plan plan;
  plan.integers = std::move(integers);
  for (std::size_t i = 0; i < formal_count(candidate); ++i) {
    const bool is_result = i >= candidate.formals.size();
    if (is_result && touched.returns_argument) continue;
    std::size_t first = 0;
    for (const Bundle& bundle : formal_at(candidate, i).object.bundles) {
      if (!bundle.group.integer) plan_bundle(plan, touched, formal_at(candidate, i), i, bundle, first, is_result);
      first += bundle.leaves.size();
    }
  }
  return plan;
}

bool narrows(const llvm::Function& function, std::set<const llvm::Function*>& seen) {
  if (!seen.insert(&function).second) return false;
  for (const llvm::BasicBlock& block : function)
    for (const llvm::Instruction& instruction : block) {
      if (instruction.getType()->getScalarType()->isFloatTy()) return true;
      const auto* call = llvm::dyn_cast<llvm::CallBase>(&instruction);
      if (call && call->getCalledFunction() && narrows(*call->getCalledFunction(), seen)) return true;
    }
  return false;
}

bool is_narrow(const Kit& kit, const Candidate& candidate) {
  for (std::size_t i = 0; i < formal_count(candidate); ++i)
    for (const Bundle& bundle : formal_at(candidate, i).object.bundles)
      for (const Leaf& leaf : bundle.leaves)
        if (leaf.number == Number::single_float) return true;
  const llvm::Function* function = kit.module->getFunction(candidate.symbol);
  std::set<const llvm::Function*> seen;
  return function && narrows(*function, seen);
}

std::string read_global(const std::string& symbol) { return "reads the global " + llvm::demangle(symbol) + ", whose value is not known"; }

std::string written_global(const Candidate& candidate, const std::vector<std::vector<bool>>& written) {
  for (std::size_t i = 0; i < candidate.formals.size(); ++i)
    if (candidate.formals[i].fixed_at && std::find(written[i].begin(), written[i].end(), true) != written[i].end())
      return "writes to the " + candidate.formals[i].name;
  return "";
}

// What a global held before the run is no input of this run.
bool reads_other_global(const Candidate& candidate, const Outcome& outcome, const Setting& setting) {
  for (std::size_t i = 0; i < candidate.formals.size(); ++i)
    for (std::size_t n = 0; candidate.formals[i].fixed_at && n < setting[i].size(); ++n)
      if (outcome.read[i][n] && !setting[i][n]) return true;
  return false;
}

std::string why_not(const Candidate& candidate, const Plan& plan, const Touched& touched) {
  if (std::string why = written_global(candidate, touched.written); !why.empty()) return why;
  if (!touched.globals.empty()) return read_global(*touched.globals.begin());
  if (plan.outputs.empty()) return "writes no numbers";
  if (plan.outputs.size() > kMostOutputs) return "gives " + std::to_string(plan.outputs.size()) + " numbers";
  if (plan.inputs.size() > kMostInputs) return "takes " + std::to_string(plan.inputs.size()) + " numbers";
  return "";
}

}  // namespace

std::variant<Driven, Refusal> drive(const std::shared_ptr<Stage>& stage, const std::vector<Selected>& selected) {
  const Candidate& candidate = stage->candidate();
  const Setting integers = integers_of(candidate, selected);
  const Touched touched = touch(*stage, integers);
  if (touched.runs == 0) return Refusal{touched.refusal};
  Plan plan = plan_of(candidate, touched, integers);
  plan.signature.single_precision = is_narrow(stage->kit(), candidate);
  if (std::string why = why_not(candidate, plan, touched); !why.empty()) return Refusal{why};
  Driven driven{plan.signature, {}, std::make_shared<Effort>()};
  driven.run = [stage, plan, effort = driven.effort](const Numbers& numbers) -> std::variant<Numbers, Refusal> {
    if (numbers.size() != plan.inputs.size()) return Refusal{"is given other numbers than it takes"};
    if (effort->total > kMostSteps) return Refusal{"takes more than " + std::to_string(kMostSteps) + " steps in all"};
    Setting setting = plan.integers;
    for (std::size_t i = 0; i < numbers.size(); ++i) setting[plan.inputs[i].formal][plan.inputs[i].leaf] = numbers[i];
    const Outcome outcome = stage->run(setting);
    effort->longest = std::max(effort->longest, outcome.steps);
    effort->total += outcome.steps;
    if (!outcome.refusal.empty()) return Refusal{outcome.refusal};
    if (!outcome.globals.empty()) return Refusal{read_global(outcome.globals.front())};
    if (reads_other_global(stage->candidate(), outcome, setting)) return Refusal{"reads a global only here and there"};
    if (std::string why = written_global(stage->candidate(), outcome.written); !why.empty()) return Refusal{why};
    Numbers results;
    for (const Slot& slot : plan.outputs) {
      if (!outcome.after[slot.formal][slot.leaf]) return Refusal{"leaves a result unset"};
      results.push_back(*outcome.after[slot.formal][slot.leaf]);
    }
    return results;
  };
  return driven;
}

std::vector<std::vector<Selected>> selections(Stage& stage) {
  const Candidate& candidate = stage.candidate();
  // An integer in memory counts where it is read; one by value always may.
  const Touched touched = touch(stage, integers_of(candidate, {}));
  std::vector<const Bundle*> chosen;
  for (std::size_t i = 0; i < candidate.formals.size(); ++i) {
    std::size_t leaf = 0;
    for (const Bundle& bundle : candidate.formals[i].object.bundles) {
      const bool by_value = !candidate.formals[i].behind_pointer && candidate.formals[i].passing.kind == Passing::Kind::pieces;
      if (bundle.group.integer && (by_value || touched.runs == 0 || touched.read[i][leaf])) chosen.push_back(&bundle);
      leaf += bundle.leaves.size();
    }
  }
  const long long usual = chosen.size() < 2 ? 13 : chosen.size() == 2 ? 4 : 2;
  std::vector<std::vector<Selected>> list{{}};
  for (const Bundle* bundle : chosen) {
    std::vector<long long> values = bundle->values;
    for (long long value = 0; bundle->values.empty() && value < usual; ++value) values.push_back(value);
    if (list.size() * values.size() > kMostSelections) values.resize(std::max<std::size_t>(1, kMostSelections / list.size()));
    std::vector<std::vector<Selected>> longer;
    for (const std::vector<Selected>& one : list)
      for (long long value : values) {
        longer.push_back(one);
        longer.back().push_back({bundle->group.formal, value});
      }
    list = std::move(longer);
  }
  return list;
}

}  // namespace dextral::probe
