// What a project asks of the network stage, in that stage's words.
#pragma once

#include "network/request.hpp"
#include "project/tables.hpp"

namespace entrain::drafting {

network::NetworkRequest network_request(const project::Project& project, const project::Tables& tables);

}  // namespace entrain::drafting
