// A function of the IR made ready to run.
//
// Values are numbered densely: a frame is an array of slots, first those of the
// arguments, then of the instructions, then the constants. Operands are indices
// into it. Phi nodes are moves on the edges between blocks. An instruction that
// the machine does not know is a step that ends the run with its reason, so it
// matters only where it is reached.
#pragma once

#include <optional>
#include <span>
#include <vector>

#include "probe/machine_globals.h"

namespace llvm {
class CallBase;
class Module;
}  // namespace llvm

namespace dextral::probe::machine {

class Run;

enum class Op : std::uint8_t {
  // Lane by lane, of integers.
  add,
  sub,
  mul,
  udiv,
  sdiv,
  urem,
  srem,
  shl,
  lshr,
  ashr,
  and_,
  or_,
  xor_,
  // Lane by lane, of numbers.
  fadd,
  fsub,
  fmul,
  fdiv,
  frem,
  fneg,
  icmp,
  fcmp,
  trunc,
  zext,
  sext,
  float_to_float,
  float_to_signed,
  float_to_unsigned,
  signed_to_float,
  unsigned_to_float,
  select,
  select_lanes,
  map,     // a function without memory, lane by lane
  reduce,  // the lanes of a vector to one number
  // Of whole values.
  copy,
  regroup,
  insert,
  extract_lane,
  insert_lane,
  shuffle,
  alloca_,
  load,
  store,
  load_parts,
  store_parts,
  offset,
  index,
  jump,
  branch,
  switch_,
  return_,
  refuse,
  call,
  call_address,
  effect,
  stack_save,
  stack_restore,
};

namespace flag {
constexpr std::uint8_t no_signed_wrap = 1, no_unsigned_wrap = 2, exact = 4, disjoint = 8, not_negative = 16;
}

struct Step {
  Op op = Op::refuse;
  std::uint8_t width = 64;       // of the operands, in bits
  std::uint8_t width_after = 0;  // of the outcome, if another
  std::uint8_t flags = 0;        // or the predicate of a comparison
  std::uint32_t lanes = 1;
  std::uint32_t to = 0, a = 0, b = 0, c = 0;
  std::uint64_t number = 0;
};

struct Move {
  std::uint32_t to = 0, from = 0;
};

struct Edge {
  std::uint32_t target = 0;  // a block, then its first step
  std::vector<Move> moves;
};

struct Switch {
  std::vector<std::pair<std::uint64_t, std::uint32_t>> cases;  // to edges
  std::uint32_t otherwise = 0;
};

// base + number + sum of index * scale
struct Index {
  std::uint32_t slot = 0;
  unsigned width = 64;
  std::uint64_t scale = 0;
};

// One lane of a function without memory: a number of the given width for up to
// three operands.
using Pure = Slot (*)(unsigned width, std::uint64_t, std::uint64_t, std::uint64_t);

// A function of the C library or an intrinsic with arguments of one slot each.
using Effect = bool (*)(Run&, std::span<const Slot>, Slot& result);

struct Argument {
  std::uint32_t slot = 0, parts = 1;
  std::uint64_t by_value = 0;  // bytes of the object that the callee gets a copy of
};

struct Code;

struct Call {
  const llvm::CallBase* site = nullptr;
  const llvm::Function* callee = nullptr;
  const Code* code = nullptr;  // once it was called
  Pure pure = nullptr;
  Effect effect = nullptr;
  std::vector<Argument> arguments;
  std::uint32_t parts = 0;  // of the result
};

struct Code {
  const llvm::Function* function = nullptr;
  std::uint32_t slots = 0;
  std::uint32_t first_constant = 0;
  std::vector<Slot> constants;
  std::vector<Step> steps;
  std::vector<Edge> edges;
  std::vector<Switch> switches;
  std::vector<std::vector<Index>> indices;
  std::vector<std::vector<std::int32_t>> lanes;  // of shuffles
  std::vector<const Shape*> shapes;
  mutable std::vector<Call> calls;
  std::vector<std::string> reasons;
  bool returns_parts = false;
};

// What the pieces of the machine share.
struct World {
  World(const llvm::Module&, Bounds);

  const llvm::DataLayout& layout;
  Fault fault;
  Shapes shapes;
  Memory memory;
  Globals globals;
};

std::unique_ptr<Code> prepare(const llvm::Function&, World&);

// What stands for a function without a body, by its name and the type of the
// call: "d(dd)". Neither set: unknown.
struct Stand {
  Pure pure = nullptr;
  Effect effect = nullptr;
  const char* signature = nullptr;
  const char* reason = nullptr;  // "throws"
};
const Stand* library(const std::string& symbol);
const Stand* maths(const std::string& symbol);

// The same for intrinsics, by number.
Pure pure_intrinsic(unsigned id);
Effect effect_intrinsic(unsigned id);
bool ignored_intrinsic(unsigned id);
const char* refused_intrinsic(unsigned id);

}  // namespace dextral::probe::machine
