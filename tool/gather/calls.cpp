// Calls: models, parts reached through operators, inlined accessors, and calls
// of functions with facts of their own.
#include "gather/walker.h"

#include <algorithm>

namespace dextral::gather {

using namespace clang;

namespace {

const std::map<std::string, OperationKind>& operation_names() {
  static const std::map<std::string, OperationKind> names = {
      {"product", OperationKind::product},     {"transpose", OperationKind::transpose},
      {"inverse", OperationKind::inverse},     {"copy", OperationKind::copy},
      {"sum", OperationKind::sum},             {"difference", OperationKind::difference},
      {"cross", OperationKind::cross},         {"dot", OperationKind::dot},
      {"skew", OperationKind::skew},           {"unskew", OperationKind::unskew},
      {"translation", OperationKind::translation}, {"pose", OperationKind::pose},
      {"column", OperationKind::column},       {"row", OperationKind::row},
      {"transform", OperationKind::transform}};
  return names;
}

std::string model_name(const FunctionDecl* function) {
  if (const auto* constructor = dyn_cast<CXXConstructorDecl>(function)) {
    std::string record = Types::name(constructor->getParent());
    return record + "::" + constructor->getParent()->getNameAsString();
  }
  return Types::name(function);
}

bool writable(QualType parameter) {
  if (parameter.isNull()) return false;
  if (parameter->isRValueReferenceType()) return false;
  QualType pointee = parameter->isReferenceType() ? parameter.getNonReferenceType() : parameter->getPointeeType();
  if (pointee.isNull()) return false;
  if (pointee->isPointerType() && parameter->isReferenceType()) return !pointee->getPointeeType().isConstQualified();
  while (pointee->isArrayType()) pointee = QualType(pointee->getArrayElementTypeNoTypeQual(), 0).withFastQualifiers(pointee.getLocalFastQualifiers() | pointee.getCanonicalType().getLocalFastQualifiers());
  return !pointee.isConstQualified() && !pointee->isFunctionType();
}

bool is_map(Shape s) {
  return s == Shape::matrix || s == Shape::rotation || s == Shape::quaternion || s == Shape::pose;
}

}  // namespace

std::string Walker::key_of(const FunctionDecl* function) {
  llvm::SmallString<128> usr;
  if (index::generateUSRForDecl(function, usr)) return function->getQualifiedNameAsString();
  return std::string(usr);
}

Result Walker::call(const CallExpr* expr) {
  Invocation invocation;
  invocation.expr = expr;
  invocation.type = expr->getCallReturnType(unit_.ast);
  invocation.callee = expr->getDirectCallee();
  const auto* method = dyn_cast_or_null<CXXMethodDecl>(invocation.callee);
  bool operator_call = isa<CXXOperatorCallExpr>(expr);
  unsigned first = 0;
  if (const auto* member = dyn_cast<CXXMemberCallExpr>(expr)) {
    invocation.has_object = true;
    Argument object;
    object.expr = member->getImplicitObjectArgument();
    object.result = evaluate(object.expr);
    object.writable = method && !method->isConst();
    invocation.arguments.push_back(std::move(object));
  } else if (operator_call && method && !method->isStatic()) {
    invocation.has_object = true;
    Argument object;
    object.expr = expr->getArg(0);
    first = 1;
    // The right side of an assignment is evaluated before its target.
    invocation.arguments.push_back(std::move(object));
  } else if (!invocation.callee) {
    evaluate(expr->getCallee());
  }
  bool assignment = operator_call && cast<CXXOperatorCallExpr>(expr)->isAssignmentOp();
  std::set<std::string> reads;
  std::set<std::string>* outer = reads_;
  if (assignment) reads_ = &reads;
  for (unsigned i = first; i < expr->getNumArgs(); ++i) {
    Argument argument;
    argument.expr = expr->getArg(i);
    unsigned index = i - first;
    if (invocation.callee && index < invocation.callee->getNumParams()) {
      argument.declared = invocation.callee->getParamDecl(index);
      argument.parameter = argument.declared->getType();
      argument.writable = writable(argument.parameter);
    } else {
      argument.writable = argument.expr->getType()->isPointerType();
    }
    argument.result = evaluate(argument.expr);
    if (argument.result.place && unit_.types.is_number(argument.expr->getType()) && !argument.writable)
      argument.result.number = number(argument.result, argument.expr);
    invocation.arguments.push_back(std::move(argument));
  }
  if (first == 1) {
    Argument& object = invocation.arguments[0];
    object.result = evaluate(object.expr);
    object.writable = !method->isConst();
  }
  Result result = invoke(invocation);
  reads_ = outer;
  if (outer && assignment) outer->insert(reads.begin(), reads.end());
  return result;
}

Result Walker::construct(const CXXConstructExpr* expr) {
  const CXXConstructorDecl* constructor = expr->getConstructor();
  if (constructor->isCopyOrMoveConstructor() && expr->getNumArgs() >= 1) return evaluate(expr->getArg(0));
  Invocation invocation;
  invocation.expr = expr;
  invocation.type = expr->getType();
  invocation.callee = constructor;
  for (unsigned i = 0; i < expr->getNumArgs(); ++i) {
    Argument argument;
    argument.expr = expr->getArg(i);
    if (i < constructor->getNumParams()) {
      argument.declared = constructor->getParamDecl(i);
      argument.parameter = argument.declared->getType();
      argument.writable = writable(argument.parameter);
    }
    argument.result = evaluate(argument.expr);
    if (argument.result.place && unit_.types.is_number(argument.expr->getType()) && !argument.writable)
      argument.result.number = number(argument.result, argument.expr);
    invocation.arguments.push_back(std::move(argument));
  }
  if (auto result = modelled(invocation)) return *result;
  TypeFacts facts = unit_.types.of(expr->getType());
  if (expr->getNumArgs() == 0 && (facts.group || is_map(facts.shape)) && (facts.model || constructor->isTrivial())) {
    Result result;
    result.literal = true;
    return result;
  }
  // A conversion between types of the same meaning keeps the frames.
  if (facts.model && expr->getNumArgs() >= 1 && (facts.group || is_map(facts.shape))) {
    Shape from = shape(invocation.arguments[0]);
    if (from == facts.shape || (is_map(from) && is_map(facts.shape) && from != Shape::pose && facts.shape != Shape::pose))
      return invocation.arguments[0].result;
    return {};
  }
  instantiate(constructor);
  if (auto result = inlined(invocation)) return *result;
  if (unit_.in_scope(constructor->getLocation())) return called(invocation);
  forget_writable(invocation);
  return {};
}

Result Walker::invoke(Invocation& invocation) {
  if (!invocation.callee) {
    forget_writable(invocation);
    return {};
  }
  std::string name = Types::name(invocation.callee);
  if ((name == "std::move" || name == "std::forward" || name == "std::as_const" || name == "std::ref" || name == "std::cref") &&
      invocation.arguments.size() == 1)
    return invocation.arguments[0].result;
  if (auto result = modelled(invocation)) return *result;
  instantiate(invocation.callee);
  const auto* method = dyn_cast<CXXMethodDecl>(invocation.callee);
  if (method && invocation.callee->getOverloadedOperator() == OO_Equal && invocation.has_object && invocation.arguments.size() == 2)
    return assigned(invocation);
  if (auto result = inlined(invocation)) return *result;
  bool known = unit_.in_scope(invocation.callee->getLocation()) || !unit_.phrases.of_return(invocation.callee).empty() ||
               std::any_of(invocation.callee->param_begin(), invocation.callee->param_end(),
                           [&](const ParmVarDecl* p) { return !unit_.phrases.of(p).empty(); });
  if (known) return called(invocation);
  if (auto result = reached(invocation)) return *result;
  return numeric(invocation);
}

// Units are parsed without the instantiations at their end: the scope's own
// templates are instantiated when they are called.
void Walker::instantiate(const FunctionDecl* function) {
  if (!unit_.sema || function->getDefinition() || function->isDependentContext()) return;
  const FunctionDecl* pattern = function->getTemplateInstantiationPattern();
  if (!pattern || !pattern->getBody() || !unit_.in_scope(pattern->getLocation())) return;
  unit_.sema->InstantiateFunctionDefinition(function->getLocation(), const_cast<FunctionDecl*>(function));
}

// A base that a template was converted to says less than the class itself.
Shape Walker::shape(const Argument& argument) {
  Shape shape = unit_.types.of(argument.expr->getType()).shape;
  if (shape != Shape::object && shape != Shape::unknown) return shape;
  return unit_.types.of(argument.expr->IgnoreImplicit()->getType()).shape;
}

Walker::Argument* Walker::argument(Invocation& invocation, int number) {
  int index = invocation.has_object ? number : number - 1;
  if (index < 0 || index >= int(invocation.arguments.size())) return nullptr;
  return &invocation.arguments[std::size_t(index)];
}

bool Walker::fits(const project::FunctionModel& model, Invocation& invocation) {
  static const std::map<std::string, Shape> shapes = {
      {"number", Shape::number}, {"vector", Shape::vector}, {"row", Shape::row}, {"matrix", Shape::matrix},
      {"rotation", Shape::rotation}, {"quaternion", Shape::quaternion}, {"pose", Shape::pose},
      {"object", Shape::object}, {"container", Shape::container}, {"unknown", Shape::unknown}};
  auto is = [&](const std::string& wanted, const Argument& argument) {
    if (wanted.empty() || wanted == "any") return true;
    auto found = shapes.find(wanted);
    if (found != shapes.end()) return shape(argument) == found->second;
    // The name of a class: where a library stands in no namespace.
    const CXXRecordDecl* record = unit_.types.bare(argument.expr->getType())->getAsCXXRecordDecl();
    return record && Types::name(record) == wanted;
  };
  std::size_t first = invocation.has_object ? 1 : 0;
  if (!model.object.empty() && (!invocation.has_object || !is(model.object, invocation.arguments[0]))) return false;
  if (model.given.empty()) return true;
  std::size_t given = 0;  // default arguments are not counted
  for (std::size_t i = first; i < invocation.arguments.size(); ++i)
    given += !isa<CXXDefaultArgExpr>(invocation.arguments[i].expr);
  if (model.given.size() != given) return false;
  for (std::size_t i = 0; i < given; ++i)
    if (!is(model.given[i], invocation.arguments[first + i])) return false;
  return true;
}

std::optional<Result> Walker::modelled(Invocation& invocation) {
  const auto* models = unit_.project.models.functions(model_name(invocation.callee));
  if (!models) return std::nullopt;
  for (const project::FunctionModel& model : *models)
    if (fits(model, invocation)) return apply(model, invocation);
  return std::nullopt;
}

Result Walker::apply(const project::FunctionModel& model, Invocation& invocation) {
  if (model.is == "element") return component(invocation, model);
  if (model.is == "elements") return built(invocation, model);
  if (model.is == "stream") return streamed(invocation);
  if (model.is == "part") return part(invocation, model);
  if (model.is == "literal" || model.is == "fill") {
    Result result;
    result.literal = true;
    if (model.into != project::kReturn) {
      store(invocation, model.into, ValueId::none, true);
      if (auto* object = argument(invocation, model.into); model.also_returned && object) return object->result;
      return {};
    }
    return result;
  }
  auto kind = operation_names().find(model.is);
  if (kind == operation_names().end()) {  // opaque, build, extract
    forget_writable(invocation);
    if (model.into != project::kReturn) store(invocation, model.into, ValueId::none, false);
    return {};
  }
  std::vector<int> of = model.of;
  if (of.empty())
    for (std::size_t i = 0; i < invocation.arguments.size(); ++i) of.push_back(int(i) + (invocation.has_object ? 0 : 1));
  std::vector<Operand> operands;
  for (int number : of) {
    Argument* argument = this->argument(invocation, number);
    if (!argument) continue;
    Operand operand = this->operand(argument->result, argument->expr);
    if (operand.value == ValueId::none) {
      // A part that is not understood: the whole is not.
      if (model.into != project::kReturn) store(invocation, model.into, ValueId::none, false);
      return {};
    }
    if (std::find(model.transposed.begin(), model.transposed.end(), number) != model.transposed.end()) {
      const Value like = recorder_.at(operand.value);
      ValueId flipped = recorder_.value(like.shape, like.rotation, operand.text, like.span, like.inverse_form);
      recorder_.operation(OperationKind::transpose, flipped, {operand}, span(invocation.expr->getSourceRange()), operand.text);
      operand.value = flipped;
      operand.span = {};
    }
    operands.push_back(std::move(operand));
  }
  return made(kind->second, invocation, std::move(operands), model);
}

Result Walker::made(OperationKind kind, Invocation& invocation, std::vector<Operand> operands, const project::FunctionModel& model) {
  SourceRange range = invocation.expr->getSourceRange();
  Span where = span(range);
  std::string text = brief(range);
  Result result;
  if (kind == OperationKind::dot) {
    recorder_.operation(kind, ValueId::none, operands, where, text);
    result.number = fresh_number();
    return result;
  }
  int line = model.index;
  if ((kind == OperationKind::column || kind == OperationKind::row) && line < 0)
    if (Argument* index = argument(invocation, invocation.has_object ? 1 : 2))
      line = integer(index->result, index->expr).value_or(-1);
  Argument* target = model.into == project::kReturn ? nullptr : argument(invocation, model.into);
  QualType type = target ? unit_.types.bare(target->expr->getType()) : invocation.type;
  Value like = unit_.types.value(type, text, where);
  if (like.shape == Shape::number) {  // a product of a row and a vector
    recorder_.operation(kind, recorder_.value(Shape::number, false, text, where), operands, where, text);
    result.number = fresh_number();
    return result;
  }
  if (like.shape == Shape::unknown && !operands.empty() &&
      (kind == OperationKind::copy || kind == OperationKind::sum || kind == OperationKind::difference || kind == OperationKind::cross))
    like.shape = recorder_.at(operands[0].value).shape;
  ValueId id = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
  Operation& op = recorder_.operation(kind, id, operands, where, text);
  if (line >= 0) op.numbers = {line};
  if (kind == OperationKind::copy && model.factor) op.numbers = {model.factor};
  if (model.into != project::kReturn) {
    store(invocation, model.into, id, false);
    if (target && model.also_returned) return target->result;
    return {};
  }
  result.value = id;
  Argument* object = argument(invocation, 0);
  bool part = kind == OperationKind::copy || kind == OperationKind::translation || kind == OperationKind::column || kind == OperationKind::row;
  if (part && object && invocation.has_object && object->result.place && object->result.place->offset == -1)
    result.view = View{*object->result.place, kind, line};
  return result;
}

// The new version of an argument that the function writes.
void Walker::store(Invocation& invocation, int into, ValueId id, bool literal) {
  Argument* target = argument(invocation, into);
  if (!target) return;
  SourceRange range = invocation.expr->getSourceRange();
  Operand from{id, {}, brief(range)};
  if (target->result.view && !literal) return write_view(*target->result.view, id, range, from);
  if (!target->result.place) return;
  const Place& place = *target->result.place;
  if (id == ValueId::none && !literal) return forget(place);
  bool self = false;
  for (const Argument& other : invocation.arguments)
    self |= other.result.place && other.result.place->path == place.path && (&other != target || into == 0);
  if (reads_ && reads_->contains(place.path)) self = true;
  write_value(place, id, literal, range, from, ReasonKind::assigned, self && !literal);
}

void Walker::write_view(const View& view, ValueId id, SourceRange range, const Operand& from) {
  if (id == ValueId::none) return forget(view.base);
  TypeFacts base = unit_.types.of(view.base.type);
  if (view.kind == OperationKind::copy) {
    bool self = reads_ && reads_->contains(view.base.path);
    return write_value(view.base, id, false, range, from, ReasonKind::assigned, self);
  }
  // A column, a row or the translation of what is being put together.
  auto found = now_.groups.find(view.base.path);
  if (found == now_.groups.end() || found->second.literal) {
    Value like = unit_.types.value(view.base.type, brief(range), span(range));
    GroupState state;
    state.place = view.base;
    state.base = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
    now_.groups[view.base.path] = state;
    hold(state.base, view.base, range, false, like.text);
  }
  ValueId whole = settle(view.base.path);
  Operation& op = recorder_.operation(view.kind, id, {{whole, {}, recorder_.at(whole).text}}, span(range), brief(range));
  op.target = from.text;
  if (view.index >= 0) op.numbers = {view.index};
}

Result Walker::assigned(Invocation& invocation) {
  Argument &to = invocation.arguments[0], &from = invocation.arguments[1];
  SourceRange range = invocation.expr->getSourceRange();
  if (to.result.view && !to.result.place) {
    Operand operand = this->operand(from.result, from.expr);
    if (!literal(from.result)) write_view(*to.result.view, operand.value, range, operand);
    return to.result;
  }
  if (to.result.place) assign(*to.result.place, from.result, from.expr, range);
  return to.result;
}

Result Walker::component(Invocation& invocation, const project::FunctionModel& model) {
  Result result;
  if (model.into != project::kReturn) {  // a setter of one component
    Argument* target = argument(invocation, model.into);
    Argument* from = model.of.empty() ? nullptr : argument(invocation, model.of[0]);
    if (!target || !target->result.place || !from || model.index < 0) return forget_writable(invocation), result;
    Place place = *target->result.place;
    place.whole = place.type;
    place.type = unit_.ast.DoubleTy;
    place.offset = model.index;
    write_number(place, number(from->result, from->expr), invocation.expr->getSourceRange());
    return result;
  }
  Argument* object = argument(invocation, invocation.has_object ? 0 : 1);
  if (!object) return {};
  TypeFacts facts = unit_.types.of(unit_.types.bare(object->expr->getType()));
  std::optional<int> index = model.index >= 0 ? std::optional(model.index) : std::nullopt;
  if (model.index < 0) {
    std::vector<int> indices;
    bool known = true;
    std::size_t first = 1;
    for (std::size_t i = first; i < invocation.arguments.size(); ++i) {
      auto k = integer(invocation.arguments[i].result, invocation.arguments[i].expr);
      known = known && k && *k >= model.base;
      if (k) indices.push_back(*k - model.base);
    }
    if (!model.transposed.empty() && indices.size() == 2) std::swap(indices[0], indices[1]);
    int columns = facts.numbers == 16 ? 4 : facts.numbers == 4 && facts.shape == Shape::matrix ? 2 : 3;
    if (known && indices.size() == 1) index = indices[0];
    if (known && indices.size() == 2) index = facts.numbers > 4 || facts.shape == Shape::matrix ? columns * indices[0] + indices[1] : indices[0] + indices[1];
  }
  if (facts.shape == Shape::pose) return {};
  if (facts.numbers == 0 && facts.shape != Shape::unknown) {
    if (object->result.place && !index) return {};
    if (object->result.place) {
      Place place = *object->result.place;
      place.path += "[" + std::to_string(*index - *index % 3) + "+]";
      place.offset = *index % 3;
      place.size = 3;
      place.type = invocation.type.getNonReferenceType();
      place.whole = {};
      place.decl = nullptr;
      result.place = place;
    }
    return result;
  }
  if (object->result.place && !object->result.view) {
    Place place = *object->result.place;
    if (place.offset == -1) place.whole = place.type;
    place.type = invocation.type.getNonReferenceType();
    place.offset = index ? std::max(place.offset, 0) + *index : kAnyComponent;
    result.place = place;
    return result;
  }
  ValueId id = value(object->result, object->expr);
  result.number = id != ValueId::none && index ? Polynomial(Atom{id, std::uint32_t(*index)}) : fresh_number();
  return result;
}

Result Walker::built(Invocation& invocation, const project::FunctionModel& model) {
  std::vector<Polynomial> elements;
  for (std::size_t i = invocation.has_object ? 1 : 0; i < invocation.arguments.size(); ++i) {
    Argument& argument = invocation.arguments[i];
    if (unit_.types.is_number(argument.expr->getType())) {
      elements.push_back(number(argument.result, argument.expr));
      continue;
    }
    int count = unit_.types.of(argument.expr->getType()).numbers;
    ValueId id = literal(argument.result) ? ValueId::none : value(argument.result, argument.expr);
    for (int k = 0; k < count; ++k)
      elements.push_back(id == ValueId::none ? Polynomial(0.0) : Polynomial(Atom{id, std::uint32_t(k)}));
  }
  if (model.order == "wxyz" && elements.size() == 4) std::rotate(elements.begin(), elements.begin() + 1, elements.end());
  if (model.order == "columns" && elements.size() == 9)
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < i; ++j) std::swap(elements[3 * i + j], elements[3 * j + i]);
  if (model.into != project::kReturn) {
    Argument* target = argument(invocation, model.into);
    SourceRange range = invocation.expr->getSourceRange();
    if (target && target->result.place) {
      Result from;
      from.elements = elements;
      from.literal = is_literal(elements);
      assign(*target->result.place, from, nullptr, range);
      if (model.also_returned) return target->result;
    }
    return {};
  }
  Result result;
  result.literal = is_literal(elements);
  result.elements = std::move(elements);
  return result;
}

