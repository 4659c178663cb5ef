// A timing plan for one period as plain data: what DESIGN calls `plan.json`, format 1. SI units; seconds as read, not rounded.
// The planner fills it, evaluation and sheets read it, the review trusts nothing in it. No behaviour lives here.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "base/quantity.hpp"

namespace entrain::plan {

enum class RightOfWay { with_protection, permissive };  // "protected" | "permissive"
enum class GroupKind { vehicle, pedestrian, bicycle };
enum class Service { every_cycle, on_call };
enum class Operation { pretimed, coordinated_actuated, free };
enum class Turn { left, through, right, u_turn };  // "L" "T" "R" "U"
// The instant an offset points at (the words of GMNS).
enum class ReferenceInstant { begin_of_green, begin_of_yellow, begin_of_red, begin_of_pedestrian_clearance };

struct Leg {
  std::string id;          // side of the intersection: N, NE, ... ; unique within the signal
  double bearing_deg = 0;  // from the intersection outwards, clockwise from north
  std::string street;      // may be empty
};

struct Movement {
  std::string id;  // "EB-T"
  std::string from_leg, to_leg;
  Turn turn = Turn::through;
};

struct LaneGroup {
  std::string id;
  std::vector<std::string> movements;
  int lanes = 1;
  double flow_vph = 0;
  double saturation_flow_vph = 0;
  std::optional<double> storage_m;
};

struct Crossing {
  std::string id;
  std::string leg;  // the leg that is crossed
  double length_m = 0;
};

struct Green {
  double start_s = 0;     // local time
  double duration_s = 0;  // == the signal's cycle: always green
};

struct Served {
  std::string movement;
  RightOfWay right_of_way = RightOfWay::with_protection;
  bool flashing_yellow_arrow = false;  // permissive display that is no circular green: no trap
};

// What a shorter or other value than the standard's rests on.
struct Override {
  std::string what;    // "yellow_s", ...
  std::string reason;  // why
  std::string author;  // who takes it on
};

struct ClearanceBasis {
  double speed_mps = 0;
  double grade = 0;    // rise over run in the direction of travel
  double width_m = 0;  // stop line to the far edge of the last conflict
  double vehicle_length_m = 6.096;
  std::optional<double> clearing_speed_mps;  // where red clearance is computed with another speed
  std::optional<Override> override_by;       // JSON key "override"
};

struct Group {
  std::string id;
  GroupKind kind = GroupKind::vehicle;
  std::optional<int> phase_number;
  std::vector<Served> serves;
  std::vector<std::string> crossings;
  std::optional<std::string> parent;  // vehicle group a pedestrian group runs with
  Service service = Service::every_cycle;
  std::vector<Green> greens;  // vehicle green, or walk
  double yellow_s = 0;
  double red_clearance_s = 0;
  std::optional<double> split_s;  // per green: green + yellow + red clearance
  double minimum_green_s = 0;     // pedestrian: least walk
  double clearance_s = 0;         // pedestrian clearance, displayed
  std::optional<double> flow_vph, saturation_flow_vph, start_up_lost_s, end_gain_s, degree_of_saturation;
  std::optional<ClearanceBasis> clearance_basis;
};

struct Conflict {
  std::string a, b;
  double intergreen_ab_s = 0, intergreen_ba_s = 0;
};

struct RingBarrier {
  std::vector<std::vector<std::string>> rings;           // group ids in sequence
  std::vector<std::vector<std::string>> barriers_after;  // one list a barrier: the last group of each ring before it
};

struct Controller {
  std::string kind = "signal_group";  // "ring_barrier" | "signal_group"
  std::optional<RingBarrier> ring_barrier;
  std::vector<std::string> coordinated;
};

// The timing that runs today, where known, for the table of changes.
struct Running {
  std::optional<double> cycle_s, offset_s;  // offset to begin of green of the plan's reference group
  std::map<std::string, double> splits_s;
  std::string sequence;
};

// Why the allocation can't be better: printed on the sheet, re-derived by the review.
struct Evidence {
  std::vector<std::string> critical_groups;  // the clique, or the cycle of constraints, that binds
  double critical_flow_ratio = 0;
  double critical_lost_time_s = 0;
  double minimum_cycle_s = 0;  // smallest whole-second cycle at which every minimum fits
  std::string text;            // the arithmetic in one sentence
};

struct Oversaturation {
  std::string lane_group;
  double degree_of_saturation = 0;
  double queue_growth_vph = 0;
};

struct Signal {
  std::string id, name;
  std::optional<double> lon, lat;
  TrafficSide traffic_side = TrafficSide::right;
  Operation operation = Operation::pretimed;
  double cycle_s = 0;
  double offset_s = 0;  // system time of local zero = begin of the first listed green of the reference group
  std::string reference_group;
  Controller controller;
  std::vector<Leg> legs;
  std::vector<Movement> movements;
  std::vector<LaneGroup> lane_groups;
  std::vector<Crossing> crossings;
  std::vector<Group> groups;
  std::vector<Conflict> conflicts;
  bool conflicts_given = false;  // the project's conflicts table, not geometry, is the source
  std::optional<Running> running;
  std::optional<Evidence> evidence;
  std::vector<Oversaturation> oversaturated;
  std::string clock = "gps";  // gps | network | line | manual
  bool offset_fixed = false, sequence_fixed = false, splits_fixed = false;
  // How far the offset may move (earlier, later) with the bands as they are; both >= 0. Absent: not on a corridor.
  std::optional<double> freedom_early_s, freedom_late_s;
};

struct LinkFeed {
  std::string from_group;
  double flow_vph = 0;
};

struct Link {
  std::string id;  // "T1>T2"
  std::string from_signal, to_signal, to_group;
  double length_m = 0;
  double travel_time_s = 0;  // running time, stop line to stop line
  std::string travel_time_origin;  // measured | progression_speed | speed_limit | class_default
  std::optional<double> travel_time_sd_s;
  std::optional<double> storage_veh;
  std::optional<double> saturation_flow_vph;  // of the lanes the link's arrivals use at to_group; absent: the group's
  double uniform_flow_vph = 0;  // arrivals that belong to no platoon (driveways, unsignalled streets)
  std::vector<LinkFeed> feeds;
};

struct Stop {
  std::string signal, group, movement;
  double distance_m = 0;     // from the previous stop line in the list
  double travel_time_s = 0;  // likewise
  double queue_clearance_s = 0;
};

struct Direction {
  std::string name;   // forward | backward
  std::string label;  // EB
  double weight = 1;
  std::vector<Stop> stops;
  double bandwidth_s = 0;
  double band_start_s = 0;  // system time modulo the cycle at which the band's leading edge passes the first stop line
  double efficiency = 0, attainability = 0;
  std::optional<double> bandwidth_bound_s;
};

struct Corridor {
  std::string id, name;
  std::vector<Direction> directions;
};

struct StandardInUse {
  std::string id;
  std::map<std::string, double> values;  // SI, by the key names of the design standard's table
};

struct Schedule {
  std::string days, from, to;
};

struct Clock {
  std::string reference = "midnight";  // midnight | time_of_day | pattern_start
  std::string time_zone = "UTC";
};

struct CostModel {
  std::string name = "platoon-queue";
  double stop_weight_s = 10;
  double alpha = 0.35, beta = 0.8;  // Robertson (1969)
  double step_s = 1;
  double scale = 1000;
  std::optional<double> spillback_weight_s;
};

struct Quality {
  std::string objective;
  double value = 0, bound = 0, gap = 0;
  std::optional<std::string> certificate;  // file beside the plan
};

// Figures of the whole plan under `evaluation`; recomputed by `entrain review`.
struct Measures {
  double delay_s_per_vehicle = 0;
  double delay_veh_h_per_h = 0;
  double stops_per_h = 0;
  double worst_degree_of_saturation = 0;
  std::string worst_degree_at;
  double longest_pedestrian_wait_s = 0;
  double longest_side_street_wait_s = 0;
};

struct Plan {
  std::string program = "entrain";
  std::string project, period;
  double cycle_s = 0;
  std::string cycle_reason;
  std::optional<Schedule> schedule;
  Clock clock;
  std::string units = "metric";  // display: us | metric
  StandardInUse standard;
  std::vector<Signal> signals;
  std::vector<Link> links;
  std::vector<Corridor> corridors;
  CostModel cost_model;
  std::optional<Quality> quality;
  std::optional<Measures> measures;
  std::vector<std::string> assumptions, cautions;
  std::vector<std::string> unknown_keys;  // JSON paths this version does not know; reported by the review, not written back
};

}  // namespace entrain::plan
