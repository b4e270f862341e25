// The functions of <math.h> without memory, for double and float.
//
// The library of the host computes them, so that a run agrees to the last bit
// with a native one on the same machine.
#include "probe/machine_maths.h"

#include <cmath>
#include <cstdlib>
#include <unordered_map>

namespace dextral::probe::machine {

namespace {

class Table {
 public:
  Table() {
    trigonometry();
    powers();
    rounding();
    two_arguments();
    classes();
    integers();
  }

  const Stand* find(const std::string& symbol) const {
    auto at = stands_.find(symbol);
    return at == stands_.end() ? nullptr : &at->second;
  }

 private:
  void add(const std::string& name, Pure pure, const char* signature) {
    stands_[name] = {pure, nullptr, signature, nullptr};
  }

  template <typename F>
  void one(const std::string& name, F) {
    using R = decltype(F{}(0.0));
    constexpr bool whole = std::is_same_v<R, int>, wide = std::is_same_v<R, long>;
    add(name, one_number<double, F>, whole ? "i(d)" : wide ? "l(d)" : "d(d)");
    add(name + "f", one_number<float, F>, whole ? "i(f)" : wide ? "l(f)" : "f(f)");
  }
  template <typename F>
  void two(const std::string& name, F) {
    add(name, two_numbers<double, F>, "d(dd)");
    add(name + "f", two_numbers<float, F>, "f(ff)");
  }
  template <typename F>
  void scaled(const std::string& name, F) {
    add(name, number_and_int<double, F>, "d(di)");
    add(name + "f", number_and_int<float, F>, "f(fi)");
  }

  void trigonometry() {
    one("sin", [](auto x) { return std::sin(x); });
    one("cos", [](auto x) { return std::cos(x); });
    one("tan", [](auto x) { return std::tan(x); });
    one("asin", [](auto x) { return std::asin(x); });
    one("acos", [](auto x) { return std::acos(x); });
    one("atan", [](auto x) { return std::atan(x); });
    one("sinh", [](auto x) { return std::sinh(x); });
    one("cosh", [](auto x) { return std::cosh(x); });
    one("tanh", [](auto x) { return std::tanh(x); });
    one("asinh", [](auto x) { return std::asinh(x); });
    one("acosh", [](auto x) { return std::acosh(x); });
    one("atanh", [](auto x) { return std::atanh(x); });
  }

  void powers() {
    one("exp", [](auto x) { return std::exp(x); });
    one("exp2", [](auto x) { return std::exp2(x); });
    one("expm1", [](auto x) { return std::expm1(x); });
    one("log", [](auto x) { return std::log(x); });
    one("log2", [](auto x) { return std::log2(x); });
    one("log10", [](auto x) { return std::log10(x); });
    one("log1p", [](auto x) { return std::log1p(x); });
    one("logb", [](auto x) { return std::logb(x); });
    one("sqrt", [](auto x) { return std::sqrt(x); });
    one("cbrt", [](auto x) { return std::cbrt(x); });
    one("erf", [](auto x) { return std::erf(x); });
    one("erfc", [](auto x) { return std::erfc(x); });
    one("tgamma", [](auto x) { return std::tgamma(x); });
    one("ilogb", [](auto x) { return std::ilogb(x); });
  }

  void rounding() {
    one("fabs", [](auto x) { return std::fabs(x); });
    one("floor", [](auto x) { return std::floor(x); });
    one("ceil", [](auto x) { return std::ceil(x); });
    one("trunc", [](auto x) { return std::trunc(x); });
    one("round", [](auto x) { return std::round(x); });
    one("rint", [](auto x) { return std::rint(x); });
    one("nearbyint", [](auto x) { return std::nearbyint(x); });
    one("roundeven", [](auto x) { return std::nearbyint(x); });
    one("lround", [](auto x) { return std::lround(x); });
    one("llround", [](auto x) { return static_cast<long>(std::llround(x)); });
    one("lrint", [](auto x) { return std::lrint(x); });
    one("llrint", [](auto x) { return static_cast<long>(std::llrint(x)); });
  }

  void two_arguments() {
    two("atan2", [](auto x, auto y) { return std::atan2(x, y); });
    two("pow", [](auto x, auto y) { return std::pow(x, y); });
    two("hypot", [](auto x, auto y) { return std::hypot(x, y); });
    two("fmod", [](auto x, auto y) { return std::fmod(x, y); });
    two("remainder", [](auto x, auto y) { return std::remainder(x, y); });
    two("drem", [](auto x, auto y) { return std::remainder(x, y); });
    two("copysign", [](auto x, auto y) { return std::copysign(x, y); });
    two("fmin", [](auto x, auto y) { return std::fmin(x, y); });
    two("fmax", [](auto x, auto y) { return std::fmax(x, y); });
    two("fdim", [](auto x, auto y) { return std::fdim(x, y); });
    two("nextafter", [](auto x, auto y) { return std::nextafter(x, y); });
    scaled("ldexp", [](auto x, int n) { return std::ldexp(x, n); });
    scaled("scalbn", [](auto x, int n) { return std::scalbn(x, n); });
    auto fused = [](auto x, auto y, auto z) { return std::fma(x, y, z); };
    add("fma", three_numbers<double, decltype(fused)>, "d(ddd)");
    add("fmaf", three_numbers<float, decltype(fused)>, "f(fff)");
  }

  void classes() {
    for (const char* prefix : {"", "__"}) {
      const std::string start = prefix;
      one(start + "isnan", [](auto x) { return static_cast<int>(std::isnan(x)); });
      one(start + "isinf", [](auto x) { return std::isinf(x) ? (x > 0 ? 1 : -1) : 0; });
      one(start + "finite", [](auto x) { return static_cast<int>(std::isfinite(x)); });
      one(start + "signbit", [](auto x) { return static_cast<int>(std::signbit(x)); });
    }
    one("__fpclassify", [](auto x) { return std::fpclassify(x); });
  }

  void integers() {
    add(
        "abs",
        [](unsigned, std::uint64_t a, std::uint64_t, std::uint64_t) {
          return a == 1ull << 31 ? poison(32, Cause::overflow) : slot_of(std::abs(static_cast<int>(a)));
        },
        "i(i)");
    Pure wide = [](unsigned, std::uint64_t a, std::uint64_t, std::uint64_t) {
      return a == 1ull << 63 ? poison(64, Cause::overflow) : slot_of(std::labs(static_cast<long>(a)));
    };
    add("labs", wide, "l(l)");
    add("llabs", wide, "l(l)");
  }

  std::unordered_map<std::string, Stand> stands_;
};

}  // namespace

const Stand* maths(const std::string& symbol) {
  static const Table table;
  return table.find(symbol);
}

}  // namespace dextral::probe::machine
