#include "probe/candidates.h"

#include <algorithm>
#include <set>

#include "gather/source.h"
#include "probe/candidates_types.h"

namespace dextral::probe {

using namespace clang;

namespace {

constexpr std::size_t kMostNumbers = 400;  // in all objects together; what counts is what is touched
constexpr std::size_t kMostFormals = 24;

using Constants = std::map<const FunctionDecl*, std::map<unsigned, std::set<long long>>>;

// The functions of the scope, and the constants that they pass to each other.
struct Survey : RecursiveASTVisitor<Survey> {
  ASTContext& context;
  std::vector<FunctionDecl*> functions;
  std::set<const FunctionDecl*> seen;
  Constants constants;

  explicit Survey(ASTContext& c) : context(c) {}
  void all() {
    SourceManager& manager = context.getSourceManager();
    for (Decl* decl : context.getTranslationUnitDecl()->decls())
      if (!manager.isInSystemHeader(manager.getExpansionLoc(decl->getLocation()))) TraverseDecl(decl);
  }
  bool shouldVisitTemplateInstantiations() const { return true; }
  bool shouldVisitImplicitCode() const { return false; }
  bool VisitFunctionDecl(FunctionDecl* function) {
    if (function->isDependentContext() || function->isImplicit() || function->isDefaulted()) return true;
    FunctionDecl* definition = function->getDefinition();
    if (!definition) {
      const FunctionDecl* pattern = function->getTemplateInstantiationPattern();
      const bool asked = function->isReferenced() || function->getTemplateSpecializationKind() == TSK_ExplicitInstantiationDefinition;
      if (!pattern || !pattern->isDefined() || !asked) return true;
      definition = function;
    }
    if (seen.insert(definition->getCanonicalDecl()).second) functions.push_back(definition);
    return true;
  }
  bool VisitCallExpr(CallExpr* call) {
    const FunctionDecl* callee = call->getDirectCallee();
    if (!callee || call->isInstantiationDependent()) return true;
    const bool object_first = isa<CXXOperatorCallExpr>(call) && isa<CXXMethodDecl>(callee);
    for (unsigned i = object_first; i < call->getNumArgs(); ++i) {
      const Expr* argument = call->getArg(i);
      Expr::EvalResult value;
      if (!argument->getType()->isIntegralOrEnumerationType() || argument->isValueDependent() || argument->containsErrors()) continue;
      if (argument->EvaluateAsInt(value, context))
        constants[callee->getCanonicalDecl()][i - object_first].insert(gather::whole_number(value.Val.getInt()));
    }
    return true;
  }
};

// What a body compares with or switches on.
struct Compared : RecursiveASTVisitor<Compared> {
  ASTContext& context;
  std::set<long long> values;
  explicit Compared(ASTContext& c) : context(c) {}
  void take(const Expr* expr) {
    Expr::EvalResult value;
    if (!expr || expr->isValueDependent() || expr->containsErrors() || !expr->getType()->isIntegralOrEnumerationType()) return;
    if (expr->EvaluateAsInt(value, context)) values.insert(gather::whole_number(value.Val.getInt()));
  }
  bool VisitCaseStmt(CaseStmt* label) {
    take(label->getLHS());
    return true;
  }
  bool VisitBinaryOperator(BinaryOperator* binary) {
    if (!binary->isEqualityOp()) return true;
    take(binary->getLHS());
    take(binary->getRHS());
    return true;
  }
};

bool fits(const std::string& wanted, const std::string& name) {
  return name == wanted || (name.size() > wanted.size() && name.ends_with(wanted) && name[name.size() - wanted.size() - 1] == ':');
}

std::string said(QualType type) { return "`" + type.getAsString() + "`"; }

bool is_number(const Object& object) {
  return std::any_of(object.bundles.begin(), object.bundles.end(), [](const Bundle& b) { return !b.group.integer; });
}

class Finder {
 public:
  Finder(ASTContext& context, Sema& sema, const project::Project& project, const Wanted& wanted, FileTable& files)
      : context_(context), project_(project), wanted_(wanted), source_(context.getSourceManager(), context.getLangOpts(), files),
        flattener_(context, sema, project.models), survey_(context) {}

  std::vector<Found> run() {
    survey_.all();
    std::vector<Found> list;
    for (FunctionDecl* function : survey_.functions)
      if (in_scope(function) && (wanted_.name.empty() || fits(wanted_.name, gather::Types::name(function)))) take(function, list);
    return list;
  }

 private:
  bool in_scope(const FunctionDecl* function) const {
    const SourceManager& manager = context_.getSourceManager();
    const SourceLocation at = manager.getExpansionLoc(function->getLocation());
    if (at.isInvalid() || manager.isInSystemHeader(at)) return false;
    const std::string file = source_.file_of(at);
    return !file.empty() && project_.file.in_scope(file);
  }

