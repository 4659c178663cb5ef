// From every leg of every intersection to the next signals along the roads.
#pragma once

#include "network/intersections.hpp"
#include "network/network.hpp"
#include "network/request.hpp"

namespace entrain::network {

// Links in natural order of id. Travel times are running times by the speed limit with the defaults' factor; the rest is added later.
std::vector<SignalLink> find_signal_links(const RoadGraph& graph, const std::vector<Intersection>& intersections, const Restrictions& restrictions, const Defaults& defaults);

}  // namespace entrain::network
