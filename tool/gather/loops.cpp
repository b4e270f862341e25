// Loops: unrolled where they count to a small constant, else walked from a head
// version; and the soft joins where paths meet.
#include <algorithm>

#include "gather/walker.h"

namespace dextral::gather {

using namespace clang;

namespace {

bool below(const std::string& path, const std::string& prefix) {
  return path.compare(0, prefix.size(), prefix) == 0 &&
         (path.size() == prefix.size() || path[prefix.size()] == '.' || path[prefix.size()] == '[');
}

bool leaves_early(const Stmt* statement) {
  if (!statement) return false;
  if (isa<BreakStmt, ContinueStmt, ReturnStmt, GotoStmt>(statement)) return true;
  if (isa<LambdaExpr>(statement)) return false;
  return std::any_of(statement->child_begin(), statement->child_end(), leaves_early);
}

}  // namespace

namespace {

// `for (int i = A; i < B; ++i)` with small constants: the variable and its values.
struct Counted {
  const VarDecl* variable = nullptr;
  int from = 0, to = 0;
};

std::optional<int> constant(const Expr* expr, ASTContext& context) {
  Expr::EvalResult result;
  if (!expr || expr->isValueDependent() || !expr->EvaluateAsInt(result, context)) return std::nullopt;
  return int(whole_number(result.Val.getInt()));
}

const VarDecl* variable_of(const Expr* expr) {
  const auto* reference = expr ? dyn_cast<DeclRefExpr>(expr->IgnoreParenImpCasts()) : nullptr;
  return reference ? dyn_cast<VarDecl>(reference->getDecl()) : nullptr;
}

std::optional<Counted> counted(const ForStmt* loop, ASTContext& context) {
  Counted result;
  const Expr* first = nullptr;
  if (const auto* decl = dyn_cast_or_null<DeclStmt>(loop->getInit()); decl && decl->isSingleDecl()) {
    result.variable = dyn_cast<VarDecl>(decl->getSingleDecl());
    if (result.variable) first = result.variable->getInit();
  } else if (const auto* set = dyn_cast_or_null<BinaryOperator>(loop->getInit()); set && set->getOpcode() == BO_Assign) {
    result.variable = variable_of(set->getLHS());
    first = set->getRHS();
  }
  const auto* condition = dyn_cast_or_null<BinaryOperator>(loop->getCond());
  if (!result.variable || !first || !condition || variable_of(condition->getLHS()) != result.variable) return std::nullopt;
  const Expr* step = loop->getInc();
  if (const auto* increment = dyn_cast_or_null<UnaryOperator>(step)) {
    if (!increment->isIncrementOp() || variable_of(increment->getSubExpr()) != result.variable) return std::nullopt;
  } else if (const auto* add = dyn_cast_or_null<CompoundAssignOperator>(step)) {
    if (add->getOpcode() != BO_AddAssign || variable_of(add->getLHS()) != result.variable || constant(add->getRHS(), context) != 1) return std::nullopt;
  } else {
    return std::nullopt;
  }
  auto from = constant(first, context), to = constant(condition->getRHS(), context);
  if (!from || !to) return std::nullopt;
  result.from = *from;
  switch (condition->getOpcode()) {
    case BO_LT: case BO_NE: result.to = *to; break;
    case BO_LE: result.to = *to + 1; break;
    default: return std::nullopt;
  }
  return result;
}

}  // namespace

bool Walker::unrolled(const ForStmt* loop) {
  auto count = counted(loop, unit_.ast);
  if (!count || count->to - count->from > 9 || count->to <= count->from || leaves_early(loop->getBody())) return false;
  int copies = count->to - count->from;
  if (unrolled_ * copies > 81) return false;
  statement(loop->getInit());
  unrolled_ *= copies;
  Place variable = place_of(count->variable);
  for (int i = count->from; i < count->to; ++i) {
    write_number(variable, Polynomial(double(i)), {});
    statement(loop->getBody());
  }
  write_number(variable, Polynomial(double(count->to)), {});
  unrolled_ /= copies;
  return true;
}

// Paths of what a statement may write, as far as their roots and members go.
std::set<std::string> Walker::written_in(const Stmt* whole) {
  struct Finder : RecursiveASTVisitor<Finder> {
    Walker& walker;
    std::set<std::string> paths;
    explicit Finder(Walker& w) : walker(w) {}

    std::string path(const Expr* expr) {
      expr = expr->IgnoreParenImpCasts();
      if (const auto* reference = dyn_cast<DeclRefExpr>(expr)) {
        const auto* variable = dyn_cast<VarDecl>(reference->getDecl());
        return variable ? walker.place_of(variable).path : "";
      }
      if (isa<CXXThisExpr>(expr)) return walker.this_ ? walker.this_->path : "this";
      if (const auto* member = dyn_cast<MemberExpr>(expr)) {
        std::string base = path(member->getBase());
        const auto* field = dyn_cast<FieldDecl>(member->getMemberDecl());
        if (base.empty() || !field) return base;
        TypeFacts facts = walker.unit_.types.of(walker.unit_.types.bare(member->getBase()->getType()));
        if ((facts.group && !facts.model) || field->isAnonymousStructOrUnion()) return base;
        if (auto slot = walker.unit_.phrases.component(field)) return base + "." + slot->group;
        return base + "." + field->getNameAsString();
      }
      if (const auto* subscript = dyn_cast<ArraySubscriptExpr>(expr)) return path(subscript->getBase());
      if (const auto* unary = dyn_cast<UnaryOperator>(expr)) return path(unary->getSubExpr());
      if (const auto* call = dyn_cast<CXXMemberCallExpr>(expr)) return path(call->getImplicitObjectArgument());
      if (const auto* call = dyn_cast<CXXOperatorCallExpr>(expr)) return call->getNumArgs() ? path(call->getArg(0)) : "";
      return "";
    }
    void add(const Expr* expr) {
      if (std::string p = path(expr); !p.empty()) paths.insert(p);
    }
    bool VisitBinaryOperator(BinaryOperator* op) {
      if (op->isAssignmentOp()) add(op->getLHS());
      return true;
    }
    bool VisitUnaryOperator(UnaryOperator* op) {
      if (op->isIncrementDecrementOp()) add(op->getSubExpr());
      return true;
    }
    bool VisitCallExpr(CallExpr* call) {
      const FunctionDecl* callee = call->getDirectCallee();
      unsigned first = 0;
      if (const auto* member = dyn_cast<CXXMemberCallExpr>(call)) {
        const CXXMethodDecl* method = member->getMethodDecl();
        if (!method || !method->isConst()) add(member->getImplicitObjectArgument());
      } else if (isa<CXXOperatorCallExpr>(call) && isa_and_nonnull<CXXMethodDecl>(callee)) {
        first = 1;
        if (!cast<CXXMethodDecl>(callee)->isConst() && call->getNumArgs()) add(call->getArg(0));
      }
      for (unsigned i = first; i < call->getNumArgs(); ++i) {
        QualType type = callee && i - first < callee->getNumParams() ? callee->getParamDecl(i - first)->getType() : call->getArg(i)->getType();
        bool by_place = type->isLValueReferenceType() || type->isPointerType();
        QualType pointee = type->isReferenceType() ? type.getNonReferenceType() : type->getPointeeType();
        if (by_place && !pointee.isNull() && !pointee.isConstQualified()) add(call->getArg(i));
      }
      return true;
    }
  } finder(*this);
  finder.TraverseStmt(const_cast<Stmt*>(whole));
  return finder.paths;
}

void Walker::loop(const Stmt* whole, const Stmt* condition, const Stmt* step, const Stmt* body, const CXXForRangeStmt* range) {
  std::optional<Place> elements;
  if (range) {
    Result container = evaluate(range->getRangeInit());
    if (container.place) elements = element(*container.place, Polynomial::unknown(), range->getLoopVariable()->getType().getNonReferenceType());
  }
  std::set<std::string> written = written_in(whole);
  struct Head {
    std::string path;
    ValueId value;
    ValueId before;
  };
  std::vector<Head> heads;
  for (const std::string& prefix : written) {
    std::vector<std::string> groups;
    for (const auto& [path, state] : now_.groups)
      if (below(path, prefix)) groups.push_back(path);
    std::map<std::string, GroupState> kept;
    for (const std::string& path : groups) {
      settle(path);
      GroupState state = now_.groups[path];
      const Value like = recorder_.at(state.base);
      Head head{path, recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form),
                state.literal ? ValueId::none : state.base};
      state.base = head.value;
      state.literal = false;
      kept[path] = state;
      heads.push_back(head);
    }
    forget_below(prefix);
    for (auto& [path, state] : kept) now_.groups[path] = state;
  }
  Environment before = now_;
  if (const auto* expr = dyn_cast_or_null<Expr>(condition)) evaluate(expr);
  if (range) {
    const VarDecl* variable = range->getLoopVariable();
    now_.aliases.erase(variable);
    forget_below(path_of(variable));
    if (const auto* binding = dyn_cast<DecompositionDecl>(variable)) {
      if (elements) now_.aliases[binding] = *elements;
    } else if (elements && variable->getType()->isReferenceType()) {
      now_.aliases[variable] = *elements;
    } else if (elements) {
      Result from;
      from.place = *elements;
      assign(place_of(variable), from, nullptr, variable->getSourceRange());
    }
  }
  breaks_.emplace_back();
  statement(body);
  if (const auto* expr = dyn_cast_or_null<Expr>(step); expr && !now_.dead) evaluate(expr);
  std::vector<Environment> ends = std::move(breaks_.back());
  breaks_.pop_back();
  ends.push_back(now_);
  std::vector<Environment*> all_ends{&before};
  for (Environment& end : ends) all_ends.push_back(&end);
  for (const Head& head : heads) {
    std::vector<Operand> operands;
    if (head.before != ValueId::none) operands.push_back({head.before, {}, recorder_.at(head.before).text});
    for (Environment& end : ends) {
      if (end.dead) continue;
      std::swap(now_, end);
      if (now_.groups.contains(head.path)) {
        ValueId id = settle(head.path);
        if (!now_.groups[head.path].literal && id != head.value) operands.push_back({id, {}, recorder_.at(id).text});
      }
      std::swap(now_, end);
    }
    if (operands.empty()) continue;
    Span where = recorder_.at(head.value).span;
    recorder_.operation(OperationKind::join, head.value, operands, where, recorder_.at(head.value).text);
    // What holds inside from the first round on need not hold behind the loop.
    const Value like = recorder_.at(head.value);
    ValueId after = operands.size() == 1 ? operands[0].value : recorder_.value(like.shape, like.rotation, like.text, where, like.inverse_form);
    if (operands.size() > 1) recorder_.operation(OperationKind::join, after, operands, where, like.text);
    for (Environment* end : all_ends)
      if (auto found = end->groups.find(head.path); found != end->groups.end()) {
        found->second.base = after;
        found->second.written.clear();
        found->second.literal = false;
        if (operands.size() > 1) found->second.self_update = false;
      }
  }
  ends.push_back(std::move(before));
  join(ends, whole);
}

