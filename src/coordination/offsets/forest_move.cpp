#include "coordination/offsets/forest_move.hpp"

#include <algorithm>

#include "base/circle.hpp"
#include "coordination/offsets/rows.hpp"

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

}  // namespace

ForestMove::ForestMove(const SeenTables& tables)
    : m_tables(tables), m_core(tables.core()), m_cluster_of(m_core.nodes.size(), -1), m_row(at(m_core.lanes)), m_reversed(m_row), m_space(m_core.cycle) {}

void ForestMove::run(const std::vector<int>& region, int largest, Random& random, Labels& labels) {
  m_cluster_count = m_used = 0;
  m_links.clear();
  grow_clusters(region, largest, random);
  choose_forest(region);
  sum_costs(labels);
  order_trees();
  send_messages();
  choose_shifts(labels);
  for (const int v : region) m_cluster_of[at(v)] = -1;
}

// Clusters in the order in which they may join the forest: a random order of their first nodes.
void ForestMove::grow_clusters(const std::vector<int>& region, int largest, Random& random) {
  m_sequence.assign(region.begin(), region.end());
  for (int i = static_cast<int>(m_sequence.size()) - 1; i > 0; --i) std::swap(m_sequence[at(i)], m_sequence[at(random.below(i + 1))]);
  for (const int v : region) m_cluster_of[at(v)] = -2;
  for (const int v : m_sequence) {
    if (m_cluster_of[at(v)] != -2) continue;
    if (m_clusters.size() == m_cluster_count) m_clusters.emplace_back();
    Cluster& cluster = m_clusters[m_cluster_count];
    cluster.nodes.assign(1, v);
    cluster.links.clear();
    cluster.tree = cluster.parent = cluster.parent_link = -1;
    m_cluster_of[at(v)] = static_cast<int>(m_cluster_count);
    const int size = largest > 1 ? 1 + random.below(largest) : 1;
    for (std::size_t next = 0; next < cluster.nodes.size() && static_cast<int>(cluster.nodes.size()) < size; ++next) {
      const int u = cluster.nodes[next];
      for (std::size_t i = m_core.first_incident[at(u)]; i < m_core.first_incident[at(u) + 1] && static_cast<int>(cluster.nodes.size()) < size; ++i) {
        const int other = m_core.incidents[i].other;
        if (m_cluster_of[at(other)] != -2 || random.chance(0.2)) continue;
        m_cluster_of[at(other)] = static_cast<int>(m_cluster_count);
        cluster.nodes.push_back(other);
      }
    }
    cluster.orders = cluster.nodes.size() == 1 ? m_core.orders[at(v)] : 1;
    ++m_cluster_count;
  }
}

int ForestMove::root_of(int cluster) {
  while (m_union[at(cluster)] != cluster) cluster = m_union[at(cluster)] = m_union[at(m_union[at(cluster)])];
  return cluster;
}

// Collects the clusters of the forest next to this one; false if two of them are in one tree.
bool ForestMove::joins_distinct_trees(int cluster) {
  m_neighbours.clear();
  for (const int v : m_clusters[at(cluster)].nodes)
    for (std::size_t i = m_core.first_incident[at(v)]; i < m_core.first_incident[at(v) + 1]; ++i) {
      const int other = m_cluster_of[at(m_core.incidents[i].other)];
      if (other < 0 || other == cluster || m_clusters[at(other)].tree < 0) continue;
      if (std::find(m_neighbours.begin(), m_neighbours.end(), other) == m_neighbours.end()) m_neighbours.push_back(other);
    }
  for (std::size_t i = 0; i < m_neighbours.size(); ++i)
    for (std::size_t j = 0; j < i; ++j)
      if (root_of(m_neighbours[i]) == root_of(m_neighbours[j])) return false;
  return true;
}

