// The proof of a lower bound: simplifying steps, then cycles among which the cost of the remaining edges is split.
//
//   bound = constant + sum over cycles of the cheapest closed walk of its thetas
//         + sum over remaining edges of min [ scale * f + alpha + alpha - sum of its thetas ]
//         + sum over remaining nodes of min over orders [ scale * n - sum of its alphas ]
// holds for whatever integers: at the optimum the terms add up to its cost, and each minimum is no larger. Derivation: the differences of
// labels round any cycle sum to 0, so the optimum's differences are one of the closed walks that the cycle's minimum ranges over.
#pragma once

#include <cstdint>
#include <vector>

#include "coordination/offsets/problem.hpp"

namespace entrain::offsets {

enum class StepKind {
  merge,  // two edges that join the same nodes: a new edge, running as the first does, holds their sum
  end,    // a node with one edge: its best reply goes to the node costs of its neighbour
  chain,  // a node with two edges to two nodes: a new edge, from the older edge's far node to the younger's, holds the best of both
  same,   // an edge that admits one difference only: its second node joins its first
};

// New edges are numbered on, after the problem's edges and those of its fixed labels.
struct Step {
  StepKind kind = StepKind::end;
  int first = 0;   // merge, same: an edge; end, chain: a node
  int second = 0;  // merge: the other edge
};

struct Alpha {
  int edge = 0;
  bool at_from = true;
  std::vector<std::int64_t> values;  // by order of that node
};

struct WalkedEdge {
  int edge = 0;
  bool forward = true;
};

struct CertificateCycle {
  std::vector<WalkedEdge> walk;  // closed and simple
  std::vector<Costs> thetas;     // by position of the walk, as long as the edge's costs, in the edge's own direction
};

struct Certificate {
  std::int64_t scale = 1;
  std::vector<Step> steps;
  std::vector<Alpha> alphas;
  std::vector<CertificateCycle> cycles;
};

}  // namespace entrain::offsets
