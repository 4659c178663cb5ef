// Roads from a file: OpenStreetMap through libosmium, every other vector source through GDAL.
#pragma once

#include <string>

#include "base/result.hpp"
#include "network/road_source.hpp"
#include "project/project.hpp"

namespace entrain::geo {

// Errors: missing, empty, truncated or unreadable file, no such layer or column; all that can be told at once.
[[nodiscard]] Result<Noted<network::RoadSource>> read_roads(const project::Roads& roads, const std::string& folder, project::Units units);

// The two readers behind it.
[[nodiscard]] Result<Noted<network::RoadSource>> read_osm_roads(const std::string& path);
[[nodiscard]] Result<Noted<network::RoadSource>> read_layer_roads(const project::Roads& roads, const std::string& path, project::Units units);

// "30 mph", "50", "50 km/h" in metres per second; 0 for anything else. A bare number is km/h.
double parse_speed_mps(std::string_view text);

}  // namespace entrain::geo
