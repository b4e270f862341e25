// What a library model claims, computed without the library.
//
// models.test.py writes one function per modelled call: it makes the library's
// objects from plain numbers, calls the library, and reads the result back
// through the library's own transform function, so that a matrix, quaternion
// or pose is known by what it does to vectors. Here are the plain numbers and
// the claims: each operation of the algebra as a formula on them.
//
// A Thing is a map x -> linear x + offset, a vector, a row, or numbers. Every
// call is tried on several random operands. Where an operation has no single
// formula (an interpolation, a comparison) the claim that is left is tried:
// that it commutes with a change of frames.
#pragma once

#include <array>
#include <cmath>
#include <cstdio>
#include <functional>
#include <random>
#include <string>
#include <vector>

namespace reference {

using Triple = std::array<double, 3>;
using Square = std::array<Triple, 3>;

enum class Kind { none, vector, row, matrix, rotation, pose, number, numbers };

struct Thing {
  Kind kind = Kind::none;
  Square linear{};                 // maps
  Triple vector{};                 // vectors, rows; the offset of a pose
  std::array<double, 4> xyzw{};    // of a rotation, the quaternion of map q v q*
  std::vector<double> numbers;     // number, numbers
};
using Things = std::vector<Thing>;

inline const Square kIdentity{{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}};

inline Thing vector(Triple v) { return {.kind = Kind::vector, .vector = v}; }
inline Thing row(Triple v) { return {.kind = Kind::row, .vector = v}; }
inline Thing number(double n) { return {.kind = Kind::number, .numbers = {n}}; }
inline Thing numbers(std::vector<double> n) { return {.kind = Kind::numbers, .numbers = std::move(n)}; }
inline Thing pose(const Square& m, Triple t) { return {.kind = Kind::pose, .linear = m, .vector = t}; }
inline Thing matrix(const Square& m) { return {.kind = Kind::matrix, .linear = m}; }

// The linear map that a function applies to a triple.
template <class Function>
Square linear_of(Function f) {
  Square m;
  const Triple origin = f(Triple{0, 0, 0});
  for (int j = 0; j < 3; ++j) {
    Triple unit{};
    unit[j] = 1;
    const Triple image = f(unit);
    for (int i = 0; i < 3; ++i) m[i][j] = image[i] - origin[i];
  }
  return m;
}
template <class Function>
Thing linear_map(Function f) { return matrix(linear_of(f)); }
template <class Function>
Thing affine_map(Function f) { return pose(linear_of(f), f(Triple{0, 0, 0})); }

inline Triple operator+(Triple a, Triple b) { return {a[0] + b[0], a[1] + b[1], a[2] + b[2]}; }
inline Triple operator-(Triple a, Triple b) { return {a[0] - b[0], a[1] - b[1], a[2] - b[2]}; }
inline Triple scaled(double s, Triple a) { return {s * a[0], s * a[1], s * a[2]}; }
inline double dot(Triple a, Triple b) { return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]; }
inline Triple cross(Triple a, Triple b) {
  return {a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]};
}
inline Triple mapped(const Square& m, Triple v) { return {dot(m[0], v), dot(m[1], v), dot(m[2], v)}; }
inline Square transposed(const Square& m) {
  return {{{m[0][0], m[1][0], m[2][0]}, {m[0][1], m[1][1], m[2][1]}, {m[0][2], m[1][2], m[2][2]}}};
}
inline Square multiplied(const Square& a, const Square& b) {
  const Square columns = transposed(b);
  Square c;
  for (int i = 0; i < 3; ++i) c[i] = mapped(columns, a[i]);
  return c;
}
inline Square inverted(const Square& m) {
  const Square cofactors{cross(m[1], m[2]), cross(m[2], m[0]), cross(m[0], m[1])};
  const double determinant = dot(m[0], cofactors[0]);
  Square r = transposed(cofactors);
  for (auto& line : r) line = scaled(1 / determinant, line);
  return r;
}
inline Square skewed(Triple v) { return {{{0, -v[2], v[1]}, {v[2], 0, -v[0]}, {-v[1], v[0], 0}}}; }

