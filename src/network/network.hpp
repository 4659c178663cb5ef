// The road network as the planner sees it: a road graph, the signals on it with legs, movements and crossings, the links between
// neighbouring signals, and corridors as ordered stops. All SI.
#pragma once

#include <boost/graph/adjacency_list.hpp>
#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <vector>

#include "base/quantity.hpp"
#include "network/road_source.hpp"

namespace entrain::network {

struct Point {
  double lon = 0, lat = 0;
};

struct Junction {
  std::int64_t node_id = 0;
  Point place;
  int signal = -1;  // index into Network::signals
};

struct Road {  // one direction of travel between two junctions
  std::int64_t way_id = 0;
  double length_m = 0;          // on the ellipsoid
  double speed_limit_mps = 0;   // given or default
  bool speed_is_default = false;
  int lanes = 1;                // in this direction
  bool lanes_are_default = false;
  RoadClass road_class = RoadClass::other;
  std::string name;
  std::string turn_lanes;       // per lane, from the left; empty: not given
  double width_m = 0;           // of the whole carriageway, given or default
  double grade = 0;             // mean along the direction of travel, rise over run; 0 where no elevation
  bool bridge_or_tunnel = false;
  bool roundabout = false;
  std::vector<Point> shape;     // including both ends
};

using RoadGraph = boost::adjacency_list<boost::vecS, boost::vecS, boost::bidirectionalS, Junction, Road>;

struct Leg {
  std::string id;                // N, NE, E, ... ; "N2" where two share a name
  double bearing_deg = 0;        // outwards, clockwise from north
  std::string street;
  int lanes_in = 0, lanes_out = 0;  // 0: one-way the other way
  double speed_limit_mps = 0;
  bool speed_is_default = false;
  double grade_in = 0;           // in the direction of traffic that approaches
  double width_m = 0;            // kerb to kerb
  bool width_is_default = true;
  RoadClass road_class = RoadClass::other;
  std::string turn_lanes_in;
  std::string neighbour;         // id of the next signal along this leg, may be empty
  double distance_to_stop_line_m = 0;  // from the intersection's centre; 0: unknown
};

enum class TurnKind { left, through, right, u_turn };

struct Movement {
  std::string id;                // "EB-T"; "EB-T.S2" style suffix where two of one kind exist
  std::string approach;          // direction of travel: NB, NEB, ...
  int from_leg = 0, to_leg = 0;  // indices into legs
  TurnKind turn = TurnKind::through;
  double turn_angle_deg = 0;     // positive to the right
};

struct Crossing {
  std::string id;   // "X-N"
  int leg = 0;
  double length_m = 0;
  bool length_is_default = false;
};

struct Signal {
  std::string id, name;
  Point place;
  bool has_place = false;
  TrafficSide traffic_side = TrafficSide::right;
  bool pedestrian_only = false;
  std::vector<std::int64_t> nodes;   // signal nodes of the source in this cluster
  std::vector<int> junctions;        // vertices of the road graph
  std::vector<Leg> legs;             // clockwise from north by bearing; empty without roads
  std::vector<Movement> movements;
  std::vector<Crossing> crossings;
};

struct TravelTime {
  double mean_s = 0;
  std::string origin;  // measured | progression_speed | speed_limit | class_default
  std::optional<double> sd_s;
  std::optional<int> runs;
};

// From stop line to stop line between neighbouring signals.
struct SignalLink {
  std::string id;  // "T1>T2"
  int from_signal = 0, to_signal = 0;
  int from_leg = -1, to_leg = -1;  // leg left by at from, leg arrived on at to; -1 without roads
  double length_m = 0;
  double grade = 0;
  int lanes = 1;
  std::map<std::string, TravelTime> travel_times;  // by period id; "" where a period has no own value
  std::vector<Point> shape;
};

const TravelTime& travel_time(const SignalLink& link, const std::string& period);

struct CorridorStop {
  int signal = 0;
  int from_leg = -1, to_leg = -1;  // arrives on, leaves by; -1 without roads
  std::string movement;            // id of the movement continued on; empty without roads
  double distance_m = 0;           // from the previous stop line
  std::vector<int> links;          // signal links travelled from the previous stop
};

struct CorridorDirection {
  std::string name;   // forward | backward
  std::string label;  // "EB"; by overall direction of travel
  std::vector<CorridorStop> stops;
};

struct Corridor {
  std::string id, name;
  std::vector<CorridorDirection> directions;
};

struct DefaultUse {
  std::string what;  // "speed limit of class secondary"
  std::string value;
  int times = 0;
};

struct Network {
  RoadGraph graph;
  TrafficSide traffic_side = TrafficSide::right;
  bool traffic_side_assumed = false;
  bool has_roads = false;
  std::vector<Signal> signals;      // natural order of id
  std::vector<SignalLink> links;    // natural order of id
  std::vector<Corridor> corridors;  // as requested
  std::vector<DefaultUse> defaults;
  std::map<std::string, int> left_out;  // finding kind -> times
  std::vector<Finding> findings;
};

// Index of the signal with that id, -1 if there is none.
int find_signal(const Network& network, const std::string& id);

}  // namespace entrain::network