// `m << a, b, c`: the innermost call opens the stream, each comma adds to it.
Result Walker::streamed(Invocation& invocation) {
  if (invocation.arguments.size() != 2) return {};
  Argument &left = invocation.arguments[0], &right = invocation.arguments[1];
  bool opens = invocation.callee->getOverloadedOperator() == OO_LessLess;
  if (opens) {
    stream_.reset();
    if (!left.result.place) return {};
    stream_ = Stream{*left.result.place, {}, {}, {}};
  }
  if (!stream_) return {};
  TypeFacts facts = unit_.types.of(stream_->place.type);
  Shape shape = this->shape(right);
  if (shape == Shape::number) stream_->numbers.push_back(number(right.result, right.expr));
  else stream_->whole.push_back(operand(right.result, right.expr)), stream_->shapes.push_back(shape);
  bool complete = int(stream_->numbers.size()) == facts.numbers ||
                  (facts.numbers == 9 && stream_->whole.size() == 3) || (facts.numbers == 3 && stream_->whole.size() == 1);
  Place place = stream_->place;
  if (!complete) {
    if (opens) forget(place);
    return {};
  }
  Result from;
  SourceRange range = invocation.expr->getSourceRange();
  if (stream_->whole.empty()) {
    from.elements = stream_->numbers;
    from.literal = is_literal(from.elements);
  } else {
    bool columns = stream_->shapes[0] == Shape::vector;
    for (int i = 0; i < 3 && facts.numbers == 9; ++i)
      for (int j = 0; j < 3; ++j) {
        ValueId id = stream_->whole[std::size_t(columns ? j : i)].value;
        from.elements.push_back(id == ValueId::none ? Polynomial::unknown() : Polynomial(Atom{id, std::uint32_t(columns ? i : j)}));
      }
    if (facts.numbers == 3) from.value = stream_->whole[0].value;
  }
  if (!from.elements.empty() && !from.literal) from.value = assembled(from.elements, place.type, range, brief(range));
  from.elements.clear();
  assign(place, from, nullptr, range);
  stream_.reset();
  return {};
}

