// The evaluator proper: a stack of frames of its own, so that no code it runs
// can exhaust the stack of the host.
#pragma once

#include "probe/machine_code.h"

namespace dextral::probe::machine {

class Run {
 public:
  Run(const llvm::Module&, Bounds);

  // Arguments and results flattened. False: the fault tells why.
  bool call(const llvm::Function&, std::vector<Slot> arguments, std::vector<Slot>& results);
  std::size_t steps() const { return steps_; }

  World& world() { return world_; }
  Memory& memory() { return world_.memory; }
  bool raise(std::string why) { return world_.fault.raise(std::move(why)); }
  // Bulk work on memory costs steps too.
  bool charge(std::uint64_t bytes);
  bool error_cell(Address&);

 private:
  struct Frame {
    const Code* code = nullptr;
    std::uint32_t next = 0;  // step
    std::size_t base = 0;    // of its slots
    std::size_t mark = 0;    // of its objects on the stack
  };

  bool loop();
  bool execute(const Step&);
  bool enter(const Code&, std::size_t base);
  const Code& code_of(const llvm::Function&);
  std::string too_long() const;

  bool integers(const Step&);
  void numbers(const Step&);
  void comparisons(const Step&);
  void conversions(const Step&);
  void map(const Step&);
  void reduce(const Step&);
  void regroup(const Step&);
  void lanes(const Step&);
  void select(const Step&);
  bool alloca_(const Step&);
  bool load_parts(const Step&);
  bool store_parts(const Step&);
  void address(const Step&);
  bool stack(const Step&);
  bool decides(const Slot&);
  bool branch(const Step&);
  bool switch_(const Step&);
  void follow(std::uint32_t edge);
  bool call(const Step&);
  bool call_address(const Step&);
  bool enter_call(const Step&, Call&, const llvm::Function&);
  bool pass(const Call&, std::size_t base);
  bool effect(const Step&);
  bool return_(const Step&);

  World world_;
  const Bounds bounds_;
  std::unordered_map<const llvm::Function*, std::unique_ptr<Code>> codes_;
  std::vector<Slot> slots_;
  std::vector<Frame> frames_;
  std::vector<Slot> results_;
  std::vector<Slot> scratch_;
  Slot* regs_ = nullptr;  // of the innermost frame
  std::size_t steps_ = 0;
  Address error_cell_ = 0;
};

// Lane arithmetic. False: divides by zero.
bool integer(const Step&, const Slot& a, const Slot& b, Slot& to);
Slot number(Op, unsigned width, const Slot& a, const Slot& b);
Slot convert(const Step&, const Slot&);
bool compare_integers(unsigned predicate, unsigned width, std::uint64_t, std::uint64_t);
bool compare_numbers(unsigned predicate, double, double);

}  // namespace dextral::probe::machine