void ForestMove::choose_forest(const std::vector<int>& region) {
  static_cast<void>(region);
  m_union.resize(m_cluster_count);
  for (std::size_t c = 0; c < m_cluster_count; ++c) {
    const int cluster = static_cast<int>(c);
    m_union[c] = cluster;
    if (!joins_distinct_trees(cluster)) continue;
    m_clusters[c].tree = cluster;
    for (const int other : m_neighbours) m_union[at(root_of(other))] = cluster;
  }
}

std::size_t ForestMove::new_rows(int count, Lane value) {
  const std::size_t first = m_used;
  m_used += at(count * m_core.lanes);
  if (m_lanes.size() < m_used) m_lanes.resize(m_used * 2);
  std::fill(m_lanes.begin() + static_cast<std::ptrdiff_t>(first), m_lanes.begin() + static_cast<std::ptrdiff_t>(m_used), value);
  return first;
}

int ForestMove::link_between(int first, int second) {
  for (const int l : m_clusters[at(first)].links)
    if (m_links[at(l)].second == second) return l;
  const int link = static_cast<int>(m_links.size());
  m_links.push_back({first, second, new_rows(m_clusters[at(first)].orders * m_clusters[at(second)].orders, 0)});
  m_clusters[at(first)].links.push_back(link);
  m_clusters[at(second)].links.push_back(link);
  return link;
}

// What the node adds to its cluster's costs and links, by the shift of its cluster.
void ForestMove::sum_node(int cluster, int v, const Labels& labels) {
  const int cycle = m_core.cycle, lanes = m_core.lanes, x = labels.label[at(v)];
  const Cluster& own = m_clusters[at(cluster)];
  for (std::size_t i = m_core.first_incident[at(v)]; i < m_core.first_incident[at(v) + 1]; ++i) {
    const Incident& incident = m_core.incidents[i];
    const int u = incident.other, other = m_cluster_of[at(u)];
    if (other == cluster) continue;
    const int difference = wrap(x - labels.label[at(u)], cycle), turn = difference == 0 ? 0 : cycle - difference;
    if (other < 0 || m_clusters[at(other)].tree < 0) {
      for (int p = 0; p < own.orders; ++p)
        add_shifted(m_tables.row(incident.edge, v, own.orders > 1 ? p : labels.order[at(v)], labels.order[at(u)]), turn, cycle, &m_lanes[own.costs] + p * lanes);
    } else if (other < cluster) {
      const Link link = m_links[at(link_between(other, cluster))];
      for (int q = 0; q < m_clusters[at(other)].orders; ++q)
        for (int p = 0; p < own.orders; ++p)
          add_shifted(m_tables.row(incident.edge, v, own.orders > 1 ? p : labels.order[at(v)], m_clusters[at(other)].orders > 1 ? q : labels.order[at(u)]), turn, cycle,
                      &m_lanes[link.rows] + (q * own.orders + p) * lanes);
    }
  }
}

void ForestMove::sum_costs(const Labels& labels) {
  for (std::size_t c = 0; c < m_cluster_count; ++c) {
    Cluster& cluster = m_clusters[c];
    if (cluster.tree < 0) continue;
    cluster.costs = new_rows(cluster.orders, 0);
    if (cluster.orders > 1)
      for (int p = 0; p < cluster.orders; ++p)
        for (int s = 0; s < m_core.cycle; ++s) m_lanes[cluster.costs + at(p * m_core.lanes + s)] = m_core.node_costs[at(cluster.nodes[0])][at(p)];
    for (const int v : cluster.nodes) sum_node(static_cast<int>(c), v, labels);
  }
}