Result Walker::part(Invocation& invocation, const project::FunctionModel& model) {
  Argument* object = argument(invocation, 0);
  if (!object) return {};
  Shape whole = shape(*object);
  TypeFacts facts = unit_.types.of(unit_.types.bare(object->expr->getType())), given = unit_.types.of(invocation.type);
  std::vector<std::optional<int>> numbers;
  std::string name = invocation.callee->getNameAsString();
  std::string key = name;
  if (const auto* arguments = invocation.callee->getTemplateSpecializationArgs())
    for (const TemplateArgument& argument : arguments->asArray())
      if (argument.getKind() == TemplateArgument::Integral) key += "," + std::to_string(whole_number(argument.getAsIntegral()));
  bool known = true;
  for (std::size_t i = 1; i < invocation.arguments.size(); ++i) {
    Polynomial p = number(invocation.arguments[i].result, invocation.arguments[i].expr);
    numbers.push_back(p.constant() ? std::optional(int(*p.constant())) : std::nullopt);
    known = known && p.known();
    key += ";" + describe(p);
  }
  auto make = [&](OperationKind kind, int line) {
    project::FunctionModel as = model;
    as.index = line;
    return made(kind, invocation, {operand(object->result, object->expr)}, as);
  };
  auto at = [&](std::size_t i, int k) { return numbers.size() > i && numbers[i] && *numbers[i] == k; };
  bool corner = (name == "block" && at(0, 0) && at(1, 0)) || name == "topLeftCorner";
  bool homogeneous = facts.numbers == 16 || whole == Shape::pose;
  if (given.numbers && given.numbers == facts.numbers && given.shape == facts.shape) return make(OperationKind::copy, -1);
  if (homogeneous && given.numbers == 9 && corner) return make(OperationKind::copy, -1);
  if (homogeneous && given.numbers == 3 && ((name == "block" && at(0, 0) && at(1, 3)) || name == "topRightCorner"))
    return make(OperationKind::translation, -1);
  if (facts.numbers == 9 && given.numbers == 3 && name == "block") {
    if (given.shape == Shape::vector && at(0, 0) && numbers[1]) return make(OperationKind::column, *numbers[1]);
    if (given.shape == Shape::row && at(1, 0) && numbers[0]) return make(OperationKind::row, *numbers[0]);
  }
  Result result;
  if (object->result.place && known && object->result.place->offset == -1 && facts.numbers == 0) {
    Place place = *object->result.place;
    place.path += "[" + key + "]";
    place.type = invocation.type.getNonReferenceType();
    place.decl = nullptr;
    result.place = place;
  }
  return result;
}

