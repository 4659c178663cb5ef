// The network as GeoPackage layers, to look at in any desktop GIS.
#pragma once

#include <cstdint>
#include <string>

#include "base/result.hpp"
#include "network/network.hpp"

namespace entrain::geo {

// Layers junctions, roads, signals, approaches, movements, crossings, links, corridors, findings; units in the field names; a layer_styles table, so that
// the file opens styled. The same bytes from the same network: all times inside are `source_date_epoch`. Written whole or not at all.
// Returns the path. Errors: the folder can't be written to.
[[nodiscard]] Result<std::string> write_network_geopackage(const network::Network& network, const std::string& path, std::int64_t source_date_epoch);

}  // namespace entrain::geo
