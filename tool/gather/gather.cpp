#include "gather/gather.h"

#include "gather/parse.h"
#include "gather/walker.h"

namespace dextral::gather {

using namespace clang;

namespace {

// Functions of the scope that have a body, in the order of the text.
struct Bodies : RecursiveASTVisitor<Bodies> {
  UnitContext& unit;
  std::vector<const FunctionDecl*> list;
  std::vector<const FieldDecl*> fields;
  explicit Bodies(UnitContext& u) : unit(u) {}
  bool shouldVisitTemplateInstantiations() const { return true; }
  bool shouldVisitImplicitCode() const { return false; }
  bool VisitFunctionDecl(FunctionDecl* function) {
    if (function->isDependentContext() || function->isImplicit() || function->isDefaulted()) return true;
    if (const auto* method = dyn_cast<CXXMethodDecl>(function); method && method->getParent()->isLambda()) return true;
    if (function->doesThisDeclarationHaveABody() && function->getBody() && unit.in_scope(function->getLocation())) list.push_back(function);
    return true;
  }
  bool VisitFieldDecl(FieldDecl* field) {
    if (!field->getParent()->isDependentContext() && !field->getParent()->isLambda() && unit.in_scope(field->getLocation())) fields.push_back(field);
    return true;
  }
};

void field_facts(UnitContext& unit, const FieldDecl* field) {
  Value like = unit.types.value(field->getType(), field->getNameAsString(), {});
  FieldFacts facts{Types::name(field), field->getNameAsString(), unit.source.span(field->getSourceRange()), like.rotation, false};
  for (const auto& list : {unit.phrases.of(field), unit.phrases.of_type(field->getType())})
    for (const Said& said : list) {
      Frames frames = dextral::frames(said.quantity);
      facts.known |= frames.rows.known() && frames.columns.known();
      facts.rotation |= said.quantity.kind == Kind::passive || said.quantity.kind == Kind::active;
    }
  if (facts.rotation) unit.facts.fields.push_back(std::move(facts));
}

void walk(UnitContext& unit) {
  unit.phrases.attach();
  Bodies bodies(unit);
  SourceManager& manager = unit.ast.getSourceManager();
  for (Decl* decl : unit.ast.getTranslationUnitDecl()->decls())
    if (!manager.isInSystemHeader(manager.getExpansionLoc(decl->getLocation())) && unit.in_scope(decl->getLocation())) bodies.TraverseDecl(decl);
  std::set<const FunctionDecl*> walked;
  auto walk_one = [&](const FunctionDecl* function) {
    if (!walked.insert(function->getCanonicalDecl()).second) return;
    unit.facts.functions.push_back(Walker(unit, function).run());
  };
  for (const FunctionDecl* function : bodies.list) walk_one(function);
  for (std::size_t i = 0; i < unit.instances.size(); ++i)
    if (const FunctionDecl* definition = unit.instances[i]->getDefinition(); definition && definition->getBody()) walk_one(definition);
  std::vector<const FunctionDecl*> called(unit.called.begin(), unit.called.end());
  std::sort(called.begin(), called.end(), [](const FunctionDecl* a, const FunctionDecl* b) { return a->getLocation() < b->getLocation(); });
  for (const FunctionDecl* function : called)
    if (!walked.contains(function->getCanonicalDecl()) && !function->isDependentContext()) unit.facts.functions.push_back(Walker(unit, function).run());
  for (const FieldDecl* field : bodies.fields) field_facts(unit, field);
}

}  // namespace

Facts gather(const project::Unit& unit, const project::Project& project, const std::vector<std::string>& rule_ids) {
  Facts facts;
  facts.unit = unit.file;
  Inactive inactive;
  const Visit visit = [&](ASTContext& ast, Sema& sema) {
    Source source(ast.getSourceManager(), ast.getLangOpts(), facts.files);
    Types types(ast, sema, project.models);
    Phrases phrases(ast, source, project, rule_ids, facts, inactive);
    UnitContext context{ast, &sema, source, types, phrases, project, facts, {}, {}};
    walk(context);
  };
  facts.read = parse(unit, project, facts, visit, {}, &inactive);
  return facts;
}

}  // namespace dextral::gather
