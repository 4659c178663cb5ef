#include "coordination/offsets/labelling.hpp"

#include "base/circle.hpp"

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

}  // namespace

SeenTables::SeenTables(const Core& core) : m_core(core), m_reversed(core.tables.size()) {
  for (const CoreEdge& edge : core.edges) {
    const int from = core.orders[at(edge.from)], to = core.orders[at(edge.to)];
    for (int p = 0; p < from; ++p)
      for (int q = 0; q < to; ++q) reverse_row(&core.tables[edge.table] + (p * to + q) * core.lanes, core.cycle, &m_reversed[edge.table] + (q * from + p) * core.lanes);
  }
}

Lane SeenTables::at_labels(int edge, const Labels& labels) const {
  const CoreEdge& e = m_core.edges[at(edge)];
  return row(edge, e.to, labels.order[at(e.to)], labels.order[at(e.from)])[wrap(labels.label[at(e.to)] - labels.label[at(e.from)], m_core.cycle)];
}

std::int64_t SeenTables::total(const Labels& labels) const {
  std::int64_t sum = 0;
  for (std::size_t e = 0; e < m_core.edges.size(); ++e) sum += at_labels(static_cast<int>(e), labels);
  for (std::size_t v = 0; v < m_core.nodes.size(); ++v) sum += m_core.node_costs[v][at(labels.order[v])];
  return sum;
}

std::int64_t SeenTables::total_around(const std::vector<int>& nodes, const Labels& labels, std::vector<char>& marks) const {
  std::int64_t sum = 0;
  for (const int v : nodes) marks[at(v)] = 1;
  for (const int v : nodes) {
    sum += m_core.node_costs[at(v)][at(labels.order[at(v)])];
    for (std::size_t i = m_core.first_incident[at(v)]; i < m_core.first_incident[at(v) + 1]; ++i) {
      const Incident& incident = m_core.incidents[i];
      if (!marks[at(incident.other)] || v < incident.other) sum += at_labels(incident.edge, labels);
    }
  }
  for (const int v : nodes) marks[at(v)] = 0;
  return sum;
}

}  // namespace entrain::offsets