void Walker::settle_groups(Environment& environment) {
  std::swap(now_, environment);
  std::vector<std::string> paths;
  for (const auto& [path, state] : now_.groups)
    if (!state.written.empty()) paths.push_back(path);
  for (const std::string& path : paths) settle(path);
  std::swap(now_, environment);
}

// What the living ends agree on stays; what they do not is joined softly.
void Walker::join(const std::vector<Environment>& given, const Stmt* at) {
  std::vector<Environment> ends;
  for (const Environment& end : given)
    if (!end.dead) ends.push_back(end);
  if (ends.empty()) {
    now_.dead = true;
    return;
  }
  for (Environment& end : ends) settle_groups(end);
  now_ = ends[0];
  if (ends.size() == 1) return;
  Environment result;
  // Epochs: a path changed on one way only is something new afterwards.
  for (const Environment& end : ends)
    for (const auto& [path, epoch] : end.epochs) result.epochs.try_emplace(path, epoch);
  for (auto& [path, epoch] : result.epochs)
    for (const Environment& end : ends) {
      auto found = end.epochs.find(path);
      if (found == end.epochs.end() || found->second != epoch) {
        epoch = ++epochs_;
        break;
      }
    }
  auto all = [&](auto member, auto&& agrees) {
    for (const auto& [key, value] : ends[0].*member) {
      bool same = std::all_of(ends.begin() + 1, ends.end(), [&](const Environment& end) {
        auto found = (end.*member).find(key);
        return found != (end.*member).end() && agrees(found->second, value);
      });
      if (same) (result.*member).emplace(key, value);
    }
  };
  all(&Environment::numbers, [](const Polynomial& a, const Polynomial& b) { return a == b; });
  all(&Environment::objects, [](const auto& a, const auto& b) { return a == b; });
  all(&Environment::aliases, [](const Place& a, const Place& b) { return a.path == b.path && a.offset == b.offset; });
  std::set<std::string> paths;
  for (const Environment& end : ends)
    for (const auto& [path, state] : end.groups) paths.insert(path);
  for (const std::string& path : paths) {
    std::vector<Operand> operands;
    const GroupState* first = nullptr;
    bool everywhere = true, self = false;
    for (const Environment& end : ends) {
      auto found = end.groups.find(path);
      if (found == end.groups.end()) {
        everywhere = false;
        continue;
      }
      if (!first) first = &found->second;
      self |= found->second.self_update;
      if (found->second.literal || found->second.base == ValueId::none) continue;
      if (std::none_of(operands.begin(), operands.end(), [&](const Operand& o) { return o.value == found->second.base; }))
        operands.push_back({found->second.base, {}, recorder_.at(found->second.base).text});
    }
    GroupState state = *first;
    state.self_update = self;
    if (!everywhere) {
      // Written on one way only, elsewhere still what it was at the start: read it there.
      bool touched = std::any_of(ends.begin(), ends.end(), [&](const Environment& end) {
        auto found = end.groups.find(path);
        return found != end.groups.end() && found->second.changed;
      });
      for (const Environment& end : ends) {
        if (end.groups.contains(path) || !touched) continue;
        Environment saved = std::exchange(now_, end);
        bool local = path[0] == 'l' || path[0] == 't';
        if (!local) {
          ValueId id = read_whole(state.place, state.range);
          if (id != ValueId::none && std::none_of(operands.begin(), operands.end(), [&](const Operand& o) { return o.value == id; }))
            operands.push_back({id, {}, recorder_.at(id).text});
        }
        now_ = std::move(saved);
      }
    }
    if (operands.size() == 1) {
      state.base = operands[0].value;
      state.literal = false;
    } else if (operands.size() > 1) {
      const Value like = recorder_.at(operands[0].value);
      state.base = recorder_.value(like.shape, like.rotation, like.text, span(at->getSourceRange()), like.inverse_form);
      state.literal = state.self_update = false;
      recorder_.operation(OperationKind::join, state.base, operands, recorder_.at(operands[0].value).span, like.text);
    }
    result.groups[path] = state;
  }
  now_ = std::move(result);
}

}  // namespace dextral::gather
