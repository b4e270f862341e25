// Instructions that compute, and those that reach memory.
#include <llvm/IR/Constants.h>
#include <llvm/IR/DataLayout.h>
#include <llvm/IR/GetElementPtrTypeIterator.h>
#include <llvm/IR/GlobalVariable.h>
#include <llvm/IR/Operator.h>

#include "probe/machine_prepare.h"

namespace dextral::probe::machine {

namespace {

Op operation(const llvm::BinaryOperator& operation) {
  switch (operation.getOpcode()) {
    case llvm::Instruction::Add:
      return Op::add;
    case llvm::Instruction::Sub:
      return Op::sub;
    case llvm::Instruction::Mul:
      return Op::mul;
    case llvm::Instruction::UDiv:
      return Op::udiv;
    case llvm::Instruction::SDiv:
      return Op::sdiv;
    case llvm::Instruction::URem:
      return Op::urem;
    case llvm::Instruction::SRem:
      return Op::srem;
    case llvm::Instruction::Shl:
      return Op::shl;
    case llvm::Instruction::LShr:
      return Op::lshr;
    case llvm::Instruction::AShr:
      return Op::ashr;
    case llvm::Instruction::And:
      return Op::and_;
    case llvm::Instruction::Or:
      return Op::or_;
    case llvm::Instruction::Xor:
      return Op::xor_;
    case llvm::Instruction::FAdd:
      return Op::fadd;
    case llvm::Instruction::FSub:
      return Op::fsub;
    case llvm::Instruction::FMul:
      return Op::fmul;
    case llvm::Instruction::FDiv:
      return Op::fdiv;
    case llvm::Instruction::FRem:
      return Op::frem;
    default:
      return Op::refuse;
  }
}

std::uint8_t flags_of(const llvm::BinaryOperator& operation) {
  std::uint8_t flags = 0;
  if (auto* wrapping = llvm::dyn_cast<llvm::OverflowingBinaryOperator>(&operation)) {
    if (wrapping->hasNoSignedWrap()) flags |= flag::no_signed_wrap;
    if (wrapping->hasNoUnsignedWrap()) flags |= flag::no_unsigned_wrap;
  }
  if (auto* division = llvm::dyn_cast<llvm::PossiblyExactOperator>(&operation))
    if (division->isExact()) flags |= flag::exact;
  if (auto* either = llvm::dyn_cast<llvm::PossiblyDisjointInst>(&operation))
    if (either->isDisjoint()) flags |= flag::disjoint;
  return flags;
}

}  // namespace

void Preparer::visitBinaryOperator(llvm::BinaryOperator& instruction) {
  Step made = step(operation(instruction), instruction);
  made.width = only_part(instruction).width;
  made.flags = flags_of(instruction);
  made.a = operand(*instruction.getOperand(0));
  made.b = operand(*instruction.getOperand(1));
  emit(made);
}

void Preparer::visitUnaryOperator(llvm::UnaryOperator& instruction) {
  Step made = step(Op::fneg, instruction);
  made.width = only_part(instruction).width;
  made.a = operand(*instruction.getOperand(0));
  emit(made);
}

void Preparer::visitICmpInst(llvm::ICmpInst& instruction) {
  Step made = step(Op::icmp, instruction);
  made.width = only_part(*instruction.getOperand(0)).width;
  made.flags = static_cast<std::uint8_t>(instruction.getPredicate());
  made.a = operand(*instruction.getOperand(0));
  made.b = operand(*instruction.getOperand(1));
  emit(made);
}

void Preparer::visitFCmpInst(llvm::FCmpInst& instruction) {
  Step made = step(Op::fcmp, instruction);
  made.width = only_part(*instruction.getOperand(0)).width;
  made.flags = static_cast<std::uint8_t>(instruction.getPredicate());
  made.a = operand(*instruction.getOperand(0));
  made.b = operand(*instruction.getOperand(1));
  emit(made);
}

void Preparer::cast(Op op, llvm::CastInst& instruction) {
  Step made = step(op, instruction);
  made.width = only_part(*instruction.getOperand(0)).width;
  made.width_after = only_part(instruction).width;
  made.a = operand(*instruction.getOperand(0));
  if (auto* extension = llvm::dyn_cast<llvm::PossiblyNonNegInst>(&instruction))
    if (extension->hasNonNeg()) made.flags |= flag::not_negative;
  if (auto* cut = llvm::dyn_cast<llvm::TruncInst>(&instruction)) {
    if (cut->hasNoSignedWrap()) made.flags |= flag::no_signed_wrap;
    if (cut->hasNoUnsignedWrap()) made.flags |= flag::no_unsigned_wrap;
  }
  emit(made);
}

void Preparer::visitCastInst(llvm::CastInst& instruction) {
  llvm::Value& from = *instruction.getOperand(0);
  switch (instruction.getOpcode()) {
    case llvm::Instruction::Trunc:
      return cast(Op::trunc, instruction);
    case llvm::Instruction::ZExt:
      return cast(Op::zext, instruction);
    case llvm::Instruction::SExt:
      return cast(Op::sext, instruction);
    case llvm::Instruction::FPTrunc:
    case llvm::Instruction::FPExt:
      return cast(Op::float_to_float, instruction);
    case llvm::Instruction::FPToSI:
      return cast(Op::float_to_signed, instruction);
    case llvm::Instruction::FPToUI:
      return cast(Op::float_to_unsigned, instruction);
    case llvm::Instruction::SIToFP:
      return cast(Op::signed_to_float, instruction);
    case llvm::Instruction::UIToFP:
      return cast(Op::unsigned_to_float, instruction);
    case llvm::Instruction::PtrToInt:
    case llvm::Instruction::IntToPtr:
      return cast(only_part(from).width > only_part(instruction).width ? Op::trunc : Op::zext, instruction);
    case llvm::Instruction::BitCast:
      return regroup(from, instruction);
    default:
      return visitInstruction(instruction);
  }
}

// The same bits as numbers of other widths.
void Preparer::regroup(llvm::Value& from, llvm::Value& to) {
  Step made = step(Op::regroup, to);
  made.width = only_part(from).width;
  made.width_after = only_part(to).width;
  made.a = operand(from);
  made.c = static_cast<std::uint32_t>(shape_of(from.getType()).parts.size());
  if (made.width == made.width_after) made.op = Op::copy;
  emit(made);
}

void Preparer::visitSelectInst(llvm::SelectInst& instruction) {
  const bool by_lane = instruction.getCondition()->getType()->isVectorTy();
  Step made = step(by_lane ? Op::select_lanes : Op::select, instruction);
  made.a = operand(*instruction.getCondition());
  made.b = operand(*instruction.getTrueValue());
  made.c = operand(*instruction.getFalseValue());
  emit(made);
}

// What is undefined stays so: it may not decide anything, frozen or not.
void Preparer::visitFreezeInst(llvm::FreezeInst& instruction) {
  Step made = step(Op::copy, instruction);
  made.a = operand(*instruction.getOperand(0));
  emit(made);
}

void Preparer::visitAllocaInst(llvm::AllocaInst& instruction) {
  llvm::Type* type = instruction.getAllocatedType();
  if (!type->isSized() || type->isScalableTy()) return refuse("uses a type of unknown size");
  Step made = step(Op::alloca_, instruction);
  made.number = world_.layout.getTypeAllocSize(type).getFixedValue();
  made.a = operand(*instruction.getArraySize());
  emit(made);
}

bool Preparer::memory_trouble(bool is_volatile, bool is_atomic, const llvm::Value& pointer, const char* verb) {
  auto* global = llvm::dyn_cast<llvm::GlobalVariable>(&pointer);
  const bool guard = global != nullptr && global->getName().starts_with("_ZGV");
  if (is_volatile) note(std::string(verb) + " a volatile value");
  if (is_atomic && !guard) note("uses atomic operations");
  return is_volatile || (is_atomic && !guard);
}

void Preparer::visitLoadInst(llvm::LoadInst& instruction) {
  const llvm::Value& pointer = *instruction.getPointerOperand();
  if (memory_trouble(instruction.isVolatile(), instruction.isAtomic(), pointer, "reads")) return;
  const Shape& shape = shape_of(instruction.getType());
  Step made = step(Op::load_parts, instruction);
  made.a = operand(pointer);
  if (shape.unstorable) note("keeps a vector of bits in memory");
  if (shape.parts.size() == 1 && shape.parts.front().offset == 0) {
    made.op = Op::load;
    made.width = shape.parts.front().width;
    made.number = shape.parts.front().bytes;
  }
  made.b = static_cast<std::uint32_t>(code_.shapes.size());
  code_.shapes.push_back(&shape);
  emit(made);
}

void Preparer::visitStoreInst(llvm::StoreInst& instruction) {
  const llvm::Value& pointer = *instruction.getPointerOperand();
  const llvm::Value& value = *instruction.getValueOperand();
  if (memory_trouble(instruction.isVolatile(), instruction.isAtomic(), pointer, "writes")) return;
  const Shape& shape = shape_of(value.getType());
  Step made;
  made.op = Op::store_parts;
  made.a = operand(pointer);
  made.c = operand(value);
  if (shape.unstorable) note("keeps a vector of bits in memory");
  if (shape.parts.size() == 1 && shape.parts.front().offset == 0) {
    made.op = Op::store;
    made.width = shape.parts.front().width;
    made.number = shape.parts.front().bytes;
  }
  made.b = static_cast<std::uint32_t>(code_.shapes.size());
  code_.shapes.push_back(&shape);
  emit(made);
}

void Preparer::visitGetElementPtrInst(llvm::GetElementPtrInst& instruction) {
  if (instruction.getType()->isVectorTy()) return refuse("uses a vector of pointers");
  Step made = step(Op::offset, instruction);
  made.a = operand(*instruction.getPointerOperand());
  std::vector<Index> indices;
  for (auto at = llvm::gep_type_begin(instruction), end = llvm::gep_type_end(instruction); at != end; ++at) {
    const llvm::Value& index = *at.getOperand();
    if (llvm::StructType* structure = at.getStructTypeOrNull()) {
      const auto field = static_cast<unsigned>(llvm::cast<llvm::ConstantInt>(index).getZExtValue());
      made.number += world_.layout.getStructLayout(structure)->getElementOffset(field).getFixedValue();
      continue;
    }
    if (at.getIndexedType()->isScalableTy()) return refuse("uses vectors of unknown length");
    const std::uint64_t scale = at.getSequentialElementStride(world_.layout).getFixedValue();
    auto* constant = llvm::dyn_cast<llvm::ConstantInt>(&index);
    if (constant != nullptr && constant->getBitWidth() <= 64)
      made.number += static_cast<std::uint64_t>(constant->getSExtValue()) * scale;
    else
      indices.push_back({operand(index), only_part(index).width, scale});
  }
  if (!indices.empty()) {
    made.op = Op::index;
    made.b = static_cast<std::uint32_t>(code_.indices.size());
    code_.indices.push_back(std::move(indices));
  }
  emit(made);
}

void Preparer::visitExtractElementInst(llvm::ExtractElementInst& instruction) {
  Step made = step(Op::extract_lane, instruction);
  made.width = only_part(instruction).width;
  made.a = operand(*instruction.getVectorOperand());
  made.b = operand(*instruction.getIndexOperand());
  made.lanes = static_cast<std::uint32_t>(shape_of(instruction.getVectorOperandType()).parts.size());
  emit(made);
}

void Preparer::visitInsertElementInst(llvm::InsertElementInst& instruction) {
  Step made = step(Op::insert_lane, instruction);
  made.width = only_part(instruction).width;
  made.a = operand(*instruction.getOperand(0));
  made.b = operand(*instruction.getOperand(2));
  made.c = operand(*instruction.getOperand(1));
  emit(made);
}

void Preparer::visitShuffleVectorInst(llvm::ShuffleVectorInst& instruction) {
  Step made = step(Op::shuffle, instruction);
  made.width = only_part(instruction).width;
  made.a = operand(*instruction.getOperand(0));
  made.b = operand(*instruction.getOperand(1));
  const std::size_t first = shape_of(instruction.getOperand(0)->getType()).parts.size();
  made.number = first;
  made.c = static_cast<std::uint32_t>(code_.lanes.size());
  if (trouble_.empty()) {
    const llvm::ArrayRef<int> mask = instruction.getShuffleMask();
    code_.lanes.emplace_back(mask.begin(), mask.end());
  }
  emit(made);
}

// How many parts lie before the one that a path of indices names.
std::uint32_t Preparer::part_at(llvm::Type* type, llvm::ArrayRef<unsigned> path) {
  std::uint32_t before = 0;
  for (unsigned index : path) {
    if (auto* structure = llvm::dyn_cast<llvm::StructType>(type)) {
      for (unsigned i = 0; i < index; ++i)
        before += static_cast<std::uint32_t>(shape_of(structure->getElementType(i)).parts.size());
      type = structure->getElementType(index);
    } else {
      type = llvm::cast<llvm::ArrayType>(type)->getElementType();
      before += index * static_cast<std::uint32_t>(shape_of(type).parts.size());
    }
  }
  return before;
}

void Preparer::visitExtractValueInst(llvm::ExtractValueInst& instruction) {
  const llvm::Value& whole = *instruction.getAggregateOperand();
  Step made = step(Op::copy, instruction);
  made.a = operand(whole);
  if (trouble_.empty()) made.a += part_at(whole.getType(), instruction.getIndices());
  emit(made);
}

void Preparer::visitInsertValueInst(llvm::InsertValueInst& instruction) {
  const llvm::Value& part = *instruction.getInsertedValueOperand();
  Step made = step(Op::insert, instruction);
  made.a = operand(*instruction.getAggregateOperand());
  made.b = operand(part);
  if (trouble_.empty()) made.c = part_at(instruction.getType(), instruction.getIndices());
  made.number = shape_of(part.getType()).parts.size();
  emit(made);
}

}  // namespace dextral::probe::machine