// Rodrigues' formula, unit axis, right-hand rule: the active rotation.
inline Square turned(Triple axis, double angle) {
  const Square k = skewed(axis), kk = multiplied(k, k);
  Square r = kIdentity;
  for (int i = 0; i < 3; ++i) r[i] = r[i] + scaled(std::sin(angle), k[i]) + scaled(1 - std::cos(angle), kk[i]);
  return r;
}
inline Square of_quaternion(const std::array<double, 4>& q) {
  const Triple v{q[0], q[1], q[2]};
  const Square k = skewed(v), kk = multiplied(k, k);
  const double norm = dot(v, v) + q[3] * q[3];
  Square r = kIdentity;
  for (int i = 0; i < 3; ++i) r[i] = r[i] + scaled(2 * q[3] / norm, k[i]) + scaled(2 / norm, kk[i]);
  return r;
}

using Quaternion = std::array<double, 4>;  // x y z w, ij = k
inline Quaternion multiplied(const Quaternion& p, const Quaternion& q) {
  const Triple a{p[0], p[1], p[2]}, b{q[0], q[1], q[2]};
  const Triple v = scaled(p[3], b) + scaled(q[3], a) + cross(a, b);
  return {v[0], v[1], v[2], p[3] * q[3] - dot(a, b)};
}
inline Quaternion conjugate(const Quaternion& q) { return {-q[0], -q[1], -q[2], q[3]}; }

// ---- random operands

struct Random {
  std::mt19937 engine{19};
  double operator()(double from, double to) { return std::uniform_real_distribution<double>(from, to)(engine); }
  Triple triple() { return {(*this)(-2, 2), (*this)(-2, 2), (*this)(-2, 2)}; }
  Triple unit() {
    const Triple v = triple();
    return scaled(1 / std::sqrt(dot(v, v)), v);
  }
};

inline Thing sample(const std::string& kind, Random& random) {
  Thing t;
  if (kind == "vector" || kind == "unit") {
    t = vector(kind == "unit" ? random.unit() : random.triple());
  } else if (kind == "row") {
    t = row(random.triple());
  } else if (kind == "number") {
    t = number(random(0.15, 0.95));
  } else if (kind == "general") {
    t = matrix({random.triple(), random.triple(), random.triple()});
  } else {
    const Triple axis = random.unit();
    const double angle = random(0.3, 2.6);
    for (int i = 0; i < 3; ++i) t.xyzw[i] = axis[i] * std::sin(angle / 2);
    t.xyzw[3] = std::cos(angle / 2);
    t.linear = turned(axis, angle);
    t.kind = kind == "pose" ? Kind::pose : kind == "matrix" ? Kind::matrix : Kind::rotation;
    if (kind == "pose") t.vector = random.triple();
  }
  return t;
}

// ---- comparison

inline bool is_map(const Thing& t) {
  return t.kind == Kind::matrix || t.kind == Kind::rotation || t.kind == Kind::pose;
}

inline double distance(Triple a, Triple b) { return std::sqrt(dot(a - b, a - b)); }
inline double distance(const Square& a, const Square& b) {
  return distance(a[0], b[0]) + distance(a[1], b[1]) + distance(a[2], b[2]);
}
inline double distance(const Thing& a, const Thing& b) {
  if (is_map(a) && is_map(b)) {
    const bool both = a.kind == Kind::pose && b.kind == Kind::pose;
    return distance(a.linear, b.linear) + (both ? distance(a.vector, b.vector) : 0);
  }
  if (a.kind != b.kind) return 1e9;
  if (a.numbers.size() != b.numbers.size()) return 1e9;
  double d = distance(a.vector, b.vector);
  for (std::size_t i = 0; i < a.numbers.size(); ++i) d += std::abs(a.numbers[i] - b.numbers[i]);
  return d;
}

inline std::vector<double> all_numbers(const Thing& t) {
  std::vector<double> n = t.numbers;
  if (is_map(t))
    for (const auto& line : t.linear) n.insert(n.end(), line.begin(), line.end());
  if (!is_map(t) || t.kind == Kind::pose) n.insert(n.end(), t.vector.begin(), t.vector.end());
  n.insert(n.end(), t.xyzw.begin(), t.xyzw.end());
  return n;
}

// ---- the claims

