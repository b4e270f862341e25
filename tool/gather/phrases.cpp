#include "gather/phrases.h"

#include <algorithm>
#include <cctype>

#include "gather/comments.h"
#include "gather/types.h"
#include "phrase/phrase.h"

namespace dextral::gather {

using namespace clang;

namespace {

// A declaration of the scope, with the lines that it covers.
struct Declared {
  const NamedDecl* decl;
  FileID file;
  unsigned name_line, begin_line, end_line;
  unsigned begin, name;  // offsets
};

struct Head {  // of a function: up to its body or its semicolon
  const FunctionDecl* decl;
  FileID file;
  unsigned begin_line, end_line, name_line;
};

struct Inventory : RecursiveASTVisitor<Inventory> {
  const SourceManager& manager;
  const LangOptions& language;
  std::vector<Declared> declared;
  std::vector<Head> heads;
  std::vector<std::pair<const NamedDecl*, const AnnotateAttr*>> annotated;
  explicit Inventory(ASTContext& context) : manager(context.getSourceManager()), language(context.getLangOpts()) {}

  unsigned line(SourceLocation at) const { return manager.getExpansionLineNumber(at); }
  void attributes(const NamedDecl* decl) {
    for (const auto* attribute : decl->specific_attrs<AnnotateAttr>())
      if (attribute->getAnnotation().starts_with("dextral:")) annotated.emplace_back(decl, attribute);
  }
  void add(const NamedDecl* decl, SourceRange range) {
    SourceLocation at = manager.getExpansionLoc(decl->getLocation());
    if (at.isInvalid() || range.isInvalid()) return;
    SourceLocation begin = manager.getExpansionLoc(range.getBegin()), end = manager.getExpansionRange(range.getEnd()).getEnd();
    declared.push_back({decl, manager.getFileID(at), line(at), line(begin), line(end), manager.getFileOffset(begin), manager.getFileOffset(at)});
    attributes(decl);
  }
  bool VisitVarDecl(VarDecl* decl) {
    if (!decl->isImplicit()) add(decl, decl->getSourceRange());
    return true;
  }
  bool VisitFieldDecl(FieldDecl* decl) {
    add(decl, decl->getSourceRange());
    return true;
  }
  bool VisitTypedefNameDecl(TypedefNameDecl* decl) {
    if (!decl->isImplicit()) add(decl, decl->getSourceRange());
    return true;
  }
  bool VisitFunctionDecl(FunctionDecl* decl) {
    if (decl->isImplicit()) return true;
    SourceLocation begin = manager.getExpansionLoc(decl->getBeginLoc());
    SourceLocation end = decl->doesThisDeclarationHaveABody() && decl->getBody() ? decl->getBody()->getBeginLoc() : decl->getEndLoc();
    if (const auto* constructor = dyn_cast<CXXConstructorDecl>(decl); constructor && constructor->getNumCtorInitializers() && decl->getTypeSourceInfo())
      end = decl->getTypeSourceInfo()->getTypeLoc().getEndLoc();
    if (begin.isInvalid() || end.isInvalid()) return true;
    heads.push_back({decl, manager.getFileID(begin), line(begin), line(end), line(decl->getLocation())});
    attributes(decl);
    return true;
  }
};

bool is_scalar(const NamedDecl* decl) {
  const auto* value = dyn_cast<ValueDecl>(decl);
  return value && value->getType()->isRealFloatingType();
}

int role(const std::string& name, int order) {
  std::string lower;
  for (char c : name) lower += char(std::tolower(static_cast<unsigned char>(c)));
  static const std::pair<const char*, int> roles[] = {{"roll", 0}, {"pitch", 1}, {"yaw", 2}, {"heading", 2}};
  for (const auto& [word, index] : roles)
    if (lower.find(word) != std::string::npos) return index;
  return order;
}

}  // namespace

// Puts the comments of one file on the declarations of that file.
class Attacher {
 public:
  Attacher(Phrases& phrases, const Inventory& inventory, FileID file) : phrases_(phrases), file_(file) {
    for (const Declared& d : inventory.declared)
      if (d.file == file) declared_.push_back(d);
    for (const Head& h : inventory.heads)
      if (h.file == file) heads_.push_back(h);
  }

