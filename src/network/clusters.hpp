// Signal nodes to intersections: one cluster for everything that one controller would run.
#pragma once

#include <string>
#include <vector>

#include "network/road_graph.hpp"

namespace entrain::network {

struct Cluster {
  std::vector<int> junctions;            // vertices where roads meet, ascending
  std::vector<std::int64_t> signal_nodes;
  Point centre;                          // mean of the junctions
};

// Clusters along the graph: a signal at a junction belongs to it, a signal at a stop line to the next junction it controls; signalised
// junctions joined by links no longer than `cluster_link_m`, and the further carriageway of a divided road, are one intersection.
// `extra`: vertices that the engineer names as signalised.
std::vector<Cluster> find_clusters(const BuiltGraph& built, const std::vector<int>& extra, double cluster_link_m);

// Number of different neighbours of a vertex, either direction.
int arm_count(const RoadGraph& graph, int vertex);

}  // namespace entrain::network
