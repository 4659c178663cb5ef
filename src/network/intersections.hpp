// Clusters to intersections: legs, lanes, movements, crossings.
#pragma once

#include <string>
#include <tuple>
#include <vector>

#include "network/clusters.hpp"
#include "network/network.hpp"
#include "network/request.hpp"

namespace entrain::network {

// One arm of the cluster in one direction of travel: the edge that crosses the border.
struct BorderEdge {
  RoadGraph::edge_descriptor edge;
  int inside = -1;   // vertex of the cluster
  int outside = -1;
};

// A leg with the edges it is made of.
struct LegEdges {
  std::vector<BorderEdge> in, out;
};

struct Intersection {
  Signal signal;                // legs, movements, crossings; id and name are given later
  std::vector<LegEdges> edges;  // by leg
};

// Turn restrictions by (from way, via node) -> ways that must not (or alone may) be taken.
class Restrictions {
 public:
  explicit Restrictions(const std::vector<TurnRestriction>& list);
  bool allows(std::int64_t from_way, std::int64_t via_node, std::int64_t to_way) const;

 private:
  struct Rule {
    std::int64_t from, via, to;
    RestrictionKind kind;
    bool operator<(const Rule& other) const { return std::tie(from, via, to) < std::tie(other.from, other.via, other.to); }
  };
  std::vector<Rule> m_rules;
};

Intersection make_intersection(const RoadGraph& graph, const Cluster& cluster, const Restrictions& restrictions, TrafficSide side);

// Right or left by the divided roads of all clusters: on which side of the outbound carriageway the inbound one lies. 0: nothing to tell by.
int side_votes(const RoadGraph& graph, const std::vector<Cluster>& clusters);

}  // namespace entrain::network
