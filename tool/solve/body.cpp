#include "solve/body.h"

#include <algorithm>

#include "solve/turns.h"

namespace dextral::solve {

namespace {

using Thing = std::variant<ValueId, Snapshot>;

NodeId slot_node(NodeId rows, Slot slot) {
  return slot == Slot::rows ? rows : NodeId(std::uint32_t(rows) + 1);
}

NodeId add_pair(Sheet& sheet) {
  NodeId rows = sheet.add();
  sheet.add();
  return rows;
}

// True when `path` is `prefix` or lies below it.
bool below(const std::string& path, const std::string& prefix) {
  if (path.compare(0, prefix.size(), prefix) != 0) return false;
  return path.size() == prefix.size() || prefix.empty() || path[prefix.size()] == '.' || path[prefix.size()] == '[';
}

NodeId place(Sheeted& sheeted, const std::string& path, std::uint32_t epoch) {
  auto [found, fresh] = sheeted.places.try_emplace({path, epoch}, NodeId::none);
  if (fresh) found->second = add_pair(sheeted.sheet);
  return found->second;
}

NodeId node_in(Sheeted& sheeted, const Snapshot& snapshot, const std::string& path, Slot slot) {
  const Part* best = nullptr;
  for (const Part& part : snapshot.parts) {
    if (below(path, part.path) && (!best || part.path.size() >= best->path.size())) best = &part;
    if (part.path != path && below(part.path, path)) return NodeId::none;  // written in pieces
  }
  if (!best) {
    if (snapshot.path.empty()) return NodeId::none;
    return slot_node(place(sheeted, snapshot.path + path, snapshot.epoch), slot);
  }
  std::string rest = path.substr(best->path.size());
  if (auto* value = std::get_if<ValueId>(&best->is)) return node_of(sheeted, *value, rest, slot);
  auto& inner = std::get<std::shared_ptr<const Snapshot>>(best->is);
  return inner ? node_in(sheeted, *inner, rest, slot) : NodeId::none;
}

class Body {
 public:
  Body(const Function& function, const Setting& setting, const std::set<std::uint32_t>& removed,
       const Alteration* alteration, std::uint32_t last, Sheeted& out)
      : function_(function), setting_(setting), removed_(removed), alteration_(alteration), last_(last), out_(out), turns_(function) {}

  void run() {
    for (std::size_t i = 0; i < function_.values.size(); ++i) out_.values.push_back(add_pair(out_.sheet));
    for (const Reading& reading : function_.readings)
      out_.places.try_emplace({reading.path, reading.epoch}, out_.values.at(std::size_t(reading.value)));
    each([&](const Operation& op) { if (op.kind == OperationKind::hold && strong(op)) hold(op); });
    each([&](const Operation& op) { if (op.kind != OperationKind::hold) insert(op); });
    settle_joins();
    each([&](const Operation& op) {
      if (op.kind == OperationKind::hold && !strong(op)) hold(op);
      if (op.kind == OperationKind::call) call(op, false);
    });
    settle_joins();
    insert_last();
  }

 private:
  void insert_last() {
    if (last_ == kNoOperation) return;
    index_ = last_;
    look_up_alteration();
    const Operation& op = function_.operations.at(last_);
    op.kind == OperationKind::hold ? hold(op) : insert(op);
  }

  template <typename Visit>
  void each(Visit visit) {
    for (index_ = 0; index_ < function_.operations.size(); ++index_) {
      if (index_ == last_ || removed_.contains(index_)) continue;
      look_up_alteration();
      visit(altered_ ? altered_->with : function_.operations[index_]);
    }
  }

  void look_up_alteration() {
    altered_ = nullptr;
    if (!alteration_) return;
    auto found = alteration_->find(index_);
    if (found != alteration_->end()) altered_ = &found->second;
  }

  bool strong(const Operation& op) const {
    return certainty(function_.holds.at(op.item).source) == Certainty::certain;
  }

  NodeId slot(const Operation& op, SlotOf of) const {
    ValueId value = of.operand == kResult ? op.result : op.operands.at(std::size_t(of.operand)).value;
    if (value == ValueId::none) return NodeId::none;
    bool flip = altered_ && altered_->flipped.contains(of.operand);
    return slot_node(out_.values.at(std::size_t(value)), flip ? other(of.slot) : of.slot);
  }