// What operators and accessors of types without a model lead to.
std::optional<Result> Walker::reached(Invocation& invocation) {
  if (!invocation.has_object || !invocation.arguments[0].result.place) return std::nullopt;
  const Place& object = *invocation.arguments[0].result.place;
  OverloadedOperatorKind op = invocation.callee->getOverloadedOperator();
  std::string name = op == OO_None && invocation.callee->getDeclName().isIdentifier() ? invocation.callee->getName().str() : "";
  Result result;
  QualType type = unit_.types.bare(invocation.type);
  bool one = invocation.arguments.size() == 1;
  if (op == OO_Arrow || (op == OO_Star && one) || ((name == "get" || name == "value") && one)) {
    Place place = object;
    place.type = type;
    place.offset = -1;
    place.path += ".*";
    place.owner = object.path;
    result.place = place;
    return result;
  }
  if (op == OO_Subscript || name == "at") {
    if (invocation.arguments.size() != 2) return std::nullopt;
    Argument& index = invocation.arguments[1];
    bool counted = unit_.types.is_number(index.expr->getType());
    result.place = element(object, counted ? number(index.result, index.expr) : Polynomial::unknown(), type);
    return result;
  }
  if ((name == "front" || name == "back") && one) {
    Place place = object;
    place.type = type;
    place.path += "." + name;
    result.place = place;
    return result;
  }
  return std::nullopt;
}

