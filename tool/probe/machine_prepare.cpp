// Numbering of values, and control flow.
#include "probe/machine_prepare.h"

#include <llvm/IR/Constants.h>
#include <llvm/IR/Module.h>

#include <algorithm>

namespace dextral::probe::machine {

World::World(const llvm::Module& module, Bounds bounds)
    : layout(module.getDataLayout()),
      shapes(layout),
      memory(bounds.bytes, fault),
      globals(layout, shapes, memory, fault) {}

std::unique_ptr<Code> prepare(const llvm::Function& function, World& world) {
  auto code = std::make_unique<Code>();
  Preparer(function, world, *code).run();
  return code;
}

Preparer::Preparer(const llvm::Function& function, World& world, Code& code)
    : function_(function), world_(world), code_(code) {
  code_.function = &function;
}

void Preparer::run() {
  number_values();
  for (const llvm::BasicBlock& one : function_) block(const_cast<llvm::BasicBlock&>(one));
  link();
  code_.slots = code_.first_constant + static_cast<std::uint32_t>(code_.constants.size());
}

void Preparer::number_values() {
  std::uint32_t next = 0;
  auto give = [&](const llvm::Value& value) {
    places_[&value] = next;
    next += static_cast<std::uint32_t>(shape_of(value.getType()).parts.size());
  };
  for (const llvm::Argument& argument : function_.args()) give(argument);
  for (const llvm::BasicBlock& one : function_) {
    blocks_[&one] = static_cast<std::uint32_t>(blocks_.size());
    for (const llvm::Instruction& instruction : one)
      if (!instruction.getType()->isVoidTy()) give(instruction);
  }
  code_.first_constant = next;
}

void Preparer::block(llvm::BasicBlock& block) {
  first_steps_.push_back(static_cast<std::uint32_t>(code_.steps.size()));
  for (llvm::Instruction& instruction : block) {
    trouble_.clear();
    const std::size_t before = code_.steps.size();
    visit(instruction);
    if (trouble_.empty()) continue;
    code_.steps.resize(before);
    refuse(trouble_);
  }
}

void Preparer::link() {
  for (Edge& edge : code_.edges) edge.target = first_steps_[edge.target];
}

const Shape& Preparer::shape_of(const llvm::Type* type) { return world_.shapes.of(const_cast<llvm::Type*>(type)); }

void Preparer::note(std::string why) {
  if (trouble_.empty()) trouble_ = std::move(why);
}

std::uint32_t Preparer::operand(const llvm::Value& value) {
  const Shape& shape = shape_of(value.getType());
  if (!shape.trouble.empty()) {
    note(shape.trouble);
    return 0;
  }
  if (auto place = places_.find(&value); place != places_.end()) return place->second;
  auto* constant = llvm::dyn_cast<llvm::Constant>(&value);
  if (constant == nullptr) {
    note("uses a value that is no number");
    return 0;
  }
  const std::size_t before = code_.constants.size();
  if (!world_.globals.evaluate(*constant, code_.constants)) {
    note(world_.fault.why());
    world_.fault.clear();
    code_.constants.resize(before);
    return 0;
  }
  const std::uint32_t at = code_.first_constant + static_cast<std::uint32_t>(before);
  places_[&value] = at;
  return at;
}

std::uint32_t Preparer::place_of(const llvm::Value& value) {
  const Shape& shape = shape_of(value.getType());
  if (!shape.trouble.empty()) note(shape.trouble);
  auto place = places_.find(&value);
  return place == places_.end() ? 0 : place->second;
}

// Of a number, or of the lanes of a vector.
const Part& Preparer::only_part(const llvm::Value& value) {
  static const Part none;
  const Shape& shape = shape_of(value.getType());
  if (!shape.trouble.empty()) note(shape.trouble);
  if (shape.parts.empty()) note("uses a value without parts");
  return shape.parts.empty() ? none : shape.parts.front();
}

Step Preparer::step(Op op, const llvm::Value& outcome) {
  Step made;
  made.op = op;
  made.to = place_of(outcome);
  made.lanes = static_cast<std::uint32_t>(shape_of(outcome.getType()).parts.size());
  return made;
}

void Preparer::emit(Step step) { code_.steps.push_back(step); }

void Preparer::refuse(std::string why) {
  Step end;
  end.op = Op::refuse;
  end.a = static_cast<std::uint32_t>(code_.reasons.size());
  code_.reasons.push_back(std::move(why));
  emit(end);
}

void Preparer::visitInstruction(llvm::Instruction& instruction) {
  refuse(std::string("uses the instruction ") + instruction.getOpcodeName());
}

std::uint32_t Preparer::edge(const llvm::BasicBlock& from, const llvm::BasicBlock& to) {
  Edge made;
  made.target = blocks_.at(&to);
  for (const llvm::PHINode& phi : to.phis()) {
    const std::uint32_t source = operand(*phi.getIncomingValueForBlock(&from));
    const std::uint32_t target = place_of(phi);
    const std::size_t parts = shape_of(phi.getType()).parts.size();
    for (std::uint32_t i = 0; i < parts; ++i) made.moves.push_back({target + i, source + i});
  }
  code_.edges.push_back(std::move(made));
  return static_cast<std::uint32_t>(code_.edges.size() - 1);
}

void Preparer::visitBranchInst(llvm::BranchInst& branch) {
  Step made;
  made.op = branch.isConditional() ? Op::branch : Op::jump;
  const llvm::BasicBlock& from = *branch.getParent();
  made.b = edge(from, *branch.getSuccessor(0));
  if (branch.isConditional()) {
    made.a = operand(*branch.getCondition());
    made.c = edge(from, *branch.getSuccessor(1));
  }
  emit(made);
}

void Preparer::visitSwitchInst(llvm::SwitchInst& instruction) {
  const llvm::BasicBlock& from = *instruction.getParent();
  Switch table;
  Step made;
  made.op = Op::switch_;
  made.a = operand(*instruction.getCondition());
  if (!trouble_.empty()) return;
  table.otherwise = edge(from, *instruction.getDefaultDest());
  std::unordered_map<const llvm::BasicBlock*, std::uint32_t> edges;
  for (auto choice : instruction.cases()) {
    auto [at, fresh] = edges.try_emplace(choice.getCaseSuccessor());
    if (fresh) at->second = edge(from, *choice.getCaseSuccessor());
    table.cases.emplace_back(choice.getCaseValue()->getZExtValue(), at->second);
  }
  std::sort(table.cases.begin(), table.cases.end());
  made.b = static_cast<std::uint32_t>(code_.switches.size());
  code_.switches.push_back(std::move(table));
  emit(made);
}

void Preparer::visitReturnInst(llvm::ReturnInst& instruction) {
  Step made;
  made.op = Op::return_;
  made.lanes = 0;
  if (const llvm::Value* value = instruction.getReturnValue()) {
    made.a = operand(*value);
    made.lanes = static_cast<std::uint32_t>(shape_of(value->getType()).parts.size());
  }
  emit(made);
}

}  // namespace dextral::probe::machine
