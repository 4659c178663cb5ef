#include "coordination/offsets/reduce.hpp"

#include <algorithm>
#include <map>
#include <set>
#include <tuple>
#include <unordered_map>

#include "base/circle.hpp"
#include "coordination/offsets/kernels.hpp"

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

std::int64_t plus(std::int64_t a, std::int64_t b) { return a == forbidden || b == forbidden ? forbidden : a + b; }

bool all_forbidden(const Costs& costs) {
  return std::all_of(costs.begin(), costs.end(), [](std::int64_t c) { return c == forbidden; });
}

// The same edge from its other end.
Costs turned(const Costs& costs, int from, int to, int cycle) {
  Costs other(costs.size());
  for (int p = 0; p < from; ++p)
    for (int q = 0; q < to; ++q)
      for (int d = 0; d < cycle; ++d) other[at((q * from + p) * cycle + (d == 0 ? 0 : cycle - d))] = costs[at((p * to + q) * cycle + d)];
  return other;
}

struct Span {
  std::int64_t least = forbidden, most = 0;
};

Span span_of(const std::int64_t* row, int cycle) {
  Span span;
  for (int d = 0; d < cycle; ++d)
    if (row[d] != forbidden) span.most = span.least == forbidden ? row[d] : std::max(span.most, row[d]), span.least = std::min(span.least, row[d]);
  return span;
}

// out[k] = min(out[k], a[i] + b[k - i]): through the 32-bit lanes where the entries' ranges fit, else by plain loops.
class WholeConvolution {
 public:
  explicit WholeConvolution(int cycle) : m_cycle(cycle), m_space(cycle), m_a(at(row_lanes(cycle))), m_b(m_a), m_out(m_a) {}

  void into(const std::int64_t* a, const std::int64_t* b, std::int64_t* out) {
    const Span span_a = span_of(a, m_cycle), span_b = span_of(b, m_cycle);
    if (span_a.least == forbidden || span_b.least == forbidden) return;
    constexpr std::int64_t fits = lane_ceiling / 4;
    if (span_a.most - span_a.least >= fits || span_b.most - span_b.least >= fits) return into_plainly(a, b, out);
    shift(a, span_a.least, m_a.data());
    shift(b, span_b.least, m_b.data());
    std::fill(m_out.begin(), m_out.end(), lane_ceiling);
    convolve_into(m_a.data(), m_b.data(), m_cycle, m_out.data(), m_space);
    for (int k = 0; k < m_cycle; ++k)
      if (m_out[at(k)] < lane_ceiling / 2) out[k] = std::min(out[k], m_out[at(k)] + span_a.least + span_b.least);
  }

 private:
  void shift(const std::int64_t* row, std::int64_t least, Lane* out) const {
    for (int d = 0; d < m_cycle; ++d) out[d] = row[d] == forbidden ? lane_ceiling : static_cast<Lane>(row[d] - least);
  }

  void into_plainly(const std::int64_t* a, const std::int64_t* b, std::int64_t* out) const {
    for (int i = 0; i < m_cycle; ++i)
      for (int j = 0; j < m_cycle && a[i] != forbidden; ++j)
        if (b[j] != forbidden) {
          std::int64_t& best = out[i + j < m_cycle ? i + j : i + j - m_cycle];
          best = std::min(best, a[i] + b[j]);
        }
  }

  int m_cycle;
  ConvolutionSpace m_space;
  std::vector<Lane> m_a, m_b, m_out;
};

