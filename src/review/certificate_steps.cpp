#include "review/certificate_steps.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <set>

namespace entrain::review {
namespace {

using plan::OffsetProblem;

std::size_t at(int index) { return static_cast<std::size_t>(index); }

bool fits(std::int64_t value) { return value < largest_magnitude && value > -largest_magnitude; }

class Reducer {
 public:
  Reducer(const OffsetProblem& problem, const plan::Certificate& certificate, const std::string& source)
      : m_problem(problem), m_certificate(certificate), m_source(source) {}

  Result<Reduced> reduce() {
    if (!lay_out_nodes() || !lay_out_edges()) return failure(m_problems);
    for (std::size_t s = 0; s < m_certificate.steps.size(); ++s) {
      if (m_reduced.infeasible) break;
      const std::string fault = carry_out(m_certificate.steps[s]);
      if (!fault.empty()) return fail(fmt::format("step {}: {}", s + 1, fault), "a step that changes no optimum");
    }
    return std::move(m_reduced);
  }

 private:
  tl::unexpected<Diagnostics> fail(std::string found, std::string expected) {
    note_problem(std::move(found), std::move(expected));
    return failure(m_problems);
  }
  void note_problem(std::string found, std::string expected) {
    m_problems.push_back(error(m_source, std::move(found), std::move(expected), "The certificate cannot be evaluated: make a new one"));
  }

  bool scaled(std::int64_t cost, std::int64_t& out) const { return !__builtin_mul_overflow(cost, m_certificate.scale, &out) && fits(out); }

  bool lay_out_nodes() {
    m_reduced.cycle = m_problem.cycle;
    m_reduced.present.assign(at(m_problem.nodes), 1);
    m_edges_at.resize(at(m_problem.nodes));
    for (int v = 0; v < m_problem.nodes; ++v) {
      const int orders = plan::orders_of(m_problem, v);
      m_reduced.orders.push_back(orders);
      Entries costs = m_problem.node_costs.empty() || m_problem.node_costs[at(v)].empty() ? Entries(at(orders), 0) : m_problem.node_costs[at(v)];
      if (costs.size() != at(orders)) return note_problem(fmt::format("node {} with {} costs", v, costs.size()), fmt::format("{}", orders)), false;
      for (std::int64_t& cost : costs)
        if (!scaled(cost, cost)) return note_problem("node costs that do not fit 64 bits when scaled", "a smaller scale"), false;
      m_reduced.node_costs.push_back(std::move(costs));
    }
    return true;
  }

  bool lay_out_edges() {
    const auto fixed = plan::fixed_label_edges(m_problem);
    for (const auto* list : {&m_problem.edges, &fixed})
      for (const plan::OffsetEdge& edge : *list) {
        if (edge.from < 0 || edge.to < 0 || edge.from >= m_problem.nodes || edge.to >= m_problem.nodes || edge.from == edge.to ||
            edge.costs.size() != at(m_reduced.orders[at(edge.from)] * m_reduced.orders[at(edge.to)] * m_reduced.cycle))
          return note_problem("a problem whose tables do not fit its sizes", "a well-formed problem"), false;
        Entries costs(edge.costs.size());
        for (std::size_t i = 0; i < costs.size(); ++i)
          if (edge.costs[i] == plan::forbidden_cost) costs[i] = excluded;
          else if (!scaled(edge.costs[i], costs[i])) return note_problem("costs that do not fit 64 bits when scaled", "a smaller scale"), false;
        add_edge(edge.from, edge.to, std::move(costs));
      }
    return true;
  }

  void add_edge(int from, int to, Entries costs) {
    const int id = static_cast<int>(m_reduced.edges.size());
    if (std::all_of(costs.begin(), costs.end(), [](std::int64_t c) { return c == excluded; })) m_reduced.infeasible = true;
    m_reduced.edges.push_back({from, to, true, std::move(costs)});
    m_edges_at[at(from)].insert(id);
    m_edges_at[at(to)].insert(id);
  }

  LiveEdge take_edge(int id) {
    LiveEdge& edge = m_reduced.edges[at(id)];
    m_edges_at[at(edge.from)].erase(id);
    m_edges_at[at(edge.to)].erase(id);
    edge.alive = false;
    return {edge.from, edge.to, false, std::move(edge.costs)};
  }

  // The same edge seen from its other end.
  LiveEdge turned(const LiveEdge& edge) const {
    const int from = m_reduced.orders[at(edge.from)], to = m_reduced.orders[at(edge.to)], cycle = m_reduced.cycle;
    LiveEdge other{edge.to, edge.from, edge.alive, Entries(edge.costs.size())};
    for (int p = 0; p < from; ++p)
      for (int q = 0; q < to; ++q)
        for (int d = 0; d < cycle; ++d) other.costs[entry(q, p, from, (cycle - d) % cycle, cycle)] = edge.costs[entry(p, q, to, d, cycle)];
    return other;
  }

