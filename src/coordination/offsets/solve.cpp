#include "coordination/offsets/solve.hpp"

#include <algorithm>

#include "base/circle.hpp"
#include "coordination/offsets/conflict.hpp"
#include "coordination/offsets/search.hpp"

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

// What the core's labels cost in the reduction, exactly; nothing if they are not admissible.
std::optional<std::int64_t> core_cost(const Reduction& r, const Core& core, const Labels& labels) {
  std::int64_t sum = r.constant;
  for (std::size_t v = 0; v < core.nodes.size(); ++v) {
    const std::int64_t term = r.node_costs[at(core.nodes[v])][at(labels.order[v])];
    if (term == forbidden) return std::nullopt;
    sum += term;
  }
  for (const CoreEdge& edge : core.edges) {
    const int d = wrap(labels.label[at(edge.to)] - labels.label[at(edge.from)], core.cycle);
    const std::int64_t term = r.edges[at(edge.id)].costs[at((labels.order[at(edge.from)] * core.orders[at(edge.to)] + labels.order[at(edge.to)]) * core.cycle + d)];
    if (term == forbidden) return std::nullopt;
    sum += term;
  }
  return sum;
}

class Solver {
 public:
  Solver(const Problem& problem, const SolveOptions& options) : m_problem(problem), m_options(options) {}

  Answer run() {
    m_stop = [this] { return m_options.elapsed_s && m_options.elapsed_s() >= m_options.time_limit_s; };
    m_reduction = reduce(m_problem, m_stop);
    m_answer.certificate.steps = m_reduction.steps;
    if (m_reduction.contradiction >= 0 || m_reduction.empty_node >= 0) return infeasible();
    m_core = core_of(m_reduction);
    m_answer.core_edges = static_cast<int>(m_core.edges.size());
    m_answer.core_nodes = m_core.edges.empty() ? 0 : static_cast<int>(m_core.nodes.size());
    solve_core();
    return finish();
  }

 private:
  Answer infeasible() {
    m_answer.status = Status::infeasible;
    m_answer.conflict = conflict_of(m_problem, m_reduction);
    return std::move(m_answer);
  }

  void solve_core() {
    SeenTables tables(m_core);
    CycleBound bound(m_core, cycles_of(m_core));
    Search search(tables, m_options.seed);
    m_work_bound = bound.bound();
    offer_start(search);
    keep(search);
    if (!m_core.edges.empty() && !proved()) {
      alternate(bound, search);
      keep(search);
    }
    if (m_options.want_certificate && !m_core.edges.empty()) bound.add_to(m_answer.certificate);
  }

