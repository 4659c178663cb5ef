// An assignment of the core under change: labels and orders, with the costs of edges seen from either end.
#pragma once

#include <cstdint>
#include <vector>

#include "coordination/offsets/core.hpp"

namespace entrain::offsets {

struct Labels {
  std::vector<int> label, order;  // by core node
};

// The core's tables in both directions: what node v pays for label x while its neighbour has label y is row(...)[(x - y) mod cycle].
class SeenTables {
 public:
  explicit SeenTables(const Core& core);
  const Core& core() const { return m_core; }

  // Costs by the label of `node` less that of the other end; p: order of `node`, q: order of the other end.
  const Lane* row(int edge, int node, int p, int q) const {
    const CoreEdge& e = m_core.edges[static_cast<std::size_t>(edge)];
    const int from = m_core.orders[static_cast<std::size_t>(e.from)], to = m_core.orders[static_cast<std::size_t>(e.to)];
    return node == e.to ? &m_core.tables[e.table] + (q * to + p) * m_core.lanes : &m_reversed[e.table] + (q * from + p) * m_core.lanes;
  }
  Lane at_labels(int edge, const Labels& labels) const;
  // All edges and node costs, in work units.
  std::int64_t total(const Labels& labels) const;
  // Edges that touch the nodes (each once) and the nodes' own costs.
  std::int64_t total_around(const std::vector<int>& nodes, const Labels& labels, std::vector<char>& marks) const;

 private:
  const Core& m_core;
  std::vector<Lane> m_reversed;  // by order of to, order of from: costs by x_from - x_to
};

}  // namespace entrain::offsets
