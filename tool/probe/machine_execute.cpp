// Steps that compute, lane by lane, and those that reach memory.
#include <cmath>

#include "probe/machine_run.h"

namespace dextral::probe::machine {

bool Run::execute(const Step& step) {
  switch (step.op) {
    case Op::add:
    case Op::sub:
    case Op::mul:
    case Op::udiv:
    case Op::sdiv:
    case Op::urem:
    case Op::srem:
    case Op::shl:
    case Op::lshr:
    case Op::ashr:
    case Op::and_:
    case Op::or_:
    case Op::xor_:
      return integers(step);
    case Op::fadd:
    case Op::fsub:
    case Op::fmul:
    case Op::fdiv:
    case Op::frem:
    case Op::fneg:
      numbers(step);
      return true;
    case Op::icmp:
    case Op::fcmp:
      comparisons(step);
      return true;
    case Op::trunc:
    case Op::zext:
    case Op::sext:
    case Op::float_to_float:
    case Op::float_to_signed:
    case Op::float_to_unsigned:
    case Op::signed_to_float:
    case Op::unsigned_to_float:
      conversions(step);
      return true;
    case Op::select:
    case Op::select_lanes:
      select(step);
      return true;
    case Op::map:
      map(step);
      return true;
    case Op::reduce:
      reduce(step);
      return true;
    case Op::regroup:
      regroup(step);
      return true;
    case Op::copy:
    case Op::insert:
    case Op::extract_lane:
    case Op::insert_lane:
    case Op::shuffle:
      lanes(step);
      return true;
    case Op::alloca_:
      return alloca_(step);
    case Op::load: {
      const Slot& pointer = regs_[step.a];
      const Part part{Kind::integer, step.width, static_cast<std::uint8_t>(step.number), 0};
      return decides(pointer) && memory().load(pointer.bits, part, regs_[step.to]);
    }
    case Op::store: {
      const Slot& pointer = regs_[step.a];
      const Part part{Kind::integer, step.width, static_cast<std::uint8_t>(step.number), 0};
      return decides(pointer) && memory().store(pointer.bits, part, regs_[step.c]);
    }
    case Op::load_parts:
      return load_parts(step);
    case Op::store_parts:
      return store_parts(step);
    case Op::offset:
    case Op::index:
      address(step);
      return true;
    case Op::jump:
      follow(step.b);
      return true;
    case Op::branch:
      return branch(step);
    case Op::switch_:
      return switch_(step);
    case Op::return_:
      return return_(step);
    case Op::refuse:
      return raise(frames_.back().code->reasons[step.a]);
    case Op::call:
      return call(step);
    case Op::call_address:
      return call_address(step);
    case Op::effect:
      return effect(step);
    case Op::stack_save:
    case Op::stack_restore:
      return stack(step);
  }
  return raise("runs into an unknown step");
}

bool Run::integers(const Step& step) {
  for (std::uint32_t i = 0; i < step.lanes; ++i)
    if (!integer(step, regs_[step.a + i], regs_[step.b + i], regs_[step.to + i])) return raise("divides by zero");
  return true;
}

void Run::numbers(const Step& step) {
  for (std::uint32_t i = 0; i < step.lanes; ++i) {
    const Slot& a = regs_[step.a + i];
    if (step.op != Op::fneg)
      regs_[step.to + i] = number(step.op, step.width, a, regs_[step.b + i]);
    else
      regs_[step.to + i] = a.undefined != 0 ? a : Slot{a.bits ^ 1ull << (step.width - 1), 0};
  }
}

void Run::comparisons(const Step& step) {
  for (std::uint32_t i = 0; i < step.lanes; ++i) {
    const Slot& a = regs_[step.a + i];
    const Slot& b = regs_[step.b + i];
    Slot& to = regs_[step.to + i];
    if ((a.undefined | b.undefined) != 0) {
      to = poison(1, cause_of(a.undefined != 0 ? a : b));
    } else if (step.op == Op::icmp) {
      to = {compare_integers(step.flags, step.width, a.bits, b.bits), 0};
    } else {
      const bool narrow = step.width == 32;
      to = {compare_numbers(step.flags, narrow ? as_float(a.bits) : as_double(a.bits),
                            narrow ? as_float(b.bits) : as_double(b.bits)),
            0};
    }
  }
}

void Run::conversions(const Step& step) {
  for (std::uint32_t i = 0; i < step.lanes; ++i) regs_[step.to + i] = convert(step, regs_[step.a + i]);
}

void Run::select(const Step& step) {
  const bool by_lane = step.op == Op::select_lanes;
  for (std::uint32_t i = 0; i < step.lanes; ++i) {
    const Slot& condition = regs_[step.a + (by_lane ? i : 0)];
    if (condition.undefined != 0)
      regs_[step.to + i] = poison(64, cause_of(condition));
    else
      regs_[step.to + i] = regs_[((condition.bits & 1) != 0 ? step.b : step.c) + i];
  }
}

void Run::map(const Step& step) {
  const Pure pure = frames_.back().code->calls[step.number].pure;
  const std::uint32_t first = step.flags & 1, second = step.flags >> 1 & 1, third = step.flags >> 2 & 1;
  for (std::uint32_t i = 0; i < step.lanes; ++i) {
    const Slot& a = regs_[step.a + i * first];
    const Slot& b = regs_[step.b + i * second];
    const Slot& c = regs_[step.c + i * third];
    if ((a.undefined | b.undefined | c.undefined) != 0)
      regs_[step.to + i] = poison(step.width_after, cause_of(a.undefined != 0 ? a : b.undefined != 0 ? b : c));
    else
      regs_[step.to + i] = pure(step.width, a.bits, b.bits, c.bits);
  }
}

void Run::reduce(const Step& step) {
  Step one = step;
  one.op = static_cast<Op>(step.flags);
  one.flags = 0;
  Slot sum = regs_[step.b];
  for (std::uint32_t i = step.c != 0 ? 0 : 1; i < step.lanes; ++i) {
    const Slot left = sum;
    if (one.op == Op::fadd || one.op == Op::fmul)
      sum = number(one.op, one.width, left, regs_[step.a + i]);
    else
      integer(one, left, regs_[step.a + i], sum);
  }
  regs_[step.to] = sum;
}

void Run::regroup(const Step& step) {
  const unsigned from = step.width, to = step.width_after;
  const unsigned unit = from % 8 == 0 && to % 8 == 0 ? 8 : 1;
  for (std::uint32_t i = 0; i < step.lanes; ++i) {
    Slot out;
    for (unsigned bit = 0; bit < to; bit += unit) {
      const std::uint64_t at = static_cast<std::uint64_t>(i) * to + bit;
      const Slot& source = regs_[step.a + at / from];
      out.bits |= (source.bits >> at % from & ones(unit)) << bit;
      out.undefined |= (source.undefined >> at % from & ones(unit)) << bit;
    }
    regs_[step.to + i] = out;
  }
}

void Run::lanes(const Step& step) {
  Slot* to = regs_ + step.to;
  if (step.op == Op::extract_lane) {
    const Slot& at = regs_[step.b];
    *to = at.undefined != 0 || at.bits >= step.lanes ? poison(step.width) : regs_[step.a + at.bits];
    return;
  }
  if (step.op == Op::shuffle) {
    const std::vector<std::int32_t>& from = frames_.back().code->lanes[step.c];
    for (std::uint32_t i = 0; i < step.lanes; ++i) {
      const auto at = static_cast<std::uint32_t>(from[i]);
      to[i] = from[i] < 0        ? poison(step.width)
              : at < step.number ? regs_[step.a + at]
                                 : regs_[step.b + at - step.number];
    }
    return;
  }
  for (std::uint32_t i = 0; i < step.lanes; ++i) to[i] = regs_[step.a + i];
  if (step.op == Op::insert)
    for (std::uint32_t i = 0; i < step.number; ++i) to[step.c + i] = regs_[step.b + i];
  if (step.op != Op::insert_lane) return;
  const Slot& at = regs_[step.b];
  if (at.undefined == 0 && at.bits < step.lanes)
    to[at.bits] = regs_[step.c];
  else
    for (std::uint32_t i = 0; i < step.lanes; ++i) to[i] = poison(step.width);
}

bool Run::alloca_(const Step& step) {
  const Slot& count = regs_[step.a];
  if (!decides(count)) return false;
  std::uint64_t size = 0;
  if (__builtin_mul_overflow(step.number, count.bits, &size)) size = ~0ull;
  Slot made;
  if (!memory().push(size, made.bits) || !charge(size)) return false;
  regs_[step.to] = made;
  return true;
}

bool Run::load_parts(const Step& step) {
  const Slot pointer = regs_[step.a];
  if (!decides(pointer)) return false;
  std::uint32_t to = step.to;
  for (const Part& part : frames_.back().code->shapes[step.b]->parts)
    if (!memory().load(pointer.bits + part.offset, part, regs_[to++])) return false;
  return true;
}

bool Run::store_parts(const Step& step) {
  const Slot pointer = regs_[step.a];
  if (!decides(pointer)) return false;
  std::uint32_t from = step.c;
  for (const Part& part : frames_.back().code->shapes[step.b]->parts)
    if (!memory().store(pointer.bits + part.offset, part, regs_[from++])) return false;
  return true;
}

void Run::address(const Step& step) {
  Slot sum = regs_[step.a];
  const std::uint64_t start = sum.bits;
  sum.bits += step.number;
  if (step.op == Op::index) {
    for (const Index& index : frames_.back().code->indices[step.b]) {
      const Slot& at = regs_[index.slot];
      if (at.undefined != 0 && sum.undefined == 0) sum = poison(64, cause_of(at));
      if (sum.undefined == 0) sum.bits += static_cast<std::uint64_t>(as_signed(at.bits, index.width)) * index.scale;
    }
  }
  if (regs_[step.a].undefined != 0) sum = regs_[step.a];
  if (sum.undefined == 0 && (sum.bits ^ start) >> 32 != 0) sum = poison(64, Cause::wild);
  regs_[step.to] = sum;
}

}  // namespace dextral::probe::machine
