// How a type is laid out in slots and in memory.
#include "probe/machine_value.h"

#include <llvm/IR/DataLayout.h>
#include <llvm/IR/DerivedTypes.h>

namespace dextral::probe::machine {

namespace {

constexpr std::size_t most_parts = 1024;
constexpr unsigned most_nesting = 64;

}  // namespace

const char* sentence(Cause cause) {
  switch (cause) {
    case Cause::overflow:
      return "overflows an integer";
    case Cause::shift:
      return "shifts by too many bits";
    case Cause::conversion:
      return "converts a number that does not fit";
    case Cause::wild:
      return "computes a wild pointer";
    case Cause::unset:
      break;
  }
  return "uses an undefined value";
}

const Shape& Shapes::of(llvm::Type* type) {
  std::unique_ptr<Shape>& shape = known_[type];
  if (shape) return *shape;
  shape = std::make_unique<Shape>();
  if (type->isVoidTy()) return *shape;
  flatten(type, 0, *shape, 0);
  if (!shape->trouble.empty()) {
    shape->parts.clear();
    return *shape;
  }
  shape->bytes = layout_.getTypeAllocSize(type).getFixedValue();
  return *shape;
}

void Shapes::flatten(llvm::Type* type, std::uint64_t offset, Shape& shape, unsigned depth) {
  if (!shape.trouble.empty()) return;
  if (depth > most_nesting || shape.parts.size() > most_parts) {
    shape.trouble = "handles a value of more than " + std::to_string(most_parts) + " parts";
    return;
  }
  if (auto* structure = llvm::dyn_cast<llvm::StructType>(type)) {
    if (structure->isOpaque() || !structure->isSized() || structure->containsHomogeneousScalableVectorTypes()) {
      shape.trouble = "uses a type of unknown size";
      return;
    }
    const llvm::StructLayout* layout = layout_.getStructLayout(structure);
    for (unsigned i = 0; i < structure->getNumElements(); ++i)
      flatten(structure->getElementType(i), offset + layout->getElementOffset(i).getFixedValue(), shape, depth + 1);
    return;
  }
  llvm::Type* element = nullptr;
  std::uint64_t count = 0, stride = 0;
  if (auto* array = llvm::dyn_cast<llvm::ArrayType>(type)) {
    element = array->getElementType();
    count = array->getNumElements();
    if (element->isSized() && !element->isScalableTy()) stride = layout_.getTypeAllocSize(element).getFixedValue();
  } else if (auto* vector = llvm::dyn_cast<llvm::FixedVectorType>(type)) {
    element = vector->getElementType();
    count = vector->getNumElements();
    const std::uint64_t bits = layout_.getTypeSizeInBits(element).getFixedValue();
    stride = bits / 8;
    shape.unstorable |= bits % 8 != 0;
  } else {
    return flatten_scalar(type, offset, shape);
  }
  if (count > most_parts) {
    shape.trouble = "handles a value of more than " + std::to_string(most_parts) + " parts";
    return;
  }
  for (std::uint64_t i = 0; i < count; ++i) {
    const std::size_t before = shape.parts.size();
    flatten(element, offset + i * stride, shape, depth + 1);
    if (shape.parts.size() == before) return;
  }
}

void Shapes::flatten_scalar(llvm::Type* type, std::uint64_t offset, Shape& shape) {
  const auto at = static_cast<std::uint32_t>(offset);
  if (offset > (1u << 30)) {
    shape.trouble = "handles a value that is too large";
  } else if (type->isDoubleTy()) {
    shape.parts.push_back({Kind::double_float, 64, 8, at});
  } else if (type->isFloatTy()) {
    shape.parts.push_back({Kind::single_float, 32, 4, at});
  } else if (type->isPointerTy()) {
    if (type->getPointerAddressSpace() != 0) shape.trouble = "uses another address space";
    shape.parts.push_back({Kind::pointer, 64, 8, at});
  } else if (type->isIntegerTy()) {
    flatten_integer(type->getIntegerBitWidth(), offset, shape);
  } else if (type->isX86_FP80Ty() || type->isFP128Ty() || type->isPPC_FP128Ty()) {
    shape.trouble = "uses long double";
  } else if (type->isHalfTy() || type->isBFloatTy()) {
    shape.trouble = "uses numbers of half precision";
  } else if (type->isScalableTy()) {
    shape.trouble = "uses vectors of unknown length";
  } else {
    shape.trouble = "uses a type that is no number";
  }
}

void Shapes::flatten_integer(unsigned width, std::uint64_t offset, Shape& shape) {
  if (width > 64) {
    shape.trouble = "uses integers of " + std::to_string(width) + " bits";
    return;
  }
  shape.parts.push_back({Kind::integer, static_cast<std::uint8_t>(width), static_cast<std::uint8_t>((width + 7) / 8),
                         static_cast<std::uint32_t>(offset)});
}

}  // namespace dextral::probe::machine
