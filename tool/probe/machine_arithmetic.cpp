// One lane of the arithmetic of the IR, with what is undefined carried along.
#include <llvm/IR/InstrTypes.h>

#include <cmath>

#include "probe/machine_run.h"

namespace dextral::probe::machine {

namespace {

Slot undefined_outcome(unsigned width, const Slot& a, const Slot& b) {
  const Cause cause = a.undefined != 0 ? cause_of(a) : cause_of(b);
  return poison(width, cause);
}

// Bits of a that are known to be zero or one matter where b is undefined.
Slot bitwise(Op op, unsigned width, const Slot& a, const Slot& b) {
  const std::uint64_t left = a.bits & ~a.undefined, right = b.bits & ~b.undefined;
  const std::uint64_t zero_left = ~left & ~a.undefined, zero_right = ~right & ~b.undefined;
  Slot out;
  if (op == Op::and_) {
    out = {left & right, (a.undefined | b.undefined) & ~zero_left & ~zero_right};
  } else if (op == Op::or_) {
    out = {left | right, (a.undefined | b.undefined) & ~left & ~right};
  } else {
    out = {left ^ right, a.undefined | b.undefined};
  }
  out.undefined &= ones(width);
  out.bits &= ~out.undefined & ones(width);
  return out.undefined == ones(width) ? undefined_outcome(width, a, b) : out;
}

Slot shift(Op op, unsigned width, const Slot& a, std::uint64_t by) {
  const std::uint64_t bits = a.bits & ~a.undefined;
  if (by >= width) return poison(width, Cause::shift);
  if (a.undefined == ones(width)) return a;
  if (op == Op::shl) return {bits << by & ones(width), a.undefined << by & ones(width)};
  if (op == Op::lshr) return {bits >> by, a.undefined >> by};
  return {static_cast<std::uint64_t>(as_signed(bits, width) >> by) & ones(width),
          static_cast<std::uint64_t>(as_signed(a.undefined, width) >> by) & ones(width)};
}

Slot with_undefined(const Step& step, const Slot& a, const Slot& b) {
  switch (step.op) {
    case Op::and_:
    case Op::or_:
    case Op::xor_:
      return bitwise(step.op, step.width, a, b);
    case Op::shl:
    case Op::lshr:
    case Op::ashr:
      if (b.undefined == 0) return shift(step.op, step.width, a, b.bits);
      break;
    default:
      break;
  }
  return undefined_outcome(step.width, a, b);
}

template <typename Signed, typename Unsigned>
Slot checked(const Step& step, std::uint64_t a, std::uint64_t b, Signed in_signed, Unsigned in_unsigned) {
  std::int64_t signed_full = 0;
  std::uint64_t full = 0;
  const unsigned width = step.width;
  const bool beyond = in_unsigned(a, b, &full) || (full & ~ones(width)) != 0;
  const std::uint64_t bits = full & ones(width);
  if ((step.flags & flag::no_unsigned_wrap) != 0 && beyond) return poison(width, Cause::overflow);
  if ((step.flags & flag::no_signed_wrap) != 0 &&
      (in_signed(as_signed(a, width), as_signed(b, width), &signed_full) || signed_full != as_signed(bits, width)))
    return poison(width, Cause::overflow);
  return {bits, 0};
}

Slot shifted_left(const Step& step, std::uint64_t a, std::uint64_t by) {
  const Slot out = shift(Op::shl, step.width, {a, 0}, by);
  if (out.undefined != 0) return out;
  const bool lost = (step.flags & flag::no_unsigned_wrap) != 0 && out.bits >> by != a;
  const bool turned =
      (step.flags & flag::no_signed_wrap) != 0 && as_signed(out.bits, step.width) >> by != as_signed(a, step.width);
  return lost || turned ? poison(step.width, Cause::overflow) : out;
}

bool divide(const Step& step, std::uint64_t a, std::uint64_t b, Slot& to) {
  if (b == 0) return false;
  const std::int64_t dividend = as_signed(a, step.width), divisor = as_signed(b, step.width);
  const bool is_signed = step.op == Op::sdiv || step.op == Op::srem;
  if (is_signed && divisor == -1) {
    const bool smallest = a == 1ull << (step.width - 1);
    to = smallest ? poison(step.width, Cause::overflow) : Slot{step.op == Op::sdiv ? (0 - a) & ones(step.width) : 0, 0};
    return true;
  }
  const std::uint64_t rest = is_signed ? static_cast<std::uint64_t>(dividend % divisor) : a % b;
  const std::uint64_t whole = is_signed ? static_cast<std::uint64_t>(dividend / divisor) : a / b;
  const bool inexact = (step.flags & flag::exact) != 0 && rest != 0;
  to = {(step.op == Op::sdiv || step.op == Op::udiv ? whole : rest) & ones(step.width), 0};
  if (inexact) to = poison(step.width, Cause::overflow);
  return true;
}

template <typename T>
T arithmetic(Op op, T a, T b) {
  switch (op) {
    case Op::fadd:
      return a + b;
    case Op::fsub:
      return a - b;
    case Op::fmul:
      return a * b;
    case Op::fdiv:
      return a / b;
    default:
      return std::fmod(a, b);
  }
}

Slot from_float(const Step& step, double value) {
  const int width = step.width_after;
  const double whole = std::trunc(value);
  if (step.op == Op::float_to_signed) {
    const double limit = std::ldexp(1.0, width - 1);
    if (!(whole >= -limit && whole < limit)) return poison(step.width_after, Cause::conversion);
    return {static_cast<std::uint64_t>(static_cast<std::int64_t>(whole)) & ones(step.width_after), 0};
  }
  if (!(whole > -1.0 && whole < std::ldexp(1.0, width))) return poison(step.width_after, Cause::conversion);
  return {static_cast<std::uint64_t>(whole) & ones(step.width_after), 0};
}

Slot to_float(const Step& step, std::uint64_t bits) {
  const std::int64_t value = as_signed(bits, step.width);
  if (step.op == Op::signed_to_float)
    return {step.width_after == 32 ? bits_of(static_cast<float>(value)) : bits_of(static_cast<double>(value)), 0};
  if ((step.flags & flag::not_negative) != 0 && value < 0) return poison(step.width_after, Cause::conversion);
  return {step.width_after == 32 ? bits_of(static_cast<float>(bits)) : bits_of(static_cast<double>(bits)), 0};
}

Slot resize(const Step& step, const Slot& from) {
  const bool wholly = from.undefined == ones(step.width);
  if (step.op == Op::trunc) {
    if (wholly) return poison(step.width_after, cause_of(from));
    const Slot out{from.bits & ones(step.width_after), from.undefined & ones(step.width_after)};
    const bool lost = from.undefined == 0 && (step.flags & flag::no_unsigned_wrap) != 0 && out.bits != from.bits;
    const bool turned = from.undefined == 0 && (step.flags & flag::no_signed_wrap) != 0 &&
                        as_signed(out.bits, step.width_after) != as_signed(from.bits, step.width);
    return lost || turned ? poison(step.width_after, Cause::overflow) : out;
  }
  if (step.op == Op::zext) {
    const bool negative = from.undefined == 0 && as_signed(from.bits, step.width) < 0;
    return (step.flags & flag::not_negative) != 0 && negative ? poison(step.width_after, Cause::conversion) : from;
  }
  if (wholly) return poison(step.width_after, cause_of(from));
  return {static_cast<std::uint64_t>(as_signed(from.bits, step.width)) & ones(step.width_after),
          static_cast<std::uint64_t>(as_signed(from.undefined, step.width)) & ones(step.width_after)};
}

}  // namespace

bool integer(const Step& step, const Slot& a, const Slot& b, Slot& to) {
  if ((a.undefined | b.undefined) != 0) [[unlikely]] {
    to = with_undefined(step, a, b);
    return true;
  }
  switch (step.op) {
    case Op::add:
      to = checked(
          step, a.bits, b.bits, [](auto x, auto y, auto* z) { return __builtin_add_overflow(x, y, z); },
          [](auto x, auto y, auto* z) { return __builtin_add_overflow(x, y, z); });
      return true;
    case Op::sub:
      to = checked(
          step, a.bits, b.bits, [](auto x, auto y, auto* z) { return __builtin_sub_overflow(x, y, z); },
          [](auto x, auto y, auto* z) { return __builtin_sub_overflow(x, y, z); });
      return true;
    case Op::mul:
      to = checked(
          step, a.bits, b.bits, [](auto x, auto y, auto* z) { return __builtin_mul_overflow(x, y, z); },
          [](auto x, auto y, auto* z) { return __builtin_mul_overflow(x, y, z); });
      return true;
    case Op::and_:
      to = {a.bits & b.bits, 0};
      return true;
    case Op::or_:
      to = (step.flags & flag::disjoint) != 0 && (a.bits & b.bits) != 0 ? poison(step.width, Cause::overflow)
                                                                        : Slot{a.bits | b.bits, 0};
      return true;
    case Op::xor_:
      to = {a.bits ^ b.bits, 0};
      return true;
    case Op::shl:
      to = shifted_left(step, a.bits, b.bits);
      return true;
    case Op::lshr:
    case Op::ashr:
      to = shift(step.op, step.width, a, b.bits);
      if ((step.flags & flag::exact) != 0 && b.bits < step.width && (a.bits & ones(static_cast<unsigned>(b.bits))) != 0)
        to = poison(step.width, Cause::overflow);
      return true;
    default:
      return divide(step, a.bits, b.bits, to);
  }
}

Slot number(Op op, unsigned width, const Slot& a, const Slot& b) {
  if ((a.undefined | b.undefined) != 0) [[unlikely]]
    return undefined_outcome(width, a, b);
  if (width == 32) return {bits_of(arithmetic(op, as_float(a.bits), as_float(b.bits))), 0};
  return {bits_of(arithmetic(op, as_double(a.bits), as_double(b.bits))), 0};
}

Slot convert(const Step& step, const Slot& from) {
  if (step.op == Op::trunc || step.op == Op::zext || step.op == Op::sext) return resize(step, from);
  if (from.undefined != 0) return poison(step.width_after, cause_of(from));
  const bool narrow = step.width == 32;
  switch (step.op) {
    case Op::float_to_float:
      return {narrow ? bits_of(static_cast<double>(as_float(from.bits)))
                     : bits_of(static_cast<float>(as_double(from.bits))),
              0};
    case Op::float_to_signed:
    case Op::float_to_unsigned:
      return from_float(step, narrow ? as_float(from.bits) : as_double(from.bits));
    default:
      return to_float(step, from.bits);
  }
}

bool compare_integers(unsigned predicate, unsigned width, std::uint64_t a, std::uint64_t b) {
  const std::int64_t left = as_signed(a, width), right = as_signed(b, width);
  switch (predicate) {
    case llvm::CmpInst::ICMP_EQ:
      return a == b;
    case llvm::CmpInst::ICMP_NE:
      return a != b;
    case llvm::CmpInst::ICMP_UGT:
      return a > b;
    case llvm::CmpInst::ICMP_UGE:
      return a >= b;
    case llvm::CmpInst::ICMP_ULT:
      return a < b;
    case llvm::CmpInst::ICMP_ULE:
      return a <= b;
    case llvm::CmpInst::ICMP_SGT:
      return left > right;
    case llvm::CmpInst::ICMP_SGE:
      return left >= right;
    case llvm::CmpInst::ICMP_SLT:
      return left < right;
    default:
      return left <= right;
  }
}

// The predicates are sets: equal 1, greater 2, less 4, unordered 8.
bool compare_numbers(unsigned predicate, double a, double b) {
  const unsigned relation = a == b ? 1 : a > b ? 2 : a < b ? 4 : 8;
  return (predicate & relation) != 0;
}

}  // namespace dextral::probe::machine