// m_sequence: clusters of the forest, every one after its parent.
void ForestMove::order_trees() {
  m_sequence.clear();
  for (std::size_t c = 0; c < m_cluster_count; ++c) {
    if (m_clusters[c].tree < 0 || m_clusters[c].parent != -1) continue;
    m_clusters[c].parent = -2;
    const std::size_t first = m_sequence.size();
    m_sequence.push_back(static_cast<int>(c));
    for (std::size_t next = first; next < m_sequence.size(); ++next) {
      const int at_cluster = m_sequence[next];
      for (const int l : m_clusters[at(at_cluster)].links) {
        const int other = m_links[at(l)].first == at_cluster ? m_links[at(l)].second : m_links[at(l)].first;
        if (m_clusters[at(other)].parent != -1) continue;
        m_clusters[at(other)].parent = at_cluster;
        m_clusters[at(other)].parent_link = l;
        m_sequence.push_back(other);
      }
    }
  }
}

// From the leaves: each cluster tells its parent what every shift of the parent costs it at best.
void ForestMove::send_messages() {
  const int lanes = m_core.lanes, cycle = m_core.cycle;
  for (std::size_t i = m_sequence.size(); i-- > 0;) {
    const Cluster& own = m_clusters[at(m_sequence[i])];
    if (own.parent < 0) continue;
    const Cluster& parent = m_clusters[at(own.parent)];
    const Link& link = m_links[at(own.parent_link)];
    Lane least = lane_ceiling;
    for (int p = 0; p < own.orders; ++p) least = std::min(least, least_of(&m_lanes[own.costs] + p * lanes, cycle));
    for (int p = 0; p < own.orders; ++p)
      for (int s = 0; s < cycle; ++s) {
        Lane& cost = m_lanes[own.costs + at(p * lanes + s)];
        cost = std::min(cost - least, lane_ceiling);
      }
    for (int q = 0; q < parent.orders; ++q) {
      std::fill(m_row.begin(), m_row.end(), Lane{1} << 30);
      for (int p = 0; p < own.orders; ++p) {
        // As the difference of the parent's shift less this cluster's.
        const bool first = link.first == m_sequence[i];
        const Lane* costs = &m_lanes[link.rows] + (first ? p * parent.orders + q : q * own.orders + p) * lanes;
        if (!first) reverse_row(costs, cycle, m_reversed.data());
        convolve_into(&m_lanes[own.costs] + p * lanes, first ? costs : m_reversed.data(), cycle, m_row.data(), m_space);
      }
      Lane* to = &m_lanes[parent.costs] + q * lanes;
      for (int s = 0; s < cycle; ++s) to[s] = std::min(to[s] + std::min(m_row[at(s)], lane_ceiling), lane_ceiling);
    }
  }
}

void ForestMove::choose_shifts(Labels& labels) {
  const int lanes = m_core.lanes, cycle = m_core.cycle;
  m_shift.assign(m_cluster_count, 0);
  m_order.assign(m_cluster_count, 0);
  for (const int c : m_sequence) {
    const Cluster& own = m_clusters[at(c)];
    Lane least = INT32_MAX;
    for (int p = 0; p < own.orders; ++p)
      for (int s = 0; s < cycle; ++s) {
        Lane cost = m_lanes[own.costs + at(p * lanes + s)];
        if (own.parent >= 0) {
          const Link& link = m_links[at(own.parent_link)];
          const int q = m_order[at(own.parent)], up = m_shift[at(own.parent)];
          const bool first = link.first == c;
          const int d = first ? up - s : s - up;
          cost += m_lanes[link.rows + at((first ? p * m_clusters[at(own.parent)].orders + q : q * own.orders + p) * lanes + (d < 0 ? d + cycle : d))];
        }
        if (cost < least) least = cost, m_shift[at(c)] = s, m_order[at(c)] = p;
      }
    apply(c, m_order[at(c)], m_shift[at(c)], labels);
  }
}

void ForestMove::apply(int c, int order, int shift, Labels& labels) {
  const Cluster& cluster = m_clusters[at(c)];
  if (cluster.orders > 1) labels.order[at(cluster.nodes[0])] = order;
  for (const int v : cluster.nodes) {
    int& label = labels.label[at(v)];
    label = label + shift >= m_core.cycle ? label + shift - m_core.cycle : label + shift;
  }
}

}  // namespace entrain::offsets
