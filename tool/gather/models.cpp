// Calls of functions that a library model speaks of.
#include <algorithm>

#include "gather/walker.h"

namespace dextral::gather {

using namespace clang;

namespace {

const std::map<std::string, OperationKind>& operation_names() {
  static const std::map<std::string, OperationKind> names = {
      {"product", OperationKind::product},     {"transpose", OperationKind::transpose},
      {"inverse", OperationKind::inverse},     {"copy", OperationKind::copy},
      {"sum", OperationKind::sum},             {"difference", OperationKind::difference},
      {"cross", OperationKind::cross},         {"dot", OperationKind::dot},
      {"skew", OperationKind::skew},           {"unskew", OperationKind::unskew},
      {"translation", OperationKind::translation}, {"pose", OperationKind::pose},
      {"column", OperationKind::column},       {"row", OperationKind::row},
      {"transform", OperationKind::transform}};
  return names;
}

std::string model_name(const FunctionDecl* function) {
  if (const auto* constructor = dyn_cast<CXXConstructorDecl>(function)) {
    std::string record = Types::name(constructor->getParent());
    return record + "::" + constructor->getParent()->getNameAsString();
  }
  return Types::name(function);
}

}  // namespace

// A base that a template was converted to says less than the class itself.
Shape Walker::shape(const Argument& argument) {
  Shape shape = unit_.types.of(argument.expr->getType()).shape;
  if (shape != Shape::object && shape != Shape::unknown) return shape;
  return unit_.types.of(argument.expr->IgnoreImplicit()->getType()).shape;
}

Walker::Argument* Walker::argument(Invocation& invocation, int number) {
  int index = invocation.has_object ? number : number - 1;
  if (index < 0 || index >= int(invocation.arguments.size())) return nullptr;
  return &invocation.arguments[std::size_t(index)];
}

bool Walker::fits(const project::FunctionModel& model, Invocation& invocation) {
  static const std::map<std::string, Shape> shapes = {
      {"number", Shape::number}, {"vector", Shape::vector}, {"row", Shape::row}, {"matrix", Shape::matrix},
      {"rotation", Shape::rotation}, {"quaternion", Shape::quaternion}, {"pose", Shape::pose},
      {"object", Shape::object}, {"container", Shape::container}, {"unknown", Shape::unknown}};
  auto is = [&](const std::string& wanted, const Argument& argument) {
    if (wanted.empty() || wanted == "any") return true;
    auto found = shapes.find(wanted);
    if (found != shapes.end()) return shape(argument) == found->second;
    // The name of a class: where a library stands in no namespace.
    const CXXRecordDecl* record = unit_.types.bare(argument.expr->getType())->getAsCXXRecordDecl();
    return record && Types::name(record) == wanted;
  };
  std::size_t first = invocation.has_object ? 1 : 0;
  if (!model.object.empty() && (!invocation.has_object || !is(model.object, invocation.arguments[0]))) return false;
  if (model.given.empty()) return true;
  std::size_t given = 0;  // default arguments are not counted
  for (std::size_t i = first; i < invocation.arguments.size(); ++i)
    given += !isa<CXXDefaultArgExpr>(invocation.arguments[i].expr);
  if (model.given.size() != given) return false;
  for (std::size_t i = 0; i < given; ++i)
    if (!is(model.given[i], invocation.arguments[first + i])) return false;
  return true;
}

std::optional<Result> Walker::modelled(Invocation& invocation) {
  const auto* models = unit_.project.models.functions(model_name(invocation.callee));
  if (!models) return std::nullopt;
  for (const project::FunctionModel& model : *models)
    if (fits(model, invocation)) return apply(model, invocation);
  return std::nullopt;
}

// `P * AngleAxisd(t, axis) * C`: a rotation of unknown making is a factor all the same.
ValueId Walker::unknown_factor(const Argument& argument) {
  const Value like = unit_.types.value(unit_.types.bare(argument.expr->getType()), brief(argument.expr->getSourceRange()),
                                       span(argument.expr->getSourceRange()));
  const bool factor = like.shape == Shape::rotation || like.shape == Shape::quaternion || like.shape == Shape::pose;
  if (!factor || argument.result.object) return ValueId::none;
  return recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
}

// How many vectors `double pv[2][3]` holds; 0 where it is a matrix or no array of vectors.
std::size_t Walker::vectors_in(const Argument& argument) {
  if (!argument.result.place || argument.result.place->offset != -1) return 0;
  const auto* array = unit_.ast.getAsConstantArrayType(argument.result.place->type);
  if (!array || unit_.types.of(argument.result.place->type).group || unit_.types.numbers(array->getElementType()) != 3) return 0;
  const std::uint64_t count = array->getSize().getLimitedValue(1000);
  return count <= 8 ? std::size_t(count) : 0;
}

// A position and its rates in one array: what is done to the array is done to each.
bool Walker::applied_to_each(const project::FunctionModel& model, Invocation& invocation) {
  std::size_t count = 0;
  for (const Argument& argument : invocation.arguments) count = std::max(count, vectors_in(argument));
  for (std::size_t k = 0; k < count; ++k) {
    Invocation one = invocation;
    for (Argument& argument : one.arguments) {
      if (vectors_in(argument) <= k) continue;
      const Place whole = *argument.result.place;
      argument.result = Result{};
      argument.result.place = element(whole, Polynomial(double(k)), unit_.ast.getAsConstantArrayType(whole.type)->getElementType());
    }
    apply(model, one);
  }
  return count > 0;
}

// `dt * Vec3(1, 0, 0)` belongs to any frame, as what it is made from does.
bool Walker::stays_literal(OperationKind kind, Invocation& invocation, const std::vector<int>& of) {
  if (kind != OperationKind::copy && kind != OperationKind::sum && kind != OperationKind::difference) return false;
  return !of.empty() && std::all_of(of.begin(), of.end(), [&](int number) {
    Argument* argument = this->argument(invocation, number);
    return argument && literal(argument->result);
  });
}

Result Walker::apply(const project::FunctionModel& model, Invocation& invocation) {
  if (applied_to_each(model, invocation)) return {};
  if (model.is == "element") return component(invocation, model);
  if (model.is == "elements") return built(invocation, model);
  if (model.is == "stream") return streamed(invocation);
  if (model.is == "part") return part(invocation, model);
  if (model.is == "literal" || model.is == "fill") {
    Result result;
    result.literal = true;
    if (model.into != project::kReturn) {
      store(invocation, model, ValueId::none, true);
      if (auto* object = argument(invocation, model.into); model.also_returned && object) return object->result;
      return {};
    }
    return result;
  }
  const bool lines = model.is == "columns" || model.is == "rows";
  auto kind = operation_names().find(lines ? model.is.substr(0, model.is.size() - 1) : model.is);
  if (kind == operation_names().end()) {  // opaque, build, extract
    forget_writable(invocation);
    if (model.into != project::kReturn) store(invocation, model, ValueId::none, false);
    return {};
  }
  std::vector<int> of = model.of;
  if (of.empty())
    for (std::size_t i = 0; i < invocation.arguments.size(); ++i) of.push_back(int(i) + (invocation.has_object ? 0 : 1));
  if (stays_literal(kind->second, invocation, of)) {
    Result result;
    result.literal = true;
    if (model.into == project::kReturn) return result;
    store(invocation, model, ValueId::none, true);
    return {};
  }
  std::vector<Operand> operands;
  for (int number : of) {
    Argument* argument = this->argument(invocation, number);
    if (!argument) continue;
    Operand operand = this->operand(argument->result, argument->expr);
    if (operand.value == ValueId::none) operand.value = unknown_factor(*argument);
    if (operand.value == ValueId::none) {
      // A part that is not understood: the whole is not.
      if (model.into != project::kReturn) store(invocation, model, ValueId::none, false);
      return {};
    }
    if (std::find(model.transposed.begin(), model.transposed.end(), number) != model.transposed.end()) {
      const Value like = recorder_.at(operand.value);
      ValueId flipped = recorder_.value(like.shape, like.rotation, operand.text, like.span, like.inverse_form);
      recorder_.operation(OperationKind::transpose, flipped, {operand}, span(invocation.expr->getSourceRange()), operand.text);
      add_twins(model, invocation, number, recorder_.function.operations.back(), 0);
      operand.value = flipped;
      operand.span = {};
    }
    operands.push_back(std::move(operand));
  }
  if (lines) return put_together(kind->second, invocation, operands, model);
  const std::size_t first = recorder_.function.operations.size();
  Result result = made(kind->second, invocation, std::move(operands), model);
  auto& operations = recorder_.function.operations;
  for (std::size_t i = 0; i < of.size() && first < operations.size(); ++i)
    if (std::find(model.transposed.begin(), model.transposed.end(), of[i]) == model.transposed.end())
      add_twins(model, invocation, of[i], operations[first], int(i));
  return result;
}

// `op` does with its operand what the model does with an argument.
void Walker::add_twins(const project::FunctionModel& model, const Invocation& invocation, int argument, Operation& op, int operand) {
  const auto* call = dyn_cast<CallExpr>(invocation.expr);
  if (!call || depth_ > 0) return;
  const Expr* callee = call->getCallee()->IgnoreImplicit();
  const auto* member = dyn_cast<MemberExpr>(callee);
  op.callee = span(member ? SourceRange(member->getMemberLoc()) : SourceRange(callee->getEndLoc()));
  for (auto& [number, name] : unit_.project.models.twins(model))
    if (number == argument) op.twins.push_back({operand, std::move(name)});
}

// A matrix whose columns or rows are given: each of them has a frame of it.
Result Walker::put_together(OperationKind line, Invocation& invocation, const std::vector<Operand>& lines,
                            const project::FunctionModel& model) {
  const Span where = span(invocation.expr->getSourceRange());
  const std::string text = brief(invocation.expr->getSourceRange());
  const Value like = unit_.types.value(invocation.type, text, where);
  Result result;
  result.value = recorder_.value(like.shape, like.rotation, text, where, like.inverse_form);
  for (std::size_t i = 0; i < lines.size(); ++i)
    recorder_.operation(line, lines[i].value, {{result.value, {}, text}}, where, text).numbers = {int(i)};
  if (model.into != project::kReturn) store(invocation, model, result.value, false);
  return result;
}

Result Walker::made(OperationKind kind, Invocation& invocation, std::vector<Operand> operands, const project::FunctionModel& model) {
  SourceRange range = invocation.expr->getSourceRange();
  Span where = span(range);
  std::string text = brief(range);
  Result result;
  if (kind == OperationKind::dot) {
    recorder_.operation(kind, ValueId::none, operands, where, text);
    result.number = fresh_number();
    return result;
  }
  int line = model.index;
  if ((kind == OperationKind::column || kind == OperationKind::row) && line < 0)
    if (Argument* index = argument(invocation, invocation.has_object ? 1 : 2))
      line = integer(index->result, index->expr).value_or(-1);
  Argument* target = model.into == project::kReturn ? nullptr : argument(invocation, model.into);
  QualType type = target ? unit_.types.bare(target->expr->getType()) : invocation.type;
  // As an argument `double out[3]` is a pointer; what stands there is an array.
  if (target && target->result.place && target->result.place->offset == -1) type = target->result.place->type;
  Value like = unit_.types.value(type, text, where);
  if (like.shape == Shape::number) {  // a product of a row and a vector
    recorder_.operation(kind, recorder_.value(Shape::number, false, text, where), operands, where, text);
    result.number = fresh_number();
    return result;
  }
  if (like.shape == Shape::unknown && !operands.empty() &&
      (kind == OperationKind::copy || kind == OperationKind::sum || kind == OperationKind::difference || kind == OperationKind::cross))
    like.shape = recorder_.at(operands[0].value).shape;
  ValueId id = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
  Operation& op = recorder_.operation(kind, id, operands, where, text);
  if (line >= 0) op.numbers = {line};
  if (kind == OperationKind::copy && model.factor) op.numbers = {model.factor};
  if (model.into != project::kReturn) {
    store(invocation, model, id, false);
    if (target && model.also_returned) return target->result;
    return {};
  }
  result.value = id;
  Argument* object = argument(invocation, 0);
  bool part = kind == OperationKind::copy || kind == OperationKind::translation || kind == OperationKind::column || kind == OperationKind::row;
  if (part && object && invocation.has_object && object->result.place && object->result.place->offset == -1)
    result.view = View{*object->result.place, kind, line};
  return result;
}

// The new version of an argument that the function writes.
void Walker::store(Invocation& invocation, const project::FunctionModel& model, ValueId id, bool literal) {
  Argument* target = argument(invocation, model.into);
  if (!target) return;
  SourceRange range = invocation.expr->getSourceRange();
  Operand from{id, {}, brief(range)};
  if (target->result.view && !literal) return write_view(*target->result.view, id, range, from);
  if (!target->result.place) return;
  const Place& place = *target->result.place;
  if (id == ValueId::none && !literal) return forget(place);
  const bool in_place = model.of.empty() || std::find(model.of.begin(), model.of.end(), model.into) != model.of.end();
  bool self = false;
  for (const Argument& other : invocation.arguments)
    self |= other.result.place && other.result.place->path == place.path && (&other != target || in_place);
  if (reads_ && reads_->contains(place.path)) self = true;
  write_value(place, id, literal, range, from, ReasonKind::assigned, self && !literal);
}

void Walker::write_view(const View& view, ValueId id, SourceRange range, const Operand& from) {
  if (id == ValueId::none) return forget(view.base);
  TypeFacts base = unit_.types.of(view.base.type);
  if (view.kind == OperationKind::copy) {
    bool self = reads_ && reads_->contains(view.base.path);
    return write_value(view.base, id, false, range, from, ReasonKind::assigned, self);
  }
  // A column, a row or the translation of what is being put together.
  auto found = now_.groups.find(view.base.path);
  if (found == now_.groups.end() || found->second.literal) {
    Value like = unit_.types.value(view.base.type, brief(range), span(range));
    GroupState state;
    state.place = view.base;
    state.base = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
    now_.groups[view.base.path] = state;
    hold(state.base, view.base, range, false, like.text);
  }
  ValueId whole = settle(view.base.path);
  Operation& op = recorder_.operation(view.kind, id, {{whole, {}, recorder_.at(whole).text}}, span(range), brief(range));
  op.target = from.text;
  if (view.index >= 0) op.numbers = {view.index};
}

Result Walker::assigned(Invocation& invocation) {
  Argument &to = invocation.arguments[0], &from = invocation.arguments[1];
  SourceRange range = invocation.expr->getSourceRange();
  if (to.result.view && !to.result.place) {
    Operand operand = this->operand(from.result, from.expr);
    if (!literal(from.result)) write_view(*to.result.view, operand.value, range, operand);
    return to.result;
  }
  if (to.result.place) assign(*to.result.place, from.result, from.expr, range);
  return to.result;
}

Result Walker::component(Invocation& invocation, const project::FunctionModel& model) {
  Result result;
  if (model.into != project::kReturn) {  // a setter of one component
    Argument* target = argument(invocation, model.into);
    Argument* from = model.of.empty() ? nullptr : argument(invocation, model.of[0]);
    if (!target || !target->result.place || !from || model.index < 0) return forget_writable(invocation), result;
    Place place = *target->result.place;
    place.whole = place.type;
    place.type = unit_.ast.DoubleTy;
    place.offset = model.index;
    write_number(place, number(from->result, from->expr), invocation.expr->getSourceRange());
    return result;
  }
  Argument* object = argument(invocation, invocation.has_object ? 0 : 1);
  if (!object) return {};
  TypeFacts facts = unit_.types.of(unit_.types.bare(object->expr->getType()));
  std::optional<int> index = model.index >= 0 ? std::optional(model.index) : std::nullopt;
  if (model.index < 0) {
    std::vector<int> indices;
    bool known = true;
    std::size_t first = 1;
    for (std::size_t i = first; i < invocation.arguments.size(); ++i) {
      auto k = integer(invocation.arguments[i].result, invocation.arguments[i].expr);
      known = known && k && *k >= model.base;
      if (k) indices.push_back(*k - model.base);
    }
    if (!model.transposed.empty() && indices.size() == 2) std::swap(indices[0], indices[1]);
    int columns = facts.numbers == 16 ? 4 : facts.numbers == 4 && facts.shape == Shape::matrix ? 2 : 3;
    if (known && indices.size() == 1) index = indices[0];
    if (known && indices.size() == 2) index = facts.numbers > 4 || facts.shape == Shape::matrix ? columns * indices[0] + indices[1] : indices[0] + indices[1];
  }
  if (facts.shape == Shape::pose) return {};
  if (facts.numbers == 0 && facts.shape != Shape::unknown) {
    if (object->result.place && !index) return {};
    if (object->result.place) {
      Place place = *object->result.place;
      place.path += "[" + std::to_string(*index - *index % 3) + "+]";
      place.offset = *index % 3;
      place.size = 3;
      place.type = invocation.type.getNonReferenceType();
      place.whole = {};
      place.decl = nullptr;
      result.place = place;
    }
    return result;
  }
  if (object->result.place && !object->result.view) {
    Place place = *object->result.place;
    if (place.offset == -1) place.whole = place.type;
    place.type = invocation.type.getNonReferenceType();
    place.offset = index ? std::max(place.offset, 0) + *index : kAnyComponent;
    result.place = place;
    return result;
  }
  ValueId id = value(object->result, object->expr);
  result.number = id != ValueId::none && index ? Polynomial(Atom{id, std::uint32_t(*index)}) : fresh_number();
  return result;
}

Result Walker::built(Invocation& invocation, const project::FunctionModel& model) {
  std::vector<Polynomial> elements;
  for (std::size_t i = invocation.has_object ? 1 : 0; i < invocation.arguments.size(); ++i) {
    Argument& argument = invocation.arguments[i];
    if (unit_.types.is_number(argument.expr->getType())) {
      elements.push_back(number(argument.result, argument.expr));
      continue;
    }
    int count = unit_.types.of(argument.expr->getType()).numbers;
    ValueId id = literal(argument.result) ? ValueId::none : value(argument.result, argument.expr);
    for (int k = 0; k < count; ++k)
      elements.push_back(id == ValueId::none ? Polynomial(0.0) : Polynomial(Atom{id, std::uint32_t(k)}));
  }
  if (model.order == "wxyz" && elements.size() == 4) std::rotate(elements.begin(), elements.begin() + 1, elements.end());
  if (model.order == "columns" && elements.size() == 9)
    for (std::size_t i = 0; i < 3; ++i)
      for (std::size_t j = 0; j < i; ++j) std::swap(elements[3 * i + j], elements[3 * j + i]);
  if (model.into != project::kReturn) {
    Argument* target = argument(invocation, model.into);
    SourceRange range = invocation.expr->getSourceRange();
    if (target && target->result.place) {
      Result from;
      from.elements = elements;
      from.literal = is_literal(elements);
      assign(*target->result.place, from, nullptr, range);
      if (model.also_returned) return target->result;
    }
    return {};
  }
  Result result;
  result.literal = is_literal(elements);
  result.elements = std::move(elements);
  return result;
}

// `m << a, b, c`: the innermost call opens the stream, each comma adds to it.
Result Walker::streamed(Invocation& invocation) {
  if (invocation.arguments.size() != 2) return {};
  Argument &left = invocation.arguments[0], &right = invocation.arguments[1];
  bool opens = invocation.callee->getOverloadedOperator() == OO_LessLess;
  if (opens) {
    stream_.reset();
    if (!left.result.place) return {};
    stream_ = Stream{*left.result.place, {}, {}, {}};
  }
  if (!stream_) return {};
  TypeFacts facts = unit_.types.of(stream_->place.type);
  Shape shape = this->shape(right);
  if (shape == Shape::number) stream_->numbers.push_back(number(right.result, right.expr));
  else stream_->whole.push_back(operand(right.result, right.expr)), stream_->shapes.push_back(shape);
  bool complete = int(stream_->numbers.size()) == facts.numbers ||
                  (facts.numbers == 9 && stream_->whole.size() == 3) || (facts.numbers == 3 && stream_->whole.size() == 1);
  Place place = stream_->place;
  if (!complete) {
    if (opens) forget(place);
    return {};
  }
  Result from;
  SourceRange range = invocation.expr->getSourceRange();
  if (stream_->whole.empty()) {
    from.elements = stream_->numbers;
    from.literal = is_literal(from.elements);
  } else {
    bool columns = stream_->shapes[0] == Shape::vector;
    for (int i = 0; i < 3 && facts.numbers == 9; ++i)
      for (int j = 0; j < 3; ++j) {
        ValueId id = stream_->whole[std::size_t(columns ? j : i)].value;
        from.elements.push_back(id == ValueId::none ? Polynomial::unknown() : Polynomial(Atom{id, std::uint32_t(columns ? i : j)}));
      }
    if (facts.numbers == 3) from.value = stream_->whole[0].value;
  }
  if (!from.elements.empty() && !from.literal) from.value = assembled(from.elements, place.type, range, brief(range));
  from.elements.clear();
  assign(place, from, nullptr, range);
  stream_.reset();
  return {};
}

Result Walker::part(Invocation& invocation, const project::FunctionModel& model) {
  Argument* object = argument(invocation, 0);
  if (!object) return {};
  Shape whole = shape(*object);
  TypeFacts facts = unit_.types.of(unit_.types.bare(object->expr->getType())), given = unit_.types.of(invocation.type);
  std::vector<std::optional<int>> numbers;
  std::string name = invocation.callee->getNameAsString();
  std::string key = name;
  if (const auto* arguments = invocation.callee->getTemplateSpecializationArgs())
    for (const TemplateArgument& argument : arguments->asArray())
      if (argument.getKind() == TemplateArgument::Integral) key += "," + std::to_string(whole_number(argument.getAsIntegral()));
  bool known = true;
  for (std::size_t i = 1; i < invocation.arguments.size(); ++i) {
    Polynomial p = number(invocation.arguments[i].result, invocation.arguments[i].expr);
    numbers.push_back(p.constant() ? std::optional(int(*p.constant())) : std::nullopt);
    known = known && p.known();
    key += ";" + describe(p);
  }
  auto make = [&](OperationKind kind, int line) {
    project::FunctionModel as = model;
    as.index = line;
    return made(kind, invocation, {operand(object->result, object->expr)}, as);
  };
  auto at = [&](std::size_t i, int k) { return numbers.size() > i && numbers[i] && *numbers[i] == k; };
  bool corner = (name == "block" && at(0, 0) && at(1, 0)) || name == "topLeftCorner";
  bool homogeneous = facts.numbers == 16 || whole == Shape::pose;
  if (given.numbers && given.numbers == facts.numbers && given.shape == facts.shape) return make(OperationKind::copy, -1);
  if (homogeneous && given.numbers == 9 && corner) return make(OperationKind::copy, -1);
  if (homogeneous && given.numbers == 3 && ((name == "block" && at(0, 0) && at(1, 3)) || name == "topRightCorner"))
    return make(OperationKind::translation, -1);
  if (facts.numbers == 9 && given.numbers == 3 && name == "block") {
    if (given.shape == Shape::vector && at(0, 0) && numbers[1]) return make(OperationKind::column, *numbers[1]);
    if (given.shape == Shape::row && at(1, 0) && numbers[0]) return make(OperationKind::row, *numbers[0]);
  }
  Result result;
  if (object->result.place && known && object->result.place->offset == -1 && facts.numbers == 0) {
    Place place = *object->result.place;
    place.path += "[" + key + "]";
    place.type = invocation.type.getNonReferenceType();
    place.decl = nullptr;
    result.place = place;
  }
  return result;
}

}  // namespace dextral::gather
