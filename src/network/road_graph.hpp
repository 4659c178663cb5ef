// Ways to a directed graph: a vertex for every junction, way end and signal node, an edge for each direction of travel between them.
#pragma once

#include "network/network.hpp"
#include "network/request.hpp"

namespace entrain::network {

struct BuiltGraph {
  RoadGraph graph;
  std::vector<SignalTag> tag;                  // by vertex
  std::vector<SignalDirection> tag_direction;  // by vertex
  std::vector<std::int64_t> vertex_ids;        // node ids, ascending; vertex = index
};

// Counts defaults and findings into `network`; fills nothing else of it.
BuiltGraph build_road_graph(const RoadSource& roads, const Defaults& defaults, Network& network);

// "primary", "secondary", ...
const char* class_word(RoadClass road_class);
RoadClass class_of_word(const std::string& word);

}  // namespace entrain::network
