#include "probe/drive_globals.h"

#include <llvm/Demangle/Demangle.h>
#include <llvm/IR/Constants.h>
#include <llvm/IR/DataLayout.h>
#include <llvm/IR/DerivedTypes.h>
#include <llvm/IR/Module.h>

#include <algorithm>

namespace dextral::probe {

namespace {

constexpr std::size_t kMostGlobals = 32;
constexpr std::size_t kMostNumbers = 40;  // of one global

bool leaves_of(llvm::Type* type, std::size_t offset, const llvm::DataLayout& layout, std::vector<Leaf>& leaves) {
  if (type->isDoubleTy() || type->isFloatTy()) {
    leaves.push_back({type->isFloatTy() ? Number::single_float : Number::double_float, offset, type->isFloatTy() ? 4u : 8u});
    return leaves.size() <= kMostNumbers;
  }
  if (auto* array = llvm::dyn_cast<llvm::ArrayType>(type)) {
    const std::size_t each = layout.getTypeAllocSize(array->getElementType()).getFixedValue();
    for (std::size_t i = 0; i < array->getNumElements(); ++i)
      if (!leaves_of(array->getElementType(), offset + i * each, layout, leaves)) return false;
    return array->getNumElements() > 0;
  }
  auto* structure = llvm::dyn_cast<llvm::StructType>(type);
  if (!structure || structure->isOpaque() || structure->getNumElements() == 0) return false;
  for (unsigned i = 0; i < structure->getNumElements(); ++i)
    if (!leaves_of(structure->getElementType(i), offset + layout.getStructLayout(structure)->getElementOffset(i).getFixedValue(), layout, leaves))
      return false;
  return true;
}

std::optional<Formal> formal_of(const llvm::GlobalVariable& global) {
  if (global.isConstant() || global.isThreadLocal() || global.getName().starts_with("llvm.") || global.use_empty()) return std::nullopt;
  const llvm::DataLayout& layout = global.getDataLayout();
  Bundle bundle;
  if (!global.getValueType()->isSized() || !leaves_of(global.getValueType(), 0, layout, bundle.leaves)) return std::nullopt;
  Formal formal;
  bundle.group.text = llvm::demangle(global.getName().str());
  formal.name = bundle.group.formal = "global " + bundle.group.text;
  bundle.group.count = bundle.leaves.size();
  if (auto* rows = llvm::dyn_cast<llvm::ArrayType>(global.getValueType()))
    if (auto* columns = llvm::dyn_cast<llvm::ArrayType>(rows->getElementType()); columns && columns->getElementType()->isFloatingPointTy()) {
      bundle.group.rows = rows->getNumElements();
      bundle.group.columns = columns->getNumElements();
    }
  formal.object.bytes = layout.getTypeAllocSize(global.getValueType()).getFixedValue();
  formal.object.bundles.push_back(std::move(bundle));
  formal.behind_pointer = true;
  return formal;
}

}  // namespace

void expose_globals(Kit& kit) {
  if (!kit.module) return;
  std::vector<std::pair<llvm::GlobalVariable*, Formal>> list;
  for (llvm::GlobalVariable& global : kit.module->globals())
    if (std::optional<Formal> formal = formal_of(global)) list.emplace_back(&global, std::move(*formal));
  std::sort(list.begin(), list.end(), [](const auto& a, const auto& b) { return a.first->getName() < b.first->getName(); });
  if (list.size() > kMostGlobals) list.resize(kMostGlobals);
  Machine machine(*kit.module, Bounds{});
  for (auto& [global, formal] : list) {
    auto place = machine.allocate(formal.object.bytes);
    if (!std::holds_alternative<std::uint64_t>(place)) return;
    formal.fixed_at = std::get<std::uint64_t>(place);
    llvm::Constant* address = llvm::ConstantInt::get(llvm::Type::getInt64Ty(kit.module->getContext()), formal.fixed_at);
    global->replaceAllUsesWith(llvm::ConstantExpr::getIntToPtr(address, global->getType()));
    for (Candidate& candidate : kit.candidates) candidate.formals.push_back(formal);
  }
}

bool make_globals(Machine& machine, const Candidate& candidate) {
  for (const Formal& formal : candidate.formals) {
    if (formal.fixed_at == 0) continue;
    auto place = machine.allocate(formal.object.bytes);
    if (!std::holds_alternative<Address>(place) || std::get<Address>(place) != formal.fixed_at) return false;
  }
  return true;
}

}  // namespace dextral::probe
