// Statements: control flow without loops, and declarations.
#include <algorithm>

#include "gather/walker.h"

namespace dextral::gather {

using namespace clang;

void Walker::statement(const Stmt* statement) {
  if (!statement || now_.dead) return;
  if (const auto* expr = dyn_cast<Expr>(statement)) {
    evaluate(expr);
    return;
  }
  switch (statement->getStmtClass()) {
    case Stmt::CompoundStmtClass:
      for (const Stmt* child : cast<CompoundStmt>(statement)->body()) this->statement(child);
      return;
    case Stmt::DeclStmtClass:
      for (const Decl* decl : cast<DeclStmt>(statement)->decls()) {
        if (const auto* binding = dyn_cast<DecompositionDecl>(decl)) structured_binding(binding);
        else if (const auto* variable = dyn_cast<VarDecl>(decl)) declare(variable);
      }
      return;
    case Stmt::IfStmtClass: return branch(cast<IfStmt>(statement));
    case Stmt::SwitchStmtClass: return select(cast<SwitchStmt>(statement));
    case Stmt::ForStmtClass: {
      const auto* loop = cast<ForStmt>(statement);
      if (unrolled(loop)) return;
      this->statement(loop->getInit());
      return this->loop(loop, loop->getCond(), loop->getInc(), loop->getBody());
    }
    case Stmt::WhileStmtClass: return loop(statement, cast<WhileStmt>(statement)->getCond(), nullptr, cast<WhileStmt>(statement)->getBody());
    case Stmt::DoStmtClass: {
      const auto* loop = cast<DoStmt>(statement);
      Expr::EvalResult once;
      if (!loop->getCond()->isValueDependent() && loop->getCond()->EvaluateAsRValue(once, unit_.ast) && once.Val.isInt() && once.Val.getInt() == 0)
        return this->statement(loop->getBody());
      return this->loop(loop, loop->getCond(), nullptr, loop->getBody());
    }
    case Stmt::CXXForRangeStmtClass: {
      const auto* range = cast<CXXForRangeStmt>(statement);
      if (range->getInit()) this->statement(range->getInit());
      return loop(range, nullptr, nullptr, range->getBody(), range);
    }
    case Stmt::ReturnStmtClass: return returned(cast<ReturnStmt>(statement));
    case Stmt::BreakStmtClass:
    case Stmt::ContinueStmtClass:
      if (!breaks_.empty()) breaks_.back().push_back(now_);
      now_.dead = true;
      return;
    case Stmt::GotoStmtClass: now_.dead = true; return;
    case Stmt::LabelStmtClass: return this->statement(cast<LabelStmt>(statement)->getSubStmt());
    case Stmt::AttributedStmtClass: return this->statement(cast<AttributedStmt>(statement)->getSubStmt());
    case Stmt::CXXTryStmtClass: {
      const auto* attempt = cast<CXXTryStmt>(statement);
      Environment before = now_;
      this->statement(attempt->getTryBlock());
      std::vector<Environment> ends{now_};
      for (unsigned i = 0; i < attempt->getNumHandlers(); ++i) {
        now_ = before;
        this->statement(attempt->getHandler(i)->getHandlerBlock());
        ends.push_back(now_);
      }
      return join(ends, statement);
    }
    default: children(statement);
  }
}

void Walker::declare(const VarDecl* variable) {
  if (variable->isInvalidDecl() || variable->getType()->isDependentType()) return;
  std::string path = path_of(variable);
  now_.aliases.erase(variable);
  if (!variable->isStaticLocal()) forget_below(path);
  const Expr* init = variable->getInit();
  Place place = place_of(variable);
  bool refers = variable->getType()->isReferenceType() || variable->getType()->isPointerType();
  if (!init) return;
  std::set<std::string> reads;
  std::set<std::string>* outer = std::exchange(reads_, nullptr);
  Result from = evaluate(init);
  if (from.place && unit_.types.is_number(init->getType()) && !refers) from.number = number(from, init);
  reads_ = outer;
  if (refers && from.place) {
    now_.aliases[variable] = *from.place;
    if (!unit_.phrases.of(variable).empty() && from.place->offset == -1) {
      Place said = *from.place;
      said.decl = variable;
      hold(value(from, init), said, init->getSourceRange(), false, variable->getNameAsString());
    }
    return;
  }
  bool nothing = isa<CXXConstructExpr>(init->IgnoreImplicit()) && cast<CXXConstructExpr>(init->IgnoreImplicit())->getNumArgs() == 0;
  if (nothing && !from.place && !from.object) return;
  QualType type = variable->getType().getNonReferenceType();
  place.type = type;
  assign(place, from, init, SourceRange(variable->getLocation(), init->getEndLoc()));
  auto found = now_.groups.find(place.path);
  if (place.offset == -1 && found != now_.groups.end() && found->second.base != ValueId::none)
    recorder_.function.declarations.push_back({found->second.base, variable->getNameAsString(), unit_.source.span(variable->getSourceRange()),
                                               recorder_.at(found->second.base).rotation});
}

void Walker::structured_binding(const DecompositionDecl* decl) {
  declare(decl);
  for (const BindingDecl* binding : decl->bindings())
    if (const VarDecl* holding = binding->getHoldingVar()) declare(holding);
}

void Walker::branch(const IfStmt* statement) {
  if (statement->getInit()) this->statement(statement->getInit());
  if (const VarDecl* variable = statement->getConditionVariable()) declare(variable);
  if (statement->isConstexpr()) {
    if (auto taken = statement->getNondiscardedCase(unit_.ast)) {
      if (*taken) this->statement(*taken);
      return;
    }
  }
  Result condition = evaluate(statement->getCond());
  if (!frames_.empty()) ++frames_.back().branches;
  Environment before = now_;
  const std::uint32_t arm = 2 * branches_++;
  recorder_.arms.push_back(arm);
  this->statement(statement->getThen());
  recorder_.arms.back() = arm + 1;
  Environment yes = std::exchange(now_, std::move(before));
  if (statement->getElse()) this->statement(statement->getElse());
  // After a branch that leaves, the rest is its other arm.
  if (!yes.dead || now_.dead) recorder_.arms.pop_back();
  join({std::move(yes), now_}, statement);
}

void Walker::select(const SwitchStmt* statement) {
  if (statement->getInit()) this->statement(statement->getInit());
  evaluate(statement->getCond());
  if (!frames_.empty()) ++frames_.back().branches;
  Environment before = now_;
  breaks_.emplace_back();
  bool has_default = false;
  now_.dead = true;
  const auto* body = dyn_cast<CompoundStmt>(statement->getBody());
  std::vector<const Stmt*> list;
  if (body) list.assign(body->body_begin(), body->body_end());
  else list.push_back(statement->getBody());
  for (const Stmt* child : list) {
    bool label = false;
    while (const auto* at = dyn_cast<SwitchCase>(child)) {
      has_default |= isa<DefaultStmt>(at);
      label = true;
      child = at->getSubStmt();
    }
    if (label) join({now_, before}, statement);
    this->statement(child);
  }
  std::vector<Environment> ends = std::move(breaks_.back());
  breaks_.pop_back();
  ends.push_back(now_);
  if (!has_default) ends.push_back(before);
  join(ends, statement);
}

}  // namespace dextral::gather