struct Claim {
  std::string call;   // for people
  std::string is;     // as in the model
  std::vector<int> of;
  std::vector<int> turned;  // operands taken transposed
  std::vector<std::string> kinds;  // of argument 0, 1, ...; "" where there is none
  std::string order, sequence, sense, turning, unit;
  int base = 0, index = -1;
  int factor = 0;  // of a copy; 0: any
  std::vector<int> angles;
  bool interpolates = false;
  bool conjugate = false;  // a quaternion object of the library stands for q* v q
  double tolerance = 1e-9;
};
using Call = std::function<Thing(const Things&)>;

inline Thing product(const Thing& a, const Thing& b, bool free) {
  const bool moves = a.kind == Kind::pose && !free;
  if (is_map(a) && b.kind == Kind::vector)
    return vector(mapped(a.linear, b.vector) + (moves ? a.vector : Triple{}));
  if (is_map(a) && is_map(b)) {
    const Square m = multiplied(a.linear, b.linear);
    if (a.kind != Kind::pose && b.kind != Kind::pose) return matrix(m);
    return pose(m, mapped(a.linear, b.vector) + a.vector);
  }
  if (a.kind == Kind::row && is_map(b)) return row(mapped(transposed(b.linear), a.vector));
  if (a.kind == Kind::row && b.kind == Kind::vector) return number(dot(a.vector, b.vector));
  if (a.kind == Kind::vector && b.kind == Kind::row)
    return matrix({scaled(a.vector[0], b.vector), scaled(a.vector[1], b.vector), scaled(a.vector[2], b.vector)});
  return {};
}

inline Thing inverse(const Thing& a) {
  const Square m = inverted(a.linear);
  return a.kind == Kind::pose ? pose(m, scaled(-1, mapped(m, a.vector))) : matrix(m);
}

inline Things operands(const Claim& c, const Things& arguments) {
  Things o;
  for (int k : c.of) {
    Thing t = arguments.at(k);
    for (int turned : c.turned)
      if (turned == k) {
        if (t.kind == Kind::pose) t = inverse(t);
        else t.linear = transposed(t.linear);
        if (t.kind == Kind::vector || t.kind == Kind::row) t.kind = t.kind == Kind::vector ? Kind::row : Kind::vector;
      }
    o.push_back(t);
  }
  return o;
}

inline Thing transpose(const Thing& a) {
  if (a.kind == Kind::vector) return row(a.vector);
  if (a.kind == Kind::row) return vector(a.vector);
  return matrix(transposed(a.linear));
}

inline Thing combined(const Thing& a, const Thing& b, double sign) {
  Thing r = a;
  r.vector = a.vector + scaled(sign, b.vector);
  for (int i = 0; i < 3; ++i) r.linear[i] = a.linear[i] + scaled(sign, b.linear[i]);
  return r;
}

inline Thing with_translation(const Thing& m, const Thing& t, bool added) {
  const Triple old = added && m.kind == Kind::pose ? m.vector : Triple{};
  return pose(m.linear, t.vector + old);
}

// The values that the claim allows: one of them must hold in every trial.
inline Things allowed(const Claim& c, const Things& o, int k) {
  const auto column = [&] { return Triple{o[0].linear[0][k], o[0].linear[1][k], o[0].linear[2][k]}; };
  if (c.is == "product") return {product(o[0], o[1], false), product(o[0], o[1], true)};
  if (c.is == "transpose") return {transpose(o[0])};
  if (c.is == "inverse") return {inverse(o[0])};
  if (c.is == "sum") return {combined(o[0], o[1], 1)};
  if (c.is == "difference") return {combined(o[0], o[1], -1)};
  if (c.is == "cross") return {{.kind = o[0].kind, .vector = cross(o[0].vector, o[1].vector)}};
  if (c.is == "skew") return {matrix(skewed(o[0].vector))};
  if (c.is == "unskew") return {vector({o[0].linear[2][1], o[0].linear[0][2], o[0].linear[1][0]})};
  if (c.is == "translation") return {vector(o[0].vector)};
  if (c.is == "pose") return {with_translation(o[0], o[1], false), with_translation(o[0], o[1], true)};
  if (c.is == "column") return {vector(column())};
  if (c.is == "row") return {vector(o[0].linear[k]), row(o[0].linear[k])};
  if (c.is == "columns" || c.is == "rows") {
    const Square rows{o[0].vector, o[1].vector, o[2].vector};
    return {matrix(c.is == "rows" ? rows : transposed(rows))};
  }
  if (c.is == "transform")
    return {matrix(multiplied(multiplied(o[0].linear, o[1].linear), transposed(o[0].linear)))};
  return {};
}