  bool remains(int edge) const { return edge >= 0 && edge < static_cast<int>(m_reduced.edges.size()) && m_reduced.edges[at(edge)].alive; }
  bool has_edges(int node, std::size_t count) const { return node >= 0 && node < m_problem.nodes && m_reduced.present[at(node)] && m_edges_at[at(node)].size() == count; }

  std::string carry_out(const plan::CertificateStep& step) {
    switch (step.kind) {
      case plan::StepKind::merge: return merge(step.first, step.second);
      case plan::StepKind::end: return end(step.first);
      case plan::StepKind::chain: return chain(step.first);
      case plan::StepKind::same: return same(step.first);
    }
    return "unknown";
  }

  std::string merge(int first, int second) {
    if (!remains(first) || !remains(second) || first == second) return fmt::format("edges {} and {} do not both remain", first, second);
    const LiveEdge &a = m_reduced.edges[at(first)], &b = m_reduced.edges[at(second)];
    if (!(a.from == b.from && a.to == b.to) && !(a.from == b.to && a.to == b.from)) return fmt::format("edges {} and {} do not join the same nodes", first, second);
    LiveEdge sum = take_edge(first), other = take_edge(second);
    if (other.from != sum.from) other = turned(other);
    for (std::size_t i = 0; i < sum.costs.size(); ++i) {
      if (sum.costs[i] == excluded || other.costs[i] == excluded) sum.costs[i] = excluded;
      else if (!add_checked(sum.costs[i], other.costs[i]) || !fits(sum.costs[i])) return "sums that do not fit 64 bits";
    }
    add_edge(sum.from, sum.to, std::move(sum.costs));
    return "";
  }

  // The edge seen from `node`, with the costs of that node's orders added.
  std::optional<LiveEdge> edge_with_node(int id, int node) {
    LiveEdge edge = take_edge(id);
    if (edge.from != node) edge = turned(edge);
    const Entries& node_costs = m_reduced.node_costs[at(node)];
    const std::size_t block = edge.costs.size() / node_costs.size();
    for (std::size_t i = 0; i < edge.costs.size(); ++i) {
      const std::int64_t extra = node_costs[i / block];
      if (edge.costs[i] == excluded || extra == excluded) edge.costs[i] = excluded;
      else if (!add_checked(edge.costs[i], extra) || !fits(edge.costs[i])) return std::nullopt;
    }
    return edge;
  }

  std::string end(int node) {
    if (!has_edges(node, 1)) return fmt::format("node {} has not exactly one edge", node);
    const auto edge = edge_with_node(*m_edges_at[at(node)].begin(), node);
    if (!edge) return "sums that do not fit 64 bits";
    m_reduced.present[at(node)] = 0;
    Entries& costs = m_reduced.node_costs[at(edge->to)];
    const int orders_to = static_cast<int>(costs.size());
    for (int q = 0; q < orders_to; ++q) {
      std::int64_t least = excluded;
      for (int p = 0; p < m_reduced.orders[at(node)]; ++p)
        for (int d = 0; d < m_reduced.cycle; ++d) least = std::min(least, edge->costs[entry(p, q, orders_to, d, m_reduced.cycle)]);
      std::int64_t& cost = costs[at(q)];
      if (least == excluded || cost == excluded) cost = excluded;
      else if (!add_checked(cost, least) || !fits(cost)) return "sums that do not fit 64 bits";
    }
    if (std::all_of(costs.begin(), costs.end(), [](std::int64_t c) { return c == excluded; })) m_reduced.infeasible = true;
    return "";
  }

  std::string chain(int node) {
    if (!has_edges(node, 2)) return fmt::format("node {} has not exactly two edges", node);
    const int older = *m_edges_at[at(node)].begin(), younger = *m_edges_at[at(node)].rbegin();
    LiveEdge in = take_edge(older);
    if (in.to != node) in = turned(in);
    const auto out = edge_with_node(younger, node);
    if (!out) return "sums that do not fit 64 bits";
    if (in.from == out->to) return fmt::format("both edges of node {} lead to one node", node);
    m_reduced.present[at(node)] = 0;
    const int from = m_reduced.orders[at(in.from)], middle = m_reduced.orders[at(node)], to = m_reduced.orders[at(out->to)], cycle = m_reduced.cycle;
    Entries costs(at(from * to * cycle), excluded);
    for (int p = 0; p < from; ++p)
      for (int r = 0; r < to; ++r)
        for (int q = 0; q < middle; ++q)
          add_best_sums(&in.costs[entry(p, q, middle, 0, cycle)], &out->costs[entry(q, r, to, 0, cycle)], cycle, &costs[entry(p, r, to, 0, cycle)]);
    if (!std::all_of(costs.begin(), costs.end(), [](std::int64_t c) { return c == excluded || fits(c); })) return "sums that do not fit 64 bits";
    add_edge(in.from, out->to, std::move(costs));
    return "";
  }

