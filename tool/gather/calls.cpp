// Calls: parts reached through operators, inlined accessors, and calls of
// functions with facts of their own. What models say stands in models.cpp.
#include "gather/walker.h"

#include <algorithm>

namespace dextral::gather {

using namespace clang;

namespace {

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

std::string Walker::key_of(const FunctionDecl* function) { return gather::key_of(function); }

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
    // `F.linear() = R` names a part of F and reads nothing of it.
    std::set<std::string> named;
    const bool plain = assignment && cast<CXXOperatorCallExpr>(expr)->getOperator() == OO_Equal;
    std::set<std::string>* kept = std::exchange(reads_, plain ? &named : reads_);
    object.result = evaluate(object.expr);
    reads_ = kept;
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
  // What has a contract is called by it.
  const auto parameters = function->parameters();
  if (std::any_of(parameters.begin(), parameters.end(), [&](const ParmVarDecl* p) { return !unit_.phrases.of(p).empty(); })) return false;
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
  if (result.place) binding.object = result.place->path;
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
