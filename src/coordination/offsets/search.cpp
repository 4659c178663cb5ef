#include "coordination/offsets/search.hpp"

#include <algorithm>
#include <numeric>

#include "base/circle.hpp"

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

// Edges of a spanning forest, the most certain first.
std::vector<int> certain_forest(const Core& core, const std::vector<Belief>& beliefs) {
  std::vector<int> order(core.edges.size()), root(core.nodes.size()), chosen;
  std::iota(order.begin(), order.end(), 0);
  std::iota(root.begin(), root.end(), 0);
  std::stable_sort(order.begin(), order.end(), [&](int a, int b) { return beliefs[at(a)].confidence > beliefs[at(b)].confidence; });
  const auto find = [&](int v) {
    while (root[at(v)] != v) v = root[at(v)] = root[at(root[at(v)])];
    return v;
  };
  for (const int e : order) {
    const int a = find(core.edges[at(e)].from), b = find(core.edges[at(e)].to);
    if (a == b) continue;
    root[at(a)] = b;
    chosen.push_back(e);
  }
  return chosen;
}

}  // namespace

Labels labels_from_beliefs(const Core& core, const std::vector<Belief>& beliefs) {
  Labels labels{std::vector<int>(core.nodes.size(), -1), std::vector<int>(core.nodes.size(), 0)};
  std::vector<char> in_forest(core.edges.size(), 0);
  std::vector<Lane> certainty(core.nodes.size(), -1);
  for (const int e : certain_forest(core, beliefs)) in_forest[at(e)] = 1;
  for (std::size_t e = 0; e < beliefs.size(); ++e) {
    const CoreEdge& edge = core.edges[e];
    if (beliefs[e].confidence > certainty[at(edge.from)]) certainty[at(edge.from)] = beliefs[e].confidence, labels.order[at(edge.from)] = beliefs[e].order_from;
    if (beliefs[e].confidence > certainty[at(edge.to)]) certainty[at(edge.to)] = beliefs[e].confidence, labels.order[at(edge.to)] = beliefs[e].order_to;
  }
  std::vector<int> open;
  for (std::size_t start = 0; start < core.nodes.size(); ++start) {
    if (labels.label[start] >= 0) continue;
    labels.label[start] = 0;
    for (open.assign(1, static_cast<int>(start)); !open.empty();) {
      const int v = open.back();
      open.pop_back();
      for (std::size_t i = core.first_incident[at(v)]; i < core.first_incident[at(v) + 1]; ++i) {
        const Incident& step = core.incidents[i];
        if (!in_forest[at(step.edge)] || labels.label[at(step.other)] >= 0) continue;
        const int d = beliefs[at(step.edge)].difference;
        labels.label[at(step.other)] = wrap(labels.label[at(v)] + (core.edges[at(step.edge)].from == v ? d : -d), core.cycle);
        open.push_back(step.other);
      }
    }
  }
  return labels;
}

Search::Search(const SeenTables& tables, std::uint64_t seed)
    : m_tables(tables), m_core(tables.core()), m_move(tables), m_random(seed), m_all(m_core.nodes.size()), m_marks(m_core.nodes.size(), 0) {
  m_labels = {std::vector<int>(m_core.nodes.size(), 0), std::vector<int>(m_core.nodes.size(), 0)};
  for (std::size_t v = 0; v < m_core.nodes.size(); ++v)
    m_labels.order[v] = static_cast<int>(std::min_element(m_core.node_costs[v].begin(), m_core.node_costs[v].end()) - m_core.node_costs[v].begin());
  m_total = tables.total(m_labels);
  std::iota(m_all.begin(), m_all.end(), 0);
}

void Search::offer(const Labels& labels) {
  const std::int64_t total = m_tables.total(labels);
  if (total >= m_total) return;
  m_labels = labels;
  m_total = total;
}

int Search::cluster_limit(std::size_t region) {
  const int kind = m_random.below(10);
  if (kind < 4) return 1;
  if (kind < 7) return 4;
  return std::max(2, static_cast<int>(region) / (kind < 9 ? 6 : 3));
}

void Search::sweep(int count) {
  for (int i = 0; i < count; ++i) m_move.run(m_all, i % 2 == 0 ? 1 : cluster_limit(std::min<std::size_t>(m_all.size(), 60)), m_random, m_labels);
  m_total = m_tables.total(m_labels);
}

// About `size` nodes around the node, nearest first.
std::vector<int> Search::region_around(int node, int size) {
  std::vector<int> region = {node};
  m_marks[at(node)] = 1;
  for (std::size_t next = 0; next < region.size() && static_cast<int>(region.size()) < size; ++next)
    for (std::size_t i = m_core.first_incident[at(region[next])]; i < m_core.first_incident[at(region[next]) + 1] && static_cast<int>(region.size()) < size; ++i) {
      const int other = m_core.incidents[i].other;
      if (m_marks[at(other)]) continue;
      m_marks[at(other)] = 1;
      region.push_back(other);
    }
  for (const int v : region) m_marks[at(v)] = 0;
  return region;
}

void Search::kick_region(const std::vector<int>& region) {
  const std::int64_t before = m_tables.total_around(region, m_labels, m_marks);
  std::vector<std::pair<int, int>> saved;
  for (const int v : region) saved.emplace_back(m_labels.label[at(v)], m_labels.order[at(v)]);
  const int size = 1 + m_random.below(std::max(1, static_cast<int>(region.size()) / 2));
  const int shift = m_core.cycle > 1 ? 1 + m_random.below(m_core.cycle - 1) : 0;
  // The cluster is a part of the region, so that its border with the rest of the region is free to move.
  for (const int v : region_around(region[at(m_random.below(static_cast<int>(region.size())))], size))
    if (std::find(region.begin(), region.end(), v) != region.end()) m_labels.label[at(v)] = wrap(m_labels.label[at(v)] + shift, m_core.cycle);
  const int moves = 2 + m_random.below(4);
  for (int i = 0; i < moves; ++i) m_move.run(region, i == 0 ? 1 : cluster_limit(region.size()), m_random, m_labels);
  const std::int64_t after = m_tables.total_around(region, m_labels, m_marks);
  if (after <= before) m_total += after - before;
  else
    for (std::size_t i = 0; i < region.size(); ++i) m_labels.label[at(region[i])] = saved[i].first, m_labels.order[at(region[i])] = saved[i].second;
}

void Search::kick(int count) {
  if (m_all.empty()) return;
  for (int i = 0; i < count; ++i) kick_region(region_around(m_random.below(static_cast<int>(m_all.size())), 12 + m_random.below(48)));
}

}  // namespace entrain::offsets
