// Constants of the IR as slots, and globals and functions as addresses.
//
// A global gets its address when it is first named and its bytes when they are
// first read, so that a module costs what a run touches of it.
#pragma once

#include <unordered_map>

#include "probe/machine_memory.h"

namespace llvm {
class Constant;
class ConstantDataSequential;
class ConstantExpr;
class Function;
class GlobalValue;
class GlobalVariable;
}  // namespace llvm

namespace dextral::probe::machine {

// "std::vector<double>::at(unsigned long)" for its symbol.
std::string name_for_people(const llvm::GlobalValue&);

class Globals {
 public:
  Globals(const llvm::DataLayout& layout, Shapes& shapes, Memory& memory, Fault& fault)
      : layout_(layout), shapes_(shapes), memory_(memory), fault_(fault) {}

  // Appends one slot for each part of its type.
  bool evaluate(const llvm::Constant&, std::vector<Slot>&, unsigned depth = 0);
  const llvm::Function* function_at(Address) const;

 private:
  bool address_of(const llvm::GlobalValue&, Slot&, unsigned depth);
  Address place(const llvm::GlobalVariable&);
  Address place(const llvm::Function&);
  bool expression(const llvm::ConstantExpr&, std::vector<Slot>&, unsigned depth);
  bool arithmetic(const llvm::ConstantExpr&, Slot&, unsigned depth);
  bool one(const llvm::Constant&, Slot&, unsigned depth);

  bool lay(const llvm::Constant&, Place, unsigned depth);
  bool lay_sequence(const llvm::ConstantDataSequential&, Place);
  bool lay_parts(const llvm::Constant&, Place, unsigned depth);

  const llvm::DataLayout& layout_;
  Shapes& shapes_;
  Memory& memory_;
  Fault& fault_;
  std::unordered_map<const llvm::GlobalValue*, Address> addresses_;
  std::vector<const llvm::Function*> functions_;
};

}  // namespace dextral::probe::machine
