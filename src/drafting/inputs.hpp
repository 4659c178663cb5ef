// Everything a draft rests on, in memory: the project, its tables, the network and the design standard.
#pragma once

#include "network/network.hpp"
#include "project/project.hpp"
#include "project/tables.hpp"
#include "standards/design_standard.hpp"

namespace entrain::drafting {

struct Inputs {
  project::Project project;
  project::Tables tables;
  network::Network network;
  standards::DesignStandard standard;
};

}  // namespace entrain::drafting
