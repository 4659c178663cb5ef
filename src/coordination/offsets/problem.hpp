// The offset problem: labels on a circle, costs on differences of labels. Plain data; nothing here knows what the costs mean.
//
// Node v carries a label x_v in 0 .. cycle - 1 and an order p_v in 0 .. orders - 1. An edge costs
// costs[(p * orders(to) + q) * cycle + d], d = (x_to - x_from) mod cycle, p and q the orders of its ends. Parallel and reversed edges add.
#pragma once

#include <cstdint>
#include <optional>
#include <vector>

#include "base/diagnostic.hpp"

namespace entrain::offsets {

inline constexpr std::int64_t forbidden = INT64_MAX;
inline constexpr std::int64_t largest_cost = 1'000'000'000'000;  // of an entry, either sign: sums of a million edges stay exact
inline constexpr int largest_cycle = 4'096;
inline constexpr int most_orders = 64;
inline constexpr int most_nodes = 4'000'000;
inline constexpr int most_edges = 1'000'000;
inline constexpr std::int64_t most_entries = std::int64_t{1} << 27;

using Costs = std::vector<std::int64_t>;

struct Edge {
  int from = 0, to = 0;
  Costs costs;
};

struct FixedLabel {
  int node = 0, label = 0;
};

struct Problem {
  int cycle = 1;
  int nodes = 0;
  std::vector<int> orders;        // by node; empty: one each
  std::vector<Costs> node_costs;  // by node, by order; empty (all or one): zeros
  std::vector<FixedLabel> fixed;
  std::vector<Edge> edges;
};

inline int orders_of(const Problem& problem, int node) { return problem.orders.empty() ? 1 : problem.orders[static_cast<std::size_t>(node)]; }

struct Assignment {
  std::vector<int> labels, orders;  // by node; empty orders: the first everywhere
};

// Everything that keeps the problem from being solved: sizes and nodes out of range, self-loops, rows of the wrong length, entries too large.
Diagnostics faults(const Problem& problem);

// What the assignment costs; nothing if it breaks a fixed label or a forbidden entry. `problem` has no faults.
std::optional<std::int64_t> cost(const Problem& problem, const Assignment& assignment);

// The fixed labels as edges: from the first fixed node to each other one, free at the one difference that fits, forbidden elsewhere.
// Steps, certificates and conflicts number them after the problem's own edges.
std::vector<Edge> fixed_label_edges(const Problem& problem);

}  // namespace entrain::offsets
