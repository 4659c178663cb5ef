#include "network/signal_links.hpp"

#include <algorithm>
#include <map>
#include <queue>
#include <unordered_map>

#include "base/natural_order.hpp"
#include "network/geometry.hpp"

namespace entrain::network {
namespace {

constexpr double farthest_m = 4000;  // a signal further away receives no platoon worth the name
constexpr double detour = 1.25;      // further targets of a leg must be nearly as near as the nearest

using Vertex = RoadGraph::vertex_descriptor;
using Edge = RoadGraph::edge_descriptor;

struct Arrival {
  int signal, leg;
};

struct Reached {
  double time_s = 0, length_m = 0;
  Edge edge;
  int before = -1;  // index into the list of reached edges
  bool default_speed = false, same_street = true;
};

class Search {
 public:
  Search(const RoadGraph& graph, const std::vector<Intersection>& intersections, const Restrictions& restrictions, const Defaults& defaults)
      : m_graph(graph), m_intersections(intersections), m_restrictions(restrictions), m_defaults(defaults), m_signal_of(boost::num_vertices(graph), -1) {
    for (std::size_t s = 0; s < intersections.size(); ++s) {
      for (const int v : intersections[s].signal.junctions) m_signal_of[static_cast<std::size_t>(v)] = static_cast<int>(s);
      for (std::size_t leg = 0; leg < intersections[s].edges.size(); ++leg)
        for (const BorderEdge& border : intersections[s].edges[leg].in) m_arrivals[key(border.edge)] = {static_cast<int>(s), static_cast<int>(leg)};
    }
  }

  // Dijkstra over edges, so that turn restrictions hold; stops at signals.
  void from_leg(int signal, int leg, std::vector<SignalLink>& links) {
    m_reached.clear();
    m_best.clear();
    using Item = std::pair<double, int>;
    std::priority_queue<Item, std::vector<Item>, std::greater<>> open;
    for (const BorderEdge& border : m_intersections[static_cast<std::size_t>(signal)].edges[static_cast<std::size_t>(leg)].out) push(border.edge, -1, open);
    std::map<int, int> found;  // target signal -> reached edge
    double nearest_s = -1;
    while (!open.empty()) {
      const auto [time, index] = open.top();
      open.pop();
      const Reached at = m_reached[static_cast<std::size_t>(index)];
      if (m_best[key(at.edge)] != index) continue;
      const int v = static_cast<int>(boost::target(at.edge, m_graph));
      const int target = m_signal_of[static_cast<std::size_t>(v)];
      if (target >= 0) {
        if (target != signal && m_arrivals.count(key(at.edge)) != 0 && found.emplace(target, index).second && nearest_s < 0) nearest_s = time;
        continue;
      }
      if (at.length_m > farthest_m || (nearest_s >= 0 && time > detour * nearest_s + 5)) continue;
      const std::int64_t node = m_graph[static_cast<Vertex>(v)].node_id;
      for (auto [e, end] = boost::out_edges(static_cast<Vertex>(v), m_graph); e != end; ++e)
        if (boost::target(*e, m_graph) != boost::source(at.edge, m_graph) && m_restrictions.allows(m_graph[at.edge].way_id, node, m_graph[*e].way_id)) push(*e, index, open);
    }
    for (const auto& [target, index] : found)
      if (m_reached[static_cast<std::size_t>(index)].time_s <= detour * nearest_s + 1e-9 || m_reached[static_cast<std::size_t>(index)].same_street)
        links.push_back(link(signal, leg, target, index));
  }

 private:
  static const void* key(const Edge& edge) { return edge.get_property(); }

  template <class Queue>
  void push(Edge edge, int before, Queue& open) {
    const Road& road = m_graph[edge];
    Reached next;
    next.edge = edge;
    next.before = before;
    next.time_s = road.length_m / (m_defaults.travel_speed_factor * road.speed_limit_mps);
    next.length_m = road.length_m;
    next.default_speed = road.speed_is_default;
    if (before >= 0) {
      const Reached& from = m_reached[static_cast<std::size_t>(before)];
      next.time_s += from.time_s;
      next.length_m += from.length_m;
      next.default_speed = next.default_speed || from.default_speed;
      next.same_street = from.same_street && road.name == m_graph[from.edge].name;
    }
    const auto best = m_best.find(key(edge));
    if (best != m_best.end() && m_reached[static_cast<std::size_t>(best->second)].time_s <= next.time_s) return;
    m_best[key(edge)] = static_cast<int>(m_reached.size());
    open.push({next.time_s, static_cast<int>(m_reached.size())});
    m_reached.push_back(next);
  }

  SignalLink link(int from, int from_leg, int to, int index) const {
    const Reached& last = m_reached[static_cast<std::size_t>(index)];
    std::vector<Edge> path;
    for (int i = index; i >= 0; i = m_reached[static_cast<std::size_t>(i)].before) path.push_back(m_reached[static_cast<std::size_t>(i)].edge);
    std::reverse(path.begin(), path.end());
    SignalLink out;
    out.from_signal = from;
    out.to_signal = to;
    out.from_leg = from_leg;
    out.to_leg = m_arrivals.at(key(last.edge)).leg;
    double rise = 0, speed_time = last.time_s;
    for (const Edge& e : path) {
      const auto& shape = m_graph[e].shape;
      out.shape.insert(out.shape.end(), shape.begin() + (out.shape.empty() ? 0 : 1), shape.end());
      rise += m_graph[e].grade * m_graph[e].length_m;
    }
    const Signal &a = m_intersections[static_cast<std::size_t>(from)].signal, &b = m_intersections[static_cast<std::size_t>(to)].signal;
    const double inner = distance_m(a.place, out.shape.front()) + distance_m(out.shape.back(), b.place);
    out.length_m = last.length_m + inner;
    out.grade = last.length_m > 0 ? rise / last.length_m : 0;
    out.lanes = m_graph[last.edge].lanes;
    const double time = speed_time * out.length_m / std::max(1.0, last.length_m);
    out.travel_times[""] = {time, last.default_speed ? "class_default" : "speed_limit", {}, {}};
    return out;
  }

  const RoadGraph& m_graph;
  const std::vector<Intersection>& m_intersections;
  const Restrictions& m_restrictions;
  const Defaults& m_defaults;
  std::vector<int> m_signal_of;                       // by vertex
  std::unordered_map<const void*, Arrival> m_arrivals;  // by border edge
  std::vector<Reached> m_reached;
  std::unordered_map<const void*, int> m_best;        // edge -> best index in m_reached
};

}  // namespace

std::vector<SignalLink> find_signal_links(const RoadGraph& graph, const std::vector<Intersection>& intersections, const Restrictions& restrictions, const Defaults& defaults) {
  std::vector<SignalLink> links;
  Search search(graph, intersections, restrictions, defaults);
  for (std::size_t s = 0; s < intersections.size(); ++s)
    for (std::size_t leg = 0; leg < intersections[s].edges.size(); ++leg) search.from_leg(static_cast<int>(s), static_cast<int>(leg), links);
  return links;
}

}  // namespace entrain::network
