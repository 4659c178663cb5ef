#include "drafting/offset_search.hpp"

#include <algorithm>

namespace entrain::drafting {
namespace {

// Coordinate descent: each node to its best label given the others, then each edge's two ends together by one shift, until nothing gains.
class Descent {
 public:
  explicit Descent(const OffsetSearch& search) : m_search(search), m_labels(search.start), m_at(search.start.size()) {
    for (std::size_t e = 0; e < search.edges.size(); ++e) {
      m_at[static_cast<std::size_t>(search.edges[e].from)].push_back(e);
      m_at[static_cast<std::size_t>(search.edges[e].to)].push_back(e);
    }
  }

  std::vector<int> run() {
    constexpr int most_rounds = 60;
    for (int round = 0; round < most_rounds && improve_once(); ++round) {
    }
    return m_labels;
  }

 private:
  std::int64_t cost(const OffsetEdge& edge) const {
    const int d = m_labels[static_cast<std::size_t>(edge.to)] - m_labels[static_cast<std::size_t>(edge.from)];
    return edge.costs[static_cast<std::size_t>(d < 0 ? d + m_search.cycle : d)];
  }
  // Sum over the edges of the group that leave it, or forbidden.
  std::int64_t border_cost(const std::vector<std::size_t>& nodes) const {
    std::int64_t sum = 0;
    for (const std::size_t node : nodes)
      for (const std::size_t e : m_at[node]) {
        const OffsetEdge& edge = m_search.edges[e];
        if (nodes.size() > 1 && inside(nodes, edge.from) && inside(nodes, edge.to)) continue;
        const std::int64_t c = cost(edge);
        if (c == OffsetSearch::forbidden) return c;
        sum += c;
      }
    return sum;
  }
  static bool inside(const std::vector<std::size_t>& nodes, int node) { return std::find(nodes.begin(), nodes.end(), static_cast<std::size_t>(node)) != nodes.end(); }

  bool shift_best(const std::vector<std::size_t>& nodes) {
    for (const std::size_t node : nodes)
      if (m_search.fixed[node]) return false;
    const std::vector<int> before = labels_of(nodes);
    std::int64_t best = border_cost(nodes);
    int best_shift = 0;
    for (int shift = 1; shift < m_search.cycle; ++shift) {
      set(nodes, before, shift);
      if (const std::int64_t c = border_cost(nodes); c < best) best = c, best_shift = shift;
    }
    set(nodes, before, best_shift);
    return best_shift != 0;
  }
  std::vector<int> labels_of(const std::vector<std::size_t>& nodes) const {
    std::vector<int> labels;
    for (const std::size_t node : nodes) labels.push_back(m_labels[node]);
    return labels;
  }
  void set(const std::vector<std::size_t>& nodes, const std::vector<int>& before, int shift) {
    for (std::size_t i = 0; i < nodes.size(); ++i) m_labels[nodes[i]] = (before[i] + shift) % m_search.cycle;
  }
  bool improve_once() {
    bool gained = false;
    for (std::size_t node = 0; node < m_labels.size(); ++node) gained = shift_best({node}) || gained;
    for (const OffsetEdge& edge : m_search.edges) gained = shift_best({static_cast<std::size_t>(edge.from), static_cast<std::size_t>(edge.to)}) || gained;
    return gained;
  }

  const OffsetSearch& m_search;
  std::vector<int> m_labels;
  std::vector<std::vector<std::size_t>> m_at;
};

}  // namespace

OffsetSearchAnswer search_offsets(const OffsetSearch& search, const CoordinateOptions&) {
  OffsetSearchAnswer answer;
  answer.labels = Descent(search).run();
  for (const OffsetEdge& edge : search.edges) {
    const int d = answer.labels[static_cast<std::size_t>(edge.to)] - answer.labels[static_cast<std::size_t>(edge.from)];
    const std::int64_t c = edge.costs[static_cast<std::size_t>(d < 0 ? d + search.cycle : d)];
    if (c != OffsetSearch::forbidden) answer.value += c;
    answer.bound += std::min(*std::min_element(edge.costs.begin(), edge.costs.end()), c);
  }
  return answer;
}

}  // namespace entrain::drafting
