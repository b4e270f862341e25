// Types to numbers in memory.
#pragma once

#include "gather/types.h"
#include "probe/candidates.h"

namespace dextral::probe {

class Flattener {
 public:
  Flattener(clang::ASTContext& context, clang::Sema& sema, const project::ModelTable& models)
      : context_(context), sema_(sema), types_(context, sema, models) {}

  // What a parameter, result or `this` of this type stands for: the object
  // itself, or that behind the pointer or reference.
  Formal formal(clang::QualType, const std::string& name, const std::string& text);

 private:
  Object object(clang::QualType, const std::string& formal, const std::string& text);
  Object open_object(clang::QualType element, const std::string& formal, const std::string& text);
  void add(clang::QualType, std::size_t offset, const Group& named, Object&);
  void add_record(clang::QualType, const clang::RecordDecl*, std::size_t offset, const Group& named, Object&);
  void add_fields(const clang::RecordDecl*, std::size_t offset, const Group& named, Object&);
  void add_union(const clang::RecordDecl*, std::size_t offset, const Group& named, Object&);
  void add_integer(clang::QualType, std::size_t offset, const Group& named, Object&);
  bool is_one_group(clang::QualType, const std::vector<Leaf>&);
  // All numbers of a type in the order of memory; false: it holds other things.
  bool leaves(clang::QualType, std::size_t offset, std::vector<Leaf>&);
  void describe(clang::QualType, Group&);
  std::vector<std::size_t> extents(clang::QualType);
  clang::QualType storage(clang::QualType);
  clang::QualType most_derived(clang::QualType);
  bool is_complete(clang::QualType);

  clang::ASTContext& context_;
  clang::Sema& sema_;
  gather::Types types_;
};

}  // namespace dextral::probe
