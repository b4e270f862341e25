// Functions are solved bottom-up over the call graph; what stays free is
// generalised into a scheme, so every call gets its own copy. Functions that
// call each other are solved twice: the second time with what the first pass
// found. In each body a clash is traced to its culprit, the culprit is taken
// out, and solving goes on, so that one fault gives one finding.
//
// Limits: at most kMostClashes findings a body; a method chosen at run time
// speaks by its contract only; fields without a phrase are followed along
// calls, not from one method to another that no caller joins.
#include "solve/solve.h"

#include <algorithm>
#include <functional>
#include <iterator>
#include <set>

#include "solve/body.h"
#include "solve/clash.h"
#include "solve/measured.h"
#include "solve/points.h"
#include "solve/repair.h"

namespace dextral::solve {

namespace {

constexpr int kMostClashes = 50;

std::string contract_key(const std::string& key) { return key + " contract"; }

Function contract_of(const Function& function) {
  Function contract = function;
  std::erase_if(contract.operations, [&](const Operation& op) {
    return op.kind != OperationKind::hold || !function.holds.at(op.item).contract;
  });
  return contract;
}

// Callees before callers; a cycle is cut where it was entered.
std::vector<std::size_t> bottom_up(const std::vector<Function>& functions, std::set<std::size_t>& recursive) {
  std::map<std::string, std::size_t> index;
  for (std::size_t i = 0; i < functions.size(); ++i) index.emplace(functions[i].key, i);
  std::vector<int> state(functions.size(), 0);
  std::vector<std::size_t> order;
  std::vector<std::pair<std::size_t, std::size_t>> stack;
  for (std::size_t root = 0; root < functions.size(); ++root) {
    if (state[root]) continue;
    stack.emplace_back(root, 0);
    state[root] = 1;
    while (!stack.empty()) {
      auto& [at, next] = stack.back();
      if (next == functions[at].calls.size()) {
        state[at] = 2;
        order.push_back(at);
        stack.pop_back();
        continue;
      }
      auto callee = index.find(functions[at].calls[next++].callee);
      if (callee == index.end()) continue;
      if (state[callee->second] == 1) {
        for (auto it = stack.rbegin(); it != stack.rend(); ++it) {
          recursive.insert(it->first);
          if (it->first == callee->second) break;
        }
      } else if (state[callee->second] == 0) {
        state[callee->second] = 1;
        stack.emplace_back(callee->second, 0);
      }
    }
  }
  return order;
}

std::string last_name(const std::string& qualified) {
  std::size_t colon = qualified.rfind("::");
  return colon == std::string::npos ? qualified : qualified.substr(colon + 2);
}

// Do two functions name their parameters alike, but for one?
bool take_alike(const Function& f, const Function& g) {
  std::size_t different = 0;
  for (std::size_t i = 0; i < f.parameter_names.size(); ++i) different += f.parameter_names[i] != g.parameter_names[i];
  return different <= 1;
}

Twins twins_of(const std::vector<Function>& functions) {
  std::map<std::pair<std::size_t, char>, std::vector<const Function*>> groups;
  for (const Function& f : functions) {
    std::string name = last_name(f.name);
    if (f.body && !name.empty() && f.parameter_names.size() >= 2) groups[{f.parameter_names.size(), name[0]}].push_back(&f);
  }
  Twins twins;
  for (const auto& [key, group] : groups)
    for (const Function* f : group)
      for (const Function* g : group) {
        std::vector<std::string> other{last_name(g->name)};
        if (f == g || group.size() > 200 || last_name(f->name) == other[0] || twins[f->key].size() >= 6) continue;
        if (!take_alike(*f, *g)) continue;
        if (nearest_word(last_name(f->name), other)) twins[f->key].emplace_back(g->key, g->name);
      }
  return twins;
}

// Dispatched calls are answered by contract.
Function dispatched_by_contract(Function function) {
  for (Call& call : function.calls)
    if (call.dispatched) call.callee = contract_key(call.callee);
  return function;
}

class Program {
 public:
  Program(const Facts& facts, const FrameCatalogue& frames) : facts_(facts), frames_(frames), twins_(twins_of(facts.functions)) {
    for (const Function& f : facts.functions) functions_.push_back(dispatched_by_contract(f));
    solution_.values.resize(functions_.size());
    for (const Measurement& m : facts.measurements) measured_[m.key].push_back(&m);
  }

  Solution run() {
    std::set<std::size_t> recursive;
    std::vector<std::size_t> order = bottom_up(facts_.functions, recursive);
    for (const Function& f : functions_) add_scheme(contract_key(f.key), contract_of(f), false);
    for (std::size_t i : order)
      if (recursive.contains(i)) add_scheme(functions_[i].key, functions_[i], true);
    for (std::size_t i : order) solve(i);
    for (std::size_t i : order) std::ranges::move(point_clashes(functions_[i], reached_), std::back_inserter(solution_.clashes));
    sort();
    return std::move(solution_);
  }

 private:
  Setting setting(bool first_pass = false) const { return {schemes_, twins_, frames_, first_pass}; }

  void add_scheme(const std::string& key, const Function& function, bool first_pass) {
    Sheeted sheeted = sheet_of(function, setting(first_pass), {});
    schemes_[key] = scheme_of(function, sheeted, setting());
  }