  void attach(const BarComment& comment) {
    phrase::Items items = phrase::parse_items(comment.text, phrases_.rules_);
    for (const phrase::Error& error : items.errors)
      complain(ComplaintKind::phrase, place(comment, error.offset, error.length), error.wrong, error.message, error.nearest);
    for (const phrase::Item& item : items.items) {
      Span where = place(comment, item.offset, item.length);
      if (auto* acceptance = std::get_if<Acceptance>(&item.says)) {
        phrases_.facts_.acceptances.push_back({*acceptance, where, {comment.code_line, 1}, {comment.code_end_line, 0xffff}});
        continue;
      }
      const Quantity& quantity = std::get<Quantity>(item.says);
      if (!phrases_.frames_known(quantity, where)) continue;
      Said said{quantity, dextral::Source::declared, where, phrase::print(quantity)};
      if (item.names.empty()) bare(comment, said);
      else named(comment, item.names, said);
    }
  }

 private:
  Span place(const BarComment& comment, std::size_t offset, std::size_t length) const {
    // Offsets within the joined text count from its first line.
    SourceManager& manager = phrases_.source_.manager();
    unsigned begin = comment.text_offset;
    std::size_t first_line = comment.text.find('\n');
    if (first_line == std::string::npos || offset <= first_line) begin += unsigned(offset);
    SourceLocation at = manager.getLocForStartOfFile(file_).getLocWithOffset(int(begin));
    Span span;
    span.file = phrases_.source_.files().add(phrases_.source_.file_of(at));
    span.begin = {manager.getLineNumber(file_, begin), manager.getColumnNumber(file_, begin)};
    span.end = {span.begin.line, span.begin.column + unsigned(std::max<std::size_t>(length, 1))};
    return span;
  }

  void complain(ComplaintKind kind, Span where, std::string wrong, std::string message, std::string nearest) {
    phrases_.facts_.complaints.push_back({kind, where, std::move(wrong), std::move(message), std::move(nearest)});
  }

  const Head* head(const BarComment& comment) const {
    const Head* best = nullptr;
    for (const Head& h : heads_) {
      bool covers = comment.line >= h.begin_line && comment.line <= h.end_line && !comment.alone;
      bool inside = comment.alone && comment.line > h.begin_line && comment.line <= h.end_line;
      bool above = comment.alone && comment.code_line == h.begin_line;
      if ((covers || inside || above) && (!best || h.begin_line > best->begin_line)) best = &h;
    }
    return best;
  }

  bool belongs_to(const Declared& d, const FunctionDecl* function) const {
    const auto* parameter = dyn_cast<ParmVarDecl>(d.decl);
    return parameter && parameter->getDeclContext() == Decl::castToDeclContext(function);
  }

  // Declarators named on a line; else the innermost that covers it.
  std::vector<const NamedDecl*> on_line(unsigned line, bool parameters) const {
    std::vector<const NamedDecl*> found;
    const Declared* cover = nullptr;
    for (const Declared& d : declared_) {
      if (isa<ParmVarDecl>(d.decl) != parameters) continue;
      if (d.name_line == line) found.push_back(d.decl);
      if (d.begin_line <= line && line <= d.end_line && (!cover || d.begin >= cover->begin)) cover = &d;
    }
    if (found.empty() && cover) found.push_back(cover->decl);
    return found;
  }

  // The last name before the comment, else the first behind it; of
  // `a, /*| in ned */ double b` the one behind.
  const NamedDecl* beside(const BarComment& comment) const {
    const Declared *before = nullptr, *behind = nullptr;
    for (const Declared& d : declared_) {
      if (comment.line < d.begin_line || comment.line > d.end_line) continue;
      if (d.name < comment.offset) {
        if (!before || d.name > before->name) before = &d;
      } else if (!behind || d.name < behind->name) {
        behind = &d;
      }
    }
    if (before && behind && behind->begin_line == comment.line && separated(before->name, comment.offset)) before = nullptr;
    return before ? before->decl : behind ? behind->decl : nullptr;
  }

  bool separated(unsigned from, unsigned to) const {
    const StringRef text = phrases_.source_.manager().getBufferData(file_);
    return text.slice(from, to).find_first_of(",;{(") != StringRef::npos;
  }

  void say(const NamedDecl* decl, const Said& said) {
    if (const auto* function = dyn_cast<FunctionDecl>(decl)) phrases_.returned_[function->getLocation().getRawEncoding()].push_back(said);
    else phrases_.said_[decl->getLocation().getRawEncoding()].push_back(said);
  }

