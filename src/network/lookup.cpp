#include "network/network.hpp"

namespace entrain::network {

const TravelTime& travel_time(const SignalLink& link, const std::string& period) {
  const auto own = link.travel_times.find(period);
  if (own != link.travel_times.end()) return own->second;
  static const TravelTime unknown;
  const auto any = link.travel_times.find("");
  return any != link.travel_times.end() ? any->second : unknown;
}

int find_signal(const Network& network, const std::string& id) {
  for (std::size_t s = 0; s < network.signals.size(); ++s)
    if (network.signals[s].id == id) return static_cast<int>(s);
  return -1;
}

}  // namespace entrain::network
