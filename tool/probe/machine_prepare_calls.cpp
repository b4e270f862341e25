// Calls: of functions with a body, of the library, of intrinsics.
#include <llvm/IR/Constants.h>
#include <llvm/IR/DataLayout.h>
#include <llvm/IR/GlobalAlias.h>
#include <llvm/IR/InlineAsm.h>
#include <llvm/IR/IntrinsicInst.h>
#include <llvm/IR/Intrinsics.h>

#include "probe/machine_prepare.h"

namespace dextral::probe::machine {

namespace {

constexpr std::uint8_t first_strides = 1, second_strides = 2, third_strides = 4;

char letter(const Shape& shape) {
  if (shape.parts.empty()) return 'v';
  if (shape.parts.size() > 1 || shape.unstorable) return '?';
  switch (shape.parts.front().kind) {
    case Kind::pointer:
      return 'p';
    case Kind::double_float:
      return 'd';
    case Kind::single_float:
      return 'f';
    case Kind::integer:
      break;
  }
  const unsigned width = shape.parts.front().width;
  return width == 64 ? 'l' : width == 32 ? 'i' : width == 8 ? 'c' : width == 1 ? 'b' : '?';
}

// The wrapped outcome, and whether it had to wrap.
template <bool is_signed, Op op>
Slot wrapped(unsigned width, std::uint64_t a, std::uint64_t b, std::uint64_t) {
  const std::uint64_t full = op == Op::add ? a + b : op == Op::sub ? a - b : a * b;
  return {full & ones(width), 0};
}

template <bool is_signed, Op op>
Slot wraps(unsigned width, std::uint64_t a, std::uint64_t b, std::uint64_t) {
  using Wide = std::conditional_t<is_signed, __int128, unsigned __int128>;
  auto widen = [width](std::uint64_t bits) {
    return is_signed ? static_cast<Wide>(as_signed(bits, width)) : static_cast<Wide>(bits);
  };
  const Wide full = op == Op::add ? widen(a) + widen(b) : op == Op::sub ? widen(a) - widen(b) : widen(a) * widen(b);
  return {full != widen(static_cast<std::uint64_t>(full) & ones(width)), 0};
}

}  // namespace

void Preparer::visitCallInst(llvm::CallInst& instruction) { call(instruction); }

void Preparer::visitInvokeInst(llvm::InvokeInst& instruction) {
  call(instruction);
  Step onward;
  onward.op = Op::jump;
  onward.b = edge(*instruction.getParent(), *instruction.getNormalDest());
  emit(onward);
}

void Preparer::call(llvm::CallBase& site) {
  if (site.isInlineAsm()) return refuse("uses inline assembly");
  const llvm::Value* called = site.getCalledOperand();
  for (int i = 0; i < 16 && llvm::isa<llvm::GlobalAlias>(called); ++i)
    called = llvm::cast<llvm::GlobalAlias>(called)->getAliasee();
  auto* callee = llvm::dyn_cast<llvm::Function>(called);
  if (callee == nullptr) return call_body(site, nullptr);
  if (callee->isIntrinsic()) return call_intrinsic(site, *callee);
  if (callee->isDeclaration()) return call_library(site, *callee);
  call_body(site, callee);
}

std::uint32_t Preparer::add_call(Call made) {
  code_.calls.push_back(std::move(made));
  return static_cast<std::uint32_t>(code_.calls.size() - 1);
}

void Preparer::call_body(llvm::CallBase& site, const llvm::Function* callee) {
  Call made;
  made.site = &site;
  made.callee = callee;
  for (unsigned i = 0; i < site.arg_size(); ++i) {
    const llvm::Value& value = *site.getArgOperand(i);
    Argument argument{operand(value), static_cast<std::uint32_t>(shape_of(value.getType()).parts.size()), 0};
    if (llvm::Type* copied = site.getParamByValType(i))
      argument.by_value = world_.layout.getTypeAllocSize(copied).getFixedValue() + 1;
    if (site.isInAllocaArgument(i) || site.paramHasAttr(i, llvm::Attribute::Preallocated))
      note("passes arguments in memory");
    made.arguments.push_back(argument);
  }
  Step step = this->step(callee != nullptr ? Op::call : Op::call_address, site);
  if (callee == nullptr) step.a = operand(*site.getCalledOperand());
  made.parts = step.lanes;
  step.number = add_call(std::move(made));
  emit(step);
}

std::string Preparer::signature(const llvm::CallBase& site) {
  std::string text(1, letter(shape_of(site.getType())));
  text += '(';
  for (const llvm::Use& argument : site.args()) text += letter(shape_of(argument->getType()));
  return text + ')';
}

void Preparer::call_library(llvm::CallBase& site, const llvm::Function& callee) {
  const std::string symbol = callee.getName().str();
  const Stand* stand = maths(symbol);
  if (stand == nullptr) stand = library(symbol);
  if (stand == nullptr) return refuse("calls " + name_for_people(callee));
  if (stand->reason != nullptr) return refuse(stand->reason);
  if (signature(site) != stand->signature)
    return refuse("calls " + name_for_people(callee) + " with arguments of other types");
  if (stand->pure != nullptr) return map(site, stand->pure, place_of(site), only_part(site).width);
  effect(site, stand->effect, site.arg_size());
}

void Preparer::map(llvm::CallBase& site, Pure pure, std::uint32_t to, unsigned width_after) {
  Step made = step(Op::map, site);
  made.to = to;
  made.width_after = static_cast<std::uint8_t>(width_after);
  std::uint32_t* operands[] = {&made.a, &made.b, &made.c};
  constexpr std::uint8_t strides[] = {first_strides, second_strides, third_strides};
  const unsigned count = site.arg_size();
  if (count == 0 || count > 3) return note("calls a function of too many arguments");
  for (unsigned i = 0; i < count; ++i) {
    const llvm::Value& value = *site.getArgOperand(i);
    *operands[i] = operand(value);
    if (value.getType()->isVectorTy()) made.flags |= strides[i];
  }
  for (unsigned i = count; i < 3; ++i) *operands[i] = made.a;
  made.width = only_part(*site.getArgOperand(0)).width;
  Call call;
  call.pure = pure;
  made.number = add_call(std::move(call));
  emit(made);
}

void Preparer::effect(llvm::CallBase& site, Effect effect, unsigned count) {
  Call made;
  made.effect = effect;
  for (unsigned i = 0; i < count; ++i) {
    const llvm::Value& value = *site.getArgOperand(i);
    if (shape_of(value.getType()).parts.size() != 1) note("passes several values as one");
    made.arguments.push_back({operand(value), 1, 0});
  }
  Step step = this->step(Op::effect, site);
  step.width_after = step.lanes > 0 ? only_part(site).width : 0;
  if (step.lanes > 1) note("takes several values as one");
  step.number = add_call(std::move(made));
  emit(step);
}

void Preparer::call_intrinsic(llvm::CallBase& site, const llvm::Function& callee) {
  const unsigned id = callee.getIntrinsicID();
  if (ignored_intrinsic(id)) return;
  if (const char* why = refused_intrinsic(id)) return refuse(why);
  if (special_intrinsic(site, id) || overflow_pair(site, id) || reduction(site, id)) return;
  if (Pure pure = pure_intrinsic(id)) {
    const Shape& shape = shape_of(site.getType());
    for (const Part& part : shape.parts)
      if (part.width != shape.parts.front().width) return refuse("calls " + callee.getName().str());
    return map(site, pure, place_of(site), only_part(site).width);
  }
  if (Effect found = effect_intrinsic(id)) return effect(site, found, site.arg_size());
  refuse("calls " + callee.getName().str());
}

bool Preparer::special_intrinsic(llvm::CallBase& site, unsigned id) {
  Step made = step(Op::copy, site);
  switch (id) {
    case llvm::Intrinsic::expect:
    case llvm::Intrinsic::expect_with_probability:
    case llvm::Intrinsic::launder_invariant_group:
    case llvm::Intrinsic::strip_invariant_group:
    case llvm::Intrinsic::ssa_copy:
    case llvm::Intrinsic::ptr_annotation:
    case llvm::Intrinsic::arithmetic_fence:
      made.a = operand(*site.getArgOperand(0));
      break;
    case llvm::Intrinsic::stacksave:
      made.op = Op::stack_save;
      break;
    case llvm::Intrinsic::stackrestore:
      made.op = Op::stack_restore;
      made.a = operand(*site.getArgOperand(0));
      break;
    default:
      return false;
  }
  emit(made);
  return true;
}

bool Preparer::overflow_pair(llvm::CallBase& site, unsigned id) {
  Pure value = nullptr, beyond = nullptr;
  auto both = [&](Pure first, Pure second) { value = first, beyond = second; };
  switch (id) {
    case llvm::Intrinsic::sadd_with_overflow:
      both(wrapped<true, Op::add>, wraps<true, Op::add>);
      break;
    case llvm::Intrinsic::uadd_with_overflow:
      both(wrapped<false, Op::add>, wraps<false, Op::add>);
      break;
    case llvm::Intrinsic::ssub_with_overflow:
      both(wrapped<true, Op::sub>, wraps<true, Op::sub>);
      break;
    case llvm::Intrinsic::usub_with_overflow:
      both(wrapped<false, Op::sub>, wraps<false, Op::sub>);
      break;
    case llvm::Intrinsic::smul_with_overflow:
      both(wrapped<true, Op::mul>, wraps<true, Op::mul>);
      break;
    case llvm::Intrinsic::umul_with_overflow:
      both(wrapped<false, Op::mul>, wraps<false, Op::mul>);
      break;
    default:
      return false;
  }
  const auto lanes = static_cast<std::uint32_t>(shape_of(site.getArgOperand(0)->getType()).parts.size());
  const std::uint32_t to = place_of(site);
  const std::size_t before = code_.steps.size();
  map(site, value, to, only_part(*site.getArgOperand(0)).width);
  map(site, beyond, to + lanes, 1);
  for (std::size_t i = before; i < code_.steps.size(); ++i) code_.steps[i].lanes = lanes;
  return true;
}

bool Preparer::reduction(llvm::CallBase& site, unsigned id) {
  Step made = step(Op::reduce, site);
  switch (id) {
    case llvm::Intrinsic::vector_reduce_add:
      made.flags = static_cast<std::uint8_t>(Op::add);
      break;
    case llvm::Intrinsic::vector_reduce_mul:
      made.flags = static_cast<std::uint8_t>(Op::mul);
      break;
    case llvm::Intrinsic::vector_reduce_and:
      made.flags = static_cast<std::uint8_t>(Op::and_);
      break;
    case llvm::Intrinsic::vector_reduce_or:
      made.flags = static_cast<std::uint8_t>(Op::or_);
      break;
    case llvm::Intrinsic::vector_reduce_xor:
      made.flags = static_cast<std::uint8_t>(Op::xor_);
      break;
    case llvm::Intrinsic::vector_reduce_fadd:
      made.flags = static_cast<std::uint8_t>(Op::fadd);
      break;
    case llvm::Intrinsic::vector_reduce_fmul:
      made.flags = static_cast<std::uint8_t>(Op::fmul);
      break;
    default:
      return false;
  }
  const bool starts = site.arg_size() == 2;
  const llvm::Value& vector = *site.getArgOperand(starts ? 1 : 0);
  made.width = only_part(vector).width;
  made.a = operand(vector);
  made.b = starts ? operand(*site.getArgOperand(0)) : made.a;
  made.c = starts ? 1 : 0;
  made.lanes = static_cast<std::uint32_t>(shape_of(vector.getType()).parts.size());
  emit(made);
  return true;
}

}  // namespace dextral::probe::machine
