#include "probe/recognise.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <functional>
#include <tuple>

#include "probe/recognise_parts.h"

namespace dextral::probe {

namespace {

constexpr std::size_t kMostInputs = 48;
constexpr std::size_t kTried = 5;  // points that choose
constexpr std::size_t kFresh = 4;  // points that verify

struct Match {
  const Entry* entry = nullptr;
  bool backward = false;
  Things in, out;  // of the candidate, in the order of the entry (backward: in and out exchanged)
  Domain domain = Domain::general;
  bool columns = false;
  int reading = 0;
  double worst = 0;
};

struct Values {
  std::array<double, 160> numbers{};
  std::vector<const double*> things;
};

void gather(const Things& things, const Numbers& from, Values& values) {
  values.things.clear();
  std::size_t n = 0;
  for (const Thing& t : things) {
    values.things.push_back(&values.numbers[n]);
    for (int at : t.at) values.numbers[n++] = from[at];
  }
}

double difference(const double* a, const double* b, std::size_t n, double sign) {
  double scale = 1e-6, worst = 0;
  for (std::size_t i = 0; i < n; ++i) scale = std::max({scale, std::abs(a[i]), std::abs(b[i])});
  for (std::size_t i = 0; i < n; ++i) {
    double d = std::abs(a[i] - sign * b[i]);
    if (!(d <= worst)) worst = d;
  }
  return worst / scale;
}

double difference(const double* got, const double* want, std::size_t n, Sameness sameness) {
  double d = difference(got, want, n, 1);
  if (sameness == Sameness::up_to_sign) d = std::min(d, difference(got, want, n, -1));
  if (sameness != Sameness::up_to_shadow) return d;
  double square = 0;
  for (std::size_t i = 0; i < n; ++i) square += want[i] * want[i];
  std::vector<double> shadow(n);
  for (std::size_t i = 0; i < n; ++i) shadow[i] = -want[i] / square;
  return std::min(d, difference(got, shadow.data(), n, 1));
}

// How far the entry is from taking `from` to `to`; huge where it is undefined.
double disagreement(const Entry& e, const Things& in, const Things& out, const Numbers& from, const Numbers& to) {
  Values arguments, wanted;
  gather(in, from, arguments);
  gather(out, to, wanted);
  std::array<double, 64> computed{};
  std::array<double*, 8> results{};
  std::size_t n = 0;
  for (std::size_t i = 0; i < out.size(); ++i) results[i] = &computed[n], n += out[i].at.size();
  if (!e.eval(arguments.things.data(), results.data())) return 1e300;
  double worst = 0;
  for (std::size_t i = 0; i < out.size(); ++i) {
    double d = difference(wanted.things[i], results[i], out[i].at.size(), e.sameness);
    if (!(d <= worst)) worst = d;
  }
  return worst;
}

// Quaternions and axes that a candidate gives have the length one.
double off_unit(const Things& given, const Numbers& output) {
  double worst = 0;
  for (const Thing& t : given) {
    if (t.at.size() != 4 && !(t.at.size() == 3 && given.size() == 2)) continue;
    double square = 0;
    for (int at : t.at) square += output[at] * output[at];
    worst = std::max(worst, std::abs(std::sqrt(square) - 1));
  }
  return worst;
}

double disagreement(const Match& m, const Trial& t) {
  if (!m.backward) return disagreement(*m.entry, m.in, m.out, t.input, t.output);
  return std::max(disagreement(*m.entry, m.in, m.out, t.output, t.input), off_unit(m.in, t.output));
}

std::vector<int> sizes(const Things& things) {
  std::vector<int> list;
  for (const Thing& t : things) list.push_back(int(t.at.size()));
  std::sort(list.begin(), list.end());
  return list;
}

// Orders of the things whose sizes are those of the entry.
std::vector<Things> orders(const Things& things, const std::vector<int>& wanted) {
  std::vector<int> order(things.size());
  for (std::size_t i = 0; i < order.size(); ++i) order[i] = int(i);
  std::vector<Things> list;
  do {
    Things arranged;
    for (int i : order) arranged.push_back(things[i]);
    bool fits = true;
    for (std::size_t i = 0; i < wanted.size(); ++i) fits &= int(arranged[i].at.size()) == wanted[i];
    if (fits) list.push_back(std::move(arranged));
  } while (std::next_permutation(order.begin(), order.end()));
  return list;
}

class Recogniser {
 public:
  Recogniser(const Signature& s, const Run& run) : signature_(s), points_(s, run) { measurement_.signature = s; }

