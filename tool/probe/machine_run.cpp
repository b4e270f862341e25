// Frames, calls and control flow.
#include "probe/machine_run.h"

#include <llvm/IR/Function.h>
#include <llvm/IR/InstrTypes.h>
#include <llvm/IR/Module.h>

#include <algorithm>

namespace dextral::probe::machine {

namespace {

constexpr std::size_t most_slots = 4 << 20;

// Calls of another type than the function has are undefined, and C without
// prototypes writes them.
bool fits(const llvm::CallBase& site, const llvm::Function& callee) {
  if (callee.isVarArg() || site.arg_size() != callee.arg_size() || site.getType() != callee.getReturnType())
    return false;
  for (unsigned i = 0; i < site.arg_size(); ++i)
    if (site.getArgOperand(i)->getType() != callee.getArg(i)->getType() ||
        site.getParamByValType(i) != callee.getParamByValType(i))
      return false;
  return true;
}

}  // namespace

Run::Run(const llvm::Module& module, Bounds bounds) : world_(module, bounds), bounds_(bounds) {}

bool Run::charge(std::uint64_t bytes) {
  steps_ += bytes / 64;
  return steps_ <= bounds_.steps || raise(too_long());
}

std::string Run::too_long() const { return "runs on past " + std::to_string(bounds_.steps) + " steps"; }

bool Run::error_cell(Address& at) {
  if (error_cell_ == 0) {
    if (!memory().allocate(4, error_cell_)) return false;
    if (!memory().fill(error_cell_, {0, 0}, 4)) return false;
  }
  at = error_cell_;
  return true;
}

bool Run::call(const llvm::Function& function, std::vector<Slot> arguments, std::vector<Slot>& results) {
  world_.fault.clear();
  memory().begin();
  frames_.clear();
  results_.clear();
  steps_ = 0;
  bool done = enter(code_of(function), 0);
  if (done) std::copy(arguments.begin(), arguments.end(), regs_);
  done = done && loop();
  frames_.clear();
  memory().pop(0);
  results = results_;
  return done;
}

const Code& Run::code_of(const llvm::Function& function) {
  std::unique_ptr<Code>& code = codes_[&function];
  if (!code) code = prepare(function, world_);
  return *code;
}

bool Run::enter(const Code& code, std::size_t base) {
  if (frames_.size() >= bounds_.depth) return raise("calls deeper than " + std::to_string(bounds_.depth));
  if (base + code.slots > most_slots) return raise("needs more than " + std::to_string(bounds_.bytes) + " bytes");
  if (slots_.size() < base + code.slots) slots_.resize(std::max(base + code.slots, 2 * slots_.size()));
  regs_ = slots_.data() + base;
  std::copy(code.constants.begin(), code.constants.end(), regs_ + code.first_constant);
  frames_.push_back({&code, 0, base, memory().mark()});
  return true;
}

bool Run::loop() {
  while (!frames_.empty()) {
    Frame& frame = frames_.back();
    const Step& step = frame.code->steps[frame.next++];
    if (++steps_ > bounds_.steps) return raise(too_long());
    if (!execute(step)) return false;
  }
  return true;
}

bool Run::decides(const Slot& slot) { return slot.undefined == 0 || raise(sentence(cause_of(slot))); }

void Run::follow(std::uint32_t number) {
  Frame& frame = frames_.back();
  const Edge& edge = frame.code->edges[number];
  frame.next = edge.target;
  if (edge.moves.empty()) return;
  if (edge.moves.size() == 1) {
    regs_[edge.moves.front().to] = regs_[edge.moves.front().from];
    return;
  }
  scratch_.clear();
  for (const Move& move : edge.moves) scratch_.push_back(regs_[move.from]);
  for (std::size_t i = 0; i < edge.moves.size(); ++i) regs_[edge.moves[i].to] = scratch_[i];
}

bool Run::branch(const Step& step) {
  const Slot& condition = regs_[step.a];
  if (!decides(condition)) return false;
  follow((condition.bits & 1) != 0 ? step.b : step.c);
  return true;
}

bool Run::switch_(const Step& step) {
  const Slot& value = regs_[step.a];
  if (!decides(value)) return false;
  const Switch& table = frames_.back().code->switches[step.b];
  auto at = std::lower_bound(table.cases.begin(), table.cases.end(), std::pair{value.bits, std::uint32_t{0}});
  const bool found = at != table.cases.end() && at->first == value.bits;
  follow(found ? at->second : table.otherwise);
  return true;
}

bool Run::call(const Step& step) {
  Call& call = frames_.back().code->calls[step.number];
  return enter_call(step, call, *call.callee);
}

bool Run::call_address(const Step& step) {
  Call& call = frames_.back().code->calls[step.number];
  const Slot& address = regs_[step.a];
  if (!decides(address)) return false;
  const llvm::Function* callee = world_.globals.function_at(address.bits);
  if (callee == nullptr)
    return raise(address.bits == 0 ? "calls through a null pointer" : "calls through a wild pointer");
  if (callee->isDeclaration()) return raise("calls " + name_for_people(*callee) + " through a pointer");
  if (call.code != nullptr && call.code->function != callee) call.code = nullptr;
  return enter_call(step, call, *callee);
}

bool Run::enter_call(const Step& step, Call& call, const llvm::Function& callee) {
  if (call.code == nullptr) {
    if (callee.isVarArg())
      return raise("calls " + name_for_people(callee) + ", which takes a variable number of arguments");
    if (!fits(*call.site, callee)) return raise("calls " + name_for_people(callee) + " with arguments of other types");
    call.code = &code_of(callee);
  }
  const std::size_t caller = frames_.back().base;
  const std::size_t base = caller + frames_.back().code->slots;
  return enter(*call.code, base) && pass(call, caller);
}

bool Run::pass(const Call& call, std::size_t caller) {
  std::size_t next = 0;
  for (const Argument& argument : call.arguments) {
    const Slot* from = slots_.data() + caller + argument.slot;
    if (argument.by_value == 0) {
      std::copy(from, from + argument.parts, regs_ + next);
    } else {
      const std::uint64_t size = argument.by_value - 1;
      Slot copy;
      if (!decides(*from) || !memory().push(size, copy.bits) || !charge(size)) return false;
      if (!memory().copy(copy.bits, from->bits, size)) return false;
      regs_[next] = copy;
    }
    next += argument.parts;
  }
  return true;
}

bool Run::effect(const Step& step) {
  constexpr std::size_t most_arguments = 8;
  const Call& call = frames_.back().code->calls[step.number];
  Slot arguments[most_arguments];
  if (call.arguments.size() > most_arguments) return raise("passes too many arguments");
  for (std::size_t i = 0; i < call.arguments.size(); ++i) {
    arguments[i] = regs_[call.arguments[i].slot];
    if (!decides(arguments[i])) return false;
  }
  Slot result;
  if (!call.effect(*this, {arguments, call.arguments.size()}, result)) return false;
  if (step.lanes == 0) return true;
  result.bits &= ones(step.width_after);
  regs_[step.to] = result;
  return true;
}

bool Run::return_(const Step& step) {
  const Frame done = frames_.back();
  memory().pop(done.mark);
  frames_.pop_back();
  const Slot* from = slots_.data() + done.base + step.a;
  if (frames_.empty()) {
    if (step.lanes > 0) results_.assign(from, from + step.lanes);
    return true;
  }
  const Frame& frame = frames_.back();
  regs_ = slots_.data() + frame.base;
  const Step& site = frame.code->steps[frame.next - 1];
  std::copy(from, from + std::min(step.lanes, site.lanes), regs_ + site.to);
  return true;
}

bool Run::stack(const Step& step) {
  const std::size_t oldest = frames_.back().mark;
  if (step.op == Op::stack_save) {
    regs_[step.to] = {memory().mark() + 1, 0};
    return true;
  }
  const Slot& mark = regs_[step.a];
  if (!decides(mark)) return false;
  if (mark.bits < oldest + 1 || mark.bits > memory().mark() + 1) return raise("restores the stack to a wrong place");
  memory().pop(mark.bits - 1);
  return true;
}

}  // namespace dextral::probe::machine
