#include "coordination/offsets/cycles.hpp"

#include <algorithm>
#include <boost/graph/adjacency_list.hpp>
#include <boost/graph/biconnected_components.hpp>
#include <boost/graph/boyer_myrvold_planar_test.hpp>
#include <boost/graph/planar_face_traversal.hpp>
#include <map>
#include <queue>
#include <set>

namespace entrain::offsets {
namespace {

using Graph = boost::adjacency_list<boost::vecS, boost::vecS, boost::undirectedS, boost::no_property, boost::property<boost::edge_index_t, int>>;
using GraphEdge = boost::graph_traits<Graph>::edge_descriptor;
using EdgeList = std::vector<int>;

std::size_t at(int index) { return static_cast<std::size_t>(index); }

// The core edges of each two-connected part, parts in order of their first edge.
std::vector<EdgeList> two_connected_parts(const Core& core) {
  Graph graph(core.nodes.size());
  for (std::size_t e = 0; e < core.edges.size(); ++e) boost::add_edge(at(core.edges[e].from), at(core.edges[e].to), static_cast<int>(e), graph);
  std::vector<std::size_t> part(core.edges.size());
  const auto index = boost::get(boost::edge_index, graph);
  const auto parts = boost::biconnected_components(graph, boost::make_iterator_property_map(part.begin(), index));
  std::vector<EdgeList> lists(parts);
  for (std::size_t e = 0; e < core.edges.size(); ++e) lists[part[e]].push_back(static_cast<int>(e));
  std::sort(lists.begin(), lists.end());
  return lists;
}

struct FaceCollector : boost::planar_face_traversal_visitor {
  std::vector<EdgeList>* faces;
  const EdgeList* edges;
  const Graph* graph;
  void begin_face() { faces->emplace_back(); }
  void next_edge(GraphEdge e) { faces->back().push_back((*edges)[at(boost::get(boost::edge_index, *graph, e))]); }
};

// Edges of each face in walking order; empty if the part is not planar.
std::vector<EdgeList> faces_of(const Core& core, const EdgeList& edges) {
  std::map<int, std::size_t> number;
  for (const int e : edges) number.try_emplace(core.edges[at(e)].from, 0), number.try_emplace(core.edges[at(e)].to, 0);
  std::size_t next = 0;
  for (auto& [node, position] : number) position = next++;
  Graph graph(number.size());
  for (std::size_t i = 0; i < edges.size(); ++i) boost::add_edge(number[core.edges[at(edges[i])].from], number[core.edges[at(edges[i])].to], static_cast<int>(i), graph);
  std::vector<std::vector<GraphEdge>> embedding(number.size());
  if (edges.size() > 3 * number.size()) return {};
  if (!boost::boyer_myrvold_planarity_test(boost::boyer_myrvold_params::graph = graph, boost::boyer_myrvold_params::embedding = embedding.data())) return {};
  std::vector<EdgeList> faces;
  FaceCollector collector;
  collector.faces = &faces;
  collector.edges = &edges;
  collector.graph = &graph;
  boost::planar_face_traversal(graph, embedding.data(), collector);
  const auto longest = std::max_element(faces.begin(), faces.end(), [](const EdgeList& a, const EdgeList& b) { return a.size() < b.size(); });
  faces.erase(longest);
  return faces;
}

// Edges in cyclic order, each sharing a node with the next, as a walk.
Walk walk_along(const Core& core, const EdgeList& edges) {
  Walk walk;
  const CoreEdge &first = core.edges[at(edges[0])], &second = core.edges[at(edges[1])];
  int at_node = first.to == second.from || first.to == second.to ? first.from : first.to;
  for (const int e : edges) {
    const bool forward = core.edges[at(e)].from == at_node;
    walk.push_back({e, forward});
    at_node = forward ? core.edges[at(e)].to : core.edges[at(e)].from;
  }
  return walk;
}

// A shortest way from one end of `edge` to the other round it, within the part; empty if there is none.
class Detour {
 public:
  Detour(const Core& core, const EdgeList& edges) : m_core(core), m_reached_by(core.nodes.size(), -1), m_inside(core.edges.size(), 0) {
    for (const int e : edges) m_inside[at(e)] = 1;
  }

