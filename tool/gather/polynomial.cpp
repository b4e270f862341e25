#include "gather/polynomial.h"

#include <algorithm>
#include <cmath>

namespace dextral::gather {

Polynomial::Polynomial(double constant) { add({}, constant); }
Polynomial::Polynomial(Atom atom) { add({atom}, 1.0); }

Polynomial Polynomial::unknown() {
  Polynomial p;
  p.known_ = false;
  return p;
}

void Polynomial::add(const Monomial& monomial, double coefficient) {
  double& sum = terms_[monomial];
  sum += coefficient;
  if (sum == 0) terms_.erase(monomial);
}

std::optional<double> Polynomial::constant() const {
  if (!known_) return std::nullopt;
  if (terms_.empty()) return 0.0;
  bool one = terms_.size() == 1 && terms_.begin()->first.empty();
  if (!one || !(std::abs(terms_.begin()->second) < kLargest)) return std::nullopt;
  return terms_.begin()->second;
}

std::optional<Atom> Polynomial::atom() const {
  if (!known_ || terms_.size() != 1) return std::nullopt;
  const auto& [monomial, coefficient] = *terms_.begin();
  if (monomial.size() != 1 || coefficient != 1.0) return std::nullopt;
  return monomial[0];
}

Polynomial Polynomial::operator-() const { return Polynomial(-1.0) * *this; }

Polynomial Polynomial::operator+(const Polynomial& other) const {
  if (!known_ || !other.known_) return unknown();
  Polynomial sum = *this;
  for (const auto& [monomial, coefficient] : other.terms_) sum.add(monomial, coefficient);
  return sum.terms_.size() > kMostTerms ? unknown() : sum;
}

Polynomial Polynomial::operator-(const Polynomial& other) const { return *this + -other; }

Polynomial Polynomial::operator*(const Polynomial& other) const {
  if (!known_ || !other.known_) return unknown();
  Polynomial product;
  for (const auto& [a, x] : terms_)
    for (const auto& [b, y] : other.terms_) {
      Monomial both = a;
      both.insert(both.end(), b.begin(), b.end());
      if (both.size() > kMostDegree) return unknown();
      std::sort(both.begin(), both.end());
      product.add(both, x * y);
      if (product.terms_.size() > kMostTerms) return unknown();
    }
  return product;
}

}  // namespace dextral::gather
