// A sheet of frame unknowns: union-find with every accepted equality kept, so
// that each consequence can be explained by a shortest chain.
//
// A node is one slot of one value, or a constant frame. An edge says that two
// nodes are the same frame, and which operation says so. A union that would
// join two constants is refused and told to the caller.
#pragma once

#include <cstdint>
#include <map>
#include <optional>
#include <vector>

#include "core/evidence.h"
#include "core/frame.h"

namespace dextral::solve {

struct SchemeEdge;

enum class NodeId : std::uint32_t { none = 0xffffffff };

struct Edge {
  NodeId a = NodeId::none, b = NodeId::none;
  std::uint32_t operation = 0;
  Certainty certainty = Certainty::certain;
  const SchemeEdge* via = nullptr;  // the callee's reasons, for calls
};

class Sheet {
 public:
  NodeId add();
  NodeId constant(const Frame&);  // one node per frame

  // True when a and b may be one frame; then the edge is kept. False: they
  // stand for different constants, and nothing changes.
  bool unite(const Edge&);

  bool same(NodeId a, NodeId b) const { return root(a) == root(b); }
  const Frame* frame(NodeId) const;  // null: unknown
  NodeId constant_of(NodeId) const;  // the constant of its class, or none

  // The chain of edges from one node to another of its class: the most certain,
  // then the shortest, then the first found. Empty where there is none.
  std::vector<Edge> path(NodeId from, NodeId to) const;
  std::size_t size() const { return parent_.size(); }
  NodeId root(NodeId) const;

 private:
  bool binds(NodeId constant) const;
  mutable std::vector<NodeId> parent_;
  std::vector<std::uint32_t> rank_;
  std::vector<NodeId> constant_;  // by root
  std::vector<std::vector<std::uint32_t>> edges_of_;
  std::vector<Edge> edges_;
  std::map<Frame, NodeId> constants_;
  std::map<NodeId, Frame> frames_;
};

}  // namespace dextral::solve