  // False: in conflict; it is recorded.
  bool unite(NodeId a, NodeId b, int left, int right, Certainty certainty = Certainty::certain,
             const SchemeEdge* via = nullptr) {
    if (a == NodeId::none || b == NodeId::none) return true;
    if (out_.sheet.unite({a, b, index_, certainty, via})) return true;
    out_.conflicts.push_back({index_, a, b, left, right, certainty, via});
    return false;
  }

  void insert(const Operation& op) {
    if (op.kind == OperationKind::call) return call(op, true);
    if (op.kind == OperationKind::join) {
      if (!join(op)) joins_.emplace_back(index_, &op);
      return;
    }
    if (turns_.is_turn(op)) return;
    for (const Agreement& agreement : law(op.kind, op.operands.size()))
      if (!unite(slot(op, agreement.left), slot(op, agreement.right), agreement.left.operand, agreement.right.operand))
        return;
  }

  Frame settled(Frame frame) const { return frame.variable ? frame : setting_.frames.orientation(frame); }

  void hold(const Operation& op) {
    const Hold& hold = function_.holds.at(op.item);
    if (hold.call >= 0 && changed_in_place(hold)) return;
    Frames said = frames(hold.quantity);
    Certainty sure = certainty(hold.source);
    if (said.rows.known() &&
        !unite(slot(op, {0, Slot::rows}), out_.sheet.constant(settled(said.rows)), 0, kResult, sure))
      return;
    if (said.columns.known())
      unite(slot(op, {0, Slot::columns}), out_.sheet.constant(settled(said.columns)), 0, kResult, sure);
  }

  // The callee reads the argument before it writes it.
  bool changed_in_place(const Hold& hold) const {
    auto found = setting_.schemes.find(function_.calls.at(std::size_t(hold.call)).callee);
    if (found == setting_.schemes.end()) return false;
    auto read = [&](const Visible& v) { return v.formal == hold.formal && !v.after && v.path.empty(); };
    return std::any_of(found->second.edges.begin(), found->second.edges.end(),
                       [&](const SchemeEdge& e) { return read(e.left) || (!e.constant.known() && read(e.right)); });
  }

  // True when the join is settled for good.
  bool join(const Operation& op) {
    bool done = true;
    for (Slot s : {Slot::rows, Slot::columns}) {
      NodeId result = slot(op, {kResult, s});
      NodeId first = NodeId::none;
      bool agree = true;
      for (std::size_t i = 0; i < op.operands.size(); ++i) {
        NodeId node = slot(op, {int(i), s});
        if (node == NodeId::none || out_.sheet.same(node, result)) continue;
        if (first == NodeId::none) first = node;
        const Frame *a = out_.sheet.frame(first), *b = out_.sheet.frame(node);
        bool unknown = !a || !b;
        if (!out_.sheet.same(first, node) && (unknown ? !setting_.first_pass : *a != *b)) agree = false;
      }
      if (first == NodeId::none) continue;
      if (agree)
        out_.sheet.unite({result, first, index_, Certainty::certain, nullptr});
      else
        done = false;
    }
    return done;
  }

  void settle_joins() {
    for (bool changed = true; changed;) {
      changed = false;
      for (auto it = joins_.begin(); it != joins_.end();) {
        index_ = it->first;
        look_up_alteration();
        if (join(*it->second)) {
          it = joins_.erase(it);
          changed = true;
        } else {
          ++it;
        }
      }
    }
  }

  const Scheme* scheme(const Call& call) const {
    const std::string& key = altered_ && !altered_->callee.empty() ? altered_->callee : call.callee;
    auto found = setting_.schemes.find(key);
    return found == setting_.schemes.end() ? nullptr : &found->second;
  }

  void call(const Operation& op, bool strong_pass) {
    const Call& call = function_.calls.at(op.item);
    const Scheme* scheme = this->scheme(call);
    if (!scheme) return;
    std::map<std::string, NodeId> free;
    for (const SchemeEdge& edge : scheme->edges) {
      if ((edge.certainty == Certainty::certain) != strong_pass) continue;
      auto [a, left] = visible(call, edge.left, free);
      auto [b, right] = edge.constant.known() ? std::pair{constant(call, edge.constant, free), kResult}
                                              : visible(call, edge.right, free);
      if (!unite(a, b, left, right, edge.certainty, &edge)) return;
    }
    if (strong_pass) keep_unchanged(call, *scheme);
  }

  NodeId free_node(std::map<std::string, NodeId>& free, const std::string& key) {
    auto [found, fresh] = free.try_emplace(key, NodeId::none);
    if (fresh) found->second = out_.sheet.add();
    return found->second;
  }

