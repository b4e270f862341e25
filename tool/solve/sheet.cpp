#include "solve/sheet.h"

#include <algorithm>
#include <queue>
#include <tuple>

namespace dextral::solve {

namespace {
std::size_t at(NodeId node) { return std::size_t(node); }
}  // namespace

NodeId Sheet::add() {
  NodeId node = NodeId(parent_.size());
  parent_.push_back(node);
  rank_.push_back(0);
  constant_.push_back(NodeId::none);
  edges_of_.emplace_back();
  return node;
}

NodeId Sheet::constant(const Frame& frame) {
  auto found = constants_.find(frame);
  if (found != constants_.end()) return found->second;
  NodeId node = add();
  constant_[at(node)] = node;
  constants_.emplace(frame, node);
  frames_.emplace(node, frame);
  return node;
}

NodeId Sheet::root(NodeId node) const {
  while (parent_[at(node)] != node) {
    parent_[at(node)] = parent_[at(parent_[at(node)])];
    node = parent_[at(node)];
  }
  return node;
}

bool Sheet::unite(const Edge& edge) {
  NodeId a = root(edge.a), b = root(edge.b);
  if (a != b) {
    NodeId left = constant_[at(a)], right = constant_[at(b)];
    if (left != NodeId::none && right != NodeId::none) {
      if (binds(left) == binds(right)) return false;
      (binds(left) ? left : right) = NodeId::none;
    }
    if (rank_[at(a)] < rank_[at(b)]) std::swap(a, b);
    if (rank_[at(a)] == rank_[at(b)]) ++rank_[at(a)];
    parent_[at(b)] = a;
    constant_[at(a)] = left != NodeId::none ? left : right;
  }
  if (edge.a == edge.b) return true;
  edges_of_[at(edge.a)].push_back(edges_.size());
  edges_of_[at(edge.b)].push_back(edges_.size());
  edges_.push_back(edge);
  return true;
}

// `own body` of an object that the function makes (a local, a temporary) is
// whatever frame is put there; of an object that comes from outside it is its own.
bool Sheet::binds(NodeId constant) const {
  const Frame& frame = frames_.at(constant);
  return frame.own && (frame.owner.starts_with('l') || frame.owner.starts_with('t')) && !frame.owner.starts_with("this");
}

NodeId Sheet::constant_of(NodeId node) const { return constant_[at(root(node))]; }

const Frame* Sheet::frame(NodeId node) const {
  NodeId constant = constant_of(node);
  return constant == NodeId::none ? nullptr : &frames_.at(constant);
}

std::vector<Edge> Sheet::path(NodeId from, NodeId to) const {
  constexpr std::uint64_t kWeak = 1u << 20;
  using Entry = std::tuple<std::uint64_t, std::uint32_t, std::uint32_t>;  // cost, order, node
  std::map<NodeId, std::pair<std::uint64_t, std::uint32_t>> best;         // cost and edge that reached it
  std::priority_queue<Entry, std::vector<Entry>, std::greater<>> open;
  std::uint32_t order = 0;
  best[from] = {0, 0};
  open.emplace(0, order++, std::uint32_t(from));
  while (!open.empty()) {
    auto [cost, rank, index] = open.top();
    open.pop();
    NodeId node = NodeId(index);
    if (node == to) break;
    if (cost > best[node].first) continue;
    // A proof never runs through a constant: two things in ned share no cause.
    if (node != from && frames_.contains(node)) continue;
    for (std::uint32_t e : edges_of_[index]) {
      const Edge& edge = edges_[e];
      NodeId next = edge.a == node ? edge.b : edge.a;
      std::uint64_t reached = cost + 1 + kWeak * std::uint64_t(edge.certainty);
      auto place = best.find(next);
      if (place != best.end() && place->second.first <= reached) continue;
      best[next] = {reached, e};
      open.emplace(reached, order++, std::uint32_t(next));
    }
  }
  std::vector<Edge> chain;
  if (!best.contains(to)) return chain;
  for (NodeId node = to; node != from;) {
    const Edge& edge = edges_[best[node].second];
    chain.push_back(edge);
    node = edge.a == node ? edge.b : edge.a;
  }
  std::reverse(chain.begin(), chain.end());
  return chain;
}

}  // namespace dextral::solve