// Functions outside the scope without a model: numbers by name, else opaque.
Result Walker::numeric(Invocation& invocation) {
  forget_writable(invocation);
  Result result;
  if (!unit_.types.is_number(invocation.type)) return result;
  std::string text = invocation.callee->getNameAsString();
  for (Argument& argument : invocation.arguments) {
    if (!unit_.types.is_number(argument.expr->getType())) {
      result.number = fresh_number();
      return result;
    }
    text += "," + describe(number(argument.result, argument.expr));
  }
  result.number = named_number(text);
  return result;
}

void Walker::forget_writable(Invocation& invocation) {
  for (Argument& argument : invocation.arguments) {
    if (!argument.writable || !argument.result.place) continue;
    if (!unit_.types.of(argument.result.place->type).model || invocation.has_object || argument.declared) forget(*argument.result.place);
  }
}

bool Walker::inlinable(const FunctionDecl* function, const Invocation& invocation) {
  if (depth_ >= 3 || !function->getBody() || function->isVariadic()) return false;
  if (const auto* method = dyn_cast<CXXMethodDecl>(function); method && method->isVirtual()) return false;
  const auto* body = dyn_cast<CompoundStmt>(function->getBody());
  if (!body || body->size() > 12) return false;
  if (const auto* constructor = dyn_cast<CXXConstructorDecl>(function)) {
    TypeFacts facts = unit_.types.of(unit_.ast.getTypeDeclType(constructor->getParent()));
    return facts.group && !facts.model;
  }
  QualType type = function->getReturnType();
  bool takes_numbers = false;
  for (const Argument& argument : invocation.arguments) takes_numbers |= unit_.types.is_number(argument.expr->getType());
  const auto* only = body->size() == 1 ? dyn_cast<ReturnStmt>(body->body_front()) : nullptr;
  if (only && only->getRetValue()) {
    const Expr* given = only->getRetValue()->IgnoreImplicit()->IgnoreParens();
    if (unit_.types.is_number(type) || isa<MemberExpr>(given) || isa<ArraySubscriptExpr>(given)) return true;
    if (const auto* made = dyn_cast<CXXConstructExpr>(given); made && made->getNumArgs() == 1)
      return isa<MemberExpr>(made->getArg(0)->IgnoreImplicit());
    return type->isReferenceType() && !isa<CallExpr>(given);
  }
  // Setters from single numbers.
  return invocation.has_object && type->isVoidType() && takes_numbers && body->size() <= 4;
}