  // The bound and the search take turns until they meet, the bound stalls and the effort is spent, or the time is up.
  void alternate(CycleBound& bound, Search& search) {
    const double nodes = static_cast<double>(m_core.nodes.size());
    const std::int64_t most_kicks = static_cast<std::int64_t>(m_options.effort * (400 + 40 * nodes));
    std::int64_t kicks = 0;
    bool stalled = false;
    for (int round = 0; !m_stop(); ++round) {
      for (int i = 0; i < 4 && !stalled; ++i) {
        const std::int64_t before = bound.bound();
        bound.sweep(m_stop);
        stalled = bound.bound() - before <= std::max<std::int64_t>(0, before / 200'000) && round > 2;
      }
      m_work_bound = bound.bound();
      if (!stalled || round < 3) search.offer(labels_from_beliefs(m_core, bound.beliefs()));
      if (round == 0) search.sweep(20);
      search.sweep(2);
      keep(search);
      if (proved()) return;
      const int batch = std::max(16, static_cast<int>(nodes) / 4);
      search.kick(batch);
      kicks += batch;
      keep(search);
      if (proved() || (!m_options.elapsed_s && stalled && kicks >= most_kicks)) return;
    }
  }

  void offer_start(Search& search) {
    if (!m_options.start || m_options.start->labels.size() != at(m_problem.nodes)) return;
    Labels labels;
    for (std::size_t i = 0; i < m_core.nodes.size(); ++i) {
      const int v = m_core.nodes[i], order = m_options.start->orders.size() == at(m_problem.nodes) ? m_options.start->orders[at(v)] : 0;
      labels.label.push_back(wrap(m_options.start->labels[at(v)], m_core.cycle));
      labels.order.push_back(order >= 0 && order < m_core.orders[i] ? order : 0);
    }
    search.offer(labels);
  }

  void keep(const Search& search) {
    const auto value = core_cost(m_reduction, m_core, search.labels());
    if (!value || (m_value && *value >= *m_value)) return;
    m_value = value;
    m_best = search.labels();
  }

  bool proved() const { return m_value && *m_value <= whole_bound(m_core, m_work_bound); }

  Answer finish() {
    m_answer.bound = whole_bound(m_core, m_work_bound);
    if (!m_value) {
      m_answer.status = Status::none_found;
      return std::move(m_answer);
    }
    Assignment assignment{std::vector<int>(at(m_problem.nodes), 0), std::vector<int>(at(m_problem.nodes), 0)};
    for (std::size_t i = 0; i < m_core.nodes.size(); ++i) {
      assignment.labels[at(m_core.nodes[i])] = m_best.label[i];
      assignment.orders[at(m_core.nodes[i])] = m_best.order[i];
    }
    expand(m_reduction, assignment);
    turn_to_references(assignment);
    if (const auto start = start_value(); start && *start < *cost(m_problem, assignment)) assignment = *m_options.start;
    m_answer.value = *cost(m_problem, assignment);
    m_answer.proved = m_answer.value == m_answer.bound;
    m_answer.assignment = std::move(assignment);
    return std::move(m_answer);
  }

  std::optional<std::int64_t> start_value() const {
    if (!m_options.start || m_options.start->labels.size() != at(m_problem.nodes)) return std::nullopt;
    if (m_options.start->orders.size() != at(m_problem.nodes)) return std::nullopt;
    for (int v = 0; v < m_problem.nodes; ++v)
      if (m_options.start->labels[at(v)] < 0 || m_options.start->labels[at(v)] >= m_problem.cycle || m_options.start->orders[at(v)] < 0 ||
          m_options.start->orders[at(v)] >= orders_of(m_problem, v))
        return std::nullopt;
    return cost(m_problem, *m_options.start);
  }

  // A shift of a connected part costs nothing: fixed labels come out as given, otherwise the first node of each part has label 0.
  void turn_to_references(Assignment& assignment) const {
    std::vector<int> part(at(m_problem.nodes), -1), turn;
    std::vector<std::vector<int>> neighbours(at(m_problem.nodes));
    for (const Edge& edge : m_problem.edges) neighbours[at(edge.from)].push_back(edge.to), neighbours[at(edge.to)].push_back(edge.from);
    for (const Edge& edge : fixed_label_edges(m_problem)) neighbours[at(edge.from)].push_back(edge.to), neighbours[at(edge.to)].push_back(edge.from);
    for (int start = 0; start < m_problem.nodes; ++start) {
      if (part[at(start)] >= 0) continue;
      part[at(start)] = static_cast<int>(turn.size());
      turn.push_back(-assignment.labels[at(start)]);
      for (std::vector<int> open = {start}; !open.empty();) {
        const int v = open.back();
        open.pop_back();
        for (const int u : neighbours[at(v)])
          if (part[at(u)] < 0) part[at(u)] = part[at(start)], open.push_back(u);
      }
    }
    if (!m_problem.fixed.empty()) {
      const FixedLabel& first = m_problem.fixed.front();
      turn[at(part[at(first.node)])] = first.label - assignment.labels[at(first.node)];
    }
    for (int v = 0; v < m_problem.nodes; ++v) assignment.labels[at(v)] = wrap(assignment.labels[at(v)] + turn[at(part[at(v)])], m_problem.cycle);
  }

  const Problem& m_problem;
  const SolveOptions& m_options;
  std::function<bool()> m_stop;
  Reduction m_reduction;
  Core m_core;
  std::int64_t m_work_bound = 0;
  std::optional<std::int64_t> m_value;
  Labels m_best;
  Answer m_answer;
};

}  // namespace

Result<Answer> solve(const Problem& problem, const SolveOptions& options) {
  Diagnostics found = faults(problem);
  if (!found.empty()) return failure(std::move(found));
  return Solver(problem, options).run();
}

}  // namespace entrain::offsets
