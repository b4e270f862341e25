// How the generated code takes the arguments of a candidate.
#pragma once

#include <clang/CodeGen/ModuleBuilder.h>
#include <llvm/IR/Function.h>

#include "gather/clang.h"
#include "probe/candidates.h"

namespace dextral::probe {

// Fills the passing of each formal and of the result; a refusal where the
// classification and the function do not fit together.
void classify(clang::CodeGenerator&, const clang::FunctionDecl*, const llvm::Function&, Candidate&);

}  // namespace dextral::probe
