#include "solve/scheme.h"

#include <algorithm>

#include "solve/body.h"

namespace dextral::solve {

namespace {

using Thing = std::variant<ValueId, Snapshot>;
using Seen = std::vector<std::pair<Visible, NodeId>>;

bool is_formal(const std::string& root) {
  return root == "this" || root == "return" || (root.size() > 1 && root[0] == 'p' && isdigit(root[1]));
}

std::pair<std::string, std::string> split(const std::string& path) {
  std::size_t end = path.find_first_of(".[");
  if (end == std::string::npos) return {path, ""};
  return {path.substr(0, end), path.substr(end)};
}

bool starts_below(const std::string& path, const std::string& prefix) {
  return path.compare(0, prefix.size(), prefix) == 0 &&
         (path.size() == prefix.size() || path[prefix.size()] == '.' || path[prefix.size()] == '[');
}

// An element whose index only the body knows: `data[i]` is another one in every call.
bool is_passing(const std::string& path) { return path.find_first_of("*?") != std::string::npos; }

void see(Seen& seen, Sheeted& sheeted, const Thing& thing, const Visible& visible, const std::string& path) {
  if (is_passing(visible.path)) return;
  for (Slot slot : {Slot::rows, Slot::columns}) {
    NodeId node = node_of(sheeted, thing, path, slot);
    if (node == NodeId::none) continue;
    Visible v = visible;
    v.slot = slot;
    seen.emplace_back(v, node);
  }
}

// Every part of an object at the end that the body knows of.
void see_after(Seen& seen, Sheeted& sheeted, const std::string& formal, const std::string& above, const Thing& whole,
               const std::string& path, const Snapshot& snapshot) {
  auto visible = [&](const std::string& rest) { return Visible{formal, above + rest, true, Slot::rows}; };
  for (const Part& part : snapshot.parts) {
    if (auto* inner = std::get_if<std::shared_ptr<const Snapshot>>(&part.is)) {
      if (*inner) see_after(seen, sheeted, formal, above + part.path, whole, path + part.path, **inner);
    } else {
      see(seen, sheeted, whole, visible(part.path), path + part.path);
    }
  }
  if (snapshot.path.empty()) return;
  auto known = sheeted.places;
  for (const auto& [key, node] : known)
    if (key.second == snapshot.epoch && starts_below(key.first, snapshot.path)) {
      std::string rest = key.first.substr(snapshot.path.size());
      see(seen, sheeted, whole, visible(rest), path + rest);
    }
}

Seen visible_nodes(const Function& function, Sheeted& sheeted) {
  Seen seen;
  for (const Reading& reading : function.readings) {
    auto [root, path] = split(reading.path);
    if (reading.epoch == 0 && is_formal(root)) see(seen, sheeted, reading.value, {root, path, false, Slot::rows}, "");
  }
  auto places = sheeted.places;
  for (const auto& [key, node] : places) {
    auto [root, path] = split(key.first);
    if (key.second != 0 || !is_formal(root)) continue;
    see(seen, sheeted, Snapshot{key.first, 0, {}}, {root, path, false, Slot::rows}, "");
  }
  for (const auto& [formal, thing] : function.exits) {
    if (auto* snapshot = std::get_if<Snapshot>(&thing)) see_after(seen, sheeted, formal, "", thing, "", *snapshot);
    else see(seen, sheeted, thing, {formal, "", true, Slot::rows}, "");
  }
  std::sort(seen.begin(), seen.end());
  seen.erase(std::unique(seen.begin(), seen.end()), seen.end());
  return seen;
}

Certainty weakest(const std::vector<Edge>& chain) {
  Certainty c = Certainty::certain;
  for (const Edge& edge : chain) c = weaker(c, edge.certainty);
  return c;
}

std::vector<Edge> joined(std::vector<Edge> a, const std::vector<Edge>& b) {
  a.insert(a.end(), b.begin(), b.end());
  return a;
}

std::vector<Visible> unchanged_formals(const Function& function) {
  std::vector<Visible> kept;
  for (const auto& [formal, thing] : function.exits) {
    auto* snapshot = std::get_if<Snapshot>(&thing);
    if (snapshot && snapshot->path == formal && snapshot->epoch == 0 && snapshot->parts.empty())
      kept.push_back({formal, "", true, Slot::rows});
  }
  return kept;
}

}  // namespace

Scheme scheme_of(const Function& function, Sheeted& sheeted, const Setting&) {
  Scheme scheme;
  scheme.unchanged = unchanged_formals(function);
  std::map<NodeId, Seen> classes;
  for (const auto& entry : visible_nodes(function, sheeted)) classes[sheeted.sheet.root(entry.second)].push_back(entry);
  for (const auto& [root, members] : classes) {
    const Frame* frame = sheeted.sheet.frame(root);
    NodeId constant = sheeted.sheet.constant_of(root);
    bool hidden = frame && !frame->owner.empty() && !is_formal(split(frame->owner).first);
    for (std::size_t i = 0; i < members.size(); ++i) {
      SchemeEdge edge;
      std::vector<Edge> chain;
      edge.left = members[i].first;
      if (frame && !frame->variable && !hidden) {
        edge.constant = *frame;
        chain = sheeted.sheet.path(members[i].second, constant);
      } else {
        if (i == 0) continue;
        edge.right = members[0].first;
        chain = frame ? joined(sheeted.sheet.path(members[i].second, constant),
                               sheeted.sheet.path(constant, members[0].second))
                      : sheeted.sheet.path(members[i].second, members[0].second);
      }
      edge.certainty = weakest(chain);
      edge.proof = reasons(function, chain);
      scheme.edges.push_back(std::move(edge));
    }
  }
  std::sort(scheme.edges.begin(), scheme.edges.end(), [](const SchemeEdge& a, const SchemeEdge& b) {
    return std::tie(a.certainty, a.left, a.right) < std::tie(b.certainty, b.left, b.right);
  });
  return scheme;
}

std::vector<Reason> reasons(const Function& function, const std::vector<Edge>& chain) {
  std::vector<Reason> list;
  auto add = [&](Reason reason) {
    if (list.empty() || !(list.back() == reason)) list.push_back(std::move(reason));
  };
  for (const Edge& edge : chain) {
    const Operation& op = function.operations.at(edge.operation);
    if (op.kind == OperationKind::hold) {
      const Hold& hold = function.holds.at(op.item);
      add({hold.source == Source::named ? ReasonKind::named : ReasonKind::declared, hold.source, hold.phrase, hold.subject,
           hold.said});
    } else if (op.kind == OperationKind::call) {
      add({ReasonKind::called, Source::modelled, op.span, op.text, function.calls.at(op.item).name});
      if (edge.via)
        for (const Reason& reason : edge.via->proof) add(reason);
    } else if (op.how != ReasonKind::operation) {
      add({op.how, Source::modelled, op.span, op.operands.empty() ? op.text : op.operands[0].text, op.target});
    } else {
      add({ReasonKind::operation, Source::modelled, op.span, op.text, text(op.kind)});
    }
  }
  return list;
}

}  // namespace dextral::solve
