// The points: deterministic pseudo-random numbers. Numbers and triples of
// general points are about one at even points and some tens at odd ones, so
// that an angle is far from small in radians and in degrees. Rotations keep
// away from the singular points of all twelve sequences.
#include <algorithm>
#include <cmath>

#include "probe/catalogue_numbers.h"
#include "probe/recognise_parts.h"

namespace dextral::probe {

namespace {

constexpr std::size_t kDraws = 16;
constexpr std::size_t kMostRuns = 150;

class Dice {
 public:
  explicit Dice(std::uint64_t seed) : state_(seed * 0x9E3779B97F4A7C15ull + 0x1234567) {}
  double next() {  // 0 to 1
    state_ += 0x9E3779B97F4A7C15ull;
    std::uint64_t z = state_;
    z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9ull;
    z = (z ^ (z >> 27)) * 0x94D049BB133111EBull;
    return double((z ^ (z >> 31)) >> 11) * 0x1p-53;
  }
  double between(double low, double high) { return low + (high - low) * next(); }
  double either(double low, double high) { return (next() < 0.5 ? -1 : 1) * between(low, high); }

 private:
  std::uint64_t state_;
};

// Exact in single precision.
double rounded(double x) { return static_cast<float>(x); }

Quat any_unit(Dice& dice) {
  for (;;) {
    Quat q{dice.either(0.1, 1), dice.either(0.1, 1), dice.either(0.1, 1), dice.either(0.1, 1)};
    q = unit(q);
    Mat m = rotation(q);
    if (std::all_of(m.begin(), m.end(), [](double x) { return std::abs(x) < 0.93 && std::abs(x) > 0.03; })) return q;
  }
}

Mat any_matrix(Dice& dice) {
  for (;;) {
    Mat m{};
    for (double& x : m) x = dice.either(0.1, 1.2);
    if (std::abs(determinant(m)) > 0.4) return m;
  }
}

void fill(Numbers& x, const std::vector<int>& at, const double* values) {
  for (std::size_t i = 0; i < at.size(); ++i) x[at[i]] = values[i];
}

void pose(Dice& dice, Numbers& x, const std::vector<int>& at, bool rotations) {
  Mat m = rotations ? rotation(any_unit(dice)) : any_matrix(dice);
  for (int i = 0; i < 3; ++i) {
    for (int j = 0; j < 3; ++j) x[at[4 * i + j]] = m[3 * i + j];
    x[at[4 * i + 3]] = rounded(dice.either(0.3, 2));
  }
  if (at.size() == 16)
    for (int j = 0; j < 4; ++j) x[at[12 + j]] = rotations ? (j == 3) : rounded(dice.either(0.2, 1.5));
}

void special(Dice& dice, Numbers& x, const Thing& thing, Domain domain) {
  const auto& at = thing.at;
  if (at.size() == 9)
    return fill(x, at, (domain == Domain::general ? any_matrix(dice) : rotation(any_unit(dice))).data());
  if (at.size() == 12 || at.size() == 16) return pose(dice, x, at, domain != Domain::general);
  if (domain == Domain::general) return;
  if (at.size() == 4) return fill(x, at, any_unit(dice).data());
  if (at.size() == 3 && domain == Domain::axis) {
    Vec v = unit(vector_part(any_unit(dice)));
    return fill(x, at, v.data());
  }
  if (at.size() == 1 && domain == Domain::blend) x[at[0]] = rounded(dice.between(0.1, 0.9));
}

// General numbers by the size of their group, where no thing says more.
Numbers base(const Signature& s, Dice& dice, bool large) {
  Numbers x;
  for (const Group& g : s.inputs) {
    if (g.integer) {
      x.insert(x.end(), g.count, 0.0);
      continue;
    }
    for (std::size_t i = 0; i < g.count; ++i)
      x.push_back(rounded(large && (g.count == 1 || g.count == 3) ? dice.either(15, 80) : dice.either(0.2, 1.3)));
  }
  return x;
}

}  // namespace

std::size_t count(const std::vector<Group>& groups) {
  std::size_t n = 0;
  for (const Group& g : groups) n += g.count;
  return n;
}

Points::Points(const Signature& s, const Run& run)
    : signature_(s), run_(run), inputs_(count(s.inputs)), outputs_(count(s.outputs)) {}

std::optional<Numbers> Points::run(const Numbers& x) {
  if (runs_ >= kMostRuns) return std::nullopt;
  ++runs_;
  auto result = run_(x);
  if (auto* refused = std::get_if<Refusal>(&result)) {
    if (refusal_.empty()) refusal_ = refused->why;
    return std::nullopt;
  }
  Numbers y = std::get<Numbers>(std::move(result));
  if (y.size() != outputs_) {
    if (refusal_.empty()) refusal_ = "gives another count of numbers than declared";
    return std::nullopt;
  }
  if (!std::all_of(y.begin(), y.end(), [](double v) { return std::isfinite(v); })) {
    if (refusal_.empty()) refusal_ = "gives no finite number";
    return std::nullopt;
  }
  return y;
}

Numbers Points::draw(Domain domain, const Things& things, std::uint64_t seed) const {
  Dice dice(seed * 8 + std::uint64_t(domain));
  Numbers x = base(signature_, dice, seed % 2);
  for (const Thing& thing : things) special(dice, x, thing, domain);
  return x;
}

const Trial* Points::at(Domain domain, const Things& things, std::size_t k) {
  std::vector<std::vector<int>> key;
  for (const Thing& t : things) key.push_back(t.at);
  Series& series = series_[{domain, key}];
  while (series.trials.size() <= k) {
    if (series.drawn >= k + kDraws) return nullptr;
    Numbers x = draw(domain, things, series.drawn++);
    auto y = run(x);
    if (!y) {
      if (++series.failed >= kDraws || runs_ >= kMostRuns) return nullptr;
      continue;
    }
    series.trials.push_back({std::move(x), std::move(*y)});
  }
  return &series.trials[k];
}

std::vector<Trial> Points::trials() const {
  std::vector<Trial> all;
  for (const auto& [key, series] : series_)
    for (const Trial& t : series.trials)
      if (all.size() < 4) all.push_back(t);
  return all;
}

}  // namespace dextral::probe
