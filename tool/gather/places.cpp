// Reading and writing of places: versions, components, objects.
#include <algorithm>

#include "gather/walker.h"

namespace dextral::gather {

using namespace clang;

namespace {

bool below(const std::string& path, const std::string& prefix) {
  return path.compare(0, prefix.size(), prefix) == 0 &&
         (path.size() == prefix.size() || path[prefix.size()] == '.' || path[prefix.size()] == '[');
}

// Where a part of an object comes from: a value, or a path at an epoch.
struct Origin {
  ValueId value = ValueId::none;
  Snapshot rest;  // path and epoch, with the parts that lie below
};

Origin descend(const Snapshot& snapshot, const std::string& path) {
  const Part* best = nullptr;
  for (const Part& part : snapshot.parts)
    if (below(path, part.path) && (!best || part.path.size() >= best->path.size())) best = &part;
  if (!best) {
    Origin origin;
    if (!snapshot.path.empty()) origin.rest = {snapshot.path + path, snapshot.epoch, {}};
    for (const Part& part : snapshot.parts)
      if (part.path.size() > path.size() && below(part.path, path))
        origin.rest.parts.push_back({part.path.substr(path.size()), part.is});
    return origin;
  }
  std::string rest = path.substr(best->path.size());
  if (auto* value = std::get_if<ValueId>(&best->is)) return {rest.empty() ? *value : ValueId::none, {}};
  auto& inner = std::get<std::shared_ptr<const Snapshot>>(best->is);
  return inner ? descend(*inner, rest) : Origin{};
}

bool supported(int size) { return size == 2 || size == 3 || size == 4 || size == 9 || size == 16; }

}  // namespace

Quantity owned(Quantity quantity, const std::string& owner) {
  for (Frame* frame : {&quantity.in, &quantity.first, &quantity.second, &quantity.seen_from})
    if (frame->own) frame->owner = owner;
  return quantity;
}

bool UnitContext::in_scope(SourceLocation location) const {
  if (location.isInvalid()) return false;
  SourceLocation expansion = ast.getSourceManager().getExpansionLoc(location);
  if (ast.getSourceManager().isInSystemHeader(expansion)) return false;
  std::string file = source.file_of(expansion);
  return !file.empty() && project.file.in_scope(file);
}

Span Walker::span(SourceRange range) const {
  return unit_.source.span(depth_ > 0 ? inlined_at_ : range);
}

std::string Walker::brief(SourceRange range) const { return unit_.source.brief(range); }

std::string Walker::path_of(const VarDecl* decl) {
  auto [found, fresh] = paths_.try_emplace(decl, "");
  if (!fresh) return found->second;
  std::string& path = found->second;
  if (const auto* parameter = dyn_cast<ParmVarDecl>(decl); parameter && parameter->getDeclContext() == function_)
    path = "p" + std::to_string(parameter->getFunctionScopeIndex());
  else if (decl->hasGlobalStorage() && !decl->isStaticLocal())
    path = "g" + std::to_string(paths_.size()) + "_" + decl->getNameAsString();
  else
    path = "l" + std::to_string(paths_.size());
  return path;
}

Place Walker::place_of(const VarDecl* decl) {
  auto alias = now_.aliases.find(decl);
  if (alias != now_.aliases.end()) {
    Place place = alias->second;
    if (!unit_.phrases.of(decl).empty()) place.decl = decl;
    return place;
  }
  // A parameter `double v[3]` is a pointer to Clang and three numbers to its author.
  QualType type = decl->getType();
  if (const auto* parameter = dyn_cast<ParmVarDecl>(decl))
    if (QualType written = parameter->getOriginalType(); unit_.ast.getAsConstantArrayType(written)) type = written;
  Place place{path_of(decl), type, decl, -1, 0, {}, ""};
  if (auto slot = unit_.phrases.component(decl)) {
    place.path = (isa<ParmVarDecl>(decl) && depth_ == 0 ? "q" : "l") + slot->group;
    place.offset = slot->index;
    place.size = slot->count;
  }
  return place;
}

std::optional<Place> Walker::member(const Place& base, const FieldDecl* field) {
  TypeFacts facts = unit_.types.of(unit_.types.bare(base.type));
  Place place = base;
  place.type = field->getType();
  const std::optional<Slot3> slot = unit_.phrases.component(field);
  // A record of nothing but numbers is one group, unless its fields form groups of their own.
  if (facts.group && !facts.model && !(slot && slot->said && slot->count != facts.numbers)) {
    int index = unit_.types.index(field);
    if (index < 0) return std::nullopt;
    if (place.whole.isNull()) place.whole = base.type;
    if (base.offset != kAnyComponent) place.offset = std::max(base.offset, 0) + index;
    return place;
  }
  if (field->isAnonymousStructOrUnion()) return place;
  place.decl = field;
  place.owner = base.path;
  place.offset = -1;
  place.whole = {};
  if (slot) {
    place.path = base.path + "." + slot->group;
    place.offset = slot->index;
    place.size = slot->count;
    return place;
  }
  place.path = base.path + "." + field->getNameAsString();
  return place;
}

std::optional<Place> Walker::element(const Place& base, const Polynomial& index, QualType type) {
  Place place = base;
  place.type = type;
  std::optional<double> constant = index.constant();
  TypeFacts facts = unit_.types.of(base.type);
  if (facts.group || base.offset != -1) {
    if (place.whole.isNull()) place.whole = base.type;
    int each = std::max(unit_.types.numbers(type), 1);
    if (!constant || base.offset == kAnyComponent) place.offset = kAnyComponent;
    else place.offset = std::max(base.offset, 0) + int(*constant) * each;
    return place;
  }
  std::string name = index.known() ? describe(index) : "?" + std::to_string(++numbers_);
  if (constant && unit_.types.is_number(type) && !type->isPointerType()) {
    int k = int(*constant);
    place.path = base.path + "[" + std::to_string(k - k % 3) + "+]";
    place.offset = k % 3;
    place.size = 3;
    return place;
  }
  place.path = base.path + "[" + name + "]";
  place.whole = {};
  return place;
}

std::uint32_t Walker::epoch(const std::string& path) const {
  std::uint32_t newest = 0;
  for (const auto& [prefix, epoch] : now_.epochs)
    if (below(path, prefix)) newest = std::max(newest, epoch);
  return newest;
}

std::vector<Said> Walker::said_of(const Place& place) const {
  std::vector<Said> said;
  if (place.decl) said = unit_.phrases.of(place.decl);
  if (place.decl)
    for (Said& more : unit_.phrases.of_type(place.decl->getType())) said.push_back(std::move(more));
  if (said.empty()) said = said_of_fields(place);
  if (!said.empty() || !place.decl) return said;
  if (auto quantity = project::named(unit_.project.file, place.decl->getNameAsString()))
    said.push_back({*quantity, dextral::Source::named, unit_.source.span(place.decl->getLocation()), ""});
  return said;
}

// `float vx, vy, vz;  //| in ned`: what the fields of a record of numbers say
// with one voice is said of the record.
std::vector<Said> Walker::said_of_fields(const Place& place) const {
  const QualType type = place.whole.isNull() ? place.type : place.whole;
  const auto* record = type.isNull() ? nullptr : unit_.types.bare(type)->getAsRecordDecl();
  const TypeFacts facts = record ? unit_.types.of(unit_.types.bare(type)) : TypeFacts{};
  if (!facts.group || facts.model) return {};
  std::vector<Said> all;
  for (const FieldDecl* field : record->fields()) {
    std::vector<Said> said = unit_.phrases.of(field);
    if (said.size() != 1 || (!all.empty() && said[0].text != all[0].text)) return {};
    all = std::move(said);
  }
  return all;
}

// The object whose frames `own` speaks of: in a method its own.
std::string Walker::owner_of(const Place& place) const {
  if (!place.owner.empty()) return place.owner;
  return this_ ? this_->path : isa<CXXMethodDecl>(function_) ? "this" : "";
}

void Walker::hold(ValueId id, const Place& place, SourceRange range, bool contract, const std::string& text) {
  if (id == ValueId::none) return;
  for (Said& said : said_of(place)) {
    Frames frames = dextral::frames(said.quantity);
    Shape shape = recorder_.at(id).shape;
    if (!frames.rows.known()) continue;
    if (shape == Shape::number || shape == Shape::object || shape == Shape::container) continue;
    if (said.source == dextral::Source::named && frames.columns.known() == (shape == Shape::vector)) continue;
    if (frames.columns.known() && shape == Shape::vector) continue;
    Hold hold{owned(said.quantity, owner_of(place)), said.source, said.text, said.span, place.decl ? place.decl->getNameAsString() : text,
              contract && said.source == dextral::Source::declared, -1, ""};
    recorder_.hold(id, std::move(hold), span(range), text);
  }
}

void Walker::hold_return(ValueId id, const Said& said, Span where, bool contract, const std::string& text) {
  if (!frames(said.quantity).rows.known()) return;
  recorder_.hold(id, {owned(said.quantity, "this"), said.source, said.text, said.span, recorder_.function.name, contract, -1, ""},
                 where, text);
}

ValueId Walker::from_objects(const std::string& path, const Value& like, bool& fresh) {
  const std::string* best = nullptr;
  for (const auto& [prefix, object] : now_.objects)
    if (below(path, prefix) && (!best || prefix.size() > best->size())) best = &prefix;
  if (!best) return ValueId::none;
  // A later change of a part of it by a call comes first.
  for (const auto& [prefix, epoch] : now_.epochs)
    if (below(path, prefix) && prefix.size() > best->size()) return ValueId::none;
  Origin origin = descend(*now_.objects[*best], path.substr(best->size()));
  if (origin.value != ValueId::none) return origin.value;
  fresh = true;
  if (origin.rest.path.empty()) return recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
  auto [id, made] = recorder_.reading(origin.rest.path, origin.rest.epoch, like);
  fresh = made;
  return id;
}

// `none`: deliberately frameless; each reading stands for itself.
bool Walker::frameless(const Place& place) const {
  if (!place.decl) return false;
  std::vector<Said> said = unit_.phrases.of(place.decl);
  return std::any_of(said.begin(), said.end(), [](const Said& s) { return s.quantity.kind == Kind::none; });
}

ValueId Walker::read_whole(const Place& place, SourceRange range) {
  if (reads_) reads_->insert(place.path);
  if (frameless(place)) {
    QualType type = place.offset == -1 || place.whole.isNull() ? place.type : place.whole;
    Value like = unit_.types.value(type, brief(range), span(range));
    return recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
  }
  auto found = now_.groups.find(place.path);
  if (found != now_.groups.end()) {
    ValueId base = settle(place.path);
    GroupState& state = now_.groups[place.path];
    if (state.literal) {
      const Value& like = recorder_.at(base);
      return recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
    }
    return base;
  }
  QualType type = place.offset == -1 ? place.type : place.whole;
  Value like = type.isNull() ? Value{Shape::vector, false, brief(range), "", span(range)}
                             : unit_.types.value(type, brief(range), span(range));
  if (place.offset != -1 && place.decl) like.text = place.decl->getNameAsString();
  bool fresh = false;
  ValueId id = from_objects(place.path, like, fresh);
  if (id == ValueId::none) std::tie(id, fresh) = recorder_.reading(place.path, epoch(place.path), like);
  GroupState state;
  state.base = id;
  state.place = place;
  state.place.offset = -1;
  if (place.offset != -1 && !place.whole.isNull()) state.place.type = place.whole;
  now_.groups[place.path] = state;
  hold(id, place, range, epoch(place.path) == 0, recorder_.at(id).text);
  return id;
}

int Walker::size_of(const Place& place, const GroupState& state) {
  if (place.size) return place.size;
  QualType type = place.whole.isNull() ? place.type : place.whole;
  int size = type.isNull() ? 0 : unit_.types.of(type).numbers;
  if (size) return size;
  int most = 0;
  for (const auto& [index, number] : state.written) most = std::max(most, index + 1);
  return most;
}

// Component writes become one new version.
ValueId Walker::settle(const std::string& path) {
  GroupState& state = now_.groups[path];
  if (state.written.empty()) return state.base;
  std::map<int, Polynomial> written = std::move(state.written);
  state.written.clear();
  GroupState with = state;
  with.written = written;
  int size = size_of(state.place, with);
  SourceRange range = state.range;
  if (!supported(size) || written.rbegin()->first >= size) {
    state.base = recorder_.value(Shape::unknown, false, brief(range), span(range));
    state.literal = false;
    return state.base;
  }
  Place place = state.place;
  bool complete = int(written.size()) == size;
  ValueId base = complete ? ValueId::none : state.base;
  if (!complete && base == ValueId::none) {
    now_.groups.erase(path);
    base = read_whole(place, range);
  }
  std::vector<Polynomial> elements;
  bool self = false;
  for (int i = 0; i < size; ++i) {
    auto own = written.find(i);
    elements.push_back(own != written.end() ? own->second : Polynomial(Atom{base, std::uint32_t(i)}));
    if (own == written.end()) self = true;
  }
  GroupState& now = now_.groups[path];
  now.place = place;
  now.range = range;
  now.changed = true;
  std::string name = place.decl ? place.decl->getNameAsString() : brief(range);
  QualType type = place.whole.isNull() ? place.type : place.whole;
  now.base = assembled(elements, type.isNull() || size != unit_.types.of(type).numbers ? QualType() : type, range, name);
  now.literal = is_literal(elements);
  if (size == 9 && recorder_.at(now.base).shape == Shape::unknown) recorder_.at(now.base).shape = Shape::matrix;
  if (size == 3 && recorder_.at(now.base).shape == Shape::unknown) recorder_.at(now.base).shape = Shape::vector;
  now.self_update = self || state.self_update;
  ValueId id = now.base;
  bool said = !said_of(place).empty();
  if (said) now.literal = false;
  if (!now.self_update) hold(id, place, range, false, name);
  return id;
}

ValueId Walker::read(const Place& place, SourceRange range, bool) {
  if (place.offset == -1) return read_whole(place, range);
  if (place.offset == kAnyComponent) return ValueId::none;
  int count = unit_.types.numbers(place.type);
  TypeFacts whole = place.whole.isNull() ? TypeFacts{} : unit_.types.of(place.whole);
  if (count == 3 && whole.numbers == 9 && place.offset % 3 == 0) {
    ValueId base = read_whole(place, range);
    ValueId row = recorder_.value(Shape::vector, false, brief(range), span(range));
    recorder_.operation(OperationKind::row, row, {{base, {}, recorder_.at(base).text}}, span(range), brief(range)).numbers = {place.offset / 3};
    return row;
  }
  if (count < 2) return ValueId::none;
  std::vector<Polynomial> elements;
  for (int i = 0; i < count; ++i) {
    Place one = place;
    one.offset += i;
    elements.push_back(read_number(one, range));
  }
  return assembled(elements, place.type, range, brief(range));
}

// The same text for the same polynomial.
std::string Walker::describe(const Polynomial& p) {
  if (auto constant = p.constant(); constant && *constant == int(*constant)) return std::to_string(int(*constant));
  std::string text;
  for (const auto& [monomial, coefficient] : p.terms()) {
    text += (text.empty() ? "" : "+") + std::to_string(coefficient);
    for (const Atom& atom : monomial)
      text += "*" + (atom.opaque() ? "n" : "v" + std::to_string(std::uint32_t(atom.value)) + ":") + std::to_string(atom.index);
  }
  return text;
}

// One opaque number per name, for as long as nothing forgets it.
Polynomial Walker::named_number(const std::string& name) {
  auto [found, fresh] = now_.numbers.try_emplace("=" + name);
  if (fresh) found->second = fresh_number();
  return found->second;
}

Polynomial Walker::fresh_number() { return Polynomial(Atom{ValueId::none, ++numbers_}); }

Polynomial Walker::read_number(const Place& place, SourceRange range) {
  if (place.offset == kAnyComponent) return fresh_number();
  if (place.offset >= 0) {
    auto found = now_.groups.find(place.path);
    if (found != now_.groups.end()) {
      auto written = found->second.written.find(place.offset);
      if (written != found->second.written.end()) return written->second;
      if (found->second.base != ValueId::none && !found->second.literal) {
        if (reads_) reads_->insert(place.path);
        return Polynomial(Atom{found->second.base, std::uint32_t(place.offset)});
      }
      if (found->second.literal) return fresh_number();
      if (!found->second.written.empty()) {
        // Read for the first time after other components were written.
        std::map<int, Polynomial> kept = found->second.written;
        GroupState state = found->second;
        now_.groups.erase(found);
        ValueId base = read_whole(place, range);
        state.base = base;
        now_.groups[place.path] = state;
        return Polynomial(Atom{base, std::uint32_t(place.offset)});
      }
    }
    return Polynomial(Atom{read_whole(place, range), std::uint32_t(place.offset)});
  }
  auto [found, fresh] = now_.numbers.try_emplace(place.path);
  if (fresh) found->second = fresh_number();
  return found->second;
}

// Settling may add and remove groups: the paths are taken first.
void Walker::settle_below(const std::string& prefix) {
  std::vector<std::string> paths;
  for (const auto& [path, state] : now_.groups)
    if (!state.written.empty() && below(path, prefix)) paths.push_back(path);
  for (const std::string& path : paths) settle(path);
}

Snapshot Walker::snapshot(const Place& place) {
  settle_below(place.path);
  Snapshot result{place.path, epoch(place.path), {}};
  const std::string* above = nullptr;
  for (const auto& [prefix, object] : now_.objects)
    if (below(place.path, prefix) && (!above || prefix.size() > above->size())) above = &prefix;
  if (above) {
    Origin origin = descend(*now_.objects[*above], place.path.substr(above->size()));
    result = origin.rest;
  }
  std::size_t length = place.path.size();
  for (const auto& [prefix, epoch] : now_.epochs)
    if (prefix.size() > length && below(prefix, place.path))
      result.parts.push_back({prefix.substr(length), std::make_shared<const Snapshot>(Snapshot{prefix, epoch, {}})});
  for (const auto& [path, object] : now_.objects)
    if (path.size() > length && below(path, place.path)) result.parts.push_back({path.substr(length), object});
  for (const auto& [path, state] : now_.groups)
    if (below(path, place.path) && state.base != ValueId::none && !state.literal)
      result.parts.push_back({path.substr(length), state.base});
  return result;
}

void Walker::write_value(const Place& place, ValueId id, bool literal, SourceRange range, const Operand& from,
                         ReasonKind how, bool self) {
  if (place.offset != -1) {
    int count = unit_.types.numbers(place.type);
    if (place.offset == kAnyComponent || count < 2) return forget(place);
    GroupState& state = now_.groups[place.path];
    if (state.place.path.empty()) state.place = place, state.place.offset = -1;
    if (!place.whole.isNull()) state.place.type = state.place.whole = place.whole;
    for (int i = 0; i < count; ++i)
      state.written[place.offset + i] = id == ValueId::none ? fresh_number() : Polynomial(Atom{id, std::uint32_t(i)});
    state.range = range;
    return;
  }
  GroupState state;
  state.place = place;
  state.range = range;
  state.changed = true;
  state.self_update = self;
  std::string name = place.decl ? place.decl->getNameAsString() : brief(range);
  Value like = unit_.types.value(place.type, name, span(range));
  if (like.shape == Shape::unknown && id != ValueId::none) like.shape = recorder_.at(id).shape;
  bool said = !said_of(place).empty();
  state.literal = literal && !said;
  state.base = recorder_.value(like.shape, like.rotation, like.text, like.span, like.inverse_form);
  if (id != ValueId::none && !literal) {
    Operation& op = recorder_.operation(OperationKind::copy, state.base, {from}, span(range), brief(range));
    op.operands[0].value = id;
    op.how = how;
    op.target = name;
  }
  now_.groups[place.path] = state;
  if (!self) hold(state.base, place, range, false, name);
}

void Walker::write_number(const Place& place, const Polynomial& number, SourceRange range) {
  if (place.offset == -1) {
    now_.numbers[place.path] = number;
    return;
  }
  if (place.offset == kAnyComponent) return forget(place);
  // A component written again begins a new version of a group that is whole.
  if (auto whole = now_.groups.find(place.path); whole != now_.groups.end() && whole->second.first_written == place.offset &&
                                                 int(whole->second.written.size()) == size_of(whole->second.place, whole->second))
    settle(place.path);
  GroupState& state = now_.groups[place.path];
  if (state.place.path.empty()) {
    state.place = place;
    state.place.offset = -1;
  }
  if (!place.whole.isNull()) state.place.type = state.place.whole = place.whole;
  if (place.size) state.place.size = place.size;
  if (state.written.empty()) state.first_written = place.offset;
  state.written[place.offset] = number.known() ? number : fresh_number();
  state.range = state.range.isValid() && state.written.size() > 1 ? SourceRange(state.range.getBegin(), range.getEnd()) : range;
}

void Walker::write_object(const Place& place, const Snapshot& object) {
  forget_below(place.path);
  now_.objects[place.path] = std::make_shared<const Snapshot>(object);
}

void Walker::forget(const Place& place) {
  forget_below(place.path);
}

void Walker::forget_below(const std::string& prefix) {
  auto drop = [&](auto& map) { std::erase_if(map, [&](const auto& entry) { return below(entry.first, prefix); }); };
  drop(now_.groups);
  drop(now_.numbers);
  drop(now_.objects);
  drop(now_.epochs);
  now_.epochs[prefix] = ++epochs_;
}

void Walker::assign(const Place& place, const Result& from, const Expr* expr, SourceRange range, ReasonKind how) {
  TypeFacts facts = unit_.types.of(place.type);
  bool scalar = facts.shape == Shape::number;
  if (scalar) return write_number(place, number(from, expr), range);
  if (facts.group || facts.shape == Shape::pose || facts.shape == Shape::quaternion) {
    bool is_literal = literal(from);
    ValueId id = is_literal ? ValueId::none : value(from, expr);
    bool self = reads_ && reads_->contains(place.path) && !(from.place && from.place->path == place.path);
    Operand operand = expr ? this->operand(result_of(id), expr) : Operand{id, {}, brief(range)};
    operand.value = id;
    return write_value(place, id, is_literal, range, operand, how, self);
  }
  if (from.object) return write_object(place, *from.object);
  if (from.place && from.place->offset == -1) return write_object(place, snapshot(*from.place));
  forget(place);
}

bool Walker::is_literal_group(const Place& place) const {
  auto found = now_.groups.find(place.path);
  return place.offset == -1 && found != now_.groups.end() && found->second.literal && found->second.written.empty();
}

}  // namespace dextral::gather