  Measurement measure() {
    if (!prepare()) return finish();
    live_ = inputs_that_matter();
    if (measurement_.refusal.empty()) whole_or_each();
    return finish();
  }

 private:
  Measurement finish() {
    measurement_.points = points_.runs();
    measurement_.trials = points_.trials();
    return std::move(measurement_);
  }

  bool refuse(std::string why) {
    measurement_.refusal = std::move(why);
    return false;
  }

  bool prepare() {
    if (count(signature_.inputs) > kMostInputs) return refuse("takes more than 48 numbers");
    if (count(signature_.outputs) == 0) return refuse("gives no number");
    if (count(signature_.outputs) > 40) return refuse("gives more than 40 numbers");
    return true;
  }

  // A point to start from: general numbers, else what a group of its size asks for.
  const Trial* start() {
    static constexpr Domain tries[] = {Domain::general, Domain::rotation, Domain::axis, Domain::blend};
    std::vector<bool> every(count(signature_.inputs), true);
    start_things_ = {};
    if (const Trial* t = points_.at(Domain::general, {}, 0)) return t;
    auto all = readings(signature_.inputs, every);
    for (std::size_t i = 0; i < std::min<std::size_t>(all.size(), 3); ++i)
      for (Domain d : tries)
        if (const Trial* t = points_.at(d, all[i], 0)) return start_things_ = all[i], start_domain_ = d, t;
    return nullptr;
  }

  std::vector<bool> inputs_that_matter() {
    std::size_t n = count(signature_.inputs);
    std::vector<bool> live(n, false);
    const Trial* first = start();
    if (!first) {
      refuse(points_.refusal().empty() ? "could not be run" : points_.refusal());
      return live;
    }
    if (n > 0) {
      auto again = points_.run(first->input);
      if (!again || *again != first->output) {
        refuse("gives different results for the same inputs");
        return live;
      }
    }
    varies_.assign(count(signature_.outputs), false);
    look_at_selectors(*first);
    for (std::size_t k = 0; k < 2; ++k)
      if (const Trial* t = points_.at(start_domain_, start_things_, k)) perturb(*t, live);
    return live;
  }

  // A refusal at a changed input counts as dependence.
  void perturb(const Trial& t, std::vector<bool>& live) {
    int at = 0;
    for (const Group& g : signature_.inputs)
      for (std::size_t i = 0; i < g.count; ++i, ++at) {
        if (live[at] || g.integer) continue;
        Numbers x = t.input;
        x[at] += std::abs(x[at]) * 0.37 + 0.01;
        auto y = points_.run(x);
        live[at] = !y || *y != t.output;
        for (std::size_t j = 0; y && j < y->size(); ++j)
          if ((*y)[j] != t.output[j]) varies_[j] = true;
      }
  }

  // A selector that was not held fixed: the measure would speak of one value only.
  void look_at_selectors(const Trial& t) {
    int at = 0;
    for (const Group& g : signature_.inputs)
      for (std::size_t i = 0; i < g.count; ++i, ++at) {
        if (!g.integer) continue;
        for (double value : {1.0, 2.0, 3.0, 4.0, 5.0, 6.0, -1.0, 123.0, 313.0, 321.0}) {
          Numbers x = t.input;
          x[at] = value;
          auto y = points_.run(x);
          if (y && *y != t.output) refuse("depends on the integer " + g.text + ", which selects");
          if (!measurement_.refusal.empty()) return;
        }
      }
  }

  // Outputs that equal an input at every point are told apart from the rest.
  bool untouched(std::size_t group) {
    const Group& o = signature_.outputs[group];
    int out = 0, in = 0;
    for (std::size_t i = 0; i < group; ++i) out += int(signature_.outputs[i].count);
    for (const Group& g : signature_.inputs) {
      if (g.formal == o.formal && g.count == o.count) {
        for (std::size_t k = 0; k < 4; ++k) {
          const Trial* t = points_.at(start_domain_, start_things_, k);
          if (!t || !std::equal(t->input.begin() + in, t->input.begin() + in + int(g.count), t->output.begin() + out))
            return false;
        }
        return true;
      }
      in += int(g.count);
    }
    return false;
  }

  void whole_or_each() {
    std::vector<std::size_t> groups;
    for (std::size_t g = 0; g < signature_.outputs.size(); ++g)
      if (signature_.outputs.size() == 1 || !untouched(g)) groups.push_back(g);
    if (groups.empty()) groups.push_back(0);
    measurement_.meanings = recognise_outputs(groups);
    if (!measurement_.meanings.empty() || groups.size() < 2) return;
    std::vector<std::vector<Meaning>> each;
    for (std::size_t g : groups) {
      each.push_back(recognise_outputs({g}));
      if (each.back().size() != 1) return;
    }
    measurement_.meanings = {joined(each)};
  }

