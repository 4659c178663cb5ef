// Exact reductions: what a problem is once everything is folded away that can be without losing an optimum.
#pragma once

#include <cstdint>
#include <functional>
#include <vector>

#include "coordination/offsets/certificate.hpp"
#include "coordination/offsets/problem.hpp"

namespace entrain::offsets {

struct ReducedEdge {
  int from = 0, to = 0;
  bool alive = true;
  int first = -1, second = -1;  // the edges it was made of; -1: one of the problem's
  Costs costs;                  // by order of from, order of to, difference
};

// Nodes keep their numbers; edges are numbered as in certificates.
struct Reduction {
  int cycle = 1;
  std::vector<int> orders;
  std::vector<Costs> node_costs;
  std::vector<char> present;
  std::vector<ReducedEdge> edges;
  std::vector<Step> steps;
  std::vector<std::vector<int>> step_edges;  // by step: the edges it took
  std::int64_t constant = 0;
  int contradiction = -1;       // an edge that admits nothing, or
  int empty_node = -1;          // a node whose orders all are forbidden: no assignment is admissible
};

// `problem` has no faults. Takes every step that applies, in a fixed order; `stop`, asked now and then, ends it early.
Reduction reduce(const Problem& problem, const std::function<bool()>& stop = {});

// Completes an assignment of the nodes that are present to one of all nodes, at no cost beyond the reduced problem's.
void expand(const Reduction& reduction, Assignment& assignment);

// The problem's edges (and fixed labels, numbered after them) that a reduced edge was made of, sorted.
std::vector<int> origins(const Reduction& reduction, int edge);

}  // namespace entrain::offsets
