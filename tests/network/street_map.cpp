#include "street_map.hpp"

#include <algorithm>
#include <cctype>
#include <stdexcept>

namespace entrain::street_map {

std::int64_t node_id(char letter) { return 1000 + std::tolower(static_cast<unsigned char>(letter)); }
std::int64_t way_id(std::size_t index) { return 1 + static_cast<std::int64_t>(index); }

network::RoadSource draw(const std::vector<std::string>& rows, const std::vector<Way>& ways, double cell_m) {
  network::RoadSource source;
  source.file = "drawn.osm";
  for (std::size_t r = 0; r < rows.size(); ++r)
    for (std::size_t c = 0; c < rows[r].size(); ++c) {
      const char letter = rows[r][c];
      if (!std::isalpha(static_cast<unsigned char>(letter))) continue;
      network::RoadNode node;
      node.id = node_id(letter);
      node.lat = 45.0 - static_cast<double>(r) * cell_m / 111131.8;
      node.lon = -30.0 + static_cast<double>(c) * cell_m / 78846.8;
      if (std::isupper(static_cast<unsigned char>(letter))) node.signal = network::SignalTag::traffic_signals;
      source.nodes.push_back(node);
    }
  std::sort(source.nodes.begin(), source.nodes.end(), [](const auto& a, const auto& b) { return a.id < b.id; });
  for (std::size_t w = 0; w < ways.size(); ++w) {
    network::RoadWay way;
    way.id = way_id(w);
    for (const char letter : ways[w].nodes) way.nodes.push_back(node_id(letter));
    way.name = ways[w].name;
    way.oneway = ways[w].oneway;
    way.road_class = ways[w].road_class;
    way.lanes = ways[w].lanes;
    way.speed_limit_mps = 13.4;
    source.ways.push_back(way);
  }
  return source;
}

network::NetworkRequest request() {
  network::NetworkRequest request;
  request.defaults = network::default_road_values(true);
  request.periods = {"am"};
  return request;
}

const network::Signal& signal_at(const network::Network& network, char letter) {
  for (const auto& signal : network.signals)
    for (const std::int64_t id : signal.nodes)
      if (id == node_id(letter)) return signal;
  throw std::runtime_error(std::string("no signal at ") + letter);
}

const network::Leg& leg(const network::Signal& signal, const std::string& id) {
  for (const auto& l : signal.legs)
    if (l.id == id) return l;
  throw std::runtime_error("no leg " + id);
}

bool has_movement(const network::Signal& signal, const std::string& id) {
  return std::any_of(signal.movements.begin(), signal.movements.end(), [&](const auto& m) { return m.id == id; });
}

const network::SignalLink* link_between(const network::Network& network, char from, char to) {
  for (const auto& link : network.links)
    if (&network.signals[static_cast<std::size_t>(link.from_signal)] == &signal_at(network, from) && &network.signals[static_cast<std::size_t>(link.to_signal)] == &signal_at(network, to)) return &link;
  return nullptr;
}

}  // namespace entrain::street_map