class Reducer {
 public:
  Reducer(const Problem& problem, const std::function<bool()>& stop) : m_stop(stop), m_convolution(problem.cycle) {
    m_r.cycle = problem.cycle;
    m_r.present.assign(at(problem.nodes), 1);
    m_edges_at.resize(at(problem.nodes));
    m_queued.assign(at(problem.nodes), 0);
    for (int v = 0; v < problem.nodes; ++v) {
      m_r.orders.push_back(orders_of(problem, v));
      const bool given = !problem.node_costs.empty() && !problem.node_costs[at(v)].empty();
      m_r.node_costs.push_back(given ? problem.node_costs[at(v)] : Costs(at(orders_of(problem, v)), 0));
    }
    for (const Edge& edge : problem.edges) m_r.edges.push_back({edge.from, edge.to, true, -1, -1, edge.costs});
    for (Edge& edge : fixed_label_edges(problem)) m_r.edges.push_back({edge.from, edge.to, true, -1, -1, std::move(edge.costs)});
  }

  Reduction run() {
    const int given = static_cast<int>(m_r.edges.size());
    for (int e = 0; e < given && !dead(); ++e) place(e);
    for (int v = 0; v < static_cast<int>(m_edges_at.size()); ++v) enqueue(v);
    for (std::size_t next = 0; !dead(); ++next) {
      if (m_stop && next % 64 == 0 && m_stop()) break;
      contract_singles();
      if (next == m_queue.size()) break;
      const int v = m_queue[next];
      m_queued[at(v)] = 0;
      if (!dead()) visit(v);
    }
    return std::move(m_r);
  }

 private:
  using Pair = std::uint64_t;
  static Pair pair_of(int a, int b) { return (static_cast<Pair>(std::min(a, b)) << 32) | static_cast<Pair>(std::max(a, b)); }

  bool dead() const { return m_r.contradiction >= 0 || m_r.empty_node >= 0; }
  void enqueue(int v) {
    if (!m_r.present[at(v)] || m_queued[at(v)]) return;
    m_queued[at(v)] = 1;
    m_queue.push_back(v);
  }

  // Enters an edge into the graph: added to the one that joins the same nodes, contracted if it admits one difference.
  void place(int id) {
    ReducedEdge& edge = m_r.edges[at(id)];
    if (all_forbidden(edge.costs)) {
      m_r.contradiction = id;
      return;
    }
    const auto [other, is_new] = m_between.try_emplace(pair_of(edge.from, edge.to), id);
    if (!is_new) {
      const int first = other->second;
      remove(first);
      return place(merged(std::min(first, id), std::max(first, id)));
    }
    m_edges_at[at(edge.from)].insert(id);
    m_edges_at[at(edge.to)].insert(id);
    if (m_edges_at[at(edge.from)].size() <= 2) enqueue(edge.from);
    if (m_edges_at[at(edge.to)].size() <= 2) enqueue(edge.to);
    if (is_single(edge)) m_singles.push_back(id);
  }

  void remove(int id) {
    const ReducedEdge& edge = m_r.edges[at(id)];
    m_between.erase(pair_of(edge.from, edge.to));
    m_edges_at[at(edge.from)].erase(id);
    m_edges_at[at(edge.to)].erase(id);
    enqueue(edge.from);
    enqueue(edge.to);
  }

  void record(StepKind kind, int first, int second, std::vector<int> edges) {
    for (const int e : edges) m_r.edges[at(e)].alive = false;
    m_r.steps.push_back({kind, first, second});
    m_r.step_edges.push_back(std::move(edges));
  }

  int add_edge(int from, int to, int first, int second, Costs costs) {
    m_r.edges.push_back({from, to, true, first, second, std::move(costs)});
    return static_cast<int>(m_r.edges.size()) - 1;
  }

  int merged(int first, int second) {
    ReducedEdge &a = m_r.edges[at(first)], &b = m_r.edges[at(second)];
    Costs other = a.from == b.from ? std::move(b.costs) : turned(b.costs, m_r.orders[at(b.from)], m_r.orders[at(b.to)], m_r.cycle);
    Costs sum = std::move(a.costs);
    for (std::size_t i = 0; i < sum.size(); ++i) sum[i] = plus(sum[i], other[i]);
    b.costs.clear();
    record(StepKind::merge, first, second, {first, second});
    return add_edge(a.from, a.to, first, second, std::move(sum));
  }

