// The making of Code out of one function of the IR.
#pragma once

#include <llvm/IR/InstVisitor.h>

#include <unordered_map>

#include "probe/machine_code.h"

namespace dextral::probe::machine {

class Preparer : public llvm::InstVisitor<Preparer> {
 public:
  Preparer(const llvm::Function&, World&, Code&);
  void run();

  void visitBinaryOperator(llvm::BinaryOperator&);
  void visitUnaryOperator(llvm::UnaryOperator&);
  void visitICmpInst(llvm::ICmpInst&);
  void visitFCmpInst(llvm::FCmpInst&);
  void visitCastInst(llvm::CastInst&);
  void visitSelectInst(llvm::SelectInst&);
  void visitFreezeInst(llvm::FreezeInst&);
  void visitPHINode(llvm::PHINode&) {}

  void visitAllocaInst(llvm::AllocaInst&);
  void visitLoadInst(llvm::LoadInst&);
  void visitStoreInst(llvm::StoreInst&);
  void visitGetElementPtrInst(llvm::GetElementPtrInst&);

  void visitExtractElementInst(llvm::ExtractElementInst&);
  void visitInsertElementInst(llvm::InsertElementInst&);
  void visitShuffleVectorInst(llvm::ShuffleVectorInst&);
  void visitExtractValueInst(llvm::ExtractValueInst&);
  void visitInsertValueInst(llvm::InsertValueInst&);

  void visitBranchInst(llvm::BranchInst&);
  void visitSwitchInst(llvm::SwitchInst&);
  void visitReturnInst(llvm::ReturnInst&);
  void visitUnreachableInst(llvm::UnreachableInst&) { refuse("reaches a place that must not be reached"); }
  void visitIndirectBrInst(llvm::IndirectBrInst&) { refuse("jumps to a computed place"); }
  void visitLandingPadInst(llvm::LandingPadInst&) { refuse("throws"); }
  void visitResumeInst(llvm::ResumeInst&) { refuse("throws"); }
  void visitFuncletPadInst(llvm::FuncletPadInst&) { refuse("throws"); }
  void visitCatchSwitchInst(llvm::CatchSwitchInst&) { refuse("throws"); }
  void visitCatchReturnInst(llvm::CatchReturnInst&) { refuse("throws"); }
  void visitCleanupReturnInst(llvm::CleanupReturnInst&) { refuse("throws"); }
  void visitAtomicCmpXchgInst(llvm::AtomicCmpXchgInst&) { refuse("uses atomic operations"); }
  void visitAtomicRMWInst(llvm::AtomicRMWInst&) { refuse("uses atomic operations"); }
  void visitFenceInst(llvm::FenceInst&) { refuse("uses atomic operations"); }
  void visitVAArgInst(llvm::VAArgInst&) { refuse("takes a variable number of arguments"); }

  void visitCallInst(llvm::CallInst&);
  void visitInvokeInst(llvm::InvokeInst&);
  void visitCallBrInst(llvm::CallBrInst&) { refuse("uses inline assembly"); }
  void visitInstruction(llvm::Instruction&);

 private:
  void number_values();
  void block(llvm::BasicBlock&);
  void link();

  // Index of the first slot; on failure the trouble is noted.
  std::uint32_t operand(const llvm::Value&);
  std::uint32_t place_of(const llvm::Value&);
  const Shape& shape_of(const llvm::Type*);
  const Part& only_part(const llvm::Value&);
  std::uint32_t edge(const llvm::BasicBlock& from, const llvm::BasicBlock& to);

  Step step(Op, const llvm::Value& outcome);
  void emit(Step);
  void refuse(std::string why);
  void note(std::string why);

  void cast(Op, llvm::CastInst&);
  void regroup(llvm::Value& from, llvm::Value& to);
  bool memory_trouble(bool is_volatile, bool is_atomic, const llvm::Value& pointer, const char* verb);
  std::uint32_t part_at(llvm::Type*, llvm::ArrayRef<unsigned> path);

  void call(llvm::CallBase&);
  void call_body(llvm::CallBase&, const llvm::Function*);
  void call_library(llvm::CallBase&, const llvm::Function&);
  void call_intrinsic(llvm::CallBase&, const llvm::Function&);
  void map(llvm::CallBase&, Pure, std::uint32_t to, unsigned width_after);
  void effect(llvm::CallBase&, Effect, unsigned arguments);
  bool overflow_pair(llvm::CallBase&, unsigned id);
  bool reduction(llvm::CallBase&, unsigned id);
  bool special_intrinsic(llvm::CallBase&, unsigned id);
  std::string signature(const llvm::CallBase&);
  std::uint32_t add_call(Call);

  const llvm::Function& function_;
  World& world_;
  Code& code_;
  std::unordered_map<const llvm::Value*, std::uint32_t> places_;
  std::unordered_map<const llvm::BasicBlock*, std::uint32_t> blocks_;
  std::vector<std::uint32_t> first_steps_;
  std::string trouble_;  // of the instruction at hand
};

}  // namespace dextral::probe::machine