  EdgeList find(int edge) {
    const int start = m_core.edges[at(edge)].from, goal = m_core.edges[at(edge)].to;
    std::vector<int> order = {start};
    m_reached_by[at(start)] = edge;
    for (std::size_t next = 0; next < order.size() && m_reached_by[at(goal)] < 0; ++next) spread(order[next], edge, order);
    EdgeList way = m_reached_by[at(goal)] < 0 ? EdgeList{} : trace(edge, goal, start);
    for (const int v : order) m_reached_by[at(v)] = -1;
    return way;
  }

 private:
  void spread(int v, int edge, std::vector<int>& order) {
    for (std::size_t i = m_core.first_incident[at(v)]; i < m_core.first_incident[at(v) + 1]; ++i) {
      const Incident& step = m_core.incidents[i];
      if (step.edge == edge || !m_inside[at(step.edge)] || m_reached_by[at(step.other)] >= 0) continue;
      m_reached_by[at(step.other)] = step.edge;
      order.push_back(step.other);
    }
  }

  EdgeList trace(int edge, int goal, int start) const {
    EdgeList way = {edge};
    for (int v = goal; v != start;) {
      const int e = m_reached_by[at(v)];
      way.push_back(e);
      v = m_core.edges[at(e)].from == v ? m_core.edges[at(e)].to : m_core.edges[at(e)].from;
    }
    return way;
  }

  const Core& m_core;
  std::vector<int> m_reached_by;
  std::vector<char> m_inside;
};

std::vector<EdgeList> short_cycles_of(const EdgeList& edges, Detour& detour) {
  std::set<EdgeList> seen;
  std::vector<EdgeList> cycles;
  for (const int e : edges) {
    EdgeList cycle = detour.find(e);
    EdgeList key = cycle;
    std::sort(key.begin(), key.end());
    if (cycle.size() >= 3 && seen.insert(key).second) cycles.push_back(std::move(cycle));
  }
  return cycles;
}

// Ranks of the nodes in breadth-first order.
std::vector<int> walk_ranks(const Core& core) {
  std::vector<int> rank(core.nodes.size(), -1), order;
  for (std::size_t root = 0; root < rank.size(); ++root) {
    if (rank[root] >= 0) continue;
    rank[root] = static_cast<int>(order.size());
    order.push_back(static_cast<int>(root));
    for (std::size_t next = at(rank[root]); next < order.size(); ++next)
      for (std::size_t i = core.first_incident[at(order[next])]; i < core.first_incident[at(order[next]) + 1]; ++i) {
        const int other = core.incidents[i].other;
        if (rank[at(other)] >= 0) continue;
        rank[at(other)] = static_cast<int>(order.size());
        order.push_back(other);
      }
  }
  return rank;
}

}  // namespace

std::vector<Walk> cycles_of(const Core& core) {
  std::vector<EdgeList> found;
  for (const EdgeList& part : two_connected_parts(core)) {
    if (part.size() < 3) continue;
    std::vector<EdgeList> cycles = faces_of(core, part);
    if (cycles.empty()) {
      Detour detour(core, part);
      cycles = short_cycles_of(part, detour);
    }
    std::move(cycles.begin(), cycles.end(), std::back_inserter(found));
  }
  const std::vector<int> rank = walk_ranks(core);
  std::vector<std::pair<std::vector<int>, std::size_t>> keys;
  for (std::size_t c = 0; c < found.size(); ++c) {
    std::vector<int> ranks;
    for (const int e : found[c]) ranks.push_back(rank[at(core.edges[at(e)].from)]), ranks.push_back(rank[at(core.edges[at(e)].to)]);
    std::sort(ranks.begin(), ranks.end());
    keys.emplace_back(std::move(ranks), c);
  }
  std::sort(keys.begin(), keys.end());
  std::vector<Walk> walks;
  for (const auto& [ranks, c] : keys) walks.push_back(walk_along(core, found[c]));
  return walks;
}

}  // namespace entrain::offsets
