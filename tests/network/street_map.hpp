// Little street maps drawn as text: letters are nodes on a grid of 100 m, ways are listed by their nodes.
#pragma once

#include <string>
#include <vector>

#include "network/build_network.hpp"

namespace entrain::street_map {

struct Way {
  std::string nodes;  // "abc": through a, b and c
  std::string name;
  network::OneWay oneway = network::OneWay::no;
  network::RoadClass road_class = network::RoadClass::secondary;
  int lanes = 2;
};

// Rows from north to south, columns from west to east, `cell_m` metres a place. Lower case: a plain node; upper case: the same node, signalised.
network::RoadSource draw(const std::vector<std::string>& rows, const std::vector<Way>& ways, double cell_m = 100);

// The id of a letter's node.
std::int64_t node_id(char letter);
// The id of the i-th way.
std::int64_t way_id(std::size_t index);

network::NetworkRequest request();

// The signal at a letter, whatever id it was given.
const network::Signal& signal_at(const network::Network& network, char letter);
const network::Leg& leg(const network::Signal& signal, const std::string& id);
bool has_movement(const network::Signal& signal, const std::string& id);
const network::SignalLink* link_between(const network::Network& network, char from, char to);

}  // namespace entrain::street_map
