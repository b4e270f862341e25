// What a function reaches: the bodies and globals that have to be emitted.
#pragma once

#include <set>
#include <string>
#include <vector>

#include "gather/clang.h"

namespace dextral::probe {

class Closure {
 public:
  explicit Closure(clang::Sema& sema) : sema_(sema) {}

  // Follows what the function names, instantiating what is still a pattern.
  // Not empty: why it cannot be emitted.
  std::string add(clang::FunctionDecl*);

  const std::vector<clang::FunctionDecl*>& functions() const { return functions_; }  // definitions
  const std::vector<clang::VarDecl*>& variables() const { return variables_; }
  // Named, and without a body in this unit.
  const std::vector<clang::FunctionDecl*>& missing() const { return missing_; }

 private:
  friend struct Names;
  void name(clang::FunctionDecl*);
  void name(clang::VarDecl*);
  clang::FunctionDecl* defined(clang::FunctionDecl*);

  clang::Sema& sema_;
  std::vector<clang::FunctionDecl*> functions_;
  std::vector<clang::VarDecl*> variables_;
  std::vector<clang::FunctionDecl*> missing_;
  std::set<const clang::Decl*> seen_;
  std::set<const clang::FunctionDecl*> broken_;
  std::vector<clang::FunctionDecl*> pending_;
};

}  // namespace dextral::probe
