// Intrinsics: of numbers and integers, of memory, and those that mean nothing here.
#include <llvm/ADT/FloatingPointMode.h>
#include <llvm/IR/Intrinsics.h>

#include <algorithm>
#include <cmath>

#include "probe/machine_maths.h"
#include "probe/machine_run.h"

namespace dextral::probe::machine {

namespace {

using Bits = std::uint64_t;
using llvm::Intrinsic::ID;

template <typename F>
Slot one(unsigned width, Bits a, Bits b, Bits c) {
  return width == 32 ? one_number<float, F>(width, a, b, c) : one_number<double, F>(width, a, b, c);
}
template <typename F>
Slot two(unsigned width, Bits a, Bits b, Bits c) {
  return width == 32 ? two_numbers<float, F>(width, a, b, c) : two_numbers<double, F>(width, a, b, c);
}
template <typename F>
Slot three(unsigned width, Bits a, Bits b, Bits c) {
  return width == 32 ? three_numbers<float, F>(width, a, b, c) : three_numbers<double, F>(width, a, b, c);
}
template <typename F>
Slot scaled(unsigned width, Bits a, Bits b, Bits c) {
  return width == 32 ? number_and_int<float, F>(width, a, b, c) : number_and_int<double, F>(width, a, b, c);
}
template <typename F>
Pure as_one(F) {
  return one<F>;
}
template <typename F>
Pure as_two(F) {
  return two<F>;
}
template <typename F>
Pure as_three(F) {
  return three<F>;
}
template <typename F>
Pure as_scaled(F) {
  return scaled<F>;
}

// IEEE 754-2019 minimum and maximum: a NaN wins.
template <typename T>
T lesser(T a, T b) {
  if (std::isnan(a) || std::isnan(b)) return a + b;
  return a == b ? (std::signbit(a) ? a : b) : std::min(a, b);
}

Pure of_numbers(ID id) {
  switch (id) {
    case llvm::Intrinsic::fabs:
      return as_one([](auto x) { return std::fabs(x); });
    case llvm::Intrinsic::sqrt:
      return as_one([](auto x) { return std::sqrt(x); });
    case llvm::Intrinsic::sin:
      return as_one([](auto x) { return std::sin(x); });
    case llvm::Intrinsic::cos:
      return as_one([](auto x) { return std::cos(x); });
    case llvm::Intrinsic::tan:
      return as_one([](auto x) { return std::tan(x); });
    case llvm::Intrinsic::asin:
      return as_one([](auto x) { return std::asin(x); });
    case llvm::Intrinsic::acos:
      return as_one([](auto x) { return std::acos(x); });
    case llvm::Intrinsic::atan:
      return as_one([](auto x) { return std::atan(x); });
    case llvm::Intrinsic::sinh:
      return as_one([](auto x) { return std::sinh(x); });
    case llvm::Intrinsic::cosh:
      return as_one([](auto x) { return std::cosh(x); });
    case llvm::Intrinsic::tanh:
      return as_one([](auto x) { return std::tanh(x); });
    case llvm::Intrinsic::exp:
      return as_one([](auto x) { return std::exp(x); });
    case llvm::Intrinsic::exp2:
      return as_one([](auto x) { return std::exp2(x); });
    case llvm::Intrinsic::log:
      return as_one([](auto x) { return std::log(x); });
    case llvm::Intrinsic::log2:
      return as_one([](auto x) { return std::log2(x); });
    case llvm::Intrinsic::log10:
      return as_one([](auto x) { return std::log10(x); });
    case llvm::Intrinsic::floor:
      return as_one([](auto x) { return std::floor(x); });
    case llvm::Intrinsic::ceil:
      return as_one([](auto x) { return std::ceil(x); });
    case llvm::Intrinsic::trunc:
      return as_one([](auto x) { return std::trunc(x); });
    case llvm::Intrinsic::round:
      return as_one([](auto x) { return std::round(x); });
    case llvm::Intrinsic::rint:
    case llvm::Intrinsic::nearbyint:
    case llvm::Intrinsic::roundeven:
      return as_one([](auto x) { return std::nearbyint(x); });
    case llvm::Intrinsic::canonicalize:
      return as_one([](auto x) { return x; });
    case llvm::Intrinsic::pow:
      return as_two([](auto x, auto y) { return std::pow(x, y); });
    case llvm::Intrinsic::copysign:
      return as_two([](auto x, auto y) { return std::copysign(x, y); });
    case llvm::Intrinsic::minnum:
      return as_two([](auto x, auto y) { return std::fmin(x, y); });
    case llvm::Intrinsic::maxnum:
      return as_two([](auto x, auto y) { return std::fmax(x, y); });
    case llvm::Intrinsic::minimum:
      return as_two([](auto x, auto y) { return lesser(x, y); });
    case llvm::Intrinsic::maximum:
      return as_two([](auto x, auto y) { return -lesser(-x, -y); });
    case llvm::Intrinsic::fma:
      return as_three([](auto x, auto y, auto z) { return std::fma(x, y, z); });
    case llvm::Intrinsic::fmuladd:
      return as_three([](auto x, auto y, auto z) { return x * y + z; });
    case llvm::Intrinsic::powi:
      return as_scaled([](auto x, int n) { return static_cast<decltype(x)>(std::pow(x, n)); });
    case llvm::Intrinsic::ldexp:
      return as_scaled([](auto x, int n) { return std::ldexp(x, n); });
    default:
      return nullptr;
  }
}

Slot counted_zeros(unsigned width, Bits a, Bits zero_is_poison, bool leading) {
  if (a == 0) return zero_is_poison != 0 ? poison(width) : Slot{width & ones(width), 0};
  const int count = leading ? std::countl_zero(a) - static_cast<int>(64 - width) : std::countr_zero(a);
  return {static_cast<Bits>(count), 0};
}

Slot swapped_bytes(unsigned width, Bits a, Bits, Bits) { return {__builtin_bswap64(a) >> (64 - width), 0}; }

Slot reversed_bits(unsigned width, Bits a, Bits, Bits) {
  Bits out = 0;
  for (unsigned i = 0; i < width; ++i) out |= (a >> i & 1) << (width - 1 - i);
  return {out, 0};
}

template <bool left>
Slot funnel(unsigned width, Bits a, Bits b, Bits c) {
  const Bits by = c % width;
  if (by == 0) return {left ? a : b, 0};
  const Bits out = left ? a << by | b >> (width - by) : a << (width - by) | b >> by;
  return {out & ones(width), 0};
}

template <bool is_signed, int sign>
Slot saturated(unsigned width, Bits a, Bits b, Bits) {
  if constexpr (is_signed) {
    const __int128 sum = static_cast<__int128>(as_signed(a, width)) + sign * static_cast<__int128>(as_signed(b, width));
    const __int128 top = static_cast<__int128>(ones(width) >> 1), bottom = -top - 1;
    return {static_cast<Bits>(std::clamp(sum, bottom, top)) & ones(width), 0};
  } else {
    const __int128 sum = static_cast<__int128>(a) + sign * static_cast<__int128>(b);
    return {static_cast<Bits>(std::clamp<__int128>(sum, 0, ones(width))), 0};
  }
}

Slot magnitude(unsigned width, Bits a, Bits smallest_is_poison, Bits) {
  if (a == 1ull << (width - 1) && smallest_is_poison != 0) return poison(width, Cause::overflow);
  return {as_signed(a, width) < 0 ? (0 - a) & ones(width) : a, 0};
}

Pure of_integers(ID id) {
  switch (id) {
    case llvm::Intrinsic::smax:
      return [](unsigned w, Bits a, Bits b, Bits) { return Slot{as_signed(a, w) > as_signed(b, w) ? a : b, 0}; };
    case llvm::Intrinsic::smin:
      return [](unsigned w, Bits a, Bits b, Bits) { return Slot{as_signed(a, w) < as_signed(b, w) ? a : b, 0}; };
    case llvm::Intrinsic::umax:
      return [](unsigned, Bits a, Bits b, Bits) { return Slot{std::max(a, b), 0}; };
    case llvm::Intrinsic::umin:
      return [](unsigned, Bits a, Bits b, Bits) { return Slot{std::min(a, b), 0}; };
    case llvm::Intrinsic::abs:
      return magnitude;
    case llvm::Intrinsic::ctpop:
      return [](unsigned w, Bits a, Bits, Bits) { return Slot{static_cast<Bits>(std::popcount(a)) & ones(w), 0}; };
    case llvm::Intrinsic::ctlz:
      return [](unsigned w, Bits a, Bits b, Bits) { return counted_zeros(w, a, b, true); };
    case llvm::Intrinsic::cttz:
      return [](unsigned w, Bits a, Bits b, Bits) { return counted_zeros(w, a, b, false); };
    case llvm::Intrinsic::bswap:
      return swapped_bytes;
    case llvm::Intrinsic::bitreverse:
      return reversed_bits;
    case llvm::Intrinsic::fshl:
      return funnel<true>;
    case llvm::Intrinsic::fshr:
      return funnel<false>;
    case llvm::Intrinsic::sadd_sat:
      return saturated<true, 1>;
    case llvm::Intrinsic::ssub_sat:
      return saturated<true, -1>;
    case llvm::Intrinsic::uadd_sat:
      return saturated<false, 1>;
    case llvm::Intrinsic::usub_sat:
      return saturated<false, -1>;
    case llvm::Intrinsic::ptrmask:
      return [](unsigned, Bits a, Bits b, Bits) { return Slot{a & b, 0}; };
    case llvm::Intrinsic::objectsize:
      return [](unsigned, Bits, Bits least, Bits) { return Slot{least != 0 ? 0 : ~0ull, 0}; };
    case llvm::Intrinsic::is_constant:
      return [](unsigned, Bits, Bits, Bits) { return Slot{0, 0}; };
    default:
      return nullptr;
  }
}

template <typename T>
unsigned class_of(T value, Bits quiet_bit) {
  const bool negative = std::signbit(value);
  if (std::isnan(value)) return quiet_bit != 0 ? llvm::fcQNan : llvm::fcSNan;
  switch (std::fpclassify(value)) {
    case FP_INFINITE:
      return negative ? llvm::fcNegInf : llvm::fcPosInf;
    case FP_ZERO:
      return negative ? llvm::fcNegZero : llvm::fcPosZero;
    case FP_SUBNORMAL:
      return negative ? llvm::fcNegSubnormal : llvm::fcPosSubnormal;
    default:
      return negative ? llvm::fcNegNormal : llvm::fcPosNormal;
  }
}

Slot is_of_class(unsigned width, Bits a, Bits classes, Bits) {
  const unsigned found = width == 32 ? class_of(as_float(a), a & 1u << 22) : class_of(as_double(a), a & 1ull << 51);
  return {(found & classes) != 0, 0};
}

bool is_volatile(Run& run, const Slot& mark) { return (mark.bits & 1) != 0 && !run.raise("uses a volatile value"); }

bool copy(Run& run, std::span<const Slot> arguments, Slot&) {
  if (is_volatile(run, arguments[3]) || !run.charge(arguments[2].bits)) return false;
  return run.memory().copy(arguments[0].bits, arguments[1].bits, arguments[2].bits);
}

bool fill(Run& run, std::span<const Slot> arguments, Slot&) {
  if (is_volatile(run, arguments[3]) || !run.charge(arguments[2].bits)) return false;
  return run.memory().fill(arguments[0].bits, arguments[1], arguments[2].bits);
}

bool forget(Run& run, std::span<const Slot> arguments, Slot&) {
  return run.charge(std::min<Bits>(arguments[0].bits, 1 << 20)) &&
         run.memory().forget(arguments[1].bits, arguments[0].bits);
}

bool nothing(Run&, std::span<const Slot>, Slot&) { return true; }

bool rounds_to_nearest(Run&, std::span<const Slot>, Slot& result) {
  result.bits = 1;
  return true;
}

}  // namespace

Pure pure_intrinsic(unsigned id) {
  if (Pure found = of_numbers(id)) return found;
  if (Pure found = of_integers(id)) return found;
  return id == llvm::Intrinsic::is_fpclass ? is_of_class : nullptr;
}

Effect effect_intrinsic(unsigned id) {
  switch (id) {
    case llvm::Intrinsic::memcpy:
    case llvm::Intrinsic::memcpy_inline:
    case llvm::Intrinsic::memmove:
      return copy;
    case llvm::Intrinsic::memset:
    case llvm::Intrinsic::memset_inline:
      return fill;
    case llvm::Intrinsic::lifetime_start:
    case llvm::Intrinsic::lifetime_end:
      return forget;
    case llvm::Intrinsic::invariant_start:
      return nothing;
    case llvm::Intrinsic::get_rounding:
      return rounds_to_nearest;
    default:
      return nullptr;
  }
}

bool ignored_intrinsic(unsigned id) {
  switch (id) {
    case llvm::Intrinsic::dbg_declare:
    case llvm::Intrinsic::dbg_value:
    case llvm::Intrinsic::dbg_label:
    case llvm::Intrinsic::dbg_assign:
    case llvm::Intrinsic::assume:
    case llvm::Intrinsic::donothing:
    case llvm::Intrinsic::prefetch:
    case llvm::Intrinsic::sideeffect:
    case llvm::Intrinsic::invariant_end:
    case llvm::Intrinsic::var_annotation:
    case llvm::Intrinsic::experimental_noalias_scope_decl:
    case llvm::Intrinsic::pseudoprobe:
      return true;
    default:
      return false;
  }
}

const char* refused_intrinsic(unsigned id) {
  switch (id) {
    case llvm::Intrinsic::trap:
    case llvm::Intrinsic::ubsantrap:
    case llvm::Intrinsic::debugtrap:
      return "asserts";
    case llvm::Intrinsic::vastart:
    case llvm::Intrinsic::vaend:
    case llvm::Intrinsic::vacopy:
      return "takes a variable number of arguments";
    case llvm::Intrinsic::threadlocal_address:
      return "uses a value that belongs to a thread";
    default:
      return nullptr;
  }
}

}  // namespace dextral::probe::machine