  // Several outputs, each a function of its own. The frames of one contract are
  // not those of another, so only the words are told where they would meet.
  static Meaning joined(const std::vector<std::vector<Meaning>>& each) {
    Meaning all = each[0][0];
    all.contract.clear();
    for (std::size_t i = 1; i < each.size(); ++i) {
      all.id += "+" + each[i][0].id;
      all.words += "; " + each[i][0].words;
    }
    return all;
  }

  std::vector<bool> outputs_of(const std::vector<std::size_t>& groups) {
    std::vector<bool> mask;
    for (std::size_t g = 0; g < signature_.outputs.size(); ++g) {
      bool wanted = std::find(groups.begin(), groups.end(), g) != groups.end();
      mask.insert(mask.end(), signature_.outputs[g].count, wanted);
    }
    return mask;
  }

  // Whole outputs, and those with constant padding left out.
  std::vector<Things> output_readings(const std::vector<std::size_t>& groups) {
    std::vector<bool> mask = outputs_of(groups), varying = mask;
    for (std::size_t i = 0; i < mask.size(); ++i) varying[i] = mask[i] && varies_[i];
    auto list = readings(signature_.outputs, mask);
    bool some = std::find(varying.begin(), varying.end(), true) != varying.end();
    if (some && varying != mask && padding_is_plain(mask, varying))
      for (auto& more : readings(signature_.outputs, varying)) list.push_back(more);
    return list;
  }

  // Left-out constants are those of a homogeneous matrix or of a fourth component.
  bool padding_is_plain(const std::vector<bool>& mask, const std::vector<bool>& varying) {
    const Trial* t = points_.at(start_domain_, start_things_, 0);
    int at = 0;
    for (const Group& g : signature_.outputs) {
      for (int i = 0; i < int(g.count); ++i, ++at) {
        if (!mask[at] || varying[at]) continue;
        double expected = g.count == 16 && i == 15 ? 1 : 0;
        bool fourth = (g.count == 4 && i == 3) || (g.count == 12 && i % 4 == 3);
        bool border = g.count == 16 && (i % 4 == 3 || i >= 12);
        bool fine = (fourth && (t->output[at] == 0 || t->output[at] == 1)) || t->output[at] == expected;
        if (border && t->output[at] != expected) return false;
        if (!fine && (g.count == 4 || g.count == 12 || g.count == 16)) return false;
      }
    }
    return true;
  }

  std::array<double, 2> tolerances() const {
    if (signature_.single_precision) return {1e-5, 2e-4};
    return {1e-9, 2e-6};
  }

  std::vector<Meaning> recognise_outputs(const std::vector<std::size_t>& groups) {
    auto ins = readings(signature_.inputs, live_);
    auto outs = output_readings(groups);
    auto [strict, loose] = tolerances();
    for (bool restricted : {false, true})
      for (bool columns : {false, true}) {
        std::vector<Match> found = search(ins, outs, loose, restricted, columns);
        if (found.empty()) continue;
        auto exact = [&](const Match& m) { return m.worst <= strict; };
        bool some = std::any_of(found.begin(), found.end(), exact);
        if (some) std::erase_if(found, std::not_fn(exact));
        return told(std::move(found), ins, outs, some ? strict : loose, restricted);
      }
    return {};
  }

  std::vector<Match> search(const std::vector<Things>& ins, const std::vector<Things>& outs, double tolerance,
                            bool restricted, bool columns) {
    std::vector<Match> all;
    int reading = 0;
    for (const Things& in : ins)
      for (const Things& out : outs) {
        ++reading;
        if (columns && !any_flat(in) && !any_flat(out)) continue;
        for (Domain domain : domains(in, out, restricted)) {
          auto found = match(in, out, domain, tolerance, columns);
          for (Match& m : found) m.reading = reading, m.columns = columns;
          all.insert(all.end(), found.begin(), found.end());
          if (!found.empty()) break;
        }
      }
    return all;
  }

  static std::vector<Domain> domains(const Things& in, const Things& out, bool restricted) {
    if (!restricted) return {Domain::general};
    auto n = sizes(in);
    auto has = [&](int size) { return std::count(n.begin(), n.end(), size); };
    bool big = has(4) || has(9) || has(12) || has(16);
    std::vector<Domain> list;
    if (big) list.push_back(Domain::rotation);
    if (has(3) && has(1)) list.push_back(Domain::axis);
    if (has(1) && has(4) > 1) list.push_back(Domain::blend);
    return list;
  }

