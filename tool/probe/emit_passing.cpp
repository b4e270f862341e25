#include "probe/emit_passing.h"

#include <clang/CodeGen/CGFunctionInfo.h>
#include <clang/CodeGen/CodeGenABITypes.h>
#include <llvm/IR/DataLayout.h>
#include <llvm/IR/Module.h>

namespace dextral::probe {

using namespace clang;
using clang::CodeGen::ABIArgInfo;

namespace {

Piece piece_of(llvm::Type* type, std::size_t offset, const llvm::DataLayout& layout) {
  Piece piece{Piece::Kind::bytes, offset, std::size_t(layout.getTypeAllocSize(type).getFixedValue())};
  if (type->isIntegerTy() || type->isPointerTy()) piece.kind = Piece::Kind::integer;
  if (type->isFloatTy()) piece.kind = Piece::Kind::single_float;
  if (type->isDoubleTy()) piece.kind = Piece::Kind::double_float;
  return piece;
}

std::vector<Piece> pieces_of(const ABIArgInfo& how, bool flattened, const llvm::DataLayout& layout) {
  llvm::Type* type = how.getCoerceToType();
  const std::size_t start = how.getDirectOffset();
  auto* structure = llvm::dyn_cast<llvm::StructType>(type);
  if (!structure || !flattened || !how.isDirect() || !how.getCanBeFlattened()) return {piece_of(type, start, layout)};
  std::vector<Piece> pieces;
  for (unsigned i = 0; i < structure->getNumElements(); ++i)
    pieces.push_back(piece_of(structure->getElementType(i), start + layout.getStructLayout(structure)->getElementOffset(i).getFixedValue(), layout));
  return pieces;
}

std::optional<Passing> passing_of(const ABIArgInfo& how, bool argument, const llvm::DataLayout& layout) {
  switch (how.getKind()) {
    case ABIArgInfo::Ignore: return Passing{Passing::Kind::nothing, {}};
    case ABIArgInfo::Indirect:
    case ABIArgInfo::IndirectAliased: return Passing{Passing::Kind::address, {}};
    case ABIArgInfo::Direct:
    case ABIArgInfo::Extend:
      if (how.getPaddingType()) return std::nullopt;
      return Passing{Passing::Kind::pieces, pieces_of(how, argument, layout)};
    case ABIArgInfo::Expand:
    case ABIArgInfo::CoerceAndExpand:
    case ABIArgInfo::InAlloca: break;
  }
  return std::nullopt;
}

const CodeGen::CGFunctionInfo* info_of(CodeGen::CodeGenModule& module, const FunctionDecl* function) {
  CanQualType type = function->getType()->getCanonicalTypeUnqualified();
  if (CanQual<FunctionNoProtoType> bare = type->getAs<FunctionNoProtoType>()) return &CodeGen::arrangeFreeFunctionType(module, bare);
  CanQual<FunctionProtoType> prototype = type->getAs<FunctionProtoType>();
  if (!prototype) return nullptr;
  if (const auto* method = dyn_cast<CXXMethodDecl>(function); method && method->isInstance())
    return &CodeGen::arrangeCXXMethodType(module, method->getParent(), prototype->getTypePtr()->castAs<FunctionProtoType>(), method);
  return &CodeGen::arrangeFreeFunctionType(module, prototype);
}

std::size_t words_of(const Formal& formal) {
  if (formal.passing.kind == Passing::Kind::nothing) return 0;
  return formal.behind_pointer || formal.passing.kind == Passing::Kind::address ? 1 : formal.passing.pieces.size();
}

}  // namespace

void classify(CodeGenerator& generator, const FunctionDecl* function, const llvm::Function& emitted, Candidate& candidate) {
  const llvm::DataLayout& layout = emitted.getDataLayout();
  const CodeGen::CGFunctionInfo* info = info_of(generator.CGM(), function);
  const std::string strange = "takes its arguments in a way that is not known";
  if (!info || info->arg_size() != candidate.formals.size()) {
    candidate.refusal = strange;
    return;
  }
  std::size_t words = 0;
  for (std::size_t i = 0; i < candidate.formals.size(); ++i) {
    std::optional<Passing> passing = passing_of(info->arguments()[i].info, true, layout);
    if (!passing || (candidate.formals[i].behind_pointer && passing->kind != Passing::Kind::pieces)) {
      candidate.refusal = strange;
      return;
    }
    candidate.formals[i].passing = *passing;
    words += words_of(candidate.formals[i]);
  }
  if (candidate.result) {
    std::optional<Passing> passing = passing_of(info->getReturnInfo(), false, layout);
    if (!passing) {
      candidate.refusal = strange;
      return;
    }
    candidate.result->passing = *passing;
    candidate.result_after_this = passing->kind == Passing::Kind::address && info->getReturnInfo().isSRetAfterThis();
    words += passing->kind == Passing::Kind::address;
  }
  if (words != emitted.arg_size()) candidate.refusal = strange;
}

}  // namespace dextral::probe
