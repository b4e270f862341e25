// Shapes of types: what of the algebra a C++ type can carry.
//
// Library types by their models (the class itself or a base of it); arrays,
// `std::array`, own structs and classes whose members are 2, 3, 4, 9 or 16
// floating-point numbers as component groups; pointers to numbers as groups of
// unknown length; everything else is an object with parts.
#pragma once

#include "gather/clang.h"
#include "project/model.h"

namespace dextral::gather {

struct TypeFacts {
  Shape shape = Shape::unknown;
  int numbers = 0;           // of a group; 0: unknown length or no group
  bool group = false;        // its parts are numbers with an index
  bool pointer = false;      // reached through a pointer to a number
  std::string inverse_form;
  const project::TypeModel* model = nullptr;
};

// The value of a constant, held within what an index can be.
inline long long whole_number(const llvm::APSInt& value) {
  if (auto exact = value.tryExtValue()) return *exact;
  return value.isNegative() ? -(1ll << 40) : 1ll << 40;
}

class Types {
 public:
  Types(clang::ASTContext& context, clang::Sema& sema, const project::ModelTable& models)
      : context_(context), sema_(sema), models_(models) {}

  TypeFacts of(clang::QualType);
  Value value(clang::QualType, std::string text, Span);

  // How many numbers an object of this type holds, if it holds nothing else.
  int numbers(clang::QualType);
  // Index of a field's first number within its record's group.
  int index(const clang::FieldDecl*);

  // References, pointers and smart pointers taken off: what is spoken of.
  clang::QualType bare(clang::QualType) const;
  bool is_number(clang::QualType) const;
  // Qualified name without template arguments.
  static std::string name(const clang::NamedDecl*);

 private:
  TypeFacts compute(clang::QualType);
  // Is a record of numbers one vector, quaternion or matrix? A state of several
  // vectors (`double r[3], v[3], a[3];`) is not, though it has nine numbers.
  bool is_one_group(const clang::RecordDecl*);
  const project::TypeModel* model_of(const clang::CXXRecordDecl*, const clang::CXXRecordDecl*& found, int depth = 0);
  std::optional<long long> constant_in(const clang::CXXRecordDecl*, const std::string& name);
  TypeFacts by_model(const project::TypeModel&, const clang::CXXRecordDecl*, clang::QualType);

  clang::ASTContext& context_;
  clang::Sema& sema_;
  const project::ModelTable& models_;
  llvm::DenseMap<const clang::Type*, TypeFacts> cache_;
  llvm::DenseMap<const clang::Type*, int> numbers_;
};

}  // namespace dextral::gather