void Walker::enter_inlined(const FunctionDecl* function, Invocation& invocation) {
  std::size_t first = invocation.has_object ? 1 : 0;
  for (unsigned i = 0; i < function->getNumParams(); ++i) {
    const ParmVarDecl* parameter = function->getParamDecl(i);
    std::string path = path_of(parameter);
    now_.aliases.erase(parameter);
    forget_below(path);
    if (first + i >= invocation.arguments.size()) continue;
    Argument& argument = invocation.arguments[first + i];
    bool by_place = parameter->getType()->isReferenceType() || parameter->getType()->isPointerType();
    if (argument.result.place && by_place) {
      now_.aliases[parameter] = *argument.result.place;
    } else {
      Place place{path, parameter->getType().getNonReferenceType(), nullptr, -1, 0, {}, ""};
      assign(place, argument.result, argument.expr, argument.expr->getSourceRange(), ReasonKind::passed);
    }
  }
}

std::optional<Result> Walker::inlined(Invocation& invocation) {
  const FunctionDecl* function = invocation.callee->getDefinition();
  if (!function || !inlinable(function, invocation)) return std::nullopt;
  std::optional<Place> object;
  bool constructs = isa<CXXConstructorDecl>(function);
  if (constructs) {
    object = Place{"t" + std::to_string(++numbers_), invocation.type, nullptr, -1, 0, {}, ""};
  } else if (invocation.has_object) {
    Argument& self = invocation.arguments[0];
    object = self.result.place;
    if (!object) {
      ValueId id = literal(self.result) ? ValueId::none : value(self.result, self.expr);
      if (id == ValueId::none && !self.result.object) return std::nullopt;
      object = Place{"t" + std::to_string(++numbers_), unit_.types.bare(self.expr->getType()), nullptr, -1, 0, {}, ""};
      if (self.result.object) write_object(*object, *self.result.object);
      else {
        GroupState state;
        state.base = id;
        state.place = *object;
        now_.groups[object->path] = state;
      }
    }
    object->type = unit_.types.bare(object->type);
  }
  SourceRange outer_range = inlined_at_;
  if (depth_ == 0) inlined_at_ = invocation.expr->getSourceRange();
  ++depth_;
  enter_inlined(function, invocation);
  std::optional<Place> outer_this = std::exchange(this_, object);
  frames_.push_back({});
  if (const auto* constructor = dyn_cast<CXXConstructorDecl>(function)) constructor_initialisers(constructor);
  statement(function->getBody());
  now_.dead = false;
  Result result = frames_.back().branches ? Result{} : frames_.back().result;
  frames_.pop_back();
  this_ = outer_this;
  if (unit_.types.is_number(invocation.type) && !invocation.type->isReferenceType() && result.place)
    result.number = number(result, nullptr), result.place.reset();
  if (constructs) {
    result = {};
    result.place = *object;
  }
  --depth_;
  inlined_at_ = outer_range;
  return result;
}

