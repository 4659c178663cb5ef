#include "coordination/offsets/problem.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <string>

#include "base/circle.hpp"

namespace entrain::offsets {
namespace {

constexpr std::size_t most_faults = 100;

std::size_t at(int index) { return static_cast<std::size_t>(index); }

class FaultFinder {
 public:
  explicit FaultFinder(const Problem& problem) : m_problem(problem) {}

  Diagnostics find() {
    find_sizes();
    if (m_count > 0) return std::move(m_found);
    find_nodes();
    for (std::size_t e = 0; e < m_problem.edges.size(); ++e) find_edge(fmt::format("edge {}", e), m_problem.edges[e]);
    if (m_entries > most_entries) add("edges", fmt::format("{} table entries", m_entries), fmt::format("at most {}", most_entries), "Split the problem");
    if (m_count > most_faults) m_found.push_back(error("problem", fmt::format("{} more of this kind", m_count - most_faults), "none", "Mend the first hundred and try again"));
    return std::move(m_found);
  }

 private:
  void add(std::string where, std::string found, std::string expected, std::string mend) {
    if (m_count++ < most_faults) m_found.push_back(error(std::move(where), std::move(found), std::move(expected), std::move(mend)));
  }

  void find_size(const char* where, std::size_t found, std::size_t least, std::size_t most) {
    if (found < least || found > most) add(where, fmt::format("{}", found), fmt::format("{} to {}", least, most), "Correct the problem's sizes");
  }

  void find_sizes() {
    if (m_problem.cycle < 1 || m_problem.cycle > largest_cycle) add("cycle", fmt::format("{}", m_problem.cycle), fmt::format("1 to {}", largest_cycle), "Choose fewer labels");
    if (m_problem.nodes < 0 || m_problem.nodes > most_nodes) add("nodes", fmt::format("{}", m_problem.nodes), fmt::format("0 to {}", most_nodes), "Split the problem");
    find_size("edges", m_problem.edges.size(), 0, at(most_edges));
    if (m_count > 0) return;
    if (!m_problem.orders.empty()) find_size("orders", m_problem.orders.size(), at(m_problem.nodes), at(m_problem.nodes));
    if (!m_problem.node_costs.empty()) find_size("node costs", m_problem.node_costs.size(), at(m_problem.nodes), at(m_problem.nodes));
    if (m_count > 0) return;
    for (const int count : m_problem.orders)
      if (count < 1 || count > most_orders) add("orders", fmt::format("{} of a node", count), fmt::format("1 to {}", most_orders), "Give every node an order, and fewer than that");
  }

  void find_nodes() {
    for (std::size_t v = 0; v < m_problem.node_costs.size(); ++v) {
      const Costs& costs = m_problem.node_costs[v];
      if (!costs.empty() && costs.size() != at(orders_of(m_problem, static_cast<int>(v))))
        add(fmt::format("node {}", v), fmt::format("{} costs", costs.size()), fmt::format("{}, one an order", orders_of(m_problem, static_cast<int>(v))), "Give one each");
      find_entries(fmt::format("node {}", v), costs, false);
    }
    std::vector<char> seen(at(m_problem.nodes), 0);
    for (const FixedLabel& fixed : m_problem.fixed) {
      if (fixed.node < 0 || fixed.node >= m_problem.nodes) add("fixed label", fmt::format("node {}", fixed.node), fmt::format("0 to {}", m_problem.nodes - 1), "Name a node that exists");
      else if (fixed.label < 0 || fixed.label >= m_problem.cycle)
        add(fmt::format("fixed label of node {}", fixed.node), fmt::format("{}", fixed.label), fmt::format("0 to {}", m_problem.cycle - 1), "Take the label modulo the cycle");
      else if (seen[at(fixed.node)]++ != 0) add(fmt::format("node {}", fixed.node), "two fixed labels", "one", "Remove one");
    }
  }

  void find_edge(const std::string& where, const Edge& edge) {
    if (edge.from < 0 || edge.from >= m_problem.nodes || edge.to < 0 || edge.to >= m_problem.nodes)
      return add(where, fmt::format("nodes {} and {}", edge.from, edge.to), fmt::format("0 to {}", m_problem.nodes - 1), "Name nodes that exist");
    if (edge.from == edge.to) return add(where, fmt::format("both ends at node {}", edge.from), "two different nodes", "Remove it: its cost does not depend on the labels");
    const std::size_t size = at(orders_of(m_problem, edge.from)) * at(orders_of(m_problem, edge.to)) * at(m_problem.cycle);
    m_entries += static_cast<std::int64_t>(size);
    if (edge.costs.size() != size) return add(where, fmt::format("{} costs", edge.costs.size()), fmt::format("{}", size), "Give one for each pair of orders and difference");
    find_entries(where, edge.costs, true);
  }

  void find_entries(const std::string& where, const Costs& costs, bool may_forbid) {
    const auto wrong = std::find_if(costs.begin(), costs.end(), [&](std::int64_t c) { return (c > largest_cost || c < -largest_cost) && !(may_forbid && c == forbidden); });
    if (wrong != costs.end()) add(where, fmt::format("a cost of {}", *wrong), fmt::format("at most {} either way", largest_cost), "Choose a larger unit of cost");
  }

  const Problem& m_problem;
  Diagnostics m_found;
  std::size_t m_count = 0;
  std::int64_t m_entries = 0;
};

}  // namespace

Diagnostics faults(const Problem& problem) { return FaultFinder(problem).find(); }

std::optional<std::int64_t> cost(const Problem& problem, const Assignment& assignment) {
  const auto order = [&](int v) { return assignment.orders.empty() ? 0 : assignment.orders[at(v)]; };
  for (const FixedLabel& fixed : problem.fixed)
    if (assignment.labels[at(fixed.node)] != fixed.label) return std::nullopt;
  std::int64_t sum = 0;
  for (int v = 0; v < problem.nodes && !problem.node_costs.empty(); ++v)
    if (!problem.node_costs[at(v)].empty()) sum += problem.node_costs[at(v)][at(order(v))];
  for (const Edge& edge : problem.edges) {
    const int d = wrap(assignment.labels[at(edge.to)] - assignment.labels[at(edge.from)], problem.cycle);
    const std::int64_t term = edge.costs[at((order(edge.from) * orders_of(problem, edge.to) + order(edge.to)) * problem.cycle + d)];
    if (term == forbidden) return std::nullopt;
    sum += term;
  }
  return sum;
}

std::vector<Edge> fixed_label_edges(const Problem& problem) {
  std::vector<Edge> edges;
  for (std::size_t i = 1; i < problem.fixed.size(); ++i) {
    const FixedLabel &first = problem.fixed.front(), &other = problem.fixed[i];
    const int pairs = orders_of(problem, first.node) * orders_of(problem, other.node);
    Edge edge{first.node, other.node, Costs(at(pairs * problem.cycle), forbidden)};
    const int difference = wrap(other.label - first.label, problem.cycle);
    for (int pair = 0; pair < pairs; ++pair) edge.costs[at(pair * problem.cycle + difference)] = 0;
    edges.push_back(std::move(edge));
  }
  return edges;
}

}  // namespace entrain::offsets
