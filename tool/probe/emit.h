// A unit to the LLVM IR of its candidates and of what they call.
//
// The unit is parsed once more, as a prefix with all bodies at hand: those of
// templates are parsed and instantiated only when a candidate reaches them, so
// that a library's cost is what is used of it. From each candidate the bodies
// that it names are followed, and they alone are given to Clang's CodeGen. No
// pass is run on what comes out: an optimiser may build on undefined behaviour
// that the machine is to see.
//
// Candidates are called as the code calls them, by the classification that
// Clang itself makes of each argument: in pieces, by address, or not at all.
// The other way, a wrapper in source text or syntax tree around each candidate,
// would have to name what is private, unnamed or overloaded, and would copy
// arguments through code of the project that the candidate does not contain.
#pragma once

#include <memory>
#include <set>
#include <string>
#include <vector>

#include "probe/candidates.h"

namespace llvm {
class LLVMContext;
class Module;
}  // namespace llvm

namespace dextral::probe {

struct Kit {
  Kit();
  Kit(Kit&&) noexcept;
  Kit& operator=(Kit&&) noexcept;
  ~Kit();

  std::shared_ptr<llvm::LLVMContext> context;
  std::unique_ptr<llvm::Module> module;
  std::vector<Candidate> candidates;
  std::set<std::string> fixed;    // globals that are const: set once, by their initialisers
  std::set<std::string> missing;  // names of functions that other units define
  std::string refusal;          // why there is nothing
};

Kit emit(const project::Unit&, const project::Project&, const Wanted&, FileTable&);

// Functions by their keys, candidates or not, to be linked to another kit.
Kit emit_functions(const project::Unit&, const project::Project&, const std::set<std::string>& keys,
                   std::shared_ptr<llvm::LLVMContext>);

// The named metadata of a module that lists what it misses: key and symbol.
inline constexpr char kMissing[] = "dextral.missing";

}  // namespace dextral::probe
