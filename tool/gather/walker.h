// The walk over one function body.
//
// A structured walk keeps, per access path, the version that holds now:
// assignments make new versions, branches are joined softly, loops with small
// constant bounds are unrolled, other loops get a head version. Expressions
// give a Result: a place, a number (a polynomial), a value of the algebra, or
// an object. What is not understood gives an empty Result and forgets what it
// may have written.
//
// The methods stand in seven files: places.cpp (reading and writing),
// expressions.cpp, calls.cpp (inlined accessors, calls of functions),
// models.cpp (what models say), statements.cpp, loops.cpp (and joins),
// body.cpp (entry and exit).
#pragma once

#include <map>
#include <memory>
#include <optional>
#include <set>
#include <string>
#include <vector>

#include "gather/clang.h"
#include "gather/components.h"
#include "gather/phrases.h"
#include "gather/recorder.h"
#include "gather/source.h"
#include "gather/types.h"
#include "project/project.h"

namespace dextral::gather {

// What one unit shares between its walks.
struct UnitContext {
  clang::ASTContext& ast;
  clang::Sema* sema;
  Source& source;
  Types& types;
  Phrases& phrases;
  const project::Project& project;
  Facts& facts;
  std::set<const clang::FunctionDecl*> called;    // canonical, for contracts
  std::vector<clang::FunctionDecl*> instances;    // templates of the scope to walk later
  bool in_scope(clang::SourceLocation) const;
};

inline constexpr int kAnyComponent = -2;

struct Place {
  std::string path;                          // of the object or group
  clang::QualType type;                      // of what stands here
  const clang::ValueDecl* decl = nullptr;    // whose phrase speaks of it
  int offset = -1;                           // component within the group; -1: the whole, kAnyComponent: unknown
  int size = 0;                              // numbers of the group, where no type says it
  clang::QualType whole;                     // type of the group that it is a component of
  std::string owner;                         // path of the object that holds the field
};

// A part of a value that can be written through: `T.linear()`, `R.col(0)`.
struct View {
  Place base;
  OperationKind kind = OperationKind::copy;  // that gives the part
  int index = 0;
};

struct Result {
  std::optional<Place> place;
  std::optional<View> view;
  std::optional<Polynomial> number;
  ValueId value = ValueId::none;
  std::optional<Snapshot> object;
  std::vector<Polynomial> elements;  // a list of numbers
  bool literal = false;              // belongs to any frame
};

struct GroupState {
  ValueId base = ValueId::none;
  std::map<int, Polynomial> written;
  int first_written = -1;     // the component that was written first
  clang::SourceRange range;   // of the last write
  bool literal = false;       // the base belongs to any frame
  bool changed = false;       // written since entry
  bool self_update = false;   // its last writing read itself
  Place place;
};

struct Environment {
  std::map<std::string, GroupState> groups;
  std::map<std::string, Polynomial> numbers;
  std::map<std::string, std::shared_ptr<const Snapshot>> objects;
  std::map<std::string, std::uint32_t> epochs;
  std::map<const clang::VarDecl*, Place> aliases;
  bool dead = false;
};

// The phrase with its `own` frames given to an object.
Quantity owned(Quantity, const std::string& owner);

class Walker {
 public:
  Walker(UnitContext& unit, const clang::FunctionDecl* function) : unit_(unit), function_(function) {}

  // The whole body; a declaration without a body gives its contract.
  Function run();

  static std::string key_of(const clang::FunctionDecl*);

 private:
  // statements.cpp
  void enter();
  void leave();
  void hold_outputs();
  void contract_only();
  void statement(const clang::Stmt*);
  void declare(const clang::VarDecl*);
  void structured_binding(const clang::DecompositionDecl*);
  void branch(const clang::IfStmt*);
  void select(const clang::SwitchStmt*);
  void loop(const clang::Stmt* whole, const clang::Stmt* condition, const clang::Stmt* step, const clang::Stmt* body,
            const clang::CXXForRangeStmt* range = nullptr);
  bool unrolled(const clang::ForStmt*);
  void returned(const clang::ReturnStmt*);
  void constructor_initialisers(const clang::CXXConstructorDecl*);
  void join(const std::vector<Environment>&, const clang::Stmt* at);
  void settle_groups(Environment&);
  std::set<std::string> written_in(const clang::Stmt*);
  Environment take_environment();

  // places.cpp
  std::string path_of(const clang::VarDecl*);
  Place place_of(const clang::VarDecl*);
  std::optional<Place> member(const Place&, const clang::FieldDecl*);
  std::optional<Place> element(const Place&, const Polynomial& index, clang::QualType);
  int size_of(const Place&, const GroupState&);
  ValueId from_objects(const std::string& path, const Value& like, bool& fresh);
  Span span(clang::SourceRange) const;
  std::string brief(clang::SourceRange) const;
  std::uint32_t epoch(const std::string& path) const;
  ValueId read(const Place&, clang::SourceRange, bool whole_only = false);
  ValueId read_whole(const Place&, clang::SourceRange);
  Polynomial read_number(const Place&, clang::SourceRange);
  Snapshot snapshot(const Place&);
  void settle_below(const std::string& prefix);
  void write_value(const Place&, ValueId, bool literal, clang::SourceRange, const Operand& from, ReasonKind how, bool self);
  void write_number(const Place&, const Polynomial&, clang::SourceRange);
  void write_object(const Place&, const Snapshot&);
  void assign(const Place&, const Result&, const clang::Expr* from, clang::SourceRange, ReasonKind how = ReasonKind::assigned);
  void forget(const Place&);
  void forget_below(const std::string& prefix);
  ValueId settle(const std::string& path);
  void hold(ValueId, const Place&, clang::SourceRange, bool contract, const std::string& text);
  std::vector<Said> said_of(const Place&) const;
  std::string owner_of(const Place&) const;
  std::vector<Said> said_of_fields(const Place&) const;
  bool is_literal_group(const Place&) const;
  bool frameless(const Place&) const;
  void hold_return(ValueId, const Said&, Span, bool contract, const std::string& text);

