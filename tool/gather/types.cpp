#include "gather/types.h"

namespace dextral::gather {

using namespace clang;

namespace {

Shape shape_of_dimensions(long long rows, long long columns) {
  if (rows == 1 && columns == 1) return Shape::number;
  if (columns == 1) return Shape::vector;
  if (rows == 1) return Shape::row;
  return Shape::matrix;
}

Shape shape_of_count(int numbers) {
  switch (numbers) {
    case 2: case 3: return Shape::vector;
    case 4: return Shape::quaternion;
    case 9: case 16: return Shape::matrix;
    default: return Shape::object;
  }
}

// m00, R12, xy: two indices at the end of each name.
bool has_element_names(const std::vector<const FieldDecl*>& fields) {
  auto is_index = [](char c) { return (c >= '0' && c <= '9') || (c >= 'x' && c <= 'z') || (c >= 'X' && c <= 'Z'); };
  return std::all_of(fields.begin(), fields.end(), [&](const FieldDecl* field) {
    const StringRef name = field->getName();
    return name.size() >= 2 && is_index(name.back()) && is_index(name[name.size() - 2]);
  });
}

// r0, r1, r2 or x, y, z: names that count.
bool is_row_of_names(const std::vector<const FieldDecl*>& fields) {
  const StringRef first = fields[0]->getName();
  for (std::size_t i = 0; i < fields.size(); ++i) {
    const StringRef name = fields[i]->getName();
    if (name.size() != first.size() || name.drop_back() != first.drop_back() || name.back() != char(first.back() + char(i))) return false;
  }
  return true;
}

}  // namespace

std::string Types::name(const NamedDecl* decl) {
  std::string name = decl->getNameAsString();
  for (const DeclContext* context = decl->getDeclContext(); context; context = context->getParent()) {
    auto* named = dyn_cast<NamedDecl>(context);
    if (!named || context->isTranslationUnit()) continue;
    if (auto* space = dyn_cast<NamespaceDecl>(named); space && (space->isInline() || space->isAnonymousNamespace())) continue;
    if (isa<FunctionDecl>(named) || isa<LinkageSpecDecl>(context)) continue;
    if (!named->getNameAsString().empty()) name = named->getNameAsString() + "::" + name;
  }
  return name;
}

QualType Types::bare(QualType type) const {
  for (int depth = 0; depth < 4 && !type.isNull(); ++depth) {
    type = type.getNonReferenceType();
    if (const auto* pointer = type->getAs<PointerType>()) type = pointer->getPointeeType();
    else break;
  }
  return type;
}

bool Types::is_number(QualType type) const {
  type = type.getNonReferenceType();
  return type->isArithmeticType() || type->isEnumeralType();
}

int Types::numbers(QualType type) {
  type = type.getCanonicalType().getUnqualifiedType();
  if (type->isRealFloatingType()) return 1;
  if (auto found = numbers_.find(type.getTypePtr()); found != numbers_.end()) return found->second;
  numbers_[type.getTypePtr()] = 0;
  int count = 0;
  if (const auto* array = context_.getAsConstantArrayType(type)) {
    int each = numbers(array->getElementType());
    std::uint64_t size = array->getSize().getLimitedValue(1000);
    count = size <= 64 ? each * int(size) : 0;
  } else if (const auto* record = type->getAs<RecordType>()) {
    const RecordDecl* decl = record->getDecl()->getDefinition();
    if (decl && !decl->isInvalidDecl() && !decl->isDependentContext()) {
      bool whole = true;
      if (const auto* cxx = dyn_cast<CXXRecordDecl>(decl)) {
        // A library's class is no heap of numbers: what holds one is an object.
        const CXXRecordDecl* found_in = nullptr;
        if (cxx->isPolymorphic() || model_of(cxx, found_in)) whole = false;
        for (const CXXBaseSpecifier& base : cxx->bases()) {
          const CXXRecordDecl* b = base.getType()->getAsCXXRecordDecl();
          int n = numbers(base.getType());
          if (!n && b && b->getDefinition() && !b->isEmpty()) whole = false;
          count += n;
        }
      }
      for (const FieldDecl* field : decl->fields()) {
        int n = numbers(field->getType());
        if (!n) whole = false;
        count = decl->isUnion() ? std::max(count, n) : count + n;
      }
      if (!whole || !is_one_group(decl)) count = 0;
    }
  }
  return numbers_[type.getTypePtr()] = count;
}

bool Types::is_one_group(const RecordDecl* record) {
  std::vector<const FieldDecl*> fields(record->field_begin(), record->field_end());
  if (fields.size() < 2 || record->isUnion()) return true;
  bool scalars = true, alike = true, named = true;
  int total = 0;
  for (const FieldDecl* field : fields) {
    scalars = scalars && field->getType()->isRealFloatingType();
    alike = alike && context_.hasSameUnqualifiedType(field->getType(), fields[0]->getType());
    named = named && field->getIdentifier();
    total += numbers(field->getType());
  }
  if (!named || total <= 4) return true;
  return scalars ? has_element_names(fields) : alike && fields[0]->getType()->isRecordType() && is_row_of_names(fields);
}

int Types::index(const FieldDecl* field) {
  const RecordDecl* record = field->getParent();
  if (record->isInvalidDecl() || !record->isCompleteDefinition() || record->isDependentContext()) return -1;
  std::uint64_t offset = context_.getFieldOffset(field);
  QualType type = field->getType();
  while (!type->isRealFloatingType()) {
    if (const auto* array = context_.getAsConstantArrayType(type)) type = array->getElementType();
    else if (const auto* inner = type->getAs<RecordType>()) {
      const RecordDecl* decl = inner->getDecl()->getDefinition();
      if (!decl || decl->field_empty()) return -1;
      type = decl->field_begin()->getType();
    } else return -1;
  }
  return int(offset / context_.getTypeSize(type));
}

const project::TypeModel* Types::model_of(const CXXRecordDecl* record, const CXXRecordDecl*& found, int depth) {
  if (const project::TypeModel* model = models_.type(name(record))) {
    found = record;
    return model;
  }
  record = record->getDefinition();
  if (!record || depth > 8) return nullptr;
  for (const CXXBaseSpecifier& base : record->bases())
    if (const CXXRecordDecl* decl = base.getType()->getAsCXXRecordDecl())
      if (const project::TypeModel* model = model_of(decl, found, depth + 1)) return model;
  return nullptr;
}

std::optional<long long> Types::constant_in(const CXXRecordDecl* record, const std::string& name) {
  record = record->getDefinition();
  if (!record) return std::nullopt;
  IdentifierInfo& id = context_.Idents.get(name);
  for (const NamedDecl* decl : record->lookup(&id))
    if (const auto* constant = dyn_cast<EnumConstantDecl>(decl)) return whole_number(constant->getInitVal());
    else if (const auto* variable = dyn_cast<VarDecl>(decl))
      if (const APValue* value = variable->evaluateValue(); value && value->isInt()) return whole_number(value->getInt());
  return std::nullopt;
}

TypeFacts Types::by_model(const project::TypeModel& model, const CXXRecordDecl* record, QualType type) {
  TypeFacts facts;
  facts.model = &model;
  facts.shape = model.shape;
  facts.inverse_form = model.inverse_form;
  auto* special = dyn_cast<ClassTemplateSpecializationDecl>(record);
  if (!model.rows.empty()) {
    auto rows = constant_in(record, model.rows), columns = constant_in(record, model.columns);
    facts.shape = rows && columns ? shape_of_dimensions(*rows, *columns) : Shape::unknown;
    facts.numbers = rows && columns && *rows > 0 && *columns > 0 && *rows * *columns <= 16 ? int(*rows * *columns) : 0;
  } else if ((model.rows_argument >= 0 || model.columns_argument >= 0) && special) {
    auto given = [&](int index) -> long long {
      if (index < 0) return 1;
      if (unsigned(index) >= special->getTemplateArgs().size()) return 0;
      const TemplateArgument& argument = special->getTemplateArgs()[unsigned(index)];
      return argument.getKind() == TemplateArgument::Integral ? whole_number(argument.getAsIntegral()) : 0;
    };
    long long rows = given(model.rows_argument), columns = given(model.columns_argument);
    facts.shape = rows > 0 && columns > 0 ? shape_of_dimensions(rows, columns) : Shape::unknown;
    facts.numbers = rows > 0 && columns > 0 && rows * columns <= 16 ? int(rows * columns) : 0;
  } else if (model.element >= 0 && model.shape == Shape::unknown && special &&
             unsigned(model.element) < special->getTemplateArgs().size()) {
    const TemplateArgument& argument = special->getTemplateArgs()[unsigned(model.element)];
    if (argument.getKind() == TemplateArgument::Type) {
      const project::TypeModel* own = facts.model;
      facts = of(argument.getAsType());
      facts.model = own;
    }
  } else if (facts.shape == Shape::vector) {
    facts.numbers = 3;
  } else if (facts.shape == Shape::quaternion) {
    facts.numbers = 4;
  } else if (facts.shape == Shape::rotation || facts.shape == Shape::matrix) {
    facts.numbers = 9;
  }
  facts.group = facts.numbers > 0;
  if (facts.shape != Shape::matrix && facts.shape != Shape::rotation && facts.shape != Shape::quaternion &&
      facts.shape != Shape::pose)
    facts.inverse_form.clear();
  return facts;
}

TypeFacts Types::of(QualType type) {
  if (type.isNull()) return {};
  type = type.getNonReferenceType().getCanonicalType().getUnqualifiedType();
  if (type->isDependentType()) return {};
  auto found = cache_.find(type.getTypePtr());
  if (found != cache_.end()) return found->second;
  TypeFacts facts = compute(type);
  cache_[type.getTypePtr()] = facts;
  return facts;
}

TypeFacts Types::compute(QualType type) {
  TypeFacts facts;
  if (type->isArithmeticType() || type->isEnumeralType()) {
    facts.shape = Shape::number;
    return facts;
  }
  if (const auto* pointer = type->getAs<PointerType>()) {
    QualType pointee = pointer->getPointeeType();
    if (pointee->isRealFloatingType()) {
      facts.group = facts.pointer = true;
      return facts;
    }
    // A parameter `double R[3][3]` is a pointer to double[3].
    if (context_.getAsConstantArrayType(pointee)) {
      int each = numbers(pointee);
      if (each == 3) {
        facts = {Shape::matrix, 9, true, true, "", nullptr};
        return facts;
      }
    }
    return of(pointee);
  }
  if (const CXXRecordDecl* record = type->getAsCXXRecordDecl()) {
    // What is only declared, as the class of `const Vector3d&`, is instantiated now.
    if (isa<ClassTemplateSpecializationDecl>(record) && !record->getDefinition()) {
      sema_.isCompleteType(record->getLocation(), type);
      if (const CXXRecordDecl* made = record->getDefinition()) record = made;
    }
    const CXXRecordDecl* found = nullptr;
    if (const project::TypeModel* model = model_of(record, found)) return by_model(*model, found, type);
  }
  facts.numbers = numbers(type);
  facts.shape = shape_of_count(facts.numbers);
  facts.group = facts.shape != Shape::object;
  if (!facts.group) facts.numbers = 0;
  return facts;
}

Value Types::value(QualType type, std::string text, Span span) {
  TypeFacts facts = of(type);
  bool rotation = facts.shape == Shape::rotation || facts.shape == Shape::pose ||
                  (facts.shape == Shape::quaternion && facts.model);
  return {facts.shape, rotation, std::move(text), facts.inverse_form, span};
}

}  // namespace dextral::gather
