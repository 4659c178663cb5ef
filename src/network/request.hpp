// What the project asks of the network stage, in this room's own words (network knows no project file).
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "base/quantity.hpp"

namespace entrain::network {

// A signal the engineer names. With a place it claims the cluster found there; without one it exists for corridors without roads.
struct SignalSite {
  std::string id, name;
  std::optional<double> lon, lat;
  std::optional<TrafficSide> traffic_side;
  std::string where;  // "signals.csv row 7", for messages
};

struct MeasuredTravelTime {
  std::string from_signal, to_signal, period;  // period empty: every period
  double mean_s = 0;
  std::optional<double> sd_s, length_m;
  std::optional<int> runs;
  std::string where;
};

struct CorridorRequest {
  std::string id, name;
  bool forward = true, backward = true;
  std::vector<std::string> signals, signals_backward;  // backward empty: the reverse
  std::string street, from, to;                        // used where `signals` is empty
  std::map<std::string, double> progression_speed_mps;  // period -> speed; "" for all periods
  std::string where;
};

struct CrossingSite {
  std::string signal, leg;
  double length_m = 0;
};

// Values used where the map is silent; every use is counted.
struct Defaults {
  std::map<std::string, double> speed_limit_mps;     // by class word: motorway, trunk, primary, ...
  std::map<std::string, int> lanes_per_direction;    // by class word
  double lane_width_m = 3.5;
  double travel_speed_factor = 1.0;                  // running speed = factor * speed limit
  double cluster_link_m = 50;                        // internal links of one intersection are at most this long
};
Defaults default_road_values(bool us_units);  // common practice, no source

struct NetworkRequest {
  std::optional<TrafficSide> traffic_side;  // absent: taken from the roads (one-way circulation), else right, stated as assumed
  std::vector<SignalSite> signals;          // empty: all found
  std::vector<MeasuredTravelTime> travel_times;
  std::vector<CorridorRequest> corridors;
  std::vector<CrossingSite> crossings;
  std::vector<std::string> periods;
  Defaults defaults;
};

}  // namespace entrain::network
