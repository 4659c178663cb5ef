// Corridors as ordered stops: listed, or followed along a street.
#pragma once

#include "base/result.hpp"
#include "network/network.hpp"
#include "network/request.hpp"

namespace entrain::network {

// Appends the corridor to `network` or says where it breaks and what would mend it.
Diagnostics add_corridor(const CorridorRequest& request, Network& network);

// Lower case, common words for streets and directions shortened, blanks and dots as one blank: "Main Street" and "MAIN ST." agree.
std::string plain_street_name(const std::string& name);

}  // namespace entrain::network
