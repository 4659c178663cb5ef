// What the reductions left, laid out for the inner loops: rows of 32-bit lanes in small work units.
//
// work(entry) = floor((entry - least) * scale_up / scale_down), clipped: never more than the entry is worth, so that a bound in work
// units, times scale_down, is a bound in units of 1 / scale_up.
#pragma once

#include <cstdint>
#include <vector>

#include "coordination/offsets/kernels.hpp"
#include "coordination/offsets/reduce.hpp"

namespace entrain::offsets {

inline constexpr Lane work_clip = Lane{1} << 24;       // entries above are clipped
inline constexpr Lane work_forbidden = Lane{1} << 25;  // stands for a forbidden entry

struct CoreEdge {
  int from = 0, to = 0;   // core nodes
  int id = 0;             // the reduction's edge
  std::size_t table = 0;  // first lane of its rows: by order of from, order of to
};

struct Incident {
  int edge = 0, other = 0;
};

struct Core {
  int cycle = 1, lanes = 16;
  std::vector<int> nodes;   // the reduction's node numbers
  std::vector<int> orders;  // by core node
  std::vector<CoreEdge> edges;
  std::vector<Lane> tables;
  std::vector<std::vector<Lane>> node_costs;  // by core node, by order; work units above the node's least
  std::int64_t scale_up = 1, scale_down = 1;
  // Sum of the least entries of edges and nodes: what the work units are counted from, in the problem's units.
  std::int64_t base = 0;
  std::vector<std::size_t> first_incident;  // by core node, one more at the end
  std::vector<Incident> incidents;

  int rows(int edge) const {
    const CoreEdge& e = edges[static_cast<std::size_t>(edge)];
    return orders[static_cast<std::size_t>(e.from)] * orders[static_cast<std::size_t>(e.to)];
  }
};

// The nodes that are present (isolated ones too) and the edges that are alive. `reduction` has no contradiction.
Core core_of(const Reduction& reduction);

// A bound in work units as one of the core: ceil(base + work * scale_down / scale_up).
std::int64_t whole_bound(const Core& core, std::int64_t work);

}  // namespace entrain::offsets
