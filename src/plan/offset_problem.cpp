#include "plan/offset_problem.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "plan/number_lines.hpp"

namespace entrain::plan {
namespace {

// Reads the lines one by one; `m_sized` once cycle and nodes are known and no more to be changed.
class ProblemReader {
 public:
  ProblemReader(std::string_view text, const std::string& source) : m_lines(text, source) {}

  Result<OffsetProblem> read() {
    if (!m_lines.next_line() || m_lines.word() != "entrain-offsets" || m_lines.word() != "1") {
      m_lines.complain("another first line", "entrain-offsets 1", "Name an offset problem");
      return failure(m_lines.complaints());
    }
    m_lines.end_line();
    while (m_lines.next_line()) read_line();
    if (!m_cycle) m_lines.complain("no cycle", "a line: cycle LABELS", "Add it after the first line");
    if (!m_nodes) m_lines.complain("no nodes", "a line: nodes COUNT", "Add it after the first line");
    if (m_lines.complained()) return failure(m_lines.complaints());
    return std::move(m_problem);
  }

 private:
  void read_line() {
    const std::string_view key = m_lines.word();
    if (key == "cycle") read_size("cycle", largest_offset_cycle, m_problem.cycle, m_cycle);
    else if (key == "nodes") read_size("number of nodes", most_offset_nodes, m_problem.nodes, m_nodes);
    else if (key != "orders" && key != "node" && key != "fixed" && key != "edge")
      m_lines.complain(fmt::format("\"{}\"", printable(std::string(key), 40)), "cycle, nodes, orders, node, fixed or edge", "Correct the first word of the line");
    else if (!m_cycle || !m_nodes) m_lines.complain(fmt::format("{} before the sizes are known", key), "cycle and nodes first", "Move the lines");
    else if (key == "orders") read_orders();
    else if (key == "node") read_node();
    else if (key == "fixed") read_fixed();
    else read_edge();
  }

  void read_size(const char* what, int most, int& value, bool& known) {
    if (known) m_lines.complain(fmt::format("a second {}", what), "one", "Remove a line");
    const auto number = m_lines.number(what, 1, most);
    if (!number) return;
    m_lines.end_line();
    value = static_cast<int>(*number);
    known = true;
  }

  void read_orders() {
    if (!m_problem.orders.empty() || !m_problem.node_costs.empty() || !m_problem.edges.empty())
      return m_lines.complain("orders after what they size, or twice", "orders before node and edge lines, once", "Move the line");
    const auto values = m_lines.numbers("orders", m_problem.nodes, largest_offset_orders);
    if (!values) return;
    if (*std::min_element(values->begin(), values->end()) < 1) return m_lines.complain("a node without an order", "at least 1 each", "Correct the entry");
    m_problem.orders.assign(values->begin(), values->end());
  }

  std::optional<int> read_node_number(const char* what) {
    const auto number = m_lines.number(what, 0, m_problem.nodes - 1);
    return number ? std::optional<int>(static_cast<int>(*number)) : std::nullopt;
  }

  void read_node() {
    const auto node = read_node_number("node");
    if (!node) return;
    auto values = m_lines.numbers("node costs", orders_of(m_problem, *node), largest_offset_cost);
    if (!values) return;
    if (m_problem.node_costs.empty()) m_problem.node_costs.resize(static_cast<std::size_t>(m_problem.nodes));
    auto& costs = m_problem.node_costs[static_cast<std::size_t>(*node)];
    if (!costs.empty()) return m_lines.complain(fmt::format("a second line of costs for node {}", *node), "one", "Remove a line");
    costs = std::move(*values);
  }

  void read_fixed() {
    const auto node = read_node_number("node");
    if (!node) return;
    const auto label = m_lines.number("label", 0, m_problem.cycle - 1);
    if (!label) return;
    m_lines.end_line();
    const auto other = std::find_if(m_problem.fixed.begin(), m_problem.fixed.end(), [&](const FixedOffset& f) { return f.node == *node; });
    if (other != m_problem.fixed.end()) return m_lines.complain(fmt::format("a second fixed label for node {}", *node), "one", "Remove a line");
    m_problem.fixed.push_back({*node, static_cast<int>(*label)});
  }

  void read_edge() {
    const auto from = read_node_number("first node");
    if (!from) return;
    const auto to = read_node_number("second node");
    if (!to) return;
    if (*from == *to) return m_lines.complain(fmt::format("an edge from node {} to itself", *from), "two different nodes", "Remove it: its cost does not depend on the labels");
    const std::int64_t size = std::int64_t{orders_of(m_problem, *from)} * orders_of(m_problem, *to) * m_problem.cycle;
    m_entries += size;
    if (m_problem.edges.size() >= static_cast<std::size_t>(most_offset_edges) || m_entries > most_offset_entries)
      return m_lines.complain("more edges than this program takes", fmt::format("at most {} edges and {} table entries", most_offset_edges, most_offset_entries), "Split the problem");
    auto costs = m_lines.numbers("costs", size, largest_offset_cost, forbidden_cost);
    if (costs) m_problem.edges.push_back({*from, *to, std::move(*costs)});
  }

  NumberLines m_lines;
  OffsetProblem m_problem;
  bool m_cycle = false, m_nodes = false;
  std::int64_t m_entries = 0;
};

void add_costs(std::string& text, const std::vector<std::int64_t>& costs) {
  for (const std::int64_t cost : costs) {
    text += ' ';
    if (cost == forbidden_cost) text += '-';
    else add_number(text, cost);
  }
  text += '\n';
}

}  // namespace

Result<OffsetProblem> read_offset_problem(std::string_view text, const std::string& source) { return ProblemReader(text, source).read(); }

std::string write_offset_problem(const OffsetProblem& problem) {
  std::string text = fmt::format("entrain-offsets 1\ncycle {}\nnodes {}\n", problem.cycle, problem.nodes);
  if (!problem.orders.empty()) {
    text += "orders";
    for (const int count : problem.orders) text += fmt::format(" {}", count);
    text += '\n';
  }
  for (std::size_t node = 0; node < problem.node_costs.size(); ++node) {
    if (problem.node_costs[node].empty()) continue;
    text += fmt::format("node {} ", node);
    add_costs(text, problem.node_costs[node]);
  }
  for (const FixedOffset& fixed : problem.fixed) text += fmt::format("fixed {} {}\n", fixed.node, fixed.label);
  for (const OffsetEdge& edge : problem.edges) {
    text += fmt::format("edge {} {} ", edge.from, edge.to);
    add_costs(text, edge.costs);
  }
  return text;
}

std::vector<OffsetEdge> fixed_label_edges(const OffsetProblem& problem) {
  std::vector<OffsetEdge> edges;
  for (std::size_t i = 1; i < problem.fixed.size(); ++i) {
    const FixedOffset &first = problem.fixed.front(), &other = problem.fixed[i];
    const int pairs = orders_of(problem, first.node) * orders_of(problem, other.node);
    OffsetEdge edge{first.node, other.node, std::vector<std::int64_t>(static_cast<std::size_t>(pairs * problem.cycle), forbidden_cost)};
    const int difference = (other.label - first.label + problem.cycle) % problem.cycle;
    for (int pair = 0; pair < pairs; ++pair) edge.costs[static_cast<std::size_t>(pair * problem.cycle + difference)] = 0;
    edges.push_back(std::move(edge));
  }
  return edges;
}

}  // namespace entrain::plan