void Walker::bind(Call& call, const std::string& formal, Argument& argument) {
  Binding binding;
  binding.formal = formal;
  SourceRange range = argument.expr->getSourceRange();
  Operand operand{ValueId::none, {}, brief(range)};
  const Result& result = argument.result;
  TypeFacts facts = unit_.types.of(unit_.types.bare(argument.expr->getType()));
  bool through_pointer = argument.expr->getType()->isPointerType() || argument.expr->getType()->isArrayType();
  TypeFacts whole = unit_.types.of(argument.expr->getType());
  bool group = facts.group || facts.shape == Shape::pose || facts.shape == Shape::quaternion || whole.group;
  bool scalar = unit_.types.is_number(argument.expr->getType()) ||
                (unit_.types.is_number(unit_.types.bare(argument.expr->getType())) && !whole.group && through_pointer);
  if (scalar) {
    if (argument.writable && result.place) forget(*result.place);
    return;
  }
  if (group) {
    operand = this->operand(result, argument.expr);
    binding.before = operand.value;
  } else if (result.place && result.place->offset == -1) {
    binding.before = snapshot(*result.place);
  } else if (result.object) {
    binding.before = *result.object;
  }
  binding.span = operand.span;
  binding.text = operand.text;
  if (argument.writable && result.place) {
    const Place& place = *result.place;
    if (group && place.offset == -1) {
      const Value like = operand.value != ValueId::none ? recorder_.at(operand.value) : unit_.types.value(place.type, operand.text, span(range));
      GroupState state;
      state.place = place;
      state.range = range;
      state.changed = true;
      state.base = recorder_.value(like.shape, like.rotation, operand.text, span(range), like.inverse_form);
      now_.groups[place.path] = state;
      binding.after = state.base;
    } else if (group) {
      forget(place);
    } else {
      forget_below(place.path);
      binding.after = Snapshot{place.path, epoch(place.path), {}};
    }
  }
  call.bindings.push_back(std::move(binding));
}

