// Roads and the project's wishes to a network: junctions, signals, legs, movements, links between signals, corridors.
#pragma once

#include "base/result.hpp"
#include "network/network.hpp"
#include "network/request.hpp"
#include "network/road_source.hpp"

namespace entrain::network {

// Errors: a named signal nowhere near a road or a signal, an unknown signal in a corridor or travel-time row, a corridor with no
// path (says after which signal it breaks and what would mend it), no roads at all. All at once.
[[nodiscard]] Result<Noted<Network>> build_network(const RoadSource& roads, const NetworkRequest& request);

// Without roads: signals and links are what the travel times and corridors name; distances where length is given, else 0 and noted.
[[nodiscard]] Result<Noted<Network>> network_from_travel_times(const NetworkRequest& request);

}  // namespace entrain::network