inline bool proportional(const std::vector<double>& a, const std::vector<double>& b, double tolerance) {
  double ab = 0, aa = 0, bb = 0;
  for (std::size_t i = 0; i < a.size(); ++i) ab += a[i] * b[i], aa += a[i] * a[i], bb += b[i] * b[i];
  return aa > 0 && bb > 0 && std::abs(std::abs(ab) - std::sqrt(aa * bb)) <= tolerance * (1 + aa + bb);
}

// A copy keeps direction: of a vector up to a factor, of a map its linear part.
inline bool copied(const Thing& from, const Thing& to, double tolerance) {
  if (is_map(from) && is_map(to)) {
    const auto flat = [](const Square& m) {
      return std::vector<double>{m[0][0], m[0][1], m[0][2], m[1][0], m[1][1], m[1][2], m[2][0], m[2][1], m[2][2]};
    };
    return proportional(flat(from.linear), flat(to.linear), tolerance);
  }
  return from.kind == to.kind && from.numbers.size() == to.numbers.size() &&
         proportional({from.vector.begin(), from.vector.end()}, {to.vector.begin(), to.vector.end()}, tolerance);
}

// The thing with its components in other axes: rows turned by g, columns by h.
inline Thing reframed(const Thing& t, const Thing& g, const Thing& h) {
  Thing r = t;
  r.vector = mapped(g.linear, t.vector);
  if (!is_map(t)) return r;
  r.linear = multiplied(multiplied(g.linear, t.linear), transposed(h.linear));
  r.xyzw = multiplied(multiplied(g.xyzw, t.xyzw), conjugate(h.xyzw));
  return r;
}

// The argument that holds all angles, or -1.
inline int triple_of_angles(const Claim& c) {
  int place = -1;
  for (std::size_t i = 0; i < c.kinds.size(); ++i) {
    if (c.kinds[i] == "number") return -1;
    if (c.kinds[i] == "vector") place = int(i);
  }
  return c.is == "build" && !c.sequence.empty() ? place : -1;
}

inline Square built(const Claim& c, const Things& a) {
  std::vector<Triple> axes;
  for (char s : c.sequence) axes.push_back(kIdentity.at(s - '1'));
  if (axes.empty())
    for (const auto& t : a)
      if (t.kind == Kind::vector) axes.push_back(t.vector);
  const int triple = triple_of_angles(c);  // then `angles` counts its components
  Square r = kIdentity;
  for (std::size_t i = 0; i < axes.size(); ++i) {
    const int place = c.angles.at(i);
    const double given = triple >= 0 ? a.at(triple).vector.at(place - 1) : a.at(place).numbers.at(0);
    const double angle = given * (c.unit == "deg" ? std::acos(-1.0) / 180 : 1);
    const Square one = turned(axes[i], angle);
    r = c.turning == "fixed" ? multiplied(one, r) : multiplied(r, one);
  }
  return c.sense == "passive" ? transposed(r) : r;
}

// ---- the trials

inline Things arguments(const Claim& c, Random& random) {
  Things a;
  for (const auto& kind : c.kinds) a.push_back(kind.empty() ? Thing{} : sample(kind, random));
  return a;
}

inline bool alike_under_frames(const Claim& c, const Call& call, Random& random) {
  Things a = arguments(c, random), b = a;
  const Thing g = sample("matrix", random), h = sample("matrix", random);
  for (int k : c.of) b[k] = reframed(a[k], g, h);
  const Thing x = call(a), y = call(b);
  if (c.is != "dot") return distance(reframed(x, g, h), y) <= 1e3 * c.tolerance;
  if (x.numbers.empty()) return false;
  for (std::size_t i = 0; i < x.numbers.size(); ++i)
    if (std::abs(x.numbers[i] - y.numbers.at(i)) > 1e3 * c.tolerance) return false;
  return true;
}

