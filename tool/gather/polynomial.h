// A number as a polynomial in the components of vectors and matrices.
//
// Hand-written algebra is read by its value, not by its text: a loop over
// three components, nine assignments and a hand-expanded product all end as
// polynomials. An Atom is one component of one value, or an opaque number.
// Limits: a polynomial of more than kMostTerms terms or of a degree above
// kMostDegree is given up (nothing is known of it).
#pragma once

#include <compare>
#include <cstdint>
#include <map>
#include <optional>
#include <vector>

#include "core/facts.h"

namespace dextral::gather {

struct Atom {
  ValueId value = ValueId::none;  // none: an opaque number
  std::uint32_t index = 0;        // component, or the number's identity
  bool opaque() const { return value == ValueId::none; }
  auto operator<=>(const Atom&) const = default;
};

using Monomial = std::vector<Atom>;  // sorted

class Polynomial {
 public:
  static constexpr std::size_t kMostTerms = 48;
  static constexpr std::size_t kMostDegree = 6;
  static constexpr double kLargest = 1e9;  // a constant beyond is not told: it may be no index

  Polynomial() = default;  // zero
  explicit Polynomial(double constant);
  explicit Polynomial(Atom);

  bool known() const { return known_; }
  static Polynomial unknown();
  std::optional<double> constant() const;
  std::optional<Atom> atom() const;  // when it is one component, unscaled
  bool is_zero() const { return known_ && terms_.empty(); }
  const std::map<Monomial, double>& terms() const { return terms_; }

  Polynomial operator+(const Polynomial&) const;
  Polynomial operator-(const Polynomial&) const;
  Polynomial operator*(const Polynomial&) const;
  Polynomial operator-() const;
  bool operator==(const Polynomial&) const = default;
  auto operator<=>(const Polynomial&) const = default;

 private:
  void add(const Monomial&, double);
  std::map<Monomial, double> terms_;
  bool known_ = true;
};

}  // namespace dextral::gather
