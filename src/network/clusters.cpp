#include "network/clusters.hpp"

#include <algorithm>
#include <map>
#include <numeric>
#include <set>

#include "network/geometry.hpp"

namespace entrain::network {
namespace {

constexpr double most_stop_line_m = 80;   // from a stop line to the junction it guards
constexpr double carriageway_gap_m = 40;  // between the two junctions of a divided road

using Vertex = RoadGraph::vertex_descriptor;

std::set<int> neighbours(const RoadGraph& graph, int v) {
  std::set<int> all;
  for (auto [e, end] = boost::out_edges(static_cast<Vertex>(v), graph); e != end; ++e) all.insert(static_cast<int>(boost::target(*e, graph)));
  for (auto [e, end] = boost::in_edges(static_cast<Vertex>(v), graph); e != end; ++e) all.insert(static_cast<int>(boost::source(*e, graph)));
  return all;
}

class Grouping {
 public:
  Grouping(const BuiltGraph& built, double cluster_link_m) : m_built(built), m_graph(built.graph), m_link_m(cluster_link_m), m_parent(boost::num_vertices(built.graph)) {
    std::iota(m_parent.begin(), m_parent.end(), 0);
  }

  std::vector<Cluster> run(const std::vector<int>& extra) {
    for (std::size_t v = 0; v < m_built.tag.size(); ++v)
      if (m_built.tag[v] == SignalTag::traffic_signals) claim(static_cast<int>(v));
    for (const int v : extra) m_signalised[v];
    join_near();
    return collect();
  }

 private:
  bool is_junction(int v) const { return arm_count(m_graph, v) >= 3; }

  // The junction a signal node controls: itself, or the next one downstream of its stop line.
  void claim(int v) {
    const std::int64_t id = m_built.graph[static_cast<Vertex>(v)].node_id;
    if (is_junction(v)) return m_signalised[v].push_back(id);
    const int next = downstream_junction(v);
    if (next >= 0) m_signalised[next].push_back(id);
    else m_signalised[v].push_back(id);
  }

  int downstream_junction(int v) const {
    int best = -1;
    double best_m = most_stop_line_m;
    const auto look = [&](bool forward) {
      const auto try_edge = [&](RoadGraph::edge_descriptor e) {
        // "forward" and "backward" of the tag are along the way; the out-edge along the way keeps the order of node ids as mapped,
        // which the graph does not know, so both sides are tried and the nearer junction wins.
        int at = static_cast<int>(forward ? boost::target(e, m_graph) : boost::source(e, m_graph));
        double length = m_graph[e].length_m;
        int before = v;
        while (length < best_m && !is_junction(at)) {
          int next = -1;
          double step = 0;
          for (const int n : neighbours(m_graph, at))
            if (n != before) next = n, step = distance_m(m_graph[static_cast<Vertex>(at)].place, m_graph[static_cast<Vertex>(n)].place);
          if (next < 0) return;
          before = at;
          at = next;
          length += step;
        }
        if (length < best_m && is_junction(at)) best = at, best_m = length;
      };
      if (forward)
        for (auto [e, end] = boost::out_edges(static_cast<Vertex>(v), m_graph); e != end; ++e) try_edge(*e);
    };
    look(true);
    return best;
  }

  void join_near() {
    std::vector<int> signalised;
    for (const auto& [v, ids] : m_signalised) signalised.push_back(v);
    for (const int v : signalised)
      for (auto [e, end] = boost::out_edges(static_cast<Vertex>(v), m_graph); e != end; ++e) join_along(v, *e);
    for (const int v : signalised)
      for (auto [e, end] = boost::in_edges(static_cast<Vertex>(v), m_graph); e != end; ++e) join_divided(v, static_cast<int>(boost::source(*e, m_graph)), m_graph[*e]);
  }

  // Follows one edge, through vertices of degree two, to another signalised junction nearby.
  void join_along(int v, RoadGraph::edge_descriptor first) {
    int at = static_cast<int>(boost::target(first, m_graph)), before = v;
    double length = m_graph[first].length_m;
    while (length <= m_link_m && !is_junction(at)) {
      int next = -1;
      for (const int n : neighbours(m_graph, at))
        if (n != before) next = n;
      if (next < 0) return;
      length += distance_m(m_graph[static_cast<Vertex>(at)].place, m_graph[static_cast<Vertex>(next)].place);
      before = at;
      at = next;
    }
    if (length > m_link_m || at == v) return;
    if (m_signalised.count(at) != 0) unite(v, at);
    else join_divided(v, at, m_graph[first]);
  }

  // The other carriageway's junction may carry no signal of its own: one-way roads on both sides of a short link.
  void join_divided(int v, int other, const Road& link) {
    if (link.length_m > carriageway_gap_m || !is_junction(other) || m_signalised.count(other) != 0) return;
    if (has_one_way(v) && has_one_way(other) && link.road_class != RoadClass::service) {
      m_signalised[other];
      unite(v, other);
    }
  }
  bool has_one_way(int v) const {
    for (auto [e, end] = boost::out_edges(static_cast<Vertex>(v), m_graph); e != end; ++e)
      if (!boost::edge(boost::target(*e, m_graph), static_cast<Vertex>(v), m_graph).second) return true;
    return false;
  }

  int root(int v) {
    while (m_parent[static_cast<std::size_t>(v)] != v) v = m_parent[static_cast<std::size_t>(v)] = m_parent[static_cast<std::size_t>(m_parent[static_cast<std::size_t>(v)])];
    return v;
  }
  void unite(int a, int b) {
    a = root(a), b = root(b);
    m_parent[static_cast<std::size_t>(std::max(a, b))] = std::min(a, b);
  }

  std::vector<Cluster> collect() {
    std::map<int, Cluster> by_root;
    for (auto& [v, ids] : m_signalised) {
      Cluster& cluster = by_root[root(v)];
      cluster.junctions.push_back(v);
      cluster.signal_nodes.insert(cluster.signal_nodes.end(), ids.begin(), ids.end());
    }
    std::vector<Cluster> clusters;
    for (auto& [first, cluster] : by_root) {
      for (const int v : cluster.junctions) {
        cluster.centre.lon += m_graph[static_cast<Vertex>(v)].place.lon / static_cast<double>(cluster.junctions.size());
        cluster.centre.lat += m_graph[static_cast<Vertex>(v)].place.lat / static_cast<double>(cluster.junctions.size());
      }
      std::sort(cluster.signal_nodes.begin(), cluster.signal_nodes.end());
      clusters.push_back(std::move(cluster));
    }
    return clusters;
  }

  const BuiltGraph& m_built;
  const RoadGraph& m_graph;
  double m_link_m;
  std::vector<int> m_parent;
  std::map<int, std::vector<std::int64_t>> m_signalised;  // junction -> signal nodes
};

}  // namespace

int arm_count(const RoadGraph& graph, int vertex) { return static_cast<int>(neighbours(graph, vertex).size()); }

std::vector<Cluster> find_clusters(const BuiltGraph& built, const std::vector<int>& extra, double cluster_link_m) { return Grouping(built, cluster_link_m).run(extra); }

}  // namespace entrain::network
