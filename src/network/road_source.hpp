// Roads as a source gives them, before any understanding: nodes, ways, turn restrictions. `geo/in` fills it from OpenStreetMap
// or any vector layer; build_network() makes a network of it.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "base/quantity.hpp"

namespace entrain::network {

enum class SignalTag {
  none,
  traffic_signals,   // an ordinary vehicle signal (junction style or stop-line style)
  pedestrian,        // signals at a crossing only
  unusual            // blinker, ramp meter, emergency, ...: left out, counted
};

enum class SignalDirection { unknown, forward, backward, both };  // along the way that holds the node

struct RoadNode {
  std::int64_t id = 0;
  double lon = 0, lat = 0;  // degrees, WGS 84
  SignalTag signal = SignalTag::none;
  SignalDirection signal_direction = SignalDirection::unknown;
  bool crossing = false;
  bool mini_roundabout = false;
  std::string unusual_value;  // for SignalTag::unusual
};

enum class OneWay { no, forward, backward, reversible };

enum class RoadClass { motorway, trunk, primary, secondary, tertiary, residential, service, ramp, other };

struct RoadWay {
  std::int64_t id = 0;
  std::vector<std::int64_t> nodes;  // ids, at least two
  RoadClass road_class = RoadClass::other;
  OneWay oneway = OneWay::no;
  std::string name, reference;
  double speed_limit_mps = 0;                             // 0: not given
  int lanes = 0, lanes_forward = 0, lanes_backward = 0;   // 0: not given
  std::string turn_lanes_forward, turn_lanes_backward;    // "left|through|through;right"; empty: not given
  double width_m = 0;                                     // 0: not given
  int layer = 0;
  bool bridge = false, tunnel = false, roundabout = false;
};

enum class RestrictionKind { no, only };

struct TurnRestriction {
  std::int64_t id = 0;
  RestrictionKind kind = RestrictionKind::no;
  std::int64_t from_way = 0, to_way = 0;
  std::int64_t via_node = 0;             // 0: the via is ways
  std::vector<std::int64_t> via_ways;
};

struct Finding {
  std::string kind;      // "missing_node", "self_loop", "unusual_signal", ...: stable words, counted in `left_out`
  std::string sentence;  // for people
  double lon = 0, lat = 0;
  bool has_place = false;
};

struct RoadSource {
  std::string file;
  std::vector<RoadNode> nodes;  // only those that roads use, sorted by id
  std::vector<RoadWay> ways;    // sorted by id
  std::vector<TurnRestriction> restrictions;
  std::vector<Finding> findings;
  bool ways_share_node_ids = true;  // false: line layer, ends were snapped to made-up ids
};

}  // namespace entrain::network