inline bool formula_holds(const Claim& c, const Call& call, Random& random, int k) {
  std::vector<bool> holds(2, true);
  for (int trial = 0; trial < 4; ++trial) {
    Things a = arguments(c, random);
    if (c.is == "column" || c.is == "row")
      for (std::size_t i = 0; i < c.kinds.size(); ++i)
        if (c.kinds[i] == "number") a[i] = number(k + c.base);
    const Thing got = call(a);
    const Things expected = allowed(c, operands(c, a), k);
    holds.resize(expected.size());
    for (std::size_t i = 0; i < expected.size(); ++i)
      if (!(distance(got, expected[i]) <= c.tolerance * 100)) holds[i] = false;
  }
  for (bool h : holds)
    if (h) return true;
  return false;
}

inline bool copies(const Claim& c, const Call& call, Random& random) {
  for (int trial = 0; trial < 4; ++trial) {
    const Things a = arguments(c, random);
    const Thing from = operands(c, a).at(0), to = call(a);
    if (!copied(from, to, c.tolerance)) return false;
    if (c.factor && distance(to.vector, scaled(c.factor, from.vector)) > c.tolerance * 100) return false;
  }
  return true;
}

inline bool builds(const Claim& c, const Call& call, Random& random) {
  for (int trial = 0; trial < 4; ++trial) {
    Things a = arguments(c, random);
    for (std::size_t i = 0; i < a.size(); ++i)
      if (c.kinds[i] == "vector" && triple_of_angles(c) < 0) a[i] = sample("unit", random);
      else if (c.kinds[i] == "number" && c.unit == "deg") a[i].numbers[0] *= 50;
    if (!(distance(matrix(built(c, a)), call(a)) <= c.tolerance * 100)) return false;
  }
  return true;
}

// The angles come back in the order of the sequence.
inline bool extracts(const Claim& c, const Call& call, Random& random) {
  for (int trial = 0; trial < 4; ++trial) {
    const Things a = arguments(c, random);
    Thing got = call(a);
    if (got.kind == Kind::vector) got = numbers({got.vector[0], got.vector[1], got.vector[2]});
    Claim back = c;
    back.angles.clear();
    Things angles{Thing{}};
    for (std::size_t i = 0; i < got.numbers.size(); ++i) {
      angles.push_back(number(got.numbers[i]));
      back.angles.push_back(int(i) + 1);
    }
    if (back.angles.size() != c.sequence.size()) return false;
    if (!(distance(built(back, angles), operands(c, a).at(0).linear) <= c.tolerance * 100)) return false;
  }
  return true;
}

// Numbers in the order that the model names make the thing.
inline bool assembles(const Claim& c, const Call& call, Random& random) {
  int count = 0;
  for (std::size_t i = 1; i < c.kinds.size(); ++i) count += c.kinds[i] == "number";
  const Thing target = sample(count == 3 ? "vector" : count >= 12 ? "pose" : "rotation", random);
  const Quaternion own = c.conjugate ? conjugate(target.xyzw) : target.xyzw;
  std::vector<double> n;
  const int rows = count == 12 && c.order == "columns" ? 3 : count >= 12 ? 4 : 3;
  const auto entry = [&](int i, int j) {
    if (i == 3) return double(j == 3);
    return j == 3 ? target.vector[i] : target.linear[i][j];
  };
  if (count == 3) n.assign(target.vector.begin(), target.vector.end());
  else if (count == 4 && c.order == "xyzw") n.assign(own.begin(), own.end());
  else if (count == 4 && c.order == "wxyz") n = {own[3], own[0], own[1], own[2]};
  else if (count == 9 || count == 16 || count == 12)
    for (int k = 0; k < count; ++k) {
      const int width = count == 9 ? 3 : 4;
      if (c.order == "rows") n.push_back(entry(k / width, k % width));
      else if (c.order == "columns") n.push_back(entry(k % rows, k / rows));
    }
  if (int(n.size()) != count) return false;
  Things a = arguments(c, random);
  for (std::size_t i = 1, k = 0; i < a.size(); ++i)
    if (c.kinds[i] == "number") a[i] = number(n[k++]);
  Thing got = call(a);
  if (got.kind == Kind::row) got.kind = Kind::vector;
  return distance(got, target) <= c.tolerance * 100;
}