  std::string same(int id) {
    if (!remains(id)) return fmt::format("edge {} does not remain", id);
    const LiveEdge edge = m_reduced.edges[at(id)];
    const auto admissible = std::count_if(edge.costs.begin(), edge.costs.end(), [](std::int64_t c) { return c != excluded; });
    if (edge.costs.size() != at(m_reduced.cycle) || admissible != 1) return fmt::format("edge {} admits not exactly one difference of single orders", id);
    take_edge(id);
    const auto place = std::find_if(edge.costs.begin(), edge.costs.end(), [](std::int64_t c) { return c != excluded; });
    const int difference = static_cast<int>(place - edge.costs.begin());
    for (const std::int64_t term : {*place, m_reduced.node_costs[at(edge.to)][0]})
      if (term == excluded || !add_checked(m_reduced.constant, term) || !fits(m_reduced.constant)) return "sums that do not fit 64 bits";
    m_reduced.present[at(edge.to)] = 0;
    for (const int other : std::set<int>(m_edges_at[at(edge.to)])) {
      const std::string fault = attach(other, edge.to, edge.from, difference);
      if (!fault.empty()) return fault;
    }
    return "";
  }

  // label(gone) = label(kept) + difference: lets the edge start or end at `kept`.
  std::string attach(int id, int gone, int kept, int difference) {
    LiveEdge& edge = m_reduced.edges[at(id)];
    if (edge.from == kept || edge.to == kept) return fmt::format("edge {} joins the same two nodes: it has to be merged first", id);
    const int shift = edge.from == gone ? difference : m_reduced.cycle - difference, cycle = m_reduced.cycle;
    for (auto block = edge.costs.begin(); block != edge.costs.end(); block += cycle) std::rotate(block, block + (cycle - shift % cycle) % cycle, block + cycle);
    (edge.from == gone ? edge.from : edge.to) = kept;
    m_edges_at[at(gone)].erase(id);
    m_edges_at[at(kept)].insert(id);
    return "";
  }

  const OffsetProblem& m_problem;
  const plan::Certificate& m_certificate;
  const std::string& m_source;
  Reduced m_reduced;
  std::vector<std::set<int>> m_edges_at;
  Diagnostics m_problems;
};

std::string fault_of_labels(const OffsetProblem& problem, const std::vector<int>& labels, const std::vector<int>& orders) {
  if (labels.size() != at(problem.nodes)) return fmt::format("{} labels", labels.size());
  if (!orders.empty() && orders.size() != at(problem.nodes)) return fmt::format("{} orders", orders.size());
  for (int v = 0; v < problem.nodes; ++v) {
    if (labels[at(v)] < 0 || labels[at(v)] >= problem.cycle) return fmt::format("label {} at node {}", labels[at(v)], v);
    if (!orders.empty() && (orders[at(v)] < 0 || orders[at(v)] >= plan::orders_of(problem, v))) return fmt::format("order {} at node {}", orders[at(v)], v);
  }
  for (const plan::FixedOffset& fixed : problem.fixed)
    if (labels[at(fixed.node)] != fixed.label) return fmt::format("label {} at node {}, which is fixed to {}", labels[at(fixed.node)], fixed.node, fixed.label);
  return "";
}

}  // namespace

bool add_checked(std::int64_t& sum, std::int64_t term) { return !__builtin_add_overflow(sum, term, &sum); }

void add_best_sums(const std::int64_t* a, const std::int64_t* b, int cycle, std::int64_t* out) {
  for (int i = 0; i < cycle; ++i) {
    if (a[i] == excluded) continue;
    const std::int64_t first = a[i];
    for (int j = 0; j < cycle; ++j) {
      const int k = i + j < cycle ? i + j : i + j - cycle;
      if (b[j] != excluded) out[k] = std::min(out[k], first + b[j]);
    }
  }
}

Result<Reduced> reduce(const OffsetProblem& problem, const plan::Certificate& certificate, const std::string& source) { return Reducer(problem, certificate, source).reduce(); }

std::optional<std::int64_t> cost_of(const OffsetProblem& problem, const std::vector<int>& labels, const std::vector<int>& orders, std::string& fault) {
  fault = fault_of_labels(problem, labels, orders);
  if (!fault.empty()) return std::nullopt;
  const auto order = [&](int v) { return orders.empty() ? 0 : orders[at(v)]; };
  std::int64_t sum = 0;
  for (std::size_t v = 0; v < problem.node_costs.size(); ++v)
    if (!problem.node_costs[v].empty()) sum += problem.node_costs[v][at(order(static_cast<int>(v)))];
  for (std::size_t e = 0; e < problem.edges.size(); ++e) {
    const plan::OffsetEdge& edge = problem.edges[e];
    const int d = (labels[at(edge.to)] - labels[at(edge.from)] + problem.cycle) % problem.cycle;
    const std::int64_t cost = edge.costs[entry(order(edge.from), order(edge.to), plan::orders_of(problem, edge.to), d, problem.cycle)];
    if (cost == plan::forbidden_cost) fault = fmt::format("a forbidden difference {} on edge {}", d, e);
    else if (!add_checked(sum, cost)) fault = "a cost that does not fit 64 bits";
    if (!fault.empty()) return std::nullopt;
  }
  return sum;
}

}  // namespace entrain::review