  // expressions.cpp
  Result evaluate(const clang::Expr*);
  Result evaluate_plain(const clang::Expr*);
  Result reference(const clang::DeclRefExpr*);
  Result member_access(const clang::MemberExpr*);
  std::optional<Result> modelled_field(const clang::MemberExpr*, const clang::FieldDecl*, const Result& base);
  Result subscript(const clang::ArraySubscriptExpr*);
  Result unary(const clang::UnaryOperator*);
  Result binary(const clang::BinaryOperator*);
  Result compound(const clang::CompoundAssignOperator*);
  Result conditional(const clang::AbstractConditionalOperator*);
  Result list(const clang::InitListExpr*);
  Result lambda(const clang::LambdaExpr*);
  Result arithmetic(clang::BinaryOperatorKind, const Result&, const Result&, const clang::Expr*);
  void children(const clang::Stmt*);
  Polynomial number(const Result&, const clang::Expr*);
  ValueId value(const Result&, const clang::Expr*);
  bool literal(const Result&) const;
  std::optional<int> integer(const Result&, const clang::Expr*);
  Operand operand(const Result&, const clang::Expr*);
  std::vector<Polynomial> flatten(const clang::InitListExpr*);
  ValueId assembled(std::vector<Polynomial>, clang::QualType, clang::SourceRange, const std::string& text);
  Polynomial fresh_number();
  static std::string describe(const Polynomial&);
  Polynomial named_number(const std::string& name);
  Result result_of(ValueId);

  // calls.cpp
  Result call(const clang::CallExpr*);
  Result construct(const clang::CXXConstructExpr*);
  struct Argument {
    const clang::Expr* expr = nullptr;
    Result result;
    clang::QualType parameter;   // null: variadic
    const clang::ParmVarDecl* declared = nullptr;
    bool writable = false;
  };
  struct Invocation {
    const clang::Expr* expr = nullptr;
    const clang::FunctionDecl* callee = nullptr;
    bool has_object = false;
    std::vector<Argument> arguments;  // [0] the object, if any
    clang::QualType type;
  };
  Result invoke(Invocation&);
  std::optional<Result> modelled(Invocation&);
  std::optional<Result> reached(Invocation&);   // *p, p->, c[i], c.at(i) of types without a model
  Result assigned(Invocation&);
  void write_view(const View&, ValueId, clang::SourceRange, const Operand& from);
  Result numeric(Invocation&);
  void bind(Call&, const std::string& formal, Argument&);
  std::optional<Result> inlined(Invocation&);
  void enter_inlined(const clang::FunctionDecl*, Invocation&);
  Result called(Invocation&);
  bool stays_literal(OperationKind, Invocation&, const std::vector<int>& of);
  ValueId unknown_factor(const Argument&);
  std::size_t vectors_in(const Argument&);
  bool applied_to_each(const project::FunctionModel&, Invocation&);
  Result apply(const project::FunctionModel&, Invocation&);
  Result made(OperationKind, Invocation&, std::vector<Operand>, const project::FunctionModel&);
  Result put_together(OperationKind line, Invocation&, const std::vector<Operand>& lines, const project::FunctionModel&);
  void add_twins(const project::FunctionModel&, const Invocation&, int argument, Operation&, int operand);
  Result streamed(Invocation&);
  Result part(Invocation&, const project::FunctionModel&);
  Result component(Invocation&, const project::FunctionModel&);
  Result built(Invocation&, const project::FunctionModel&);
  void store(Invocation&, const project::FunctionModel&, ValueId, bool literal);
  Argument* argument(Invocation&, int number);
  bool fits(const project::FunctionModel&, Invocation&);
  Shape shape(const Argument&);
  void instantiate(const clang::FunctionDecl*);
  void forget_writable(Invocation&);
  bool inlinable(const clang::FunctionDecl*, const Invocation&);

  UnitContext& unit_;
  const clang::FunctionDecl* function_;
  Recorder recorder_;
  Environment now_;
  std::map<const clang::VarDecl*, std::string> paths_;
  std::map<const clang::VarDecl*, const clang::LambdaExpr*> lambdas_;
  std::uint32_t epochs_ = 0;
  std::uint32_t numbers_ = 0;
  int depth_ = 0;               // of inlining
  int unrolled_ = 1;            // copies of the innermost unrolled body
  std::optional<Place> this_;   // while inlining a method
  clang::SourceRange inlined_at_;
  struct Inlining {             // of an inlined call
    bool returned = false;
    int branches = 0;
    Result result;
  };
  std::vector<Inlining> frames_;
  std::set<std::string>* reads_ = nullptr;  // paths read while an assignment is evaluated
  std::vector<std::vector<Environment>> breaks_;  // of the loops around
  std::uint32_t branches_ = 0;                    // met so far
  std::vector<Operand> returns_;
  std::vector<Snapshot> returned_objects_;
  struct Stream {               // an open comma initialiser
    Place place;
    std::vector<Polynomial> numbers;
    std::vector<Operand> whole;  // vectors or matrices streamed whole
    std::vector<Shape> shapes;
  };
  std::optional<Stream> stream_;
};

}  // namespace dextral::gather