  bool is_single(const ReducedEdge& edge) const {
    if (edge.costs.size() != at(m_r.cycle) || m_r.cycle == 0) return false;
    int admissible = 0;
    for (const std::int64_t c : edge.costs)
      if (c != forbidden && ++admissible > 1) return false;
    return admissible == 1;
  }

  void contract_singles() {
    while (!m_singles.empty() && !dead()) {
      const int id = m_singles.back();
      m_singles.pop_back();
      if (m_r.edges[at(id)].alive && is_single(m_r.edges[at(id)])) contract(id);
    }
  }

  void visit(int v) {
    if (!m_r.present[at(v)]) return;
    if (m_edges_at[at(v)].size() == 1) fold_end(v);
    else if (m_edges_at[at(v)].size() == 2) fold_chain(v);
  }

  void fold_end(int v) {
    const int id = *m_edges_at[at(v)].begin();
    const ReducedEdge& edge = m_r.edges[at(id)];
    const bool from_here = edge.from == v;
    const int other = from_here ? edge.to : edge.from, to = m_r.orders[at(edge.to)];
    Costs best(at(m_r.orders[at(other)]), forbidden);
    for (std::size_t i = 0; i < edge.costs.size(); ++i) {
      const int pair = static_cast<int>(i) / m_r.cycle, p = pair / to, q = pair % to;
      std::int64_t& least = best[at(from_here ? q : p)];
      least = std::min(least, plus(edge.costs[i], m_r.node_costs[at(v)][at(from_here ? p : q)]));
    }
    for (std::size_t p = 0; p < best.size(); ++p) m_r.node_costs[at(other)][p] = plus(m_r.node_costs[at(other)][p], best[p]);
    remove(id);
    m_r.present[at(v)] = 0;
    record(StepKind::end, v, 0, {id});
    if (all_forbidden(m_r.node_costs[at(other)])) m_r.empty_node = other, m_r.contradiction = all_forbidden(best) ? id : -1;
  }

  void fold_chain(int v) {
    const int older = *m_edges_at[at(v)].begin(), younger = *m_edges_at[at(v)].rbegin();
    const auto seen_from = [&](int id, bool ends_here) {
      const ReducedEdge& edge = m_r.edges[at(id)];
      return (edge.to == v) == ends_here ? edge.costs : turned(edge.costs, m_r.orders[at(edge.from)], m_r.orders[at(edge.to)], m_r.cycle);
    };
    const auto far = [&](int id) { return m_r.edges[at(id)].from == v ? m_r.edges[at(id)].to : m_r.edges[at(id)].from; };
    const Costs in = seen_from(older, true);
    Costs out = seen_from(younger, false);
    const int u = far(older), w = far(younger), from = m_r.orders[at(u)], middle = m_r.orders[at(v)], to = m_r.orders[at(w)];
    for (std::size_t i = 0; i < out.size(); ++i) out[i] = plus(out[i], m_r.node_costs[at(v)][i / at(to * m_r.cycle)]);
    Costs costs(at(from * to * m_r.cycle), forbidden);
    for (int p = 0; p < from; ++p)
      for (int r = 0; r < to; ++r)
        for (int q = 0; q < middle; ++q)
          m_convolution.into(&in[at((p * middle + q) * m_r.cycle)], &out[at((q * to + r) * m_r.cycle)], &costs[at((p * to + r) * m_r.cycle)]);
    remove(older);
    remove(younger);
    m_r.present[at(v)] = 0;
    record(StepKind::chain, v, 0, {older, younger});
    place(add_edge(u, w, older, younger, std::move(costs)));
  }