  // Numbers that are one triple or quaternion between them.
  void say_all(const std::vector<const NamedDecl*>& decls, const Said& said) {
    bool together = decls.size() >= 2 && decls.size() <= 4 && std::all_of(decls.begin(), decls.end(), is_scalar) &&
                    said.quantity.kind != Kind::unit && said.quantity.kind != Kind::along && said.quantity.kind != Kind::heading &&
                    said.quantity.kind != Kind::geodetic && said.quantity.kind != Kind::none;
    std::string group;
    for (const NamedDecl* decl : decls) group += (group.empty() ? "{" : ",") + decl->getNameAsString();
    for (std::size_t i = 0; i < decls.size(); ++i) {
      say(decls[i], said);
      if (together)
        phrases_.components_[decls[i]->getLocation().getRawEncoding()] = {group + "}", role(decls[i]->getNameAsString(), int(i)), int(decls.size()), true};
    }
  }

  void bare(const BarComment& comment, const Said& said) {
    if (comment.is_inline) {
      if (const NamedDecl* decl = beside(comment)) return say(decl, said);
    }
    unsigned line = comment.code_line;
    if (const Head* h = head(comment)) {
      std::vector<const NamedDecl*> parameters;
      for (const Declared& d : declared_)
        if (belongs_to(d, h->decl) && d.name_line == line) parameters.push_back(d.decl);
      if (parameters.size() == 1 && (h->name_line != line || h->decl->getNumParams() > 1)) return say(parameters[0], said);
      if (!h->decl->getReturnType()->isVoidType()) return say(h->decl, said);
      if (parameters.size() == 1) return say(parameters[0], said);
      return complain(ComplaintKind::unattached, said.span, said.text,
                      "the phrase does not say which parameter it speaks of; write `NAME: " + said.text + "`", "");
    }
    std::vector<const NamedDecl*> decls = on_line(line, false);
    if (decls.empty()) decls = on_line(line, true);
    if (decls.empty())
      return complain(ComplaintKind::unattached, said.span, said.text, "the phrase stands at no declaration", "");
    say_all(decls, said);
  }

  const NamedDecl* find(const BarComment& comment, const std::string& name) const {
    const Head* h = head(comment);
    if (h) {
      if (name == "return") return h->decl;
      for (const ParmVarDecl* parameter : h->decl->parameters())
        if (parameter->getNameAsString() == name) return parameter;
    }
    const Declared* best = nullptr;
    for (const Declared& d : declared_) {
      if (d.decl->getNameAsString() != name) continue;
      auto away = [&](const Declared& x) { return std::abs(int(x.name_line) - int(comment.code_line)); };
      if (away(d) <= 3 && (!best || away(d) < away(*best))) best = &d;
    }
    return best ? best->decl : nullptr;
  }

  void named(const BarComment& comment, const std::vector<std::string>& names, const Said& said) {
    std::vector<const NamedDecl*> decls;
    for (const std::string& name : names) {
      if (const NamedDecl* decl = find(comment, name)) {
        decls.push_back(decl);
        continue;
      }
      std::vector<std::string> known{"return"};
      if (const Head* h = head(comment))
        for (const ParmVarDecl* parameter : h->decl->parameters()) known.push_back(parameter->getNameAsString());
      for (const Declared& d : declared_)
        if (d.name_line + 3 >= comment.line && d.name_line <= comment.code_line + 3) known.push_back(d.decl->getNameAsString());
      complain(ComplaintKind::unknown_name, said.span, name, "nothing of this name is declared here", nearest_word(name, known).value_or(""));
    }
    if (decls.size() == 1 && isa<FunctionDecl>(decls[0])) return say(decls[0], said);
    say_all(decls, said);
  }

