// Which declaration says what: phrases attached to declarations.
//
// Bar comments are lexed from the files themselves, macros are annotate
// attributes, contracts come from the project file. All are looked up by where
// the declared name stands, so that instances of a template and
// redeclarations find them too.
#pragma once

#include <map>
#include <optional>
#include <set>
#include <string>
#include <vector>

#include "core/facts.h"
#include "gather/clang.h"
#include "gather/source.h"
#include "project/project.h"

namespace dextral::gather {

struct Said {
  Quantity quantity;
  dextral::Source source = dextral::Source::declared;
  Span span;         // of the phrase
  std::string text;  // the phrase, printed
};

// A number that is one component of a named group: vx of vx, vy, vz.
struct Slot3 {
  std::string group;  // name that stands for the group
  int index = 0;
  int count = 0;
  bool said = false;  // by a phrase on all of them, not by their names alone
};

class Phrases {
 public:
  Phrases(clang::ASTContext&, const Source&, const project::Project&, const std::vector<std::string>& rules, Facts&,
          const std::vector<clang::SourceRange>& inactive);

  // Reads the comments of the scope's files and attaches them.
  void attach();

  // What is said of a variable, field, parameter or type alias.
  std::vector<Said> of(const clang::NamedDecl*) const;
  // What is said of the value that a function returns.
  std::vector<Said> of_return(const clang::FunctionDecl*) const;
  // What the aliases say through which a type is written.
  std::vector<Said> of_type(clang::QualType) const;
  // The component that a scalar declaration is, by phrase or by name.
  std::optional<Slot3> component(const clang::ValueDecl*) const;

 private:
  friend class Attacher;
  using Key = unsigned;  // raw location of the declared name
  std::vector<Said> at(clang::SourceLocation) const;
  bool is_inactive(clang::SourceLocation) const;
  bool frames_known(const Quantity&, Span where) const;

  clang::ASTContext& context_;
  const Source& source_;
  const project::Project& project_;
  const std::vector<std::string>& rules_;
  Facts& facts_;
  const std::vector<clang::SourceRange>& inactive_;  // left out by #if
  std::map<Key, std::vector<Said>> said_;
  std::map<Key, std::vector<Said>> returned_;
  std::map<Key, Slot3> components_;
  std::map<std::string, const project::Contract*> contracts_;
};

}  // namespace dextral::gather
