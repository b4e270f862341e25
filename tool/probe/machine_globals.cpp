// Evaluation of constants, and the first values of globals.
#include "probe/machine_globals.h"

#include <llvm/Demangle/Demangle.h>
#include <llvm/IR/Constants.h>
#include <llvm/IR/DataLayout.h>
#include <llvm/IR/Function.h>
#include <llvm/IR/GlobalAlias.h>
#include <llvm/IR/GlobalVariable.h>
#include <llvm/IR/Operator.h>

namespace dextral::probe::machine {

namespace {

constexpr unsigned most_nesting = 64;

bool starts(llvm::StringRef name, const char* with) { return name.starts_with(with); }

}  // namespace

std::string name_for_people(const llvm::GlobalValue& value) {
  return value.hasName() ? llvm::demangle(value.getName().str()) : "a function without a name";
}

const llvm::Function* Globals::function_at(Address at) const {
  std::optional<std::uint32_t> number = memory_.function_at(at);
  return number ? functions_[*number] : nullptr;
}

bool Globals::evaluate(const llvm::Constant& constant, std::vector<Slot>& slots, unsigned depth) {
  const Shape& shape = shapes_.of(constant.getType());
  if (!shape.trouble.empty()) return fault_.raise(shape.trouble);
  if (depth > most_nesting) return fault_.raise("uses a constant that is nested too deeply");
  if (constant.isNullValue() && !llvm::isa<llvm::ConstantExpr>(constant)) {
    slots.resize(slots.size() + shape.parts.size());
    return true;
  }
  if (llvm::isa<llvm::UndefValue>(constant)) {
    for (const Part& part : shape.parts) slots.push_back(poison(part.width));
    return true;
  }
  if (auto* expression = llvm::dyn_cast<llvm::ConstantExpr>(&constant))
    return this->expression(*expression, slots, depth);
  if (shape.parts.size() == 1 && !constant.getType()->isAggregateType() && !constant.getType()->isVectorTy()) {
    Slot slot;
    if (!one(constant, slot, depth)) return false;
    slots.push_back(slot);
    return true;
  }
  const std::size_t whole = slots.size() + shape.parts.size();
  for (unsigned i = 0;; ++i) {
    const llvm::Constant* element = constant.getAggregateElement(i);
    if (element == nullptr) break;
    if (!evaluate(*element, slots, depth + 1)) return false;
  }
  return slots.size() == whole || fault_.raise("uses a constant of an unknown kind");
}

bool Globals::one(const llvm::Constant& constant, Slot& slot, unsigned depth) {
  if (auto* integer = llvm::dyn_cast<llvm::ConstantInt>(&constant)) {
    slot.bits = integer->getZExtValue();
    return true;
  }
  if (auto* number = llvm::dyn_cast<llvm::ConstantFP>(&constant)) {
    slot.bits = number->getValueAPF().bitcastToAPInt().getZExtValue();
    return true;
  }
  if (auto* value = llvm::dyn_cast<llvm::GlobalValue>(&constant)) return address_of(*value, slot, depth);
  if (auto* same = llvm::dyn_cast<llvm::DSOLocalEquivalent>(&constant))
    return address_of(*same->getGlobalValue(), slot, depth);
  if (auto* same = llvm::dyn_cast<llvm::NoCFIValue>(&constant)) return address_of(*same->getGlobalValue(), slot, depth);
  if (llvm::isa<llvm::BlockAddress>(constant)) return fault_.raise("jumps to a computed place");
  return fault_.raise("uses a constant of an unknown kind");
}

bool Globals::address_of(const llvm::GlobalValue& value, Slot& slot, unsigned depth) {
  if (auto known = addresses_.find(&value); known != addresses_.end()) {
    slot.bits = known->second;
    return true;
  }
  if (auto* alias = llvm::dyn_cast<llvm::GlobalAlias>(&value)) {
    std::vector<Slot> slots;
    if (!evaluate(*alias->getAliasee(), slots, depth + 1)) return false;
    slot = slots.front();
  } else if (auto* variable = llvm::dyn_cast<llvm::GlobalVariable>(&value)) {
    if (variable->isThreadLocal()) return fault_.raise("uses a value that belongs to a thread");
    slot.bits = place(*variable);
  } else if (auto* function = llvm::dyn_cast<llvm::Function>(&value)) {
    slot.bits = place(*function);
  } else {
    return fault_.raise("chooses " + name_for_people(value) + " when the program is loaded");
  }
  if (slot.bits == 0) return false;
  addresses_[&value] = slot.bits;
  return true;
}

Address Globals::place(const llvm::GlobalVariable& variable) {
  GlobalTraits traits;
  traits.name = name_for_people(variable);
  traits.symbol = variable.getName().str();
  traits.constant = variable.isConstant();
  traits.guard = starts(variable.getName(), "_ZGV");
  traits.local = starts(variable.getName(), "_ZZ");
  if (variable.hasDefinitiveInitializer())
    traits.fill = [this, &variable](Place place) { lay(*variable.getInitializer(), place, 0); };
  llvm::Type* type = variable.getValueType();
  const bool sized = type->isSized() && !type->isScalableTy();
  return memory_.place_global(sized ? layout_.getTypeAllocSize(type).getFixedValue() : 0, std::move(traits));
}

Address Globals::place(const llvm::Function& function) {
  functions_.push_back(&function);
  return memory_.place_function(static_cast<std::uint32_t>(functions_.size() - 1));
}

bool Globals::expression(const llvm::ConstantExpr& expression, std::vector<Slot>& slots, unsigned depth) {
  const Shape& shape = shapes_.of(expression.getType());
  if (shape.parts.size() != 1 || expression.getType()->isVectorTy())
    return fault_.raise("uses a constant that is computed by parts");
  Slot slot;
  if (!arithmetic(expression, slot, depth)) return false;
  const unsigned width = shape.parts.front().width;
  slot.bits &= ones(width);
  slot.undefined &= ones(width);
  slots.push_back(slot);
  return true;
}

bool Globals::arithmetic(const llvm::ConstantExpr& expression, Slot& slot, unsigned depth) {
  auto operand = [&](unsigned i, Slot& to) {
    std::vector<Slot> slots;
    if (!evaluate(*expression.getOperand(i), slots, depth + 1)) return false;
    if (slots.size() != 1) return fault_.raise("uses a constant that is computed by parts");
    to = slots.front();
    return true;
  };
  Slot a, b;
  if (!operand(0, a)) return false;
  slot = a;
  if (auto* offset = llvm::dyn_cast<llvm::GEPOperator>(&expression)) {
    llvm::APInt sum(layout_.getIndexTypeSizeInBits(expression.getType()), 0);
    if (!offset->accumulateConstantOffset(layout_, sum)) return fault_.raise("uses an address that is no constant");
    slot.bits = a.bits + sum.getZExtValue();
    return true;
  }
  switch (expression.getOpcode()) {
    case llvm::Instruction::Trunc:
    case llvm::Instruction::PtrToInt:
    case llvm::Instruction::IntToPtr:
    case llvm::Instruction::BitCast:
      return true;
    case llvm::Instruction::Add:
    case llvm::Instruction::Sub:
    case llvm::Instruction::Mul:
    case llvm::Instruction::Xor:
      break;
    default:
      return fault_.raise("uses a constant of an unknown kind");
  }
  if (!operand(1, b)) return false;
  if ((a.undefined | b.undefined) != 0) {
    slot = poison(64);
    return true;
  }
  const unsigned code = expression.getOpcode();
  slot.bits = code == llvm::Instruction::Add   ? a.bits + b.bits
              : code == llvm::Instruction::Sub ? a.bits - b.bits
              : code == llvm::Instruction::Mul ? a.bits * b.bits
                                               : a.bits ^ b.bits;
  return true;
}

bool Globals::lay(const llvm::Constant& constant, Place place, unsigned depth) {
  if (depth > most_nesting) return fault_.raise("uses a constant that is nested too deeply");
  if (llvm::isa<llvm::ConstantAggregateZero>(constant)) return true;
  if (auto* sequence = llvm::dyn_cast<llvm::ConstantDataArray>(&constant)) return lay_sequence(*sequence, place);
  llvm::Type* type = constant.getType();
  if (llvm::isa<llvm::UndefValue>(constant)) {
    if (type->isSized()) std::memset(place.undefined, 0xff, layout_.getTypeAllocSize(type).getFixedValue());
    return true;
  }
  auto* structure = llvm::dyn_cast<llvm::StructType>(type);
  auto* array = llvm::dyn_cast<llvm::ArrayType>(type);
  if (structure == nullptr && array == nullptr) return lay_parts(constant, place, depth);
  const std::uint64_t stride = array ? layout_.getTypeAllocSize(array->getElementType()).getFixedValue() : 0;
  for (unsigned i = 0; i < constant.getNumOperands(); ++i) {
    const std::uint64_t offset =
        structure ? layout_.getStructLayout(structure)->getElementOffset(i).getFixedValue() : i * stride;
    if (!lay(*constant.getAggregateElement(i), {place.bytes + offset, place.undefined + offset}, depth + 1))
      return false;
  }
  return true;
}

bool Globals::lay_sequence(const llvm::ConstantDataSequential& sequence, Place place) {
  const llvm::StringRef raw = sequence.getRawDataValues();
  std::memcpy(place.bytes, raw.data(), raw.size());
  return true;
}

bool Globals::lay_parts(const llvm::Constant& constant, Place place, unsigned depth) {
  const Shape& shape = shapes_.of(constant.getType());
  std::vector<Slot> slots;
  if (!evaluate(constant, slots, depth + 1)) return false;
  if (shape.unstorable) return fault_.raise("keeps a vector of bits in memory");
  for (std::size_t i = 0; i < slots.size(); ++i) {
    const std::uint32_t offset = shape.parts[i].offset;
    put(shape.parts[i], slots[i], place.bytes + offset, place.undefined + offset);
  }
  return true;
}

}  // namespace dextral::probe::machine
