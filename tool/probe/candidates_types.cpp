#include "probe/candidates_types.h"

#include <algorithm>
#include <cctype>

namespace dextral::probe {

using namespace clang;

namespace {

constexpr std::size_t kOpenNumbers = 16;  // behind a plain pointer
constexpr std::size_t kOpenRows = 4;      // behind a pointer to rows
constexpr std::size_t kMostElements = 256;
constexpr std::size_t kMostEnumerators = 40;

bool says_quaternion(const std::string& type) {
  std::string lower = type;
  std::transform(lower.begin(), lower.end(), lower.begin(), [](unsigned char c) { return char(std::tolower(c)); });
  return lower.find("quat") != std::string::npos;
}

// An integer constant of a class or of one of its bases.
std::optional<long long> constant_of(const CXXRecordDecl* record, const std::string& name, ASTContext& context, int depth = 0) {
  record = record ? record->getDefinition() : nullptr;
  if (!record || depth > 8) return std::nullopt;
  for (const NamedDecl* decl : record->lookup(&context.Idents.get(name))) {
    if (const auto* constant = dyn_cast<EnumConstantDecl>(decl)) return gather::whole_number(constant->getInitVal());
    if (const auto* variable = dyn_cast<VarDecl>(decl))
      if (const APValue* value = variable->evaluateValue(); value && value->isInt()) return gather::whole_number(value->getInt());
  }
  for (const CXXBaseSpecifier& base : record->bases())
    if (auto found = constant_of(base.getType()->getAsCXXRecordDecl(), name, context, depth + 1)) return found;
  return std::nullopt;
}

Group part_of(const Group& whole, const std::string& name) {
  Group part;
  part.formal = name.empty() || name.starts_with("[") ? whole.formal + name : whole.formal + "." + name;
  part.text = name.empty() || name.starts_with("[") ? whole.text + name : whole.text + "." + name;
  return part;
}

}  // namespace

Formal Flattener::formal(QualType type, const std::string& name, const std::string& text) {
  Formal formal;
  formal.name = name;
  if (const auto* decayed = type->getAs<DecayedType>()) {
    formal.behind_pointer = true;
    QualType array = decayed->getOriginalType();
    formal.object = context_.getAsConstantArrayType(array) ? object(array, name, text)
                                                           : open_object(type->getPointeeType(), name, text);
  } else if (type->isReferenceType()) {
    formal.behind_pointer = true;
    formal.object = object(most_derived(type.getNonReferenceType()), name, text);
  } else if (type->isPointerType()) {
    formal.behind_pointer = true;
    QualType pointee = type->getPointeeType();
    bool rows = context_.getAsConstantArrayType(pointee);
    formal.object = rows || pointee->isRealFloatingType() ? open_object(pointee, name, text) : object(pointee, name, text);
  } else {
    formal.object = object(type, name, text);
  }
  return formal;
}

// `const MatrixBase<Matrix3d>&` is a view of the class that derives from it.
QualType Flattener::most_derived(QualType type) {
  const auto* special = dyn_cast_or_null<ClassTemplateSpecializationDecl>(type->getAsCXXRecordDecl());
  if (!special || special->getTemplateArgs().size() == 0) return type;
  const TemplateArgument& first = special->getTemplateArgs()[0];
  if (first.getKind() != TemplateArgument::Type || !is_complete(first.getAsType())) return type;
  const CXXRecordDecl* derived = first.getAsType()->getAsCXXRecordDecl();
  return derived && derived->isDerivedFrom(special) ? first.getAsType() : type;
}

bool Flattener::is_complete(QualType type) {
  const RecordDecl* record = type->getAsRecordDecl();
  if (!record) return !type->isIncompleteType();
  return !record->isInvalidDecl() && sema_.isCompleteType(record->getLocation(), type) &&
         !record->getDefinition()->isInvalidDecl() && !record->getDefinition()->isDependentContext();
}

Object Flattener::object(QualType type, const std::string& formal, const std::string& text) {
  Object object;
  if (type->isVoidType() || type->isFunctionType() || type->isDependentType() || !is_complete(type)) {
    object.other = !type->isVoidType();
    return object;
  }
  object.bytes = std::size_t(context_.getTypeSizeInChars(type).getQuantity());
  Group named;
  named.formal = formal;
  named.text = text;
  add(type, 0, named, object);
  return object;
}

Object Flattener::open_object(QualType element, const std::string& formal, const std::string& text) {
  Object object;
  Bundle bundle;
  bundle.group.formal = formal;
  bundle.group.text = text;
  const std::size_t each = std::size_t(context_.getTypeSizeInChars(element).getQuantity());
  const std::size_t count = element->isRealFloatingType() ? kOpenNumbers : kOpenRows;
  for (std::size_t i = 0; i < count; ++i) object.other |= !leaves(element, i * each, bundle.leaves);
  describe(element, bundle.group);
  std::vector<std::size_t> sizes = extents(element);
  if (sizes.size() == 1) bundle.group.columns = sizes[0];
  object.open = true;
  object.bytes = each * count;
  bundle.group.count = bundle.leaves.size();
  if (!object.other) object.bundles.push_back(std::move(bundle));
  return object;
}

bool Flattener::leaves(QualType type, std::size_t offset, std::vector<Leaf>& list) {
  const std::size_t bytes = std::size_t(context_.getTypeSizeInChars(type).getQuantity());
  type = type.getCanonicalType().getUnqualifiedType();
  if (type->isSpecificBuiltinType(BuiltinType::Double) || type->isSpecificBuiltinType(BuiltinType::Float)) {
    list.push_back({bytes == 4 ? Number::single_float : Number::double_float, offset, bytes});
    return list.size() <= kMostElements;
  }
  QualType element;
  std::size_t count = 0;
  if (const auto* array = context_.getAsConstantArrayType(type)) {
    element = array->getElementType();
    count = array->getSize().getLimitedValue(kMostElements + 1);
  } else if (const auto* vector = type->getAs<VectorType>()) {
    element = vector->getElementType();
    count = vector->getNumElements();
  } else if (const auto* complex = type->getAs<ComplexType>()) {
    element = complex->getElementType();
    count = 2;
  }
  if (!element.isNull()) {
    const std::size_t each = std::size_t(context_.getTypeSizeInChars(element).getQuantity());
    for (std::size_t i = 0; i < count; ++i)
      if (!leaves(element, offset + i * each, list)) return false;
    return count > 0 && count <= kMostElements;
  }
  const RecordDecl* record = type->getAsRecordDecl();
  if (!record || !is_complete(type)) return false;
  Object whole;
  whole.bytes = bytes;
  add_fields(record->getDefinition(), offset, {}, whole);
  for (const Bundle& bundle : whole.bundles) {
    if (bundle.group.integer) return false;
    list.insert(list.end(), bundle.leaves.begin(), bundle.leaves.end());
  }
  return !whole.other && list.size() <= kMostElements;
}

void Flattener::add(QualType type, std::size_t offset, const Group& named, Object& object) {
  QualType canonical = type.getCanonicalType().getUnqualifiedType();
  if (canonical->isIntegralOrEnumerationType()) return add_integer(canonical, offset, named, object);
  if (const RecordDecl* record = canonical->getAsRecordDecl()) return add_record(type, record, offset, named, object);
  Bundle bundle;
  bundle.group = named;
  if (leaves(canonical, offset, bundle.leaves)) {
    bundle.group.count = bundle.leaves.size();
    describe(type, bundle.group);
    object.bundles.push_back(std::move(bundle));
    return;
  }
  const auto* array = context_.getAsConstantArrayType(canonical);
  if (!array || array->getSize().getLimitedValue(kMostElements + 1) > kMostElements) {
    object.other = true;
    return;
  }
  const std::size_t each = std::size_t(context_.getTypeSizeInChars(array->getElementType()).getQuantity());
  for (std::size_t i = 0; i < array->getSize().getLimitedValue(); ++i)
    add(array->getElementType(), offset + i * each, part_of(named, "[" + std::to_string(i) + "]"), object);
}

void Flattener::add_integer(QualType type, std::size_t offset, const Group& named, Object& object) {
  Bundle bundle;
  bundle.group = named;
  bundle.group.count = 1;
  bundle.group.integer = true;
  bundle.leaves.push_back({Number::integer, offset, std::size_t(context_.getTypeSizeInChars(type).getQuantity())});
  if (type->isBooleanType()) bundle.values = {0, 1};
  if (const auto* chosen = type->getAs<EnumType>())
    for (const EnumConstantDecl* constant : chosen->getDecl()->enumerators())
      if (bundle.values.size() < kMostEnumerators) bundle.values.push_back(gather::whole_number(constant->getInitVal()));
  object.bundles.push_back(std::move(bundle));
}

void Flattener::add_record(QualType type, const RecordDecl* record, std::size_t offset, const Group& named, Object& object) {
  if (!is_complete(type)) {
    object.other = true;
    return;
  }
  record = record->getDefinition();
  Bundle bundle;
  bundle.group = named;
  if (leaves(type, offset, bundle.leaves) && is_one_group(type, bundle.leaves)) {
    bundle.group.count = bundle.leaves.size();
    describe(type, bundle.group);
    object.bundles.push_back(std::move(bundle));
    return;
  }
  add_fields(record, offset, named, object);
}

bool Flattener::is_one_group(QualType type, const std::vector<Leaf>& list) {
  if (list.empty()) return false;
  const gather::TypeFacts facts = types_.of(type);
  const bool pose = facts.model && facts.shape == Shape::pose && list.size() == 16;
  return pose || (facts.group && (facts.numbers == 0 || std::size_t(facts.numbers) == list.size()));
}

void Flattener::add_fields(const RecordDecl* record, std::size_t offset, const Group& named, Object& object) {
  if (record->isUnion()) return add_union(record, offset, named, object);
  const ASTRecordLayout& layout = context_.getASTRecordLayout(record);
  if (const auto* with_bases = dyn_cast<CXXRecordDecl>(record)) {
    object.other |= with_bases->isDynamicClass();
    for (const CXXBaseSpecifier& base : with_bases->bases()) {
      const CXXRecordDecl* decl = base.getType()->getAsCXXRecordDecl();
      if (!decl || base.isVirtual()) object.other = true;
      else add_fields(decl->getDefinition(), offset + std::size_t(layout.getBaseClassOffset(decl).getQuantity()), named, object);
    }
  }
  for (const FieldDecl* field : record->fields()) {
    const std::size_t at = std::size_t(layout.getFieldOffset(field->getFieldIndex()) / 8);
    if (field->isBitField() || field->getType()->isReferenceType()) object.other = true;
    else add(field->getType(), offset + at, part_of(named, field->getNameAsString()), object);
  }
}

// The member with the most numbers stands for all.
void Flattener::add_union(const RecordDecl* record, std::size_t offset, const Group& named, Object& object) {
  std::vector<Leaf> most;
  for (const FieldDecl* field : record->fields())
    if (std::vector<Leaf> list; leaves(field->getType(), offset, list) && list.size() > most.size()) most = list;
  object.other |= most.empty();
  if (most.empty()) return;
  Bundle bundle;
  bundle.group = named;
  bundle.group.count = most.size();
  bundle.leaves = std::move(most);
  object.bundles.push_back(std::move(bundle));
}

std::vector<std::size_t> Flattener::extents(QualType type) {
  type = type.getCanonicalType().getUnqualifiedType();
  std::vector<std::size_t> sizes;
  if (const auto* array = context_.getAsConstantArrayType(type)) {
    sizes = extents(array->getElementType());
    sizes.insert(sizes.begin(), array->getSize().getLimitedValue(kMostElements));
    return sizes;
  }
  const RecordDecl* record = type->getAsRecordDecl();
  record = record ? record->getDefinition() : nullptr;
  if (!record) return sizes;
  std::vector<QualType> parts;
  if (const auto* with_bases = dyn_cast<CXXRecordDecl>(record))
    for (const CXXBaseSpecifier& base : with_bases->bases())
      if (const CXXRecordDecl* decl = base.getType()->getAsCXXRecordDecl(); decl && !decl->isEmpty()) parts.push_back(base.getType());
  for (const FieldDecl* field : record->fields()) parts.push_back(field->getType());
  if (parts.size() == 1) return extents(parts[0]);
  const bool alike = std::all_of(parts.begin(), parts.end(), [&](QualType part) { return context_.hasSameUnqualifiedType(part, parts[0]); });
  if (!alike || parts.empty() || record->isUnion()) return sizes;
  sizes = extents(parts[0]);
  sizes.insert(sizes.begin(), parts.size());
  return sizes;
}

// A class around one member, as a pose around its matrix, lies as that does.
QualType Flattener::storage(QualType type) {
  for (int depth = 0; depth < 4; ++depth) {
    const gather::TypeFacts facts = types_.of(type);
    const RecordDecl* record = type->getAsRecordDecl();
    record = record ? record->getDefinition() : nullptr;
    if (!record || (facts.model && !facts.model->rows.empty())) return type;
    if (std::distance(record->field_begin(), record->field_end()) != 1) return type;
    type = record->field_begin()->getType();
  }
  return type;
}

void Flattener::describe(QualType type, Group& group) {
  const gather::TypeFacts facts = types_.of(type);
  group.quaternion = group.count == 4 && ((facts.model && facts.shape == Shape::quaternion) || says_quaternion(type.getAsString()));
  std::vector<std::size_t> sizes = extents(type);
  QualType inner = storage(type);
  const gather::TypeFacts stored = types_.of(inner);
  if (stored.model && !stored.model->rows.empty()) {
    const CXXRecordDecl* record = inner->getAsCXXRecordDecl();
    auto rows = constant_of(record, stored.model->rows, context_), columns = constant_of(record, stored.model->columns, context_);
    auto row_major = constant_of(record, "IsRowMajor", context_);
    if (rows && columns && row_major && *rows > 0 && *columns > 0) {
      sizes = {std::size_t(*rows), std::size_t(*columns)};
      group.column_major = *rows > 1 && *columns > 1 && !*row_major;
    }
  }
  if (sizes.size() != 2 || sizes[0] < 2 || sizes[1] < 2 || sizes[0] * sizes[1] != group.count) {
    group.column_major = false;
    return;
  }
  group.rows = sizes[0];
  group.columns = sizes[1];
}

}  // namespace dextral::probe
