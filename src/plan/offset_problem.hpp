// An offset problem as plain data and its text form, `*.offsets`.
//
// Nodes carry labels 0 .. cycle - 1 and, optionally, one of several orders. An edge costs costs[(p * orders(to) + q) * cycle + d] where p
// and q are the orders of its ends and d = (label(to) - label(from)) mod cycle. Parallel and reversed edges are legal and add.
//
//   entrain-offsets 1
//   cycle 80
//   nodes 25
//   orders 1 2 1 ...            optional: how many orders each node has
//   node 3  0 15                optional: costs of the orders of node 3
//   fixed 4 10                  optional: node 4 has label 10
//   edge 0 1  120 118 - 95 ...  costs, whole numbers, "-" forbids
//
// Blank lines and lines that start with # are skipped; cycle, nodes and orders stand before what they size.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

#include "base/result.hpp"

namespace entrain::plan {

inline constexpr std::int64_t forbidden_cost = INT64_MAX;
inline constexpr std::int64_t largest_offset_cost = 1'000'000'000'000;  // either sign
inline constexpr int largest_offset_cycle = 4'096;
inline constexpr int largest_offset_orders = 64;
inline constexpr int most_offset_nodes = 4'000'000;
inline constexpr int most_offset_edges = 1'000'000;
inline constexpr std::int64_t most_offset_entries = std::int64_t{1} << 27;

struct OffsetEdge {
  int from = 0, to = 0;
  std::vector<std::int64_t> costs;
  bool operator==(const OffsetEdge&) const = default;
};

struct FixedOffset {
  int node = 0, label = 0;
  bool operator==(const FixedOffset&) const = default;
};

struct OffsetProblem {
  int cycle = 1;
  int nodes = 0;
  std::vector<int> orders;                            // by node; empty: one each
  std::vector<std::vector<std::int64_t>> node_costs;  // by node, by order; empty (all or one): zeros
  std::vector<FixedOffset> fixed;
  std::vector<OffsetEdge> edges;
  bool operator==(const OffsetProblem&) const = default;
};

inline int orders_of(const OffsetProblem& problem, int node) { return problem.orders.empty() ? 1 : problem.orders[static_cast<std::size_t>(node)]; }

// Reads a problem; `source` names the file in messages. Errors: everything that is wrong (at most a hundred, then how many more).
[[nodiscard]] Result<OffsetProblem> read_offset_problem(std::string_view text, const std::string& source);

// Deterministic text; read_offset_problem(write_offset_problem(p)) equals p, but for empty lists that were spelled out as zeros or ones.
std::string write_offset_problem(const OffsetProblem& problem);

// The fixed labels as edges: from the first fixed node to each other one, in order, free at the one difference that fits and forbidden
// elsewhere. Certificates number them after the problem's own edges.
std::vector<OffsetEdge> fixed_label_edges(const OffsetProblem& problem);

}  // namespace entrain::plan