  Phrases& phrases_;
  FileID file_;
  std::vector<Declared> declared_;
  std::vector<Head> heads_;
};

Phrases::Phrases(ASTContext& context, const Source& source, const project::Project& project, const std::vector<std::string>& rules, Facts& facts,
                 const std::vector<SourceRange>& inactive)
    : context_(context), source_(source), project_(project), rules_(rules), facts_(facts), inactive_(inactive) {
  for (const project::Contract& contract : project.file.contracts) contracts_[contract.entity] = &contract;
}

void Phrases::attach() {
  Inventory inventory(context_);
  SourceManager& manager = context_.getSourceManager();
  std::set<FileID> files;
  for (Decl* decl : context_.getTranslationUnitDecl()->decls()) {
    SourceLocation at = manager.getExpansionLoc(decl->getLocation());
    if (at.isInvalid() || manager.isInSystemHeader(at)) continue;
    FileID file = manager.getFileID(at);
    if (!files.contains(file)) {
      std::string name = source_.file_of(at);
      if (name.empty() || !project_.file.in_scope(name)) continue;
      files.insert(file);
    }
    inventory.TraverseDecl(decl);
  }
  files.insert(manager.getMainFileID());
  for (const auto& [decl, attribute] : inventory.annotated) {
    auto parsed = phrase::parse(attribute->getAnnotation().drop_front(8).trim().str());
    Span where = source_.span(attribute->getRange());
    if (auto* error = std::get_if<phrase::Error>(&parsed)) {
      facts_.complaints.push_back({ComplaintKind::phrase, where, error->wrong, error->message, error->nearest});
      continue;
    }
    if (!frames_known(std::get<Quantity>(parsed), where)) continue;
    Said said{std::get<Quantity>(parsed), dextral::Source::declared, where, phrase::print(std::get<Quantity>(parsed))};
    (isa<FunctionDecl>(decl) ? returned_ : said_)[decl->getLocation().getRawEncoding()].push_back(said);
  }
  for (FileID file : files) {
    if (!project_.file.in_scope(source_.file_of(manager.getLocForStartOfFile(file))) && file != manager.getMainFileID()) continue;
    Attacher attacher(*this, inventory, file);
    for (const BarComment& comment : bar_comments(file, manager, context_.getLangOpts()))
      if (!is_inactive(manager.getLocForStartOfFile(file).getLocWithOffset(int(comment.offset)))) attacher.attach(comment);
  }
}

bool Phrases::is_inactive(SourceLocation at) const {
  const SourceManager& manager = context_.getSourceManager();
  return std::any_of(inactive_.begin(), inactive_.end(), [&](SourceRange range) {
    return manager.isBeforeInTranslationUnit(range.getBegin(), at) && manager.isBeforeInTranslationUnit(at, range.getEnd());
  });
}

// A misspelt frame is told, and its phrase says nothing: one fault, one finding.
bool Phrases::frames_known(const Quantity& quantity, Span where) const {
  const project::ProjectFile& file = project_.file;
  bool known = true;
  for (const Frame& frame : phrase::mentioned(quantity)) {
    if (frame.variable || frame.name.empty() || file.frames.find(frame.name)) continue;
    const auto near = file.frames.nearest(frame.name);
    if (!near && !file.only_declared_frames) continue;
    facts_.complaints.push_back({ComplaintKind::unknown_frame, where, frame.name, "no frame of this name is declared", near.value_or("")});
    known = false;
  }
  return known;
}

std::vector<Said> Phrases::at(SourceLocation location) const {
  auto found = said_.find(location.getRawEncoding());
  return found == said_.end() ? std::vector<Said>{} : found->second;
}

namespace {

void add_contract(std::vector<Said>& list, const project::Contract* contract, const std::string& name, const std::string& file, const Source& source) {
  for (const auto& [parameter, text] : contract->phrases) {
    if (parameter != name) continue;
    auto parsed = phrase::parse(text);
    auto* quantity = std::get_if<Quantity>(&parsed);
    if (!quantity) continue;
    Span span;
    span.file = source.files().add(file);
    span.begin = {contract->line, 1};
    span.end = {contract->line, 2};
    list.push_back({*quantity, dextral::Source::declared, span, phrase::print(*quantity)});
  }
}

}  // namespace

std::vector<Said> Phrases::of(const NamedDecl* decl) const {
  std::vector<Said> list;
  const auto* parameter = dyn_cast<ParmVarDecl>(decl);
  const auto* function = parameter ? dyn_cast<FunctionDecl>(parameter->getDeclContext()) : nullptr;
  if (function) {
    unsigned index = parameter->getFunctionScopeIndex();
    auto take = [&](const FunctionDecl* f) {
      for (const FunctionDecl* again : f->redecls())
        if (index < again->getNumParams())
          for (Said& said : at(again->getParamDecl(index)->getLocation()))
            if (std::none_of(list.begin(), list.end(), [&](const Said& s) { return s.span == said.span; })) list.push_back(std::move(said));
    };
    take(function);
    if (const FunctionDecl* pattern = function->getTemplateInstantiationPattern()) take(pattern);
    if (const auto* method = dyn_cast<CXXMethodDecl>(function))
      for (const CXXMethodDecl* base : method->overridden_methods())
        if (index < base->getNumParams())
          for (Said& said : of(base->getParamDecl(index))) list.push_back(std::move(said));
    if (auto contract = contracts_.find(Types::name(function)); contract != contracts_.end())
      add_contract(list, contract->second, parameter->getNameAsString(), project_.file.path, source_);
    return list;
  }
  list = at(decl->getLocation());
  if (auto contract = contracts_.find(Types::name(decl)); contract != contracts_.end())
    add_contract(list, contract->second, "", project_.file.path, source_);
  return list;
}

std::vector<Said> Phrases::of_return(const FunctionDecl* function) const {
  std::vector<Said> list;
  auto take = [&](const FunctionDecl* f) {
    for (const FunctionDecl* again : f->redecls())
      if (auto found = returned_.find(again->getLocation().getRawEncoding()); found != returned_.end())
        for (const Said& said : found->second)
          if (std::none_of(list.begin(), list.end(), [&](const Said& s) { return s.span == said.span; })) list.push_back(said);
  };
  take(function);
  if (const FunctionDecl* pattern = function->getTemplateInstantiationPattern()) take(pattern);
  if (const auto* method = dyn_cast<CXXMethodDecl>(function))
    for (const CXXMethodDecl* base : method->overridden_methods())
      for (Said& said : of_return(base)) list.push_back(std::move(said));
  for (Said& said : of_type(function->getReturnType())) list.push_back(std::move(said));
  if (auto contract = contracts_.find(Types::name(function)); contract != contracts_.end()) {
    add_contract(list, contract->second, "return", project_.file.path, source_);
    add_contract(list, contract->second, "", project_.file.path, source_);
  }
  return list;
}

std::vector<Said> Phrases::of_type(QualType type) const {
  std::vector<Said> list;
  for (int depth = 0; depth < 16 && !type.isNull(); ++depth) {
    if (const auto* alias = dyn_cast<TypedefType>(type.getTypePtr())) {
      for (Said& said : of(alias->getDecl())) list.push_back(std::move(said));
      type = alias->desugar();
    } else if (type->isReferenceType() || type->isPointerType()) {
      type = type->getPointeeType();
    } else if (const auto* array = dyn_cast<ArrayType>(type.getTypePtr())) {
      type = array->getElementType();
    } else {
      QualType next = type.getSingleStepDesugaredType(context_);
      if (next == type) break;
      type = next;
    }
  }
  return list;
}

namespace {

// vx -> v?x with index 0; none when the name has no axis letter at a word's end.
std::optional<std::pair<std::string, int>> axis_letter(const std::string& name) {
  auto axis = [](char c) { return c == 'x' || c == 'X' ? 0 : c == 'y' || c == 'Y' ? 1 : c == 'z' || c == 'Z' ? 2 : -1; };
  auto at = [&](std::size_t i) -> std::optional<std::pair<std::string, int>> {
    if (axis(name[i]) < 0) return std::nullopt;
    std::string pattern = name;
    pattern[i] = std::isupper(static_cast<unsigned char>(name[i])) ? '!' : '?';
    return std::pair{pattern, axis(name[i])};
  };
  if (name.empty() || name.size() > 40) return std::nullopt;
  std::size_t last = name.find_last_not_of('_');
  if (last == std::string::npos) return std::nullopt;
  if (auto found = at(last)) return found;
  for (std::size_t i = 0; i < name.size(); ++i)
    if ((i == 0 || name[i - 1] == '_') && (i + 1 == name.size() || name[i + 1] == '_'))
      if (auto found = at(i)) return found;
  return std::nullopt;
}

}  // namespace

std::optional<Slot3> Phrases::component(const ValueDecl* decl) const {
  if (!decl->getType()->isRealFloatingType()) return std::nullopt;
  auto found = components_.find(decl->getLocation().getRawEncoding());
  if (found != components_.end()) return found->second;
  auto letter = axis_letter(decl->getNameAsString());
  if (!letter) return std::nullopt;
  const DeclContext* context = decl->getDeclContext();
  if (!context->isRecord() && !context->isFunctionOrMethod()) return std::nullopt;
  std::array<int, 3> seen{};
  for (const Decl* sibling : context->decls()) {
    const auto* value = dyn_cast<ValueDecl>(sibling);
    if (!value || !value->getIdentifier() || value->getType().getCanonicalType().getUnqualifiedType() != decl->getType().getCanonicalType().getUnqualifiedType()) continue;
    auto other = axis_letter(value->getNameAsString());
    if (other && other->first == letter->first) ++seen[std::size_t(other->second)];
  }
  if (seen != std::array<int, 3>{1, 1, 1}) return std::nullopt;
  return Slot3{"{" + letter->first + "}", letter->second, 3};
}

}  // namespace dextral::gather
