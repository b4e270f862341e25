#include "probe/drive_constants.h"

#include <llvm/IR/Constants.h>
#include <llvm/IR/DataLayout.h>
#include <llvm/IR/Function.h>
#include <llvm/IR/Instructions.h>
#include <llvm/IR/Module.h>
#include <llvm/IR/ReplaceConstant.h>

#include "probe/machine.h"

namespace dextral::probe {

namespace {

// The functions that make globals, in the order of the text.
std::vector<llvm::Function*> initialisers(llvm::Module& module) {
  std::vector<llvm::Function*> list;
  llvm::GlobalVariable* all = module.getGlobalVariable("llvm.global_ctors", true);
  auto* entries = all && all->hasInitializer() ? llvm::dyn_cast<llvm::ConstantArray>(all->getInitializer()) : nullptr;
  if (!entries) return list;
  for (llvm::Use& entry : entries->operands()) {
    auto* whole = llvm::dyn_cast<llvm::Function>(llvm::cast<llvm::ConstantStruct>(entry)->getOperand(1));
    if (!whole) continue;
    if (!whole->getName().starts_with("_GLOBAL__")) list.push_back(whole);
    else
      for (llvm::BasicBlock& block : *whole)
        for (llvm::Instruction& instruction : block)
          if (auto* call = llvm::dyn_cast<llvm::CallInst>(&instruction); call && call->getCalledFunction() && call->arg_empty())
            list.push_back(call->getCalledFunction());
  }
  return list;
}

bool is_numbers(const llvm::Type* type) {
  if (const auto* array = llvm::dyn_cast<llvm::ArrayType>(type)) return is_numbers(array->getElementType());
  if (const auto* structure = llvm::dyn_cast<llvm::StructType>(type))
    return std::all_of(structure->element_begin(), structure->element_end(), is_numbers);
  return type->isIntegerTy() || type->isFloatTy() || type->isDoubleTy();
}

std::set<llvm::GlobalVariable*> written_in(llvm::Function& function) {
  std::set<llvm::GlobalVariable*> globals;
  for (llvm::BasicBlock& block : function)
    for (llvm::Instruction& instruction : block)
      for (llvm::Use& operand : instruction.operands())
        if (auto* global = llvm::dyn_cast<llvm::GlobalVariable>(operand->stripInBoundsConstantOffsets()); global && !global->isConstant())
          globals.insert(global);
  return globals;
}

void replace_within(llvm::Function& function, llvm::GlobalVariable& global, llvm::Constant* by) {
  llvm::convertUsersOfConstantsToInstructions({&global});
  for (llvm::BasicBlock& block : function)
    for (llvm::Instruction& instruction : block) instruction.replaceUsesOfWith(&global, by);
}

using Bytes = std::vector<std::byte>;

std::optional<Bytes> made_by(llvm::Module& module, llvm::Function& function, llvm::GlobalVariable& global) {
  Machine machine(module, Bounds{});
  const std::size_t size = module.getDataLayout().getTypeAllocSize(global.getValueType()).getFixedValue();
  auto place = machine.allocate(size);
  if (!std::holds_alternative<Address>(place)) return std::nullopt;
  const Address at = std::get<Address>(place);
  if (machine.write(at, Bytes(size))) return std::nullopt;
  llvm::Constant* address = llvm::ConstantInt::get(llvm::Type::getInt64Ty(module.getContext()), at);
  replace_within(function, global, llvm::ConstantExpr::getIntToPtr(address, global.getType()));
  if (std::holds_alternative<Refusal>(machine.call(function, {}))) return std::nullopt;
  auto bytes = machine.read(at, size);
  if (!std::holds_alternative<Bytes>(bytes)) return std::nullopt;
  return std::get<Bytes>(bytes);
}

void make_constant(llvm::Module& module, llvm::GlobalVariable& global, const Bytes& bytes) {
  const llvm::StringRef text(reinterpret_cast<const char*>(bytes.data()), bytes.size());
  llvm::Constant* value = llvm::ConstantDataArray::getString(module.getContext(), text, false);
  auto* constant = new llvm::GlobalVariable(module, value->getType(), true, llvm::GlobalValue::InternalLinkage, value);
  constant->setAlignment(global.getAlign());
  global.replaceAllUsesWith(constant);
  constant->takeName(&global);
}

}  // namespace

void fix_constants(Kit& kit) {
  if (!kit.module) return;
  for (llvm::Function* function : initialisers(*kit.module)) {
    const std::set<llvm::GlobalVariable*> globals = written_in(*function);
    if (globals.size() != 1) continue;
    llvm::GlobalVariable& global = **globals.begin();
    if (!kit.fixed.contains(global.getName().str()) || !global.hasInitializer() || !is_numbers(global.getValueType())) continue;
    if (auto bytes = made_by(*kit.module, *function, global)) make_constant(*kit.module, global, *bytes);
  }
}

}  // namespace dextral::probe