  // Contracts an edge with one admissible difference: its second node joins its first. Edges to a common neighbour then add.
  void contract(int id) {
    const ReducedEdge edge = m_r.edges[at(id)];
    const int kept = edge.from, gone = edge.to;
    const auto place_of = std::find_if(edge.costs.begin(), edge.costs.end(), [](std::int64_t c) { return c != forbidden; });
    const int difference = static_cast<int>(place_of - edge.costs.begin());
    const std::int64_t extra = m_r.node_costs[at(gone)][0];
    remove(id);
    m_r.present[at(gone)] = 0;
    m_r.constant += *place_of + extra;
    record(StepKind::same, id, 0, {id});
    for (const int other : std::set<int>(m_edges_at[at(gone)])) {
      remove(other);
      attach(m_r.edges[at(other)], gone, kept, difference);
      m_moved.push_back(other);
    }
    while (!m_moved.empty() && !dead()) {
      const int other = m_moved.back();
      m_moved.pop_back();
      place(other);
    }
  }

  // label(gone) = label(kept) + difference: lets the edge start or end at `kept`.
  void attach(ReducedEdge& edge, int gone, int kept, int difference) const {
    const bool starts = edge.from == gone;
    const int forward = starts ? wrap(-difference, m_r.cycle) : difference;
    for (auto row = edge.costs.begin(); row != edge.costs.end(); row += m_r.cycle) std::rotate(row, row + forward, row + m_r.cycle);
    (starts ? edge.from : edge.to) = kept;
  }

  const std::function<bool()>& m_stop;
  Reduction m_r;
  WholeConvolution m_convolution;
  std::vector<std::set<int>> m_edges_at;
  std::unordered_map<Pair, int> m_between;
  std::vector<int> m_queue, m_singles, m_moved;
  std::vector<char> m_queued;
};

// Chooses label and order of one node given all its neighbours among `edges`, at least cost.
void choose_best(const Reduction& r, int node, const std::vector<int>& edges, Assignment& assignment) {
  std::int64_t least = forbidden;
  int best_label = 0, best_order = 0;
  for (int p = 0; p < r.orders[at(node)]; ++p)
    for (int x = 0; x < r.cycle; ++x) {
      std::int64_t sum = r.node_costs[at(node)][at(p)];
      for (const int e : edges) {
        const ReducedEdge& edge = r.edges[at(e)];
        const int to = r.orders[at(edge.to)];
        if (edge.from == node)
          sum = plus(sum, edge.costs[at((p * to + assignment.orders[at(edge.to)]) * r.cycle + wrap(assignment.labels[at(edge.to)] - x, r.cycle))]);
        else
          sum = plus(sum, edge.costs[at((assignment.orders[at(edge.from)] * to + p) * r.cycle + wrap(x - assignment.labels[at(edge.from)], r.cycle))]);
      }
      if (sum < least) least = sum, best_label = x, best_order = p;
    }
  assignment.labels[at(node)] = best_label;
  assignment.orders[at(node)] = best_order;
}

}  // namespace

Reduction reduce(const Problem& problem, const std::function<bool()>& stop) { return Reducer(problem, stop).run(); }

void expand(const Reduction& r, Assignment& assignment) {
  for (std::size_t s = r.steps.size(); s-- > 0;) {
    const Step& step = r.steps[s];
    if (step.kind == StepKind::merge) continue;
    if (step.kind != StepKind::same) {
      choose_best(r, step.first, r.step_edges[s], assignment);
      continue;
    }
    const ReducedEdge& edge = r.edges[at(step.first)];
    const auto place = std::find_if(edge.costs.begin(), edge.costs.end(), [](std::int64_t c) { return c != forbidden; });
    assignment.labels[at(edge.to)] = wrap(assignment.labels[at(edge.from)] + static_cast<int>(place - edge.costs.begin()), r.cycle);
    assignment.orders[at(edge.to)] = 0;
  }
}

std::vector<int> origins(const Reduction& reduction, int edge) {
  std::vector<int> open = {edge};
  std::set<int> found;
  while (!open.empty()) {
    const int e = open.back();
    open.pop_back();
    const ReducedEdge& reduced = reduction.edges[at(e)];
    if (reduced.first < 0) found.insert(e);
    else open.push_back(reduced.first), open.push_back(reduced.second);
  }
  return {found.begin(), found.end()};
}

}  // namespace entrain::offsets
