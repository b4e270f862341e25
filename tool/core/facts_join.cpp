// The facts of all units joined into those of the program.
//
// File numbers are given anew, in the order of the names, so that spans sort
// like the names do. Of a function, field, complaint or acceptance that several
// units saw, one stays. The choice depends on what the units hold, never on the
// order in which they arrive.
//
// Limit: phrases that stand only on a declaration which the unit with the body
// does not include are not carried over to the body.
#include <algorithm>
#include <iterator>
#include <map>
#include <set>
#include <string_view>
#include <tuple>

#include "core/facts.h"

namespace dextral {

namespace {

// Old file numbers of one unit to new ones, put into everything with a span.
class Renumber {
 public:
  Renumber(const FileTable& from, FileTable& to) {
    for (const std::string& name : from.names()) ids_.push_back(to.add(name));
  }

  void in(Span& span) const {
    if (span.file != FileId::none) span.file = ids_.at(std::size_t(span.file));
  }
  void in(Value& x) const { in(x.span); }
  void in(Operand& x) const { in(x.span); }
  void in(Operation& x) const {
    in(x.span);
    in(x.callee);
    each(x.operands);
  }
  void in(Hold& x) const { in(x.phrase); }
  void in(Binding& x) const { in(x.span); }
  void in(Call& x) const { each(x.bindings); }
  void in(Declaration& x) const { in(x.span); }
  void in(FieldFacts& x) const { in(x.span); }
  void in(Complaint& x) const { in(x.span); }
  void in(AcceptanceAt& x) const { in(x.span); }
  void in(Measurement& x) const { in(x.span); }
  void in(Function& x) const {
    in(x.span);
    each(x.values);
    each(x.operations);
    each(x.holds);
    each(x.calls);
    each(x.declarations);
  }
  template <class T>
  void each(std::vector<T>& list) const {
    for (T& item : list) in(item);
  }

 private:
  std::vector<FileId> ids_;
};

void renumber(Facts& unit, FileTable& files) {
  Renumber numbers(unit.files, files);
  numbers.each(unit.functions);
  numbers.each(unit.fields);
  numbers.each(unit.complaints);
  numbers.each(unit.acceptances);
  numbers.each(unit.measurements);
}

FileTable all_files(const std::vector<Facts>& units) {
  std::set<std::string> names;
  for (const Facts& unit : units) names.insert(unit.files.names().begin(), unit.files.names().end());
  FileTable table;
  for (const std::string& name : names) table.add(name);
  return table;
}

// With a body first, then the first file, then the unit that understood most.
auto order(const Function& f) {
  return std::tuple(!f.body, f.span.file, -std::int64_t(f.operations.size()), f.span.begin);
}
auto order(const FieldFacts& f) { return std::tuple(!f.known, f.span); }
auto order(const Complaint& c) {
  return std::tuple(c.span, c.kind, std::string_view(c.wrong), std::string_view(c.message),
                    std::string_view(c.nearest));
}
auto order(const AcceptanceAt& a) {
  return std::tuple(a.span, std::string_view(a.acceptance.rule), std::string_view(a.acceptance.reason), a.from, a.to);
}

// What was measured comes before what could not be.
auto order(const Measurement& m) {
  std::vector<std::pair<std::string, long long>> selected;
  for (const Selected& s : m.selected) selected.emplace_back(s.formal, s.value);
  return std::tuple(std::string_view(m.key), std::move(selected), !m.refusal.empty(), m.span);
}

// Of several with one key the first by `order` stays; of equals the first seen.
template <class T>
class ByKey {
 public:
  void add(std::vector<T>& list) {
    for (T& item : list) {
      auto [kept, fresh] = items_.try_emplace(item.key, item);
      if (!fresh && order(item) < order(kept->second)) kept->second = std::move(item);
    }
  }
  std::vector<T> take() {
    std::vector<T> list;
    for (auto& [key, item] : items_) list.push_back(std::move(item));
    return list;
  }

 private:
  std::map<std::string, T> items_;
};

template <class T>
void append(std::vector<T>& to, std::vector<T>& from) {
  std::move(from.begin(), from.end(), std::back_inserter(to));
}

template <class T>
void sort_and_keep_once(std::vector<T>& list) {
  std::sort(list.begin(), list.end(), [](const T& a, const T& b) { return order(a) < order(b); });
  auto same = [](const T& a, const T& b) { return order(a) == order(b); };
  list.erase(std::unique(list.begin(), list.end(), same), list.end());
}

// Two programs of one project may each define a function of the same name: the
// second body gets a key of its own, and its unit's calls go there.
class Bodies {
 public:
  void tell_apart(Facts& unit, const FileTable& files) {
    std::map<std::string, std::string> renamed;
    for (Function& f : unit.functions) {
      if (!f.body) continue;
      auto [first, fresh] = places_.try_emplace(f.key, f.span.file, f.span.begin.line);
      if (fresh || first->second == std::pair(f.span.file, f.span.begin.line)) continue;
      renamed[f.key] = f.key + " in " + files.name(f.span.file);
      f.key = renamed[f.key];
    }
    if (renamed.empty()) return;
    for (Function& f : unit.functions)
      for (Call& call : f.calls)
        if (auto other = renamed.find(call.callee); other != renamed.end()) call.callee = other->second;
  }

 private:
  std::map<std::string, std::pair<FileId, std::uint32_t>> places_;
};

}  // namespace

bool exclude_each_other(const Operation& a, const Operation& b) {
  return std::any_of(a.arms.begin(), a.arms.end(), [&](std::uint32_t arm) {
    return std::find(b.arms.begin(), b.arms.end(), arm ^ 1u) != b.arms.end();
  });
}

Facts join(std::vector<Facts> units) {
  std::sort(units.begin(), units.end(), [](const Facts& a, const Facts& b) { return a.unit < b.unit; });
  Facts program;
  program.files = all_files(units);
  program.read = true;
  ByKey<Function> functions;
  ByKey<FieldFacts> fields;
  Bodies bodies;
  for (Facts& unit : units) {
    program.read = program.read && unit.read;
    renumber(unit, program.files);
    bodies.tell_apart(unit, program.files);
    functions.add(unit.functions);
    fields.add(unit.fields);
    append(program.complaints, unit.complaints);
    append(program.acceptances, unit.acceptances);
    append(program.measurements, unit.measurements);
  }
  program.functions = functions.take();
  program.fields = fields.take();
  sort_and_keep_once(program.complaints);
  sort_and_keep_once(program.acceptances);
  sort_and_keep_once(program.measurements);
  return program;
}

}  // namespace dextral
