#include "gather/components.h"

#include <algorithm>
#include <cmath>
#include <set>

namespace dextral::gather {

namespace {

// One class of terms: the same opaque factors and the same values.
struct Key {
  Monomial scale;               // opaque factors
  std::vector<ValueId> values;  // sorted, with repetition
  auto operator<=>(const Key&) const = default;
};

struct Entry {
  int element;               // which number of the group
  std::vector<int> indices;  // component of each value of the key
  double coefficient;
};

using Class = std::vector<Entry>;
using Classes = std::map<Key, Class>;

Classes split(const std::vector<Polynomial>& elements) {
  Classes classes;
  for (std::size_t i = 0; i < elements.size(); ++i)
    for (const auto& [monomial, coefficient] : elements[i].terms()) {
      Key key;
      Entry entry{int(i), {}, coefficient};
      for (const Atom& atom : monomial) {
        if (atom.opaque()) {
          key.scale.push_back(atom);
        } else {
          key.values.push_back(atom.value);
          entry.indices.push_back(int(atom.index));
        }
      }
      classes[key].push_back(std::move(entry));
    }
  return classes;
}

bool alike(const Class& entries, bool signs_too = true) {
  return std::all_of(entries.begin(), entries.end(), [&](const Entry& e) {
    double a = e.coefficient, b = entries[0].coefficient;
    return signs_too ? std::abs(a - b) <= 1e-12 * std::abs(b) : std::abs(std::abs(a) - std::abs(b)) <= 1e-12 * std::abs(b);
  });
}

int levi_civita(int i, int j, int k) { return (j - i) * (k - i) * (k - j) / 2; }

class Assembly {
 public:
  Assembly(Recorder& recorder, const Group& group) : recorder_(recorder), group_(group), size_(int(group.elements.size())) {}

  ValueId run() {
    for (const Polynomial& p : group_.elements)
      if (!p.known()) return opaque_or_partial();
    Classes classes = split(group_.elements);
    if (mixes(classes)) return opaque();
    std::vector<Operand> parts;
    std::vector<int> signs;
    for (const auto& [key, entries] : classes) {
      if (key.values.empty()) {
        if (size_ == 9 && classes.size() > 1) return opaque();
        continue;  // numbers belong to any frame
      }
      ValueId part = pattern(key, entries);
      if (part == ValueId::none) return classes.size() > 1 || size_ == 9 ? opaque_or_partial() : columns_or_opaque(classes);
      if (std::none_of(parts.begin(), parts.end(), [&](const Operand& o) { return o.value == part; })) {
        parts.push_back({part, {}, recorder_.at(part).text});
        signs.push_back(key.scale.empty() ? sign_of(entries) : 0);
      }
    }
    if (parts.empty()) return opaque();
    ValueId result = opaque();
    recorder_.operation(parts.size() > 1 ? OperationKind::sum : OperationKind::copy, result, parts, group_.span, group_.text).numbers = signs;
    return result;
  }

 private:
  ValueId opaque() { return recorder_.value(group_.like.shape, group_.like.rotation, group_.like.text, group_.span, group_.like.inverse_form); }

  Operand operand(ValueId id) { return {id, {}, recorder_.at(id).text}; }

  ValueId made(OperationKind kind, std::vector<Operand> operands, Shape shape) {
    ValueId result = recorder_.value(shape, false, group_.text, group_.span);
    recorder_.operation(kind, result, std::move(operands), group_.span, group_.text);
    return result;
  }

  ValueId transposed(ValueId id) {
    ValueId result = recorder_.value(recorder_.at(id).shape, recorder_.at(id).rotation, recorder_.at(id).text, group_.span);
    recorder_.operation(OperationKind::transpose, result, {operand(id)}, group_.span, group_.text);
    return result;
  }