  void take(FunctionDecl* function, std::vector<Found>& list) {
    Found found{function, {}};
    found.candidate.key = gather::key_of(function);
    found.candidate.name = gather::Types::name(function);
    found.candidate.span = source_.span(SourceRange(function->getLocation()));
    found.candidate.refusal = why_not(function);
    if (found.candidate.refusal.empty()) flatten(function, found.candidate);
    if (found.candidate.refusal.empty()) found.candidate.refusal = why_not(found.candidate);
    if (found.candidate.refusal.empty() || !wanted_.name.empty()) list.push_back(std::move(found));
  }

  std::string why_not(const FunctionDecl* function) const {
    const auto* method = dyn_cast<CXXMethodDecl>(function);
    if (function->isInvalidDecl()) return "does not compile";
    if (isa<CXXDestructorDecl>(function) || (method && method->getParent()->isLambda()) || function->isMain()) return "is no function that others call";
    if (function->isVariadic()) return "takes a variable number of arguments";
    if (function->getReturnType()->isUndeducedType()) return "its result has no type yet";
    if (method && method->getParent()->getNumVBases() > 0) return "belongs to a class with virtual bases";
    if (function->param_size() > kMostFormals) return "takes many arguments";
    return "";
  }

  void flatten(FunctionDecl* function, Candidate& candidate) {
    const auto* method = dyn_cast<CXXMethodDecl>(function);
    if (method && method->isInstance()) candidate.formals.push_back(flattener_.formal(method->getThisType(), "this", "this"));
    for (const ParmVarDecl* parameter : function->parameters()) {
      const unsigned index = parameter->getFunctionScopeIndex();
      std::string text = parameter->getNameAsString();
      if (text.empty()) text = "argument " + std::to_string(index + 1);
      candidate.formals.push_back(flattener_.formal(parameter->getType(), "p" + std::to_string(index), text));
      if (candidate.formals.back().object.bundles.empty() && candidate.formals.back().object.other && candidate.refusal.empty())
        candidate.refusal = "takes " + said(parameter->getType());
    }
    if (!function->getReturnType()->isVoidType() && !isa<CXXConstructorDecl>(function))
      candidate.result = flattener_.formal(function->getReturnType(), "return", "return");
    give_values(function, candidate);
  }

  // Enumerators stand already; what is compared or passed counts for the rest.
  void give_values(FunctionDecl* function, Candidate& candidate) {
    Compared compared(context_);
    if (const FunctionDecl* body = function->getDefinition()) compared.TraverseDecl(const_cast<FunctionDecl*>(body));
    for (Formal& formal : candidate.formals)
      for (Bundle& bundle : formal.object.bundles) {
        if (!bundle.group.integer || !bundle.values.empty()) continue;
        std::set<long long> values = compared.values;
        if (auto other = wanted_.constants.find({candidate.key, bundle.group.formal}); other != wanted_.constants.end())
          values.insert(other->second.begin(), other->second.end());
        if (formal.name != "this") {
          const std::set<long long>& passed = survey_.constants[function->getCanonicalDecl()][unsigned(std::stoul(formal.name.substr(1)))];
          values.insert(passed.begin(), passed.end());
        }
        bundle.values.assign(values.begin(), values.end());
      }
  }

  static std::string why_not(const Candidate& candidate) {
    std::size_t numbers = 0;
    bool takes = false, gives = candidate.result && is_number(candidate.result->object);
    for (const Formal& formal : candidate.formals) {
      for (const Bundle& bundle : formal.object.bundles) numbers += bundle.leaves.size();
      takes |= is_number(formal.object);
      gives |= formal.behind_pointer && is_number(formal.object);
    }
    if (candidate.result && candidate.result->object.other && candidate.result->object.bundles.empty())
      return "gives something other than numbers";
    if (!takes && !gives) return "takes and gives no numbers";
    if (!gives) return "gives no numbers";
    return numbers > kMostNumbers ? "takes and gives many numbers" : "";
  }

  ASTContext& context_;
  const project::Project& project_;
  const Wanted& wanted_;
  gather::Source source_;
  Flattener flattener_;
  Survey survey_;
};

}  // namespace

std::vector<FunctionDecl*> find_functions(ASTContext& context, const std::set<std::string>& keys) {
  Survey survey(context);
  survey.all();
  std::vector<FunctionDecl*> list;
  for (FunctionDecl* function : survey.functions)
    if (keys.contains(gather::key_of(function))) list.push_back(function);
  return list;
}

std::vector<Found> find_candidates(ASTContext& context, Sema& sema, const project::Project& project, const Wanted& wanted,
                                   FileTable& files) {
  return Finder(context, sema, project, wanted, files).run();
}

}  // namespace dextral::probe