  std::pair<NodeId, int> visible(const Call& call, const Visible& what, std::map<std::string, NodeId>& free) {
    for (std::size_t formal = 0; formal < call.bindings.size(); ++formal) {
      if (call.bindings[formal].formal != what.formal) continue;
      std::size_t i = exchanged(formal);
      const Binding& binding = call.bindings[i];
      bool flip = altered_ && altered_->flipped.contains(int(i));
      NodeId node = node_of(out_, what.after ? binding.after : binding.before, what.path,
                            flip ? other(what.slot) : what.slot);
      if (node != NodeId::none) return {node, int(i)};
    }
    return {free_node(free, what.formal + (what.after ? ">" : "<") + what.path + (what.slot == Slot::rows ? "r" : "c")),
            kResult};
  }

  std::size_t exchanged(std::size_t i) const {
    if (!altered_) return i;
    if (int(i) == altered_->exchanged.first) return std::size_t(altered_->exchanged.second);
    if (int(i) == altered_->exchanged.second) return std::size_t(altered_->exchanged.first);
    return i;
  }

  // The frame of an `own` phrase belongs to the caller's object.
  NodeId constant(const Call& call, Frame frame, std::map<std::string, NodeId>& free) {
    if (!frame.own || frame.owner.empty()) return out_.sheet.constant(frame);
    for (const Binding& binding : call.bindings) {
      if (!below(frame.owner, binding.formal)) continue;
      if (binding.object.empty()) break;
      frame.owner = binding.object + frame.owner.substr(binding.formal.size());
      return out_.sheet.constant(frame);
    }
    return free_node(free, "own " + frame.name + "@" + frame.tag + " of " + frame.owner);
  }

  // What the callee leaves alone is after the call what it was before.
  void keep_unchanged(const Call& call, const Scheme& scheme) {
    for (const Binding& binding : call.bindings) {
      bool kept = std::any_of(scheme.unchanged.begin(), scheme.unchanged.end(),
                              [&](const Visible& v) { return v.formal == binding.formal; });
      if (!kept) continue;
      for (const std::string& path : paths_below(binding.after))
        for (Slot s : {Slot::rows, Slot::columns})
          unite(node_of(out_, binding.before, path, s), node_of(out_, binding.after, path, s), kResult, kResult);
    }
  }

  std::vector<std::string> paths_below(const Thing& thing) const {
    auto* snapshot = std::get_if<Snapshot>(&thing);
    if (!snapshot) return {""};
    std::vector<std::string> paths;
    for (const auto& [key, node] : out_.places)
      if (key.second == snapshot->epoch && below(key.first, snapshot->path))
        paths.push_back(key.first.substr(snapshot->path.size()));
    return paths;
  }

  const Function& function_;
  const Setting& setting_;
  const std::set<std::uint32_t>& removed_;
  const Alteration* alteration_;
  std::uint32_t last_;
  Sheeted& out_;
  Turns turns_;
  std::uint32_t index_ = 0;
  const Altered* altered_ = nullptr;
  std::vector<std::pair<std::uint32_t, const Operation*>> joins_;
};

}  // namespace

NodeId node_of(Sheeted& sheeted, const Thing& thing, const std::string& path, Slot slot) {
  if (auto* value = std::get_if<ValueId>(&thing)) {
    if (*value == ValueId::none || !path.empty()) return NodeId::none;
    return slot_node(sheeted.values.at(std::size_t(*value)), slot);
  }
  return node_in(sheeted, std::get<Snapshot>(thing), path, slot);
}

bool is_of_phrases(const Function& function, const Sheeted& sheeted, const Conflict& conflict) {
  const Operation& op = function.operations.at(conflict.operation);
  if (op.kind != OperationKind::hold) return false;
  const std::vector<Edge> chain = sheeted.sheet.path(conflict.left, sheeted.sheet.constant_of(conflict.left));
  if (chain.size() != 1) return false;
  const Operation& other = function.operations.at(chain[0].operation);
  return other.kind == OperationKind::hold && other.operands[0].value == op.operands[0].value &&
         function.holds.at(other.item).subject == function.holds.at(op.item).subject;
}

Sheeted sheet_of(const Function& function, const Setting& setting, const std::set<std::uint32_t>& removed,
                 const Alteration* alteration, std::uint32_t last) {
  Sheeted out;
  Body(function, setting, removed, alteration, last, out).run();
  return out;
}

}  // namespace dextral::solve