  // (c x - s y, s x + c y, z): a vector that stands in its own places and in
  // others too is turned by a map that nobody knows.
  static bool mixes(const Classes& classes) {
    std::map<ValueId, int> in_place, elsewhere;
    for (const auto& [key, entries] : classes) {
      if (key.values.size() != 1) continue;
      const bool keeps = std::all_of(entries.begin(), entries.end(), [](const Entry& e) { return e.element == e.indices[0]; });
      ++(keeps ? in_place : elsewhere)[key.values[0]];
    }
    return std::any_of(elsewhere.begin(), elsewhere.end(),
                       [&](const auto& entry) { return entry.second > 1 || in_place.contains(entry.first); });
  }

  // 1 or -1 where a whole vector stands with that factor; else 0.
  static int sign_of(const Class& entries) {
    const double factor = entries[0].coefficient;
    const bool one = std::all_of(entries.begin(), entries.end(), [&](const Entry& e) { return e.coefficient == factor; });
    return one && std::abs(factor) == 1 ? int(factor) : 0;
  }

  // Where some numbers are not understood or come from elsewhere (clamped, set
  // to zero), a vector whose other components keep their places keeps its frame.
  ValueId opaque_or_partial() {
    if (size_ != 3) return columns_or_opaque(split(group_.elements));
    std::set<ValueId> bases;
    int kept = 0;
    for (int i = 0; i < size_; ++i) {
      const Polynomial& p = group_.elements[std::size_t(i)];
      auto atom = p.known() ? p.atom() : std::nullopt;
      if (!atom || atom->opaque()) continue;
      if (int(atom->index) != i || recorder_.at(atom->value).shape == Shape::matrix) return opaque();
      bases.insert(atom->value);
      ++kept;
    }
    if (bases.size() != 1 || kept < 2) return opaque();
    ValueId result = opaque();
    recorder_.operation(OperationKind::copy, result, {operand(*bases.begin())}, group_.span, group_.text);
    return result;
  }

  // A matrix whose columns (or rows) are whole vectors.
  ValueId columns_or_opaque(const Classes&) {
    ValueId result = opaque();
    if (size_ != 9) return result;
    for (bool columns : {true, false}) {
      std::vector<ValueId> vectors(3, ValueId::none);
      bool whole = true;
      for (int i = 0; i < 3; ++i)
        for (int j = 0; j < 3; ++j) {
          auto atom = group_.elements[std::size_t(3 * i + j)].atom();
          int line = columns ? j : i, component = columns ? i : j;
          const bool plain = atom && !atom->opaque() && int(atom->index) == component && length(atom->value) != 9;
          ValueId& vector = vectors[std::size_t(line)];
          if (plain && component == 0 && whole) vector = atom->value;
          whole = whole && plain && vector == atom->value;
        }
      if (!whole) continue;
      for (int line = 0; line < 3; ++line) {
        Operation& op = recorder_.operation(columns ? OperationKind::column : OperationKind::row,
                                            vectors[std::size_t(line)], {{result, {}, group_.like.text}}, group_.span, group_.text);
        op.numbers = {line};
      }
      return result;
    }
    return result;
  }

  int length(ValueId id) {
    Shape shape = recorder_.at(id).shape;
    return shape == Shape::matrix || shape == Shape::rotation ? 9 : 3;
  }

  ValueId pattern(const Key& key, const Class& entries) {
    if (key.values.size() == 1) return size_ == 9 ? matrix_of_one(key.values[0], entries) : vector_of_one(key.values[0], entries);
    if (key.values.size() != 2) return ValueId::none;
    if (size_ == 9) return matrix_of_two(key.values[0], key.values[1], entries);
    if (size_ == 3) return vector_of_two(key.values[0], key.values[1], entries);
    return ValueId::none;
  }

