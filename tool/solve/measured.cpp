#include "solve/measured.h"

#include <algorithm>

namespace dextral::solve {

namespace {

Shape shape_of(const Term& term) { return frames(term.quantity).columns.known() ? Shape::matrix : Shape::vector; }

// Adds what a term says of its group, before or after the call.
void add(Function& contract, const Measurement& from, const Meaning& meaning, const Term& term) {
  if (!frames(term.quantity).rows.known()) return;
  const ValueId value = ValueId(contract.values.size());
  contract.values.push_back({shape_of(term), false, term.formal, "", contract.span});
  Hold hold;
  hold.quantity = term.quantity;
  hold.source = Source::measured;
  hold.said = meaning.words;
  hold.phrase = from.span;
  hold.subject = from.name;
  hold.contract = true;
  Operation operation;
  operation.kind = OperationKind::hold;
  operation.operands = {{value, {}, term.formal}};
  operation.item = std::uint32_t(contract.holds.size());
  operation.span = from.span;
  contract.holds.push_back(std::move(hold));
  contract.operations.push_back(std::move(operation));
  if (term.output) contract.exits.emplace_back(term.formal, value);
  else contract.readings.push_back({term.formal, 0, value});
}

// What is read and not written is after the call what it was before.
void keep_inputs(Function& contract) {
  for (const Reading& reading : contract.readings) {
    const bool written = std::any_of(contract.exits.begin(), contract.exits.end(),
                                     [&](const auto& exit) { return exit.first == reading.path; });
    if (!written) contract.exits.emplace_back(reading.path, Snapshot{reading.path, 0, {}});
  }
}

}  // namespace

std::optional<Function> as_contract(const Function& measured, const std::vector<const Measurement*>& measurements) {
  const Meaning* meaning = nullptr;
  for (const Measurement* m : measurements) {
    if (m->meanings.size() != 1 || (meaning && m->meanings[0].id != meaning->id)) return std::nullopt;
    if (!meaning) meaning = &m->meanings[0];
  }
  // What holds for one value of a selector says nothing of the others.
  const bool selects = measurements.size() > 1 || !measurements[0]->selected.empty();
  if (!meaning || meaning->contract.empty() || selects) return std::nullopt;
  Function contract;
  contract.key = measured.key;
  contract.name = measured.name;
  contract.span = measured.span;
  contract.parameter_names = measured.parameter_names;
  for (const Term& term : meaning->contract) add(contract, *measurements[0], *meaning, term);
  keep_inputs(contract);
  return contract;
}

}  // namespace dextral::solve
