#include "probe/emit.h"

#include <clang/AST/GlobalDecl.h>
#include <clang/Basic/CodeGenOptions.h>
#include <clang/CodeGen/ModuleBuilder.h>
#include <clang/Lex/HeaderSearchOptions.h>
#include <clang/Lex/PreprocessorOptions.h>
#include <llvm/IR/LLVMContext.h>
#include <llvm/IR/Metadata.h>
#include <llvm/IR/Module.h>

#include "gather/parse.h"
#include "gather/source.h"
#include "probe/emit_closure.h"
#include "probe/emit_passing.h"

namespace dextral::probe {

using namespace clang;

Kit::Kit() = default;
Kit::Kit(Kit&&) noexcept = default;
Kit& Kit::operator=(Kit&&) noexcept = default;
Kit::~Kit() {
  module.reset();
  context.reset();
}

namespace {

CodeGenOptions plain_options() {
  CodeGenOptions options;
  options.OptimizationLevel = 1;  // bodies that are only there to be inlined are emitted too
  options.DisableLifetimeMarkers = true;
  options.RelaxedAliasing = true;
  options.StructPathTBAA = false;
  options.EmitDeclMetadata = false;
  options.setDebugInfo(llvm::codegenoptions::NoDebugInfo);
  return options;
}

GlobalDecl global_of(const FunctionDecl* function) {
  if (const auto* constructor = dyn_cast<CXXConstructorDecl>(function)) return {constructor, Ctor_Complete};
  if (const auto* destructor = dyn_cast<CXXDestructorDecl>(function)) return {destructor, Dtor_Complete};
  return {function};
}

class Emitter {
 public:
  Emitter(ASTContext& ast, Sema& sema, Kit& kit)
      : ast_(ast), closure_(sema), kit_(kit),
        diagnostics_(new DiagnosticIDs, new DiagnosticOptions, new IgnoringDiagConsumer) {
    if (!kit_.context) kit_.context = std::make_shared<llvm::LLVMContext>();
    diagnostics_.setSourceManager(&ast.getSourceManager());
    generator_.reset(CreateLLVMCodeGen(diagnostics_, "probe", &ast.getSourceManager().getFileManager().getVirtualFileSystem(),
                                       headers_, preprocessor_, options_, *kit_.context));
  }

  void run(std::vector<Found>& found) {
    for (Found& one : found)
      if (one.candidate.refusal.empty()) one.candidate.refusal = closure_.add(one.function);
    start();
    for (Found& one : found)
      if (one.candidate.refusal.empty()) take(one);
    finish();
    for (Found& one : found) kit_.candidates.push_back(std::move(one.candidate));
  }

  void run(const std::vector<FunctionDecl*>& functions) {
    std::vector<FunctionDecl*> whole;
    for (FunctionDecl* function : functions)
      if (closure_.add(function).empty()) whole.push_back(function->getDefinition());
    start();
    for (FunctionDecl* function : whole) generator_->GetAddrOfGlobal(global_of(function), false);
    finish();
  }

 private:
  void start() {
    generator_->Initialize(ast_);
    for (VarDecl* variable : closure_.variables()) feed(variable);
    for (FunctionDecl* function : closure_.functions()) feed(function);
  }

  void finish() {
    std::vector<std::pair<std::string, std::string>> missing;
    for (FunctionDecl* function : closure_.missing())
      if (auto* declared = dyn_cast_or_null<llvm::Function>(generator_->GetAddrOfGlobal(global_of(function), false)))
        missing.emplace_back(gather::key_of(function), declared->getName().str());
    generator_->HandleTranslationUnit(ast_);
    kit_.module.reset(generator_->ReleaseModule());
    if (kit_.module) list(missing);
    else kit_.refusal = "Clang emits no code for it";
  }

  void list(const std::vector<std::pair<std::string, std::string>>& missing) {
    llvm::NamedMDNode* node = kit_.module->getOrInsertNamedMetadata(kMissing);
    for (const auto& [key, symbol] : missing) {
      llvm::Metadata* both[] = {llvm::MDString::get(*kit_.context, key), llvm::MDString::get(*kit_.context, symbol)};
      node->addOperand(llvm::MDNode::get(*kit_.context, both));
    }
  }

  void feed(Decl* decl) { generator_->HandleTopLevelDecl(DeclGroupRef(decl)); }
  void feed(VarDecl* variable) {
    feed(static_cast<Decl*>(variable));
    if (!variable->getType().isConstQualified() && !variable->getType()->isReferenceType()) return;
    if (auto* global = dyn_cast_or_null<llvm::GlobalVariable>(generator_->GetAddrOfGlobal(variable, false)))
      kit_.fixed.insert(global->getName().str());
  }

  void take(Found& found) {
    auto* emitted = dyn_cast_or_null<llvm::Function>(generator_->GetAddrOfGlobal(global_of(found.function->getDefinition()), false));
    if (!emitted) {
      found.candidate.refusal = "Clang emits no code for it";
      return;
    }
    found.candidate.symbol = emitted->getName().str();
    classify(*generator_, found.function, *emitted, found.candidate);
  }

  ASTContext& ast_;
  Closure closure_;
  Kit& kit_;
  DiagnosticsEngine diagnostics_;
  HeaderSearchOptions headers_;
  PreprocessorOptions preprocessor_;
  CodeGenOptions options_ = plain_options();
  std::unique_ptr<CodeGenerator> generator_;
};

}  // namespace

Kit emit(const project::Unit& unit, const project::Project& project, const Wanted& wanted, FileTable& files) {
  Kit kit;
  Facts facts;
  const bool read = gather::parse(
      unit, project, facts,
      [&](ASTContext& ast, Sema& sema) {
        std::vector<Found> found = find_candidates(ast, sema, project, wanted, files);
        if (!found.empty()) Emitter(ast, sema, kit).run(found);
      },
      gather::Bodies::all);
  if (!read) kit.refusal = facts.not_read_because;
  return kit;
}

Kit emit_functions(const project::Unit& unit, const project::Project& project, const std::set<std::string>& keys,
                   std::shared_ptr<llvm::LLVMContext> context) {
  Kit kit;
  kit.context = std::move(context);
  Facts facts;
  const bool read = gather::parse(
      unit, project, facts, [&](ASTContext& ast, Sema& sema) { Emitter(ast, sema, kit).run(find_functions(ast, keys)); },
      gather::Bodies::all);
  if (!read) kit.refusal = facts.not_read_because;
  return kit;
}

}  // namespace dextral::probe