  ValueId vector_of_one(ValueId v, const Class& entries) {
    bool in_place = std::all_of(entries.begin(), entries.end(), [](const Entry& e) { return e.element == e.indices[0]; });
    if (in_place && alike(entries)) return v;
    if (in_place && size_ == 4 && alike(entries, false)) return conjugate(v, entries);
    if (size_ != 3 || !alike(entries, false)) return ValueId::none;
    std::vector<int> map(3, 0);
    for (const Entry& e : entries) {
      if (e.element > 2 || e.indices[0] > 2 || map[std::size_t(e.element)]) return ValueId::none;
      map[std::size_t(e.element)] = (e.coefficient > 0 ? 1 : -1) * (e.indices[0] + 1);
    }
    ValueId result = made(OperationKind::shuffle, {operand(v)}, Shape::vector);
    recorder_.function.operations.back().numbers = map;
    return result;
  }

  // Three components against one: the conjugate of a quaternion, or a sign flip
  // of it; which one is the vector part depends on the storage.
  ValueId conjugate(ValueId v, const Class& entries) {
    if (entries.size() != 4) return ValueId::none;
    int negative = int(std::count_if(entries.begin(), entries.end(), [](const Entry& e) { return e.coefficient < 0; }));
    if (negative != 1 && negative != 3) return ValueId::none;
    return made(OperationKind::inverse, {operand(v)}, recorder_.at(v).shape);
  }

  ValueId matrix_of_one(ValueId v, const Class& entries) {
    auto all = [&](auto test) { return std::all_of(entries.begin(), entries.end(), test); };
    if (entries.size() == 9 && alike(entries)) {
      if (all([](const Entry& e) { return e.element == e.indices[0]; })) return v;
      if (all([](const Entry& e) { return e.element == 3 * (e.indices[0] % 3) + e.indices[0] / 3; })) return transposed(v);
    }
    if (entries.size() != 6 || !alike(entries, false)) return ValueId::none;
    double sign = 0;
    for (const Entry& e : entries) {
      int i = e.element / 3, j = e.element % 3, k = e.indices[0];
      if (k > 2) return ValueId::none;
      double expected = -levi_civita(i, j, k);
      if (expected == 0) return ValueId::none;
      if (sign == 0) sign = e.coefficient / expected;
      if (std::abs(e.coefficient - sign * expected) > 1e-12) return ValueId::none;
    }
    return made(OperationKind::skew, {operand(v)}, Shape::matrix);
  }

  ValueId vector_of_two(ValueId a, ValueId b, const Class& entries) {
    for (bool exchanged : {false, true}) {
      auto first = [&](const Entry& e) { return e.indices[exchanged]; };
      auto second = [&](const Entry& e) { return e.indices[!exchanged]; };
      auto all = [&](auto test) { return std::all_of(entries.begin(), entries.end(), test); };
      ValueId m = exchanged ? b : a, v = exchanged ? a : b;
      if (entries.size() != 9 || !alike(entries)) break;
      if (all([&](const Entry& e) { return second(e) < 3 && first(e) == 3 * e.element + second(e); }))
        return made(OperationKind::product, {operand(m), operand(v)}, Shape::vector);
      if (all([&](const Entry& e) { return second(e) < 3 && first(e) == 3 * second(e) + e.element; }))
        return made(OperationKind::product, {operand(transposed(m)), operand(v)}, Shape::vector);
    }
    return cross(a, b, entries);
  }

  ValueId cross(ValueId a, ValueId b, const Class& entries) {
    if (entries.size() != 6 || a == b || !alike(entries, false)) return ValueId::none;
    double sign = 0;
    for (const Entry& e : entries) {
      if (e.indices[0] > 2 || e.indices[1] > 2) return ValueId::none;
      double expected = levi_civita(e.element, e.indices[0], e.indices[1]);
      if (expected == 0) return ValueId::none;
      if (sign == 0) sign = e.coefficient / expected;
      if (std::abs(e.coefficient - sign * expected) > 1e-12 * std::abs(sign)) return ValueId::none;
    }
    if (sign < 0) std::swap(a, b);
    return made(OperationKind::cross, {operand(a), operand(b)}, Shape::vector);
  }

