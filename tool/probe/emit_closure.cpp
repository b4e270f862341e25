#include "probe/emit_closure.h"

namespace dextral::probe {

using namespace clang;

namespace {
constexpr std::size_t kMostFunctions = 2000;  // that one candidate brings
}

// The functions and variables that a body names, said or implied.
struct Names : RecursiveASTVisitor<Names> {
  Closure& closure;
  bool whole = true;  // it compiles
  explicit Names(Closure& c) : closure(c) {}
  bool shouldVisitImplicitCode() const { return true; }
  // Types run nothing, and those of parameters keep what was not instantiated.
  bool TraverseTypeLoc(TypeLoc) { return true; }
  bool TraverseNestedNameSpecifierLoc(NestedNameSpecifierLoc) { return true; }

  bool VisitExpr(Expr* expr) {
    whole = whole && !expr->containsErrors() && !expr->isInstantiationDependent();
    return whole;
  }
  bool VisitDeclRefExpr(DeclRefExpr* reference) { return declared(reference->getDecl()); }
  bool VisitMemberExpr(MemberExpr* member) { return declared(member->getMemberDecl()); }
  bool VisitCXXConstructExpr(CXXConstructExpr* made) { return declared(made->getConstructor()); }
  bool VisitCXXInheritedCtorInitExpr(CXXInheritedCtorInitExpr* made) { return declared(made->getConstructor()); }
  bool VisitCXXBindTemporaryExpr(CXXBindTemporaryExpr* bound) { return ended(bound->getType()); }
  bool VisitCXXDefaultArgExpr(CXXDefaultArgExpr* implied) { return TraverseStmt(implied->getExpr()); }
  bool VisitCXXDefaultInitExpr(CXXDefaultInitExpr* implied) { return TraverseStmt(implied->getExpr()); }
  bool VisitCXXNewExpr(CXXNewExpr* made) { return declared(made->getOperatorNew()) && declared(made->getOperatorDelete()); }
  bool VisitCXXDeleteExpr(CXXDeleteExpr* gone) { return declared(gone->getOperatorDelete()) && ended(gone->getDestroyedType()); }
  bool VisitVarDecl(VarDecl* variable) {
    whole = whole && !variable->isInvalidDecl();
    return whole && ended(variable->getType());
  }

  void follow(FunctionDecl* function) {
    if (const auto* constructor = dyn_cast<CXXConstructorDecl>(function))
      for (const CXXCtorInitializer* initialiser : constructor->inits()) TraverseStmt(initialiser->getInit());
    if (const auto* destructor = dyn_cast<CXXDestructorDecl>(function)) members_ended(destructor->getParent());
    TraverseStmt(function->getBody());
  }
  bool declared(ValueDecl* decl) {
    if (auto* function = dyn_cast_or_null<FunctionDecl>(decl)) closure.name(function);
    if (auto* variable = dyn_cast_or_null<VarDecl>(decl)) closure.name(variable);
    return true;
  }
  bool ended(QualType type) {
    if (type.isNull()) return true;
    const CXXRecordDecl* record = type->getBaseElementTypeUnsafe()->getAsCXXRecordDecl();
    record = record ? record->getDefinition() : nullptr;
    if (record && !record->hasTrivialDestructor() && !record->isDependentContext()) declared(record->getDestructor());
    return true;
  }
  void members_ended(const CXXRecordDecl* record) {
    for (const CXXBaseSpecifier& base : record->bases()) ended(base.getType());
    for (const FieldDecl* field : record->fields()) ended(field->getType());
  }
};

// Bodies that libraries keep in their binaries are none of ours.
static bool is_kept_elsewhere(const FunctionDecl* function) {
  return function->getTemplateSpecializationKind() == TSK_ExplicitInstantiationDeclaration && function->isInStdNamespace();
}

void Closure::name(FunctionDecl* function) {
  if (function->getBuiltinID() || function->isDeleted() || function->isDependentContext() || function->isImmediateFunction()) return;
  if (!is_kept_elsewhere(function) && seen_.insert(function->getCanonicalDecl()).second) pending_.push_back(function);
}

void Closure::name(VarDecl* variable) {
  if (!variable->hasGlobalStorage() || variable->isStaticLocal() || variable->isInvalidDecl()) return;
  if (!seen_.insert(variable->getCanonicalDecl()).second) return;
  if (variable->getTemplateInstantiationPattern() && !variable->getInit())
    sema_.InstantiateVariableDefinition(variable->getLocation(), variable);
  VarDecl* definition = variable->getDefinition();
  if (!definition || definition->isInvalidDecl()) return;
  Names names(*this);
  if (definition->getInit()) names.TraverseStmt(definition->getInit());
  names.ended(definition->getType());
  if (names.whole) variables_.push_back(definition);
}

FunctionDecl* Closure::defined(FunctionDecl* function) {
  FunctionDecl* definition = function->getDefinition();
  if (definition && definition->getBody()) return definition;
  const SourceLocation at = function->getLocation();
  const FunctionDecl* pattern = function->getTemplateInstantiationPattern();
  if (function->isDefaulted()) sema_.MarkFunctionReferenced(at, function);
  else if (pattern && pattern->isDefined()) sema_.InstantiateFunctionDefinition(at, function);
  definition = function->getDefinition();
  return definition && (definition->getBody() || definition->isDefaulted()) ? definition : nullptr;
}

std::string Closure::add(FunctionDecl* candidate) {
  std::size_t brought = 0;
  name(candidate);
  while (!pending_.empty()) {
    FunctionDecl* function = pending_.back();
    pending_.pop_back();
    if (++brought > kMostFunctions) continue;
    FunctionDecl* definition = defined(function);
    if (!definition && function->isExternallyVisible() && !function->isInStdNamespace()) missing_.push_back(function);
    if (!definition || definition->isInvalidDecl()) continue;
    Names names(*this);
    names.follow(definition);
    if (names.whole) {
      functions_.push_back(definition);
    } else {
      broken_.insert(function->getCanonicalDecl());
      definition->setBody(nullptr);  // CodeGen finds the bodies within a class by itself
    }
  }
  if (broken_.contains(candidate->getCanonicalDecl())) return "does not compile";
  if (brought > kMostFunctions) return "calls more than " + std::to_string(kMostFunctions) + " functions";
  return candidate->getDefinition() ? "" : "has no body";
}

}  // namespace dextral::probe