inline bool reads_element(const Claim& c, const Call& call, Random& random) {
  const Things start = arguments(c, random);
  const Thing o = operands(c, start).at(0);
  const Quaternion own = c.conjugate ? conjugate(o.xyzw) : o.xyzw;
  std::vector<int> places;
  for (std::size_t i = 0; i < c.kinds.size(); ++i)
    if (c.kinds[i] == "number") places.push_back(int(i));
  const bool flat_vector = o.kind == Kind::vector || o.kind == Kind::row;
  const int count = flat_vector ? 3 : o.kind == Kind::rotation ? 4 : 9;
  for (int k = 0; k < count; ++k) {
    if (c.index >= 0 && k != c.index) continue;
    Things a = start;
    if (places.size() == 1) a[places[0]] = number(k + c.base);
    if (places.size() == 2) a[places[0]] = number(k / 3 + c.base), a[places[1]] = number(k % 3 + c.base);
    const double expected = flat_vector ? o.vector[k] : o.kind == Kind::rotation ? own[k] : o.linear[k / 3][k % 3];
    const Thing got = call(a);
    if (got.numbers.size() != 1 || std::abs(got.numbers[0] - expected) > c.tolerance * 100) return false;
  }
  return true;
}

// A setter of one component: of {1} into 0.
inline bool writes_element(const Claim& c, const Call& call, Random& random) {
  const Things a = arguments(c, random);
  Thing expected = a.at(0);
  const double written = a.at(1).numbers.at(0);
  if (is_map(expected)) {
    expected.xyzw.at(c.index) = written;
    expected.linear = of_quaternion(expected.xyzw);
    return copied(matrix(expected.linear), matrix(call(a).linear), c.tolerance * 100);
  }
  expected.vector.at(c.index) = written;
  return distance(expected, call(a)) <= c.tolerance * 100;
}

inline bool takes_part(const Claim& c, const Call& call, Random& random) {
  const Things a = arguments(c, random);
  const auto whole = all_numbers(operands(c, a).at(0));
  for (double n : all_numbers(call(a))) {
    bool found = n == 0 || n == 1;
    for (double w : whole) found = found || std::abs(n - w) <= c.tolerance * 10;
    if (!found) return false;
  }
  return true;
}

inline bool fills(const Claim& c, const Call& call, Random& random) {
  const Things a = arguments(c, random);
  const Thing got = call(a);
  for (std::size_t i = 1; i < a.size(); ++i)
    if (a[i].kind == Kind::number)
      for (double n : all_numbers(got))
        if (n != 0 && std::abs(n - a[i].numbers[0]) > c.tolerance * 10) return false;
  return true;
}

// A literal does not depend on what stood there before.
inline bool is_constant(const Claim& c, const Call& call, Random& random) {
  const Things a = arguments(c, random), b = arguments(c, random);
  Things mixed = b;
  for (std::size_t i = 0; i < a.size(); ++i)
    if (a[i].kind == Kind::number) mixed[i] = a[i];
  return distance(call(a), call(mixed)) <= c.tolerance;
}

inline bool holds(const Claim& c, const Call& call) {
  Random random;
  if (c.interpolates || c.is == "dot") return alike_under_frames(c, call, random);
  if (c.is == "copy") return copies(c, call, random);
  if (c.is == "build") return builds(c, call, random);
  if (c.is == "extract") return extracts(c, call, random);
  if (c.is == "elements" || c.is == "stream") return assembles(c, call, random);
  if (c.is == "element" && c.of == std::vector<int>{1}) return writes_element(c, call, random);
  if (c.is == "element") return reads_element(c, call, random);
  if (c.is == "part") return takes_part(c, call, random);
  if (c.is == "fill") return fills(c, call, random);
  if (c.is == "literal") return is_constant(c, call, random);
  if (c.is == "column" || c.is == "row") {
    for (int k = 0; k < 3; ++k)
      if ((c.index < 0 || c.index == k) && !formula_holds(c, call, random, k)) return false;
    return true;
  }
  return formula_holds(c, call, random, 0);
}

}  // namespace reference
