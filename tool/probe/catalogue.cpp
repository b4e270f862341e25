#include "probe/catalogue.h"

#include <algorithm>
#include <set>

namespace dextral::probe {

namespace {

Shape shape(std::vector<int> in, std::vector<int> out) {
  std::sort(in.begin(), in.end());
  std::sort(out.begin(), out.end());
  return {in, out};
}

const std::vector<const Entry*>& find(const std::map<Shape, std::vector<const Entry*>>& map, const Shape& key) {
  static const std::vector<const Entry*> none;
  auto found = map.find(key);
  return found == map.end() ? none : found->second;
}

Catalogue all() {
  Catalogue c;
  add_vectors(c);
  add_matrices(c);
  add_sequences(c);
  add_turns(c);
  add_quaternions(c);
  add_rates(c);
  add_euler_rates(c);
  add_maps(c);
  add_poses(c);
  add_units(c);
  return c;
}

}  // namespace

void Catalogue::add(Entry entry) {
  entries_.push_back(std::make_unique<Entry>(std::move(entry)));
  const Entry* e = entries_.back().get();
  if (e->forward) forward_[shape(e->in, e->out)].push_back(e);
  if (e->backward) backward_[shape(e->out, e->in)].push_back(e);
}

const std::vector<const Entry*>& Catalogue::forward(const Shape& key) const { return find(forward_, key); }
const std::vector<const Entry*>& Catalogue::backward(const Shape& key) const { return find(backward_, key); }

std::vector<std::string> Catalogue::ids() const {
  std::set<std::string> ids;
  for (const auto& e : entries_)
    for (bool backward : {false, true}) {
      if (!(backward ? e->backward : e->forward)) continue;
      Bound bound{.backward = backward};
      auto fill = [](const std::vector<int>& sizes, std::vector<Named>& named) {
        for (int n : sizes) named.push_back({.text = "x", .parts = std::vector<std::string>(n, "x")});
      };
      fill(e->in, bound.in);
      fill(e->out, bound.out);
      ids.insert(e->say(bound).id);
    }
  return {ids.begin(), ids.end()};
}

const Catalogue& catalogue() {
  static const Catalogue c = all();
  return c;
}

Frame variable(const std::string& name) { return {.name = name, .variable = true}; }

Quantity in(const std::string& frame) { return {.kind = Kind::vector, .in = variable(frame)}; }

Quantity passive(const std::string& a, const std::string& b) {
  return {.kind = Kind::passive, .first = variable(a), .second = variable(b)};
}

Quantity active(const std::string& a, const std::string& b) {
  return {.kind = Kind::active, .first = variable(a), .second = variable(b)};
}

Quantity map(const std::string& rows, const std::string& columns) { return passive(columns, rows); }

Quantity quaternion_of(Quantity sense, bool scalar_last) {
  sense.scalar = scalar_last ? ScalarPlace::last : ScalarPlace::first;
  sense.product = Product::hamilton;
  sense.maps_by = QuaternionMap::qvq_star;
  sense.form = Form::quaternion;
  return sense;
}

Quantity turn(const std::string& a, const std::string& b, Form form) {
  return {.kind = Kind::turn, .first = variable(a), .second = variable(b), .form = form};
}

Quantity rate(const std::string& of, const std::string& against, const std::string& in) {
  return {.kind = Kind::rate, .in = variable(in), .first = variable(against), .second = variable(of)};
}

Meaning meaning(std::string id, std::string words) { return {.id = std::move(id), .words = std::move(words)}; }

void term(Meaning& m, const Named& named, const Quantity& quantity) {
  if (named.partial) return;
  for (const std::string& formal : named.formals)
    m.contract.push_back({.formal = formal, .output = named.output, .quantity = quantity});
}

}  // namespace dextral::probe