  std::vector<Match> match(const Things& in, const Things& out, Domain domain, double tolerance, bool columns) {
    Shape shape{sizes(in), sizes(out)};
    const auto& forward = catalogue().forward(shape);
    static const std::vector<const Entry*> none;
    const auto& backward = domain == Domain::general ? none : catalogue().backward(shape);
    if (forward.empty() && backward.empty()) return {};
    Things i = columns ? by_columns(in) : in, o = columns ? by_columns(out) : out;
    const Trial* t = points_.at(domain, in, 0);
    if (!t) return {};
    std::vector<Match> alive;
    for (const Entry* e : forward) first_look(*e, i, o, false, domain, *t, tolerance, alive);
    for (const Entry* e : backward) first_look(*e, o, i, true, domain, *t, tolerance, alive);
    return survivors(std::move(alive), in, domain, tolerance);
  }

  static void first_look(const Entry& e, const Things& from, const Things& to, bool backward, Domain domain,
                         const Trial& t, double tolerance, std::vector<Match>& alive) {
    for (const Things& f : orders(from, e.in))
      for (const Things& g : orders(to, e.out)) {
        Match m{&e, backward, f, g, domain};
        m.worst = disagreement(m, t);
        if (m.worst <= tolerance) alive.push_back(std::move(m));
      }
  }

  // Those that also agree at the other points and at the fresh ones. On a
  // domain where the candidate is constant it says nothing.
  std::vector<Match> survivors(std::vector<Match> alive, const Things& in, Domain domain, double tolerance) {
    const Trial* first = points_.at(domain, in, 0);
    bool constant = !in.empty();
    Numbers y0 = first->output;
    for (std::size_t k = 1; k < kTried + kFresh && !alive.empty() && !in.empty(); ++k) {
      const Trial* t = points_.at(domain, in, k);
      if (!t) return {};
      for (std::size_t j = 0; j < y0.size(); ++j) {
        constant &= std::abs(t->output[j] - y0[j]) <= 1e-3 * tolerance + 1e-12;
        if (!varies_[j] && t->output[j] != y0[j]) return {};
      }
      std::erase_if(alive, [&](Match& m) {
        double d = disagreement(m, *t);
        m.worst = std::max(m.worst, d);
        return !(d <= tolerance);
      });
    }
    if (constant) alive.clear();
    return alive;
  }

  static std::vector<int> indices(const Things& things) {
    std::vector<int> all;
    for (const Thing& t : things) all.insert(all.end(), t.at.begin(), t.at.end());
    std::sort(all.begin(), all.end());
    return all;
  }

  // Whether two matches are the same function on their domain. With and without
  // constant padding they are.
  bool same(const Match& a, const Match& b, const Things& in) {
    if (a.domain == Domain::general && indices(a.out) != indices(b.out)) return true;
    if (a.backward != b.backward) return agree_across(a.backward ? b : a, a.backward ? a : b, in);
    for (std::uint64_t seed = 1000; seed < 1010; ++seed) {
      Numbers from = a.backward ? outputs_drawn(seed) : points_.draw(a.domain, in, seed);
      Numbers to(a.backward ? count(signature_.inputs) : count(signature_.outputs), 0.0);
      if (!apply(a, from, to)) continue;
      double d = disagreement(*b.entry, b.in, b.out, from, to);
      if (!(d <= 1e-7)) return false;
    }
    return true;
  }

  Numbers outputs_drawn(std::uint64_t seed) const {
    Numbers y(count(signature_.outputs));
    std::uint64_t state = seed * 0x9E3779B97F4A7C15ull;
    for (double& v : y)
      state = state * 6364136223846793005ull + 1442695040888963407ull, v = double(state >> 40) / (1 << 24) * 60 - 30;
    return y;
  }

  static bool apply(const Match& m, const Numbers& from, Numbers& to) {
    Values arguments;
    gather(m.in, from, arguments);
    std::array<double, 64> computed{};
    std::array<double*, 8> results{};
    std::size_t n = 0;
    for (std::size_t i = 0; i < m.out.size(); ++i) results[i] = &computed[n], n += m.out[i].at.size();
    if (!m.entry->eval(arguments.things.data(), results.data())) return false;
    n = 0;
    for (const Thing& t : m.out)
      for (int at : t.at) to[at] = computed[n++];
    return true;
  }

