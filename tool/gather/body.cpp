// Entry and exit of a function: parameters, results, contracts.
#include <algorithm>

#include "gather/walker.h"

namespace dextral::gather {

using namespace clang;

Function Walker::run() {
  Function& f = recorder_.function;
  f.key = key_of(function_);
  f.name = Types::name(function_);
  f.span = unit_.source.span(SourceRange(function_->getLocation()));
  f.template_instance = function_->isTemplateInstantiation();
  for (const ParmVarDecl* parameter : function_->parameters()) f.parameter_names.push_back(parameter->getNameAsString());
  if (const auto* method = dyn_cast<CXXMethodDecl>(function_))
    for (const CXXMethodDecl* base : method->overridden_methods()) f.overrides.push_back(key_of(base));
  if (!function_->doesThisDeclarationHaveABody() || !function_->getBody()) {
    contract_only();
    return std::move(f);
  }
  f.body = true;
  enter();
  if (const auto* constructor = dyn_cast<CXXConstructorDecl>(function_)) constructor_initialisers(constructor);
  statement(function_->getBody());
  leave();
  return std::move(f);
}

// Parameters are read where the body reads them; those with a phrase at once.
void Walker::enter() {
  for (const ParmVarDecl* parameter : function_->parameters()) {
    TypeFacts facts = unit_.types.of(parameter->getType());
    if (!facts.group && facts.shape != Shape::pose && facts.shape != Shape::quaternion) continue;
    bool input = !parameter->getType()->isPointerType() && !parameter->getType()->isLValueReferenceType();
    bool constant = !input && parameter->getType()->isReferenceType() && parameter->getType().getNonReferenceType().isConstQualified();
    Place place = place_of(parameter);
    if (!input && !constant) continue;
    ValueId id = read(place, SourceRange(parameter->getLocation()));
    if (id != ValueId::none)
      recorder_.function.declarations.push_back({id, parameter->getNameAsString(), unit_.source.span(parameter->getSourceRange()), recorder_.at(id).rotation});
  }
}

// What a call has written that nobody understands is still what the parameter's
// phrase says; not where the function has read it before, since then the phrase
// may speak of what went in.
void Walker::hold_outputs() {
  for (const ParmVarDecl* parameter : function_->parameters()) {
    const bool by_place = parameter->getType()->isReferenceType() || parameter->getType()->isPointerType();
    const Place place = place_of(parameter);
    if (!by_place || place.path != path_of(parameter) || epoch(place.path) == 0 || said_of(place).empty()) continue;
    const auto& readings = recorder_.function.readings;
    const bool read_before = std::any_of(readings.begin(), readings.end(), [&](const Reading& r) { return r.path == place.path && r.epoch == 0; });
    if (!read_before && !now_.groups.contains(place.path) && unit_.types.of(place.type).group) read_whole(place, parameter->getSourceRange());
  }
}

void Walker::leave() {
  std::vector<std::string> paths;
  for (const auto& [path, state] : now_.groups) paths.push_back(path);
  for (const std::string& path : paths) settle(path);
  // A field or parameter that was updated from itself is what its phrase says at the end.
  for (const std::string& path : paths) {
    GroupState state = now_.groups[path];
    const auto* parameter = dyn_cast_or_null<ParmVarDecl>(state.place.decl);
    bool by_value = parameter && !parameter->getType()->isReferenceType() && !parameter->getType()->isPointerType();
    if (state.self_update && state.place.decl && !by_value && path[0] != 'l' && path[0] != 't')
      hold(state.base, state.place, state.range, true, state.place.decl->getNameAsString());
  }
  hold_outputs();
  auto& exits = recorder_.function.exits;
  for (const ParmVarDecl* parameter : function_->parameters()) {
    Place place{"p" + std::to_string(parameter->getFunctionScopeIndex()), parameter->getType(), nullptr, -1, 0, {}, ""};
    bool by_place = parameter->getType()->isReferenceType() || parameter->getType()->isPointerType();
    if (by_place) exits.emplace_back(place.path, snapshot(place));
  }
  if (const auto* method = dyn_cast<CXXMethodDecl>(function_); method && !method->isStatic())
    exits.emplace_back("this", snapshot(Place{"this", {}, nullptr, -1, 0, {}, ""}));
  if (returned_objects_.size() == 1) exits.emplace_back("return", returned_objects_[0]);
  if (returns_.empty()) return;
  ValueId id = returns_[0].value;
  if (returns_.size() > 1) {
    const Value like = recorder_.at(id);
    id = recorder_.value(like.shape, like.rotation, "return", recorder_.function.span, like.inverse_form);
    recorder_.operation(OperationKind::join, id, returns_, recorder_.function.span, recorder_.function.name);
  }
  exits.emplace_back("return", id);
  for (const Said& said : unit_.phrases.of_return(function_))
    hold_return(id, said, returns_.size() > 1 ? said.span : recorder_.at(id).span, true, recorder_.at(id).text);
}

// What the phrases of a declaration promise, for callers.
void Walker::contract_only() {
  Function& f = recorder_.function;
  for (const ParmVarDecl* parameter : function_->parameters()) {
    TypeFacts facts = unit_.types.of(parameter->getType());
    if (!facts.group && facts.shape != Shape::pose && facts.shape != Shape::quaternion) continue;
    Place place = place_of(parameter);
    if (place.offset != -1) continue;
    QualType pointee = parameter->getType()->isReferenceType() ? parameter->getType().getNonReferenceType() : parameter->getType()->getPointeeType();
    bool out = !pointee.isNull() && !pointee.isConstQualified();
    Value like = unit_.types.value(parameter->getType(), parameter->getNameAsString(), unit_.source.span(parameter->getSourceRange()));
    if (!out) {
      read(place, SourceRange(parameter->getLocation()));
      f.exits.emplace_back(place.path, Snapshot{place.path, 0, {}});
      continue;
    }
    ValueId id = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
    hold(id, place, parameter->getSourceRange(), true, like.text);
    f.exits.emplace_back(place.path, id);
  }
  std::vector<Said> said = unit_.phrases.of_return(function_);
  QualType type = unit_.types.bare(function_->getReturnType());
  if (said.empty()) return;
  Value like = unit_.types.value(type, f.name, f.span);
  ValueId id = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
  for (const Said& s : said) hold_return(id, s, f.span, true, f.name);
  f.exits.emplace_back("return", id);
}

void Walker::constructor_initialisers(const CXXConstructorDecl* constructor) {
  Place self = this_ ? *this_ : Place{"this", unit_.ast.getTypeDeclType(constructor->getParent()), nullptr, -1, 0, {}, ""};
  for (const CXXCtorInitializer* initialiser : constructor->inits()) {
    const Expr* init = initialiser->getInit();
    if (!init) continue;
    Result from = evaluate(init);
    if (!initialiser->isAnyMemberInitializer()) continue;
    if (auto to = member(self, initialiser->getAnyMember())) {
      if (isa<CXXConstructExpr>(init->IgnoreImplicit()) && cast<CXXConstructExpr>(init->IgnoreImplicit())->getNumArgs() == 0) continue;
      assign(*to, from, init, init->getSourceRange());
    }
  }
}

void Walker::returned(const ReturnStmt* statement) {
  const Expr* expr = statement->getRetValue();
  if (!expr) {
    now_.dead = true;
    return;
  }
  Result result = evaluate(expr);
  if (!frames_.empty()) {
    Inlining& frame = frames_.back();
    if (frame.returned) ++frame.branches;
    frame.returned = true;
    frame.result = result;
    now_.dead = true;
    return;
  }
  TypeFacts facts = unit_.types.of(unit_.types.bare(function_->getReturnType()));
  SourceRange range = expr->getSourceRange();
  if (facts.group || facts.shape == Shape::pose || facts.shape == Shape::quaternion) {
    std::vector<Said> said = unit_.phrases.of_return(function_);
    if (!literal(result)) {
      Operand operand = this->operand(result, expr);
      if (operand.value != ValueId::none) {
        const Value like = recorder_.at(operand.value);
        ValueId id = recorder_.value(like.shape, like.rotation, operand.text, span(range), like.inverse_form);
        Operation& op = recorder_.operation(OperationKind::copy, id, {operand}, span(range), brief(range));
        op.how = ReasonKind::returned;
        op.target = recorder_.function.name;
        for (const Said& s : said) hold_return(id, s, span(range), false, operand.text);
        returns_.push_back({id, operand.span, operand.text});
      }
    }
  } else if (result.object) {
    returned_objects_.push_back(*result.object);
  } else if (result.place && result.place->offset == -1 && !unit_.types.is_number(function_->getReturnType())) {
    returned_objects_.push_back(snapshot(*result.place));
  }
  now_.dead = true;
}

}  // namespace dextral::gather
