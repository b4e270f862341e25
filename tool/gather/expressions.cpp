// Expressions: from Clang's tree to results.
#include "gather/walker.h"

namespace dextral::gather {

using namespace clang;

namespace {
constexpr unsigned kMostInitialisers = 32;
}

void Walker::children(const Stmt* statement) {
  for (const Stmt* child : statement->children()) {
    if (const auto* expr = dyn_cast_or_null<Expr>(child)) evaluate(expr);
    else if (child) this->statement(child);
  }
}

Result Walker::result_of(ValueId id) {
  Result result;
  result.value = id;
  return result;
}

bool Walker::literal(const Result& result) const {
  return result.literal || (result.place && is_literal_group(*result.place)) ||
         (!result.elements.empty() && is_literal(result.elements));
}

Polynomial Walker::number(const Result& result, const Expr* expr) {
  if (result.number) return result.number->known() ? *result.number : fresh_number();
  if (result.place) return read_number(*result.place, expr ? expr->getSourceRange() : SourceRange());
  if (result.elements.size() == 1) return result.elements[0];
  return fresh_number();
}

ValueId Walker::value(const Result& result, const Expr* expr) {
  if (result.value != ValueId::none) return result.value;
  SourceRange range = expr ? expr->getSourceRange() : SourceRange();
  if (result.place) {
    if (result.place->offset == -1 && unit_.types.is_number(result.place->type)) return ValueId::none;
    return read(*result.place, range);
  }
  if (!result.elements.empty()) return assembled(result.elements, expr ? expr->getType() : QualType(), range, brief(range));
  if (result.literal && expr) {
    Value like = unit_.types.value(expr->getType(), brief(range), span(range));
    return recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
  }
  return ValueId::none;
}

std::optional<int> Walker::integer(const Result& result, const Expr* expr) {
  std::optional<double> constant = number(result, expr).constant();
  if (!constant || *constant != int(*constant)) return std::nullopt;
  return int(*constant);
}

Operand Walker::operand(const Result& result, const Expr* expr) {
  Operand operand{value(result, expr), {}, ""};
  if (!expr) return operand;
  SourceRange range = expr->getSourceRange();
  operand.text = unit_.source.text(range);
  if (operand.text.size() > 160 || operand.text.find('\n') != std::string::npos) operand.text = brief(range);
  else if (!unit_.source.in_macro(range) && depth_ == 0) operand.span = unit_.source.span(range);
  if (operand.text.empty() && operand.value != ValueId::none) operand.text = recorder_.at(operand.value).text;
  return operand;
}

ValueId Walker::assembled(std::vector<Polynomial> elements, QualType type, SourceRange range, const std::string& text) {
  Group group;
  group.elements = std::move(elements);
  group.like = type.isNull() ? Value{Shape::unknown, false, text, "", span(range)} : unit_.types.value(type, text, span(range));
  if (type.isNull() || group.like.shape == Shape::unknown)
    group.like.shape = group.elements.size() == 3 ? Shape::vector : group.elements.size() == 9 ? Shape::matrix : Shape::unknown;
  group.span = span(range);
  group.text = brief(range);
  return assemble(recorder_, group);
}

Result Walker::evaluate(const Expr* expr) {
  if (!expr || expr->isTypeDependent() || expr->isValueDependent()) return {};
  return evaluate_plain(expr);
}

Result Walker::evaluate_plain(const Expr* expr) {
  switch (expr->getStmtClass()) {
    case Stmt::ParenExprClass: return evaluate(cast<ParenExpr>(expr)->getSubExpr());
    case Stmt::ExprWithCleanupsClass:
    case Stmt::ConstantExprClass: return evaluate(cast<FullExpr>(expr)->getSubExpr());
    case Stmt::MaterializeTemporaryExprClass: return evaluate(cast<MaterializeTemporaryExpr>(expr)->getSubExpr());
    case Stmt::CXXBindTemporaryExprClass: return evaluate(cast<CXXBindTemporaryExpr>(expr)->getSubExpr());
    case Stmt::SubstNonTypeTemplateParmExprClass: return evaluate(cast<SubstNonTypeTemplateParmExpr>(expr)->getReplacement());
    case Stmt::CXXDefaultArgExprClass: return evaluate(cast<CXXDefaultArgExpr>(expr)->getExpr());
    case Stmt::CXXDefaultInitExprClass: return evaluate(cast<CXXDefaultInitExpr>(expr)->getExpr());
    case Stmt::CompoundLiteralExprClass: return evaluate(cast<CompoundLiteralExpr>(expr)->getInitializer());
    case Stmt::OpaqueValueExprClass: return evaluate(cast<OpaqueValueExpr>(expr)->getSourceExpr());
    case Stmt::ImplicitCastExprClass:
    case Stmt::CStyleCastExprClass:
    case Stmt::CXXStaticCastExprClass:
    case Stmt::CXXFunctionalCastExprClass:
    case Stmt::CXXConstCastExprClass:
    case Stmt::CXXReinterpretCastExprClass:
    case Stmt::CXXDynamicCastExprClass: {
      const auto* cast = llvm::cast<CastExpr>(expr);
      Result result = evaluate(cast->getSubExpr());
      // A pointer seen as a pointer to something else is another thing.
      if (cast->getCastKind() == CK_BitCast && result.place && !isa<ImplicitCastExpr>(expr)) {
        if (!unit_.types.of(expr->getType()).group) return {};
      }
      if (result.number && expr->getType()->isIntegerType() && cast->getCastKind() == CK_FloatingToIntegral) result.number = fresh_number();
      return result;
    }
    case Stmt::DeclRefExprClass: return reference(cast<DeclRefExpr>(expr));
    case Stmt::MemberExprClass: return member_access(cast<MemberExpr>(expr));
    case Stmt::CXXThisExprClass: {
      Result result;
      if (this_) result.place = this_;
      else result.place = Place{"this", expr->getType()->getPointeeType(), nullptr, -1, 0, {}, ""};
      return result;
    }
    case Stmt::ArraySubscriptExprClass: return subscript(cast<ArraySubscriptExpr>(expr));
    case Stmt::UnaryOperatorClass: return unary(cast<UnaryOperator>(expr));
    case Stmt::CompoundAssignOperatorClass: return compound(cast<CompoundAssignOperator>(expr));
    case Stmt::BinaryOperatorClass: return binary(cast<BinaryOperator>(expr));
    case Stmt::CXXRewrittenBinaryOperatorClass: return evaluate(cast<CXXRewrittenBinaryOperator>(expr)->getSemanticForm());
    case Stmt::ConditionalOperatorClass:
    case Stmt::BinaryConditionalOperatorClass: return conditional(cast<AbstractConditionalOperator>(expr));
    case Stmt::IntegerLiteralClass: {
      Result result;
      result.number = Polynomial(double(cast<IntegerLiteral>(expr)->getValue().getLimitedValue(1u << 30)));
      return result;
    }
    case Stmt::FloatingLiteralClass: {
      Result result;
      result.number = Polynomial(cast<FloatingLiteral>(expr)->getValueAsApproximateDouble());
      return result;
    }
    case Stmt::InitListExprClass: return list(cast<InitListExpr>(expr));
    case Stmt::CXXStdInitializerListExprClass: return evaluate(cast<CXXStdInitializerListExpr>(expr)->getSubExpr());
    case Stmt::CXXConstructExprClass:
    case Stmt::CXXTemporaryObjectExprClass: return construct(cast<CXXConstructExpr>(expr));
    case Stmt::CallExprClass:
    case Stmt::CXXMemberCallExprClass:
    case Stmt::CXXOperatorCallExprClass: return call(cast<CallExpr>(expr));
    case Stmt::LambdaExprClass: return lambda(cast<LambdaExpr>(expr));
    case Stmt::ImplicitValueInitExprClass:
    case Stmt::CXXScalarValueInitExprClass: {
      Result result;
      if (unit_.types.is_number(expr->getType())) result.number = Polynomial(0.0);
      else result.literal = true;
      return result;
    }
    case Stmt::UnaryExprOrTypeTraitExprClass: return {};
    case Stmt::ArrayInitLoopExprClass: return evaluate(cast<ArrayInitLoopExpr>(expr)->getCommonExpr()->getSourceExpr());
    case Stmt::CXXThrowExprClass:
      children(expr);
      now_.dead = true;
      return {};
    default: children(expr); return {};
  }
}

Result Walker::reference(const DeclRefExpr* expr) {
  Result result;
  if (const auto* constant = dyn_cast<EnumConstantDecl>(expr->getDecl())) {
    result.number = Polynomial(double(whole_number(constant->getInitVal())));
    return result;
  }
  if (const auto* binding = dyn_cast<BindingDecl>(expr->getDecl())) {
    if (const VarDecl* holding = binding->getHoldingVar()) result.place = place_of(holding);
    else if (binding->getBinding()) return evaluate(binding->getBinding());
    return result;
  }
  const auto* variable = dyn_cast<VarDecl>(expr->getDecl());
  if (!variable) return {};
  // Named constants are their values.
  if (unit_.types.is_number(variable->getType()) && variable->getType().isConstQualified() && !isa<ParmVarDecl>(variable) &&
      variable->getAnyInitializer() && !now_.numbers.contains(path_of(variable)) && !variable->getAnyInitializer()->isValueDependent()) {
    Expr::EvalResult evaluated;
    if (variable->getAnyInitializer()->EvaluateAsRValue(evaluated, unit_.ast)) {
      if (evaluated.Val.isInt()) result.number = Polynomial(double(whole_number(evaluated.Val.getInt())));
      if (evaluated.Val.isFloat()) result.number = Polynomial(evaluated.Val.getFloat().convertToDouble());
      if (result.number) return result;
    }
  }
  result.place = place_of(variable);
  return result;
}

Result Walker::member_access(const MemberExpr* expr) {
  Result base = evaluate(expr->getBase());
  const auto* field = dyn_cast<FieldDecl>(expr->getMemberDecl());
  Result result;
  if (!field) {
    if (const auto* variable = dyn_cast<VarDecl>(expr->getMemberDecl())) result.place = place_of(variable);
    return result;
  }
  if (auto modelled = modelled_field(expr, field, base)) return *modelled;
  if (base.place) {
    result.place = member(*base.place, field);
    return result;
  }
  int index = unit_.types.index(field);
  if (base.value != ValueId::none && index >= 0 && unit_.types.is_number(field->getType())) {
    result.number = Polynomial(Atom{base.value, std::uint32_t(index)});
    return result;
  }
  if (base.object) {
    // A part of a temporary: give the temporary a place.
    Place place{"t" + std::to_string(++numbers_), unit_.types.bare(expr->getBase()->getType()), nullptr, -1, 0, {}, ""};
    write_object(place, *base.object);
    result.place = member(place, field);
  }
  return result;
}

// A public member that a library model speaks of: the rotation or the origin
// of a pose.
std::optional<Result> Walker::modelled_field(const MemberExpr* expr, const FieldDecl* field, const Result& base) {
  const auto* models = unit_.project.models.functions(Types::name(field));
  if (!models || models->empty()) return std::nullopt;
  const std::string& is = models->front().is;
  if (is != "copy" && is != "translation") return std::nullopt;
  OperationKind kind = is == "copy" ? OperationKind::copy : OperationKind::translation;
  Result result;
  SourceRange range = expr->getSourceRange();
  Operand whole = operand(base, expr->getBase());
  if (whole.value == ValueId::none) return result;
  Value like = unit_.types.value(expr->getType(), brief(range), span(range));
  result.value = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
  recorder_.operation(kind, result.value, {whole}, span(range), brief(range));
  if (base.place && base.place->offset == -1) {
    View view{*base.place, kind, 0};
    view.base.type = unit_.types.bare(view.base.type);
    result.view = view;
  }
  return result;
}

Result Walker::subscript(const ArraySubscriptExpr* expr) {
  Result base = evaluate(expr->getBase());
  Polynomial index = number(evaluate(expr->getIdx()), expr->getIdx());
  Result result;
  if (base.place) result.place = element(*base.place, index, expr->getType());
  else if (base.value != ValueId::none && index.constant() && unit_.types.is_number(expr->getType()))
    result.number = Polynomial(Atom{base.value, std::uint32_t(*index.constant())});
  return result;
}

Result Walker::unary(const UnaryOperator* expr) {
  Result operand = evaluate(expr->getSubExpr());
  Result result;
  switch (expr->getOpcode()) {
    case UO_AddrOf: case UO_Deref: case UO_Plus: case UO_Extension: return operand;
    case UO_Minus:
      if (unit_.types.is_number(expr->getType())) result.number = -number(operand, expr->getSubExpr());
      return result;
    case UO_PreInc: case UO_PreDec: case UO_PostInc: case UO_PostDec: {
      if (!operand.place || !unit_.types.is_number(expr->getType())) {
        if (operand.place) forget(*operand.place);
        return {};
      }
      Polynomial before = read_number(*operand.place, expr->getSourceRange());
      Polynomial after = before + Polynomial(expr->isIncrementOp() ? 1.0 : -1.0);
      write_number(*operand.place, after, expr->getSourceRange());
      result.number = expr->isPrefix() ? after : before;
      return result;
    }
    default:
      result.number = fresh_number();
      return result;
  }
}

Result Walker::arithmetic(BinaryOperatorKind op, const Result& left, const Result& right, const Expr* expr) {
  Result result;
  // Pointer arithmetic: a slice.
  if (expr->getType()->isPointerType()) {
    if (!left.place) return {};
    auto offset = number(right, nullptr).constant();
    if (!offset || op != BO_Add) return {};
    Place place = *left.place;
    if (*offset != 0) {
      place.path += "[" + std::to_string(int(*offset)) + "+]";
      place.offset = -1;
      place.whole = {};
    }
    result.place = place;
    return result;
  }
  if (!unit_.types.is_number(expr->getType())) return {};
  Polynomial a = number(left, nullptr), b = number(right, nullptr);
  switch (op) {
    case BO_Add: result.number = a + b; break;
    case BO_Sub: result.number = a - b; break;
    case BO_Mul: result.number = a * b; break;
    case BO_Div: {
      auto by = b.constant();
      if (by && *by != 0 && !expr->getType()->isIntegerType()) result.number = a * Polynomial(1.0 / *by);
      else if (by && *by != 0 && a.constant()) result.number = Polynomial(double(int(*a.constant()) / int(*by)));
      else result.number = b.known() ? a * named_number("1/(" + describe(b) + ")") : fresh_number();
      break;
    }
    case BO_Rem: {
      auto x = a.constant(), y = b.constant();
      result.number = x && y && *y != 0 ? Polynomial(double(int(*x) % int(*y))) : fresh_number();
      break;
    }
    default: result.number = fresh_number();
  }
  if (!result.number->known()) result.number = fresh_number();
  return result;
}

Result Walker::binary(const BinaryOperator* expr) {
  if (expr->getOpcode() == BO_Comma) {
    evaluate(expr->getLHS());
    return evaluate(expr->getRHS());
  }
  if (!expr->isAssignmentOp()) {
    Result left = evaluate(expr->getLHS());
    Result right = evaluate(expr->getRHS());
    if (left.place && unit_.types.is_number(expr->getLHS()->getType())) left.number = number(left, expr->getLHS());
    if (right.place && unit_.types.is_number(expr->getRHS()->getType())) right.number = number(right, expr->getRHS());
    return arithmetic(expr->getOpcode(), left, right, expr);
  }
  std::set<std::string> reads;
  std::set<std::string>* outer = std::exchange(reads_, &reads);
  Result from = evaluate(expr->getRHS());
  if (from.place && unit_.types.is_number(expr->getRHS()->getType())) from.number = number(from, expr->getRHS());
  Result to = evaluate(expr->getLHS());
  if (to.place) {
    // A pointer variable that is made to point elsewhere.
    const auto* target = dyn_cast<DeclRefExpr>(expr->getLHS()->IgnoreParenImpCasts());
    if (expr->getType()->isPointerType() && target && isa<VarDecl>(target->getDecl())) {
      const auto* variable = cast<VarDecl>(target->getDecl());
      now_.aliases.erase(variable);
      if (from.place) now_.aliases[variable] = *from.place;
      else forget(place_of(variable));
    } else {
      assign(*to.place, from, expr->getRHS(), expr->getSourceRange());
    }
  }
  if (auto dot = from.number ? as_dot(recorder_, *from.number) : std::nullopt)
    recorder_.operation(OperationKind::dot, ValueId::none,
                        {{dot->first, {}, recorder_.at(dot->first).text}, {dot->second, {}, recorder_.at(dot->second).text}},
                        span(expr->getSourceRange()), brief(expr->getSourceRange()));
  reads_ = outer;
  if (outer) outer->insert(reads.begin(), reads.end());
  return to;
}

Result Walker::compound(const CompoundAssignOperator* expr) {
  Result from = evaluate(expr->getRHS());
  if (from.place && unit_.types.is_number(expr->getRHS()->getType())) from.number = number(from, expr->getRHS());
  Result to = evaluate(expr->getLHS());
  if (!to.place) return to;
  if (expr->getType()->isPointerType()) {
    forget(*to.place);
    return to;
  }
  BinaryOperatorKind op = BinaryOperator::getOpForCompoundAssignment(expr->getOpcode());
  Result now;
  now.number = read_number(*to.place, expr->getLHS()->getSourceRange());
  Result result = arithmetic(op, now, from, expr);
  write_number(*to.place, number(result, expr), expr->getSourceRange());
  return to;
}

Result Walker::conditional(const AbstractConditionalOperator* expr) {
  evaluate(expr->getCond());
  Environment before = now_;
  Result yes = evaluate(expr->getTrueExpr());
  bool number = unit_.types.is_number(expr->getType());
  bool grouped = unit_.types.of(expr->getType()).group && !expr->getType()->isPointerType();
  ValueId a = !number && (grouped || yes.value != ValueId::none) && !literal(yes) ? value(yes, expr->getTrueExpr()) : ValueId::none;
  Environment after_yes = std::exchange(now_, before);
  Result no = evaluate(expr->getFalseExpr());
  ValueId b = !number && (grouped || no.value != ValueId::none) && !literal(no) ? value(no, expr->getFalseExpr()) : ValueId::none;
  Environment after_no = std::exchange(now_, before);
  join({after_yes, after_no}, expr);
  Result result;
  if (number) {
    result.number = fresh_number();
    return result;
  }
  if (a == ValueId::none && b == ValueId::none) {
    if (yes.place && no.place && yes.place->path == no.place->path) return yes;
    result.literal = literal(yes) && literal(no);
    return result;
  }
  std::vector<Operand> operands;
  for (ValueId id : {a, b})
    if (id != ValueId::none) operands.push_back({id, {}, recorder_.at(id).text});
  const Value like = recorder_.at(operands[0].value);
  result.value = recorder_.value(like.shape, like.rotation, brief(expr->getSourceRange()), span(expr->getSourceRange()), like.inverse_form);
  recorder_.operation(OperationKind::join, result.value, operands, span(expr->getSourceRange()), brief(expr->getSourceRange()));
  return result;
}

std::vector<Polynomial> Walker::flatten(const InitListExpr* list) {
  std::vector<Polynomial> elements;
  for (const Expr* init : list->inits()) {
    const Expr* plain = init->IgnoreImplicit();
    if (const auto* inner = dyn_cast<InitListExpr>(plain)) {
      for (Polynomial& p : flatten(inner)) elements.push_back(std::move(p));
      continue;
    }
    Result result = evaluate(init);
    int count = unit_.types.is_number(init->getType()) ? 1 : unit_.types.of(init->getType()).numbers;
    if (count == 1) {
      elements.push_back(number(result, init));
      continue;
    }
    ValueId id = literal(result) ? ValueId::none : value(result, init);
    for (int i = 0; i < count; ++i)
      elements.push_back(id == ValueId::none ? Polynomial(0.0) : Polynomial(Atom{id, std::uint32_t(i)}));
  }
  if (list->hasArrayFiller() || list->getNumInits() == 0) {
    int size = unit_.types.of(list->getType()).numbers;
    while (int(elements.size()) < size) elements.push_back(Polynomial(0.0));
  }
  return elements;
}

Result Walker::list(const InitListExpr* expr) {
  if (expr->isSyntacticForm() && expr->getSemanticForm()) expr = expr->getSemanticForm();
  TypeFacts facts = unit_.types.of(expr->getType());
  Result result;
  if (expr->getNumInits() > kMostInitialisers) return {};  // a table
  if (facts.shape == Shape::number) {
    if (expr->getNumInits() == 1) return evaluate(expr->getInit(0));
    result.number = Polynomial(0.0);
    return result;
  }
  if (facts.group && !facts.model) {
    result.elements = flatten(expr);
    if (int(result.elements.size()) != facts.numbers) result.elements.clear();
    return result;
  }
  if (expr->getNumInits() == 1 && expr->isTransparent()) return evaluate(expr->getInit(0));
  // An object: each member is assigned.
  const auto* record = expr->getType()->getAs<RecordType>();
  Place place{"t" + std::to_string(++numbers_), expr->getType(), nullptr, -1, 0, {}, ""};
  unsigned i = 0;
  if (record && !record->getDecl()->isUnion()) {
    if (const auto* cxx = dyn_cast<CXXRecordDecl>(record->getDecl())) i = cxx->getNumBases();
    for (const FieldDecl* field : record->getDecl()->fields()) {
      if (i >= expr->getNumInits()) break;
      const Expr* init = expr->getInit(i++);
      if (!init || isa<ImplicitValueInitExpr>(init)) continue;
      Result from = evaluate(init);
      if (auto to = member(place, field)) assign(*to, from, init, init->getSourceRange());
    }
    result.object = snapshot(place);
    return result;
  }
  if (unit_.ast.getAsArrayType(expr->getType())) {
    for (unsigned k = 0; k < expr->getNumInits(); ++k) {
      const Expr* init = expr->getInit(k);
      Result from = evaluate(init);
      if (auto to = element(place, Polynomial(double(k)), init->getType())) assign(*to, from, init, init->getSourceRange());
    }
    result.object = snapshot(place);
    return result;
  }
  children(expr);
  return {};
}

// The body is read once where it stands; calls of it are read at the call.
Result Walker::lambda(const LambdaExpr* expr) {
  for (const Expr* init : expr->capture_inits())
    if (init && !isa<DeclRefExpr>(init->IgnoreImplicit())) evaluate(init);
  Environment before = now_;
  frames_.push_back({});
  frames_.back().branches = 1;  // what it returns is not followed
  statement(expr->getBody());
  frames_.pop_back();
  now_ = std::move(before);
  for (const std::string& path : written_in(expr->getBody())) forget_below(path);
  return {};
}

}  // namespace dextral::gather