  void solve(std::size_t index) {
    const Function& function = functions_[index];
    std::set<std::uint32_t> removed;
    Sheeted sheeted = sheet_of(function, setting(), removed);
    for (int i = 0; i < kMostClashes && !sheeted.conflicts.empty(); ++i) {
      Culprit culprit = find_culprit(function, setting(), removed, sheeted);
      if (is_of_callee(function, sheeted)) {  // told there
        remove_contracts(function, culprit.operation, removed);
        sheeted = sheet_of(function, setting(), removed);
        continue;
      }
      record(function, culprit, removed, sheeted);
      removed.insert(culprit.operation);
      removed.insert(culprit.cleared.begin(), culprit.cleared.end());
      if (solution_.clashes.back().kind == ClashKind::contract) remove_contracts(function, culprit.operation, removed);
      sheeted = sheet_of(function, setting(), removed);
    }
    solution_.values[index] = known(function, sheeted);
    count(function, solution_.values[index]);
    schemes_[function.key] = scheme_of(function, sheeted, setting());
    add_measured(function);
  }

  // What running it has shown holds beside what its text says.
  void add_measured(const Function& function) {
    auto found = measured_.find(function.key);
    if (found == measured_.end()) return;
    const std::optional<Function> contract = as_contract(function, found->second);
    if (!contract) return;
    Sheeted sheeted = sheet_of(*contract, setting(), {});
    Scheme scheme = scheme_of(*contract, sheeted, setting());
    std::ranges::move(schemes_[function.key].edges, std::back_inserter(scheme.edges));
    schemes_[function.key] = std::move(scheme);
  }

  // Phrases that contradict each other: nobody knows which is right, so the body
  // is held against none of them.
  static void remove_contracts(const Function& function, std::uint32_t refused, std::set<std::uint32_t>& removed) {
    const Hold& told = function.holds.at(function.operations[refused].item);
    for (std::uint32_t i = 0; i < function.operations.size(); ++i) {
      const Operation& op = function.operations[i];
      if (op.kind != OperationKind::hold) continue;
      const Hold& hold = function.holds.at(op.item);
      if (hold.subject == told.subject && hold.formal == told.formal && hold.call == told.call) removed.insert(i);
    }
  }

  // Two phrases of a callee's parameter contradict each other.
  static bool is_of_callee(const Function& function, const Sheeted& sheeted) {
    const Conflict& conflict = sheeted.conflicts.front();
    return is_of_phrases(function, sheeted, conflict) && function.holds.at(function.operations[conflict.operation].item).call >= 0;
  }

  void record(const Function& function, const Culprit& culprit, const std::set<std::uint32_t>& removed, Sheeted& surfaced) {
    Sheeted last = sheet_of(function, setting(), removed, nullptr, culprit.operation);
    auto told = std::find_if(last.conflicts.begin(), last.conflicts.end(),
                             [&](const Conflict& c) { return c.operation == culprit.operation; });
    bool found = told != last.conflicts.end();
    solution_.clashes.push_back(found ? clash_of(function, last, *told, culprit)
                                      : clash_of(function, surfaced, surfaced.conflicts.front(), culprit));
  }

  static std::vector<KnownFrames> known(const Function& function, const Sheeted& sheeted) {
    std::vector<KnownFrames> list(function.values.size());
    for (std::size_t i = 0; i < list.size(); ++i) {
      NodeId rows = sheeted.values[i];
      if (const Frame* frame = sheeted.sheet.frame(rows)) list[i].rows = *frame;
      if (const Frame* frame = sheeted.sheet.frame(NodeId(std::uint32_t(rows) + 1))) list[i].columns = *frame;
    }
    return list;
  }

  void count(const Function& function, const std::vector<KnownFrames>& values) {
    for (const Declaration& declaration : function.declarations) {
      if (!declaration.rotation || declaration.value == ValueId::none) continue;
      const KnownFrames& frames = values.at(std::size_t(declaration.value));
      ++solution_.rotations;
      if (frames.rows.known() && frames.columns.known()) ++solution_.rotations_known;
    }
  }

  void sort() {
    for (const FieldFacts& field : facts_.fields) {
      solution_.rotations += field.rotation;
      solution_.rotations_known += field.rotation && field.known;
    }
    auto key = [this](const Clash& c) {
      return std::tuple(facts_.files.name(c.span.file), c.span.begin, c.span.end, int(c.kind), c.expression, c.left, c.right);
    };
    auto& clashes = solution_.clashes;
    std::sort(clashes.begin(), clashes.end(), [&](const Clash& a, const Clash& b) { return key(a) < key(b); });
    auto same = [&](const Clash& a, const Clash& b) { return a.span == b.span && a.kind == b.kind; };
    clashes.erase(std::unique(clashes.begin(), clashes.end(), same), clashes.end());
  }

  const Facts& facts_;
  const FrameCatalogue& frames_;
  Twins twins_;
  std::vector<Function> functions_;
  Schemes schemes_;
  ReachedBy reached_;
  std::map<std::string, std::vector<const Measurement*>> measured_;
  Solution solution_;
};

}  // namespace

Solution solve(const Facts& facts, const FrameCatalogue& frames) { return Program(facts, frames).run(); }

}  // namespace dextral::solve
