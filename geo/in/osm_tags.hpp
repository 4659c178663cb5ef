// What OpenStreetMap's tags say about roads, signals and restrictions. Private to geo/in.
#pragma once

#include <optional>
#include <osmium/osm/relation.hpp>
#include <osmium/osm/tag.hpp>

#include "network/road_source.hpp"

namespace entrain::geo {

bool is_road(const osmium::TagList& tags);
network::RoadWay road_of(const osmium::TagList& tags);        // without id and nodes
network::RoadNode road_node_of(const osmium::TagList& tags);  // without id and place
std::optional<network::TurnRestriction> restriction_of(const osmium::Relation& relation);

}  // namespace entrain::geo