  bool agree_across(const Match& forward, const Match& backward, const Things& in) {
    for (std::uint64_t seed = 1000; seed < 1010; ++seed) {
      Trial t{points_.draw(forward.domain, in, seed), Numbers(count(signature_.outputs), 0.0)};
      if (apply(forward, t.input, t.output) && !(disagreement(backward, t) <= 1e-7)) return false;
    }
    return true;
  }

  std::vector<Meaning> told(std::vector<Match> found, const std::vector<Things>& ins, const std::vector<Things>& outs,
                            double tolerance, bool restricted) {
    std::stable_sort(found.begin(), found.end(), [](const Match& a, const Match& b) {
      return std::tie(a.entry->rank, a.reading) < std::tie(b.entry->rank, b.reading);
    });
    std::vector<std::vector<Match>> classes;
    for (Match& m : found) {
      auto home = std::find_if(classes.begin(), classes.end(),
                               [&](auto& c) { return same(c[0], m, c[0].backward ? c[0].out : c[0].in); });
      if (home == classes.end())
        classes.push_back({m});
      else
        home->push_back(m);
    }
    std::vector<Meaning> meanings;
    for (auto& c : classes) meanings.push_back(meaning_of(c, ins, outs, tolerance, restricted));
    return meanings;
  }

  Bound bound(const Match& m) const {
    Bound b{.backward = m.backward};
    for (const Thing& t : m.in)
      b.in.push_back(named(m.backward ? signature_.outputs : signature_.inputs, t, m.backward));
    for (const Thing& t : m.out)
      b.out.push_back(named(m.backward ? signature_.inputs : signature_.outputs, t, !m.backward));
    return b;
  }

  Meaning meaning_of(const std::vector<Match>& same, const std::vector<Things>& ins, const std::vector<Things>& outs,
                     double tolerance, bool restricted) {
    const Match& m = same[0];
    Meaning meaning = m.entry->say(bound(m));
    if (m.columns) meaning.words += "; matrices stored by columns";
    meaning.words += restriction(m);
    meaning.words += unused();
    if (tolerance == tolerances()[1])
      meaning.words += signature_.single_precision ? "; to four digits only" : "; to six digits only";
    measurement_.worst = std::max(measurement_.worst, m.worst);
    for (std::size_t i = 1; i < same.size() && meaning.equivalents.size() < 12; ++i) equivalent(meaning, same[i]);
    if (!m.columns)
      for (const Match& c : search(ins, outs, tolerance, restricted, true))
        if (c.reading == m.reading && meaning.equivalents.size() < 12)
          meaning.equivalents.push_back("stored by columns: " + c.entry->say(bound(c)).words);
    return meaning;
  }

  void equivalent(Meaning& meaning, const Match& m) const {
    std::string words = m.entry->say(bound(m)).words;
    if (words != meaning.words &&
        std::find(meaning.equivalents.begin(), meaning.equivalents.end(), words) == meaning.equivalents.end())
      meaning.equivalents.push_back(std::move(words));
  }

  static std::string restriction(const Match& m) {
    if (m.domain == Domain::general) return "";
    const Things& in = m.backward ? m.out : m.in;
    auto n = sizes(in);
    auto has = [&](int size) { return std::count(n.begin(), n.end(), size) > 0; };
    std::string words;
    auto add = [&](bool yes, const char* word) {
      if (yes) words += (words.empty() ? "" : ", ") + std::string(word);
    };
    add(has(9), "rotation matrices");
    add(has(4), "unit quaternions");
    add(has(12) || has(16), "rigid poses");
    add(has(3) && m.domain == Domain::axis, "unit vectors");
    add(has(1) && m.domain == Domain::blend, "fractions");
    return words.empty() ? "" : "; for " + words + " only";
  }

  std::string unused() const {
    std::string words;
    int at = 0;
    for (const Group& g : signature_.inputs) {
      bool none = std::none_of(live_.begin() + at, live_.begin() + at + int(g.count), [](bool b) { return b; });
      at += int(g.count);
      bool written = std::any_of(signature_.outputs.begin(), signature_.outputs.end(),
                                 [&](const Group& o) { return o.formal == g.formal; });
      if (none && !g.integer && !written) words += (words.empty() ? "; does not use " : ", ") + g.text;
    }
    return words;
  }

  const Signature& signature_;
  Points points_;
  Measurement measurement_;
  std::vector<bool> live_, varies_;
  Things start_things_;
  Domain start_domain_ = Domain::general;
};

}  // namespace

Measurement recognise(const Signature& signature, const Run& run) { return Recogniser(signature, run).measure(); }

}  // namespace dextral::probe