  ValueId matrix_of_two(ValueId a, ValueId b, const Class& entries) {
    if (!alike(entries)) return ValueId::none;
    if (entries.size() == 9) return outer(a, b, entries);
    if (entries.size() != 27 && !(a == b && entries.size() >= 18)) return ValueId::none;
    for (bool exchanged : {false, true})
      for (bool left : {false, true})
        for (bool right : {false, true})
          if (is_product(entries, exchanged, left, right)) {
            ValueId x = exchanged ? b : a, y = exchanged ? a : b;
            return made(OperationKind::product, {operand(left ? transposed(x) : x), operand(right ? transposed(y) : y)}, Shape::matrix);
          }
    return ValueId::none;
  }

  static bool is_product(const Class& entries, bool exchanged, bool left, bool right) {
    return std::all_of(entries.begin(), entries.end(), [&](const Entry& e) {
      int x = e.indices[exchanged], y = e.indices[!exchanged];
      int xi = left ? x % 3 : x / 3, xk = left ? x / 3 : x % 3;
      int yk = right ? y % 3 : y / 3, yj = right ? y / 3 : y % 3;
      return xi == e.element / 3 && yj == e.element % 3 && xk == yk;
    });
  }

  ValueId outer(ValueId a, ValueId b, const Class& entries) {
    for (bool exchanged : {false, true}) {
      bool fits = std::all_of(entries.begin(), entries.end(), [&](const Entry& e) {
        return e.indices[exchanged] == e.element / 3 && e.indices[!exchanged] == e.element % 3;
      });
      ValueId x = exchanged ? b : a, y = exchanged ? a : b;
      if (fits) return made(OperationKind::product, {operand(x), operand(transposed(y))}, Shape::matrix);
    }
    return ValueId::none;
  }

  Recorder& recorder_;
  const Group& group_;
  int size_;
};

}  // namespace

namespace {

// (q.x, q.y, q.z): a vector, but of what is turned by it nothing keeps its frame.
bool of_quaternion(const Recorder& recorder, const std::vector<Polynomial>& elements) {
  bool any = false;
  for (const Polynomial& p : elements)
    for (const auto& [monomial, coefficient] : p.terms())
      for (const Atom& atom : monomial) {
        if (atom.opaque()) continue;
        if (recorder.function.values[std::size_t(atom.value)].shape != Shape::quaternion) return false;
        any = true;
      }
  return any;
}

}  // namespace

ValueId assemble(Recorder& recorder, const Group& group) {
  const ValueId id = Assembly(recorder, group).run();
  if (group.elements.size() == 3 && of_quaternion(recorder, group.elements)) recorder.at(id).of_rotation = true;
  return id;
}

namespace {

bool of_no_vector(const Polynomial& p) {
  return p.known() && std::all_of(p.terms().begin(), p.terms().end(), [](const auto& term) {
           return std::all_of(term.first.begin(), term.first.end(), [](const Atom& atom) { return atom.opaque(); });
         });
}

}  // namespace

bool is_literal(const std::vector<Polynomial>& elements) {
  const auto free = std::count_if(elements.begin(), elements.end(), [](const Polynomial& p) { return !p.constant(); });
  if (free == 0) return true;
  return elements.size() == 3 && free == 1 && std::all_of(elements.begin(), elements.end(), of_no_vector);
}

std::optional<std::pair<ValueId, ValueId>> as_dot(const Recorder& recorder, const Polynomial& p) {
  if (!p.known()) return std::nullopt;
  Classes classes = split({p});
  if (classes.size() != 1) return std::nullopt;
  const auto& [key, entries] = *classes.begin();
  if (key.values.size() != 2 || key.values[0] == key.values[1] || entries.size() != 3 || !alike(entries)) return std::nullopt;
  for (const Entry& e : entries)
    if (e.indices[0] != e.indices[1] || e.indices[0] > 2) return std::nullopt;
  for (ValueId id : key.values)
    if (recorder.function.values.at(std::size_t(id)).shape != Shape::vector) return std::nullopt;
  return std::pair{key.values[0], key.values[1]};
}

}  // namespace dextral::gather
