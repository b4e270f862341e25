#include "gather/parse.h"

#include <clang/Basic/DiagnosticLex.h>
#include <clang/Basic/DiagnosticParse.h>
#include <clang/Basic/DiagnosticSema.h>
#include <clang/Frontend/Utils.h>
#include <clang/Lex/PreprocessorOptions.h>
#include <llvm/Support/Path.h>

#include "gather/source.h"

namespace dextral::gather {

using namespace clang;

namespace {

// Where Clang's own headers are: beside the program, else where Debian has them.
std::string resource_folder() {
  std::vector<std::string> places;
  std::string self = llvm::sys::fs::getMainExecutable(nullptr, nullptr);
  llvm::SmallString<256> beside(llvm::sys::path::parent_path(llvm::sys::path::parent_path(self)));
  llvm::sys::path::append(beside, "lib", "clang", "19");
  places.emplace_back(beside);
  places.emplace_back(DEXTRAL_CLANG_RESOURCES);
  places.emplace_back("/usr/lib/llvm-19/lib/clang/19");
  for (const std::string& place : places)
    if (llvm::sys::fs::exists(place + "/include/stddef.h")) return place;
  return places[1];
}

// Errors become facts: where, and what is missing.
class Listener : public DiagnosticConsumer {
 public:
  Listener(Facts& facts) : facts_(facts) {}
  void BeginSourceFile(const LangOptions& language, const Preprocessor*) override { language_ = language; }
  void HandleDiagnostic(DiagnosticsEngine::Level level, const Diagnostic& info) override {
    if (level < DiagnosticsEngine::Error) return;
    llvm::SmallString<256> text;
    info.FormatDiagnostic(text);
    Complaint complaint;
    bool missing = info.getID() == diag::err_pp_file_not_found;
    complaint.kind = missing ? ComplaintKind::missing_header : ComplaintKind::compile_error;
    if (missing && info.getNumArgs() > 0 && info.getArgKind(0) == DiagnosticsEngine::ak_std_string) complaint.wrong = info.getArgStdStr(0);
    complaint.message = std::string(text);
    if (info.hasSourceManager() && info.getLocation().isValid())
      complaint.span = Source(info.getSourceManager(), language_, facts_.files).span(SourceRange(info.getLocation()));
    if (++count_ <= 50 || missing) facts_.complaints.push_back(std::move(complaint));
  }

 private:
  Facts& facts_;
  LangOptions language_;
  int count_ = 0;
};

class Consumer : public SemaConsumer {
 public:
  Consumer(const project::Project& project, const Visit& visit, Facts& facts, bool& done)
      : project_(project), visit_(visit), facts_(facts), done_(done) {}
  void Initialize(ASTContext& context) override { context_ = &context; }
  void InitializeSema(Sema& sema) override { sema_ = &sema; }
  void ForgetSema() override { sema_ = nullptr; }
  bool shouldSkipFunctionBody(Decl* decl) override {
    SourceManager& manager = context_->getSourceManager();
    SourceLocation at = manager.getExpansionLoc(decl->getLocation());
    FileID file = manager.getFileID(at);
    auto [found, fresh] = scope_.try_emplace(file, false);
    if (fresh) {
      Source source(manager, context_->getLangOpts(), facts_.files);
      std::string name = source.file_of(at);
      found->second = file == manager.getMainFileID() ||
                      (!manager.isInSystemHeader(at) && !name.empty() && project_.file.in_scope(name));
    }
    return !found->second;
  }
  void HandleTranslationUnit(ASTContext& context) override {
    done_ = true;
    if (!sema_) return;
    // Bodies that are parsed late look names up in the scope of the unit, which is closed by now.
    sema_->TUScope = sema_->getCurScope();
    visit_(context, *sema_);
    sema_->TUScope = nullptr;
  }

 private:
  const project::Project& project_;
  const Visit& visit_;
  Facts& facts_;
  bool& done_;
  ASTContext* context_ = nullptr;
  Sema* sema_ = nullptr;
  std::map<FileID, bool> scope_;
};

class LeftOut : public PPCallbacks {
 public:
  explicit LeftOut(Inactive& inactive) : inactive_(inactive) {}
  void SourceRangeSkipped(SourceRange range, SourceLocation) override { inactive_.push_back(range); }

 private:
  Inactive& inactive_;
};

class Action : public ASTFrontendAction {
 public:
  Action(const project::Project& project, const Visit& visit, Facts& facts, bool& done, Inactive* inactive)
      : project_(project), visit_(visit), facts_(facts), done_(done), inactive_(inactive) {}
  TranslationUnitKind getTranslationUnitKind() override { return TU_Prefix; }
  std::unique_ptr<ASTConsumer> CreateASTConsumer(CompilerInstance& compiler, llvm::StringRef) override {
    if (inactive_) compiler.getPreprocessor().addPPCallbacks(std::make_unique<LeftOut>(*inactive_));
    return std::make_unique<Consumer>(project_, visit_, facts_, done_);
  }

 private:
  const project::Project& project_;
  const Visit& visit_;
  Facts& facts_;
  bool& done_;
  Inactive* inactive_;
};

std::vector<const char*> command(const std::vector<std::string>& words) {
  std::vector<const char*> command;
  for (const std::string& word : words) command.push_back(word.c_str());
  return command;
}

}  // namespace

bool parse(const project::Unit& unit, const project::Project& project, Facts& facts, const Visit& visit, Bodies bodies, Inactive* inactive) {
  std::vector<std::string> words{"clang", "-fsyntax-only", "-resource-dir", resource_folder(), "-Wno-everything", "-ferror-limit=0"};
  words.insert(words.end(), unit.arguments.begin(), unit.arguments.end());
  words.push_back("--");
  words.push_back(unit.file);
  auto files = llvm::vfs::createPhysicalFileSystem();
  if (files->setCurrentWorkingDirectory(unit.directory)) {
    facts.not_read_because = "its folder " + unit.directory + " cannot be entered";
    return false;
  }
  llvm::IntrusiveRefCntPtr<llvm::vfs::FileSystem> system(files.release());
  auto* listener = new Listener(facts);
  IntrusiveRefCntPtr<DiagnosticsEngine> diagnostics =
      CompilerInstance::createDiagnostics(new DiagnosticOptions(), listener, true);
  CreateInvocationOptions options;
  options.Diags = diagnostics;
  options.VFS = system;
  options.RecoverOnError = true;
  std::shared_ptr<CompilerInvocation> invocation = createInvocation(command(words), options);
  if (!invocation) {
    facts.not_read_because = "its flags are not understood";
    return false;
  }
  invocation->getFrontendOpts().SkipFunctionBodies = bodies == Bodies::of_scope;
  if (bodies == Bodies::all) invocation->getLangOpts().DelayedTemplateParsing = true;
  invocation->getFrontendOpts().DisableFree = false;  // a worker reads many units
  invocation->getDiagnosticOpts().IgnoreWarnings = true;
  CompilerInstance compiler;
  compiler.setInvocation(invocation);
  compiler.setDiagnostics(diagnostics.get());
  compiler.getDiagnostics().setFatalsAsError(true);
  compiler.getDiagnostics().setSuppressAllDiagnostics(false);
  compiler.createFileManager(system);
  bool done = false;
  Action action(project, visit, facts, done, inactive);
  compiler.ExecuteAction(action);
  if (!done && facts.not_read_because.empty()) facts.not_read_because = "it could not be opened or its flags are wrong";
  return done;
}

}  // namespace dextral::gather