Result Walker::called(Invocation& invocation) {
  const FunctionDecl* callee = invocation.callee;
  SourceRange range = invocation.expr->getSourceRange();
  unit_.called.insert(callee->getCanonicalDecl());
  if (const FunctionDecl* pattern = callee->getTemplateInstantiationPattern(); pattern && unit_.in_scope(pattern->getLocation()))
    unit_.instances.push_back(const_cast<FunctionDecl*>(callee));
  Call call;
  call.callee = key_of(callee);
  call.name = callee->getNameAsString();
  if (const auto* method = dyn_cast<CXXMethodDecl>(callee); method && method->getParent()->isLambda() && invocation.has_object)
    call.name = brief(invocation.arguments[0].expr->getSourceRange());
  if (const auto* method = dyn_cast<CXXMethodDecl>(callee)) {
    const auto* member = dyn_cast<CXXMemberCallExpr>(invocation.expr);
    const auto* access = member ? dyn_cast<MemberExpr>(member->getCallee()->IgnoreParens()) : nullptr;
    call.dispatched = method->isVirtual() && !(access && access->hasQualifier()) && !method->hasAttr<FinalAttr>() &&
                      !method->getParent()->hasAttr<FinalAttr>();
  }
  std::size_t first = invocation.has_object ? 1 : 0;
  if (first) bind(call, "this", invocation.arguments[0]);
  for (std::size_t i = first; i < invocation.arguments.size(); ++i) bind(call, "p" + std::to_string(i - first), invocation.arguments[i]);
  // What the phrases of a written argument say holds after the call.
  struct Written {
    ValueId id;
    Place place;
    std::string formal;
  };
  std::vector<Written> written;
  std::map<std::string, int> uses;
  for (std::size_t i = 0; i < invocation.arguments.size(); ++i) {
    const Argument& argument = invocation.arguments[i];
    if (!argument.result.place) continue;
    ++uses[argument.result.place->path];
    if (!argument.writable || argument.result.place->offset != -1) continue;
    auto found = now_.groups.find(argument.result.place->path);
    if (found != now_.groups.end() && found->second.base != ValueId::none && found->second.changed)
      written.push_back({found->second.base, *argument.result.place, i < first ? "this" : "p" + std::to_string(i - first)});
  }
  Result result;
  Binding binding;
  binding.formal = isa<CXXConstructorDecl>(callee) ? "this" : "return";
  binding.text = brief(range);
  TypeFacts facts = unit_.types.of(unit_.types.bare(invocation.type));
  if (facts.group || facts.shape == Shape::pose || facts.shape == Shape::quaternion) {
    Value like = unit_.types.value(unit_.types.bare(invocation.type), brief(range), span(range));
    result.value = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
    binding.after = result.value;
    call.bindings.push_back(binding);
  } else if (unit_.types.is_number(invocation.type)) {
    result.number = fresh_number();
  } else if (!invocation.type->isVoidType()) {
    Place place{"t" + std::to_string(++numbers_), unit_.types.bare(invocation.type), nullptr, -1, 0, {}, ""};
    result.place = place;
    binding.after = Snapshot{place.path, epoch(place.path), {}};
    call.bindings.push_back(binding);
  }
  Operation& op = recorder_.operation(OperationKind::call, ValueId::none, {}, span(range), brief(range));
  op.item = std::uint32_t(recorder_.function.calls.size());
  recorder_.function.calls.push_back(std::move(call));
  std::uint32_t index = op.item;
  for (const Written& w : written) {
    if (uses[w.place.path] > 1) continue;
    std::size_t before = recorder_.function.holds.size();
    hold(w.id, w.place, range, false, recorder_.at(w.id).text);
    for (std::size_t i = before; i < recorder_.function.holds.size(); ++i) {
      recorder_.function.holds[i].call = int(index);
      recorder_.function.holds[i].formal = w.formal;
    }
  }
  return result;
}

}  // namespace dextral::gather
