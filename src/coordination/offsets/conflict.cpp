#include "coordination/offsets/conflict.hpp"

#include <algorithm>
#include <map>
#include <set>

namespace entrain::offsets {
namespace {

std::size_t at(int index) { return static_cast<std::size_t>(index); }

struct Ends {
  int from = 0, to = 0;
};

Ends ends_of(const Problem& problem, int edge) {
  const int own = static_cast<int>(problem.edges.size());
  if (edge < own) return {problem.edges[at(edge)].from, problem.edges[at(edge)].to};
  return {problem.fixed.front().node, problem.fixed[at(1 + edge - own)].node};
}

// Do these edges alone still contradict each other, as far as the reductions see?
bool contradicts(const Problem& problem, const std::vector<Edge>& fixed, const std::vector<int>& edges) {
  Problem part;
  part.cycle = problem.cycle;
  std::map<int, int> number;
  std::vector<int> nodes;
  const auto node = [&](int v) {
    const auto [place, is_new] = number.try_emplace(v, static_cast<int>(nodes.size()));
    if (is_new) nodes.push_back(v);
    return place->second;
  };
  const int own = static_cast<int>(problem.edges.size());
  for (const int e : edges) {
    const Edge& edge = e < own ? problem.edges[at(e)] : fixed[at(e - own)];
    Costs costs = edge.costs;
    for (std::int64_t& c : costs)
      if (c != forbidden) c = 0;
    part.edges.push_back({node(edge.from), node(edge.to), std::move(costs)});
  }
  part.nodes = static_cast<int>(nodes.size());
  for (const int v : nodes) part.orders.push_back(orders_of(problem, v));
  const Reduction r = reduce(part);
  return r.contradiction >= 0 || r.empty_node >= 0;
}

// The edges one after the other round a cycle; as they are if they form no single cycle.
std::vector<int> in_walking_order(const Problem& problem, const std::vector<int>& edges) {
  std::vector<int> left = edges, walk = {edges.front()};
  left.erase(left.begin());
  const int start = ends_of(problem, walk[0]).from;
  int at_node = ends_of(problem, walk[0]).to;
  while (at_node != start && !left.empty()) {
    const auto next = std::find_if(left.begin(), left.end(), [&](int e) { return ends_of(problem, e).from == at_node || ends_of(problem, e).to == at_node; });
    if (next == left.end()) return edges;
    const Ends ends = ends_of(problem, *next);
    at_node = ends.from == at_node ? ends.to : ends.from;
    walk.push_back(*next);
    left.erase(next);
  }
  return left.empty() ? walk : edges;
}

}  // namespace

std::vector<int> conflict_of(const Problem& problem, const Reduction& reduction) {
  std::vector<int> edges;
  if (reduction.contradiction >= 0) edges = origins(reduction, reduction.contradiction);
  const std::vector<Edge> fixed = fixed_label_edges(problem);
  if (edges.empty() || !contradicts(problem, fixed, edges)) {
    edges.clear();
    for (int e = 0; e < static_cast<int>(problem.edges.size() + fixed.size()); ++e) edges.push_back(e);
  }
  // Leaving out whole runs first keeps the number of trials near (edges that matter) x log(edges).
  for (std::size_t run = std::max<std::size_t>(1, edges.size() / 2); run > 0; run = run == 1 ? 0 : run / 2)
    for (std::size_t first = 0; first < edges.size();) {
      std::vector<int> fewer(edges.begin(), edges.begin() + static_cast<std::ptrdiff_t>(first));
      fewer.insert(fewer.end(), edges.begin() + static_cast<std::ptrdiff_t>(std::min(edges.size(), first + run)), edges.end());
      if (!fewer.empty() && contradicts(problem, fixed, fewer)) edges = std::move(fewer);
      else first += run;
    }
  return in_walking_order(problem, edges);
}

}  // namespace entrain::offsets
