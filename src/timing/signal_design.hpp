// Local timing of one signal, before any cycle length: signal groups, right of way, conflicts, intergreens, clearances, minimums.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "base/result.hpp"
#include "base/tenths.hpp"
#include "demand/demand.hpp"
#include "network/network.hpp"
#include "standards/design_standard.hpp"

namespace entrain::timing {

enum class RightOfWay { with_protection, permissive };
enum class GroupKind { vehicle, pedestrian, bicycle };

struct Served {
  std::string movement;
  RightOfWay right_of_way = RightOfWay::with_protection;
  bool flashing_yellow_arrow = false;
};

struct ClearanceBasis {
  double speed_mps = 0, grade = 0, width_m = 0;
  std::optional<double> clearing_speed_mps;
  std::string override_what, override_reason, override_author;  // empty: none
};

struct Group {
  std::string id;
  GroupKind kind = GroupKind::vehicle;
  std::optional<int> phase_number;
  std::vector<Served> serves;           // vehicle
  std::vector<std::string> crossings;   // pedestrian
  int parent = -1;                      // pedestrian: index of the vehicle group it runs with
  bool on_call = false;
  Tenths yellow, red_clearance;         // vehicle
  Tenths minimum_green;                 // vehicle green, or walk
  Tenths clearance;                     // pedestrian clearance, displayed
  Tenths pedestrian_need;               // vehicle: least green + yellow + red so that its pedestrians fit (0: none)
  double start_up_lost_s = 2.0, end_gain_s = 2.0;
  std::vector<int> lane_groups;         // indices into SignalDesign::lane_groups
  std::optional<ClearanceBasis> basis;
};

struct LaneGroup {
  std::string id;
  std::vector<std::string> movements;
  int lanes = 1;
  double saturation_flow_vph = 0;
  std::optional<double> storage_m;
  bool permissive_only = false;
};

// Conflicting groups a and b (indices, a < b) and the time from the end of one's occupied time to the start of the other's green.
struct Conflict {
  int a = 0, b = 0;
  Tenths intergreen_ab, intergreen_ba;
};

// Rings have as many sides as each other; a side may be empty in one ring (three legs): that ring rests until the barrier.
struct RingBarrier {
  std::vector<std::vector<std::vector<int>>> rings;  // [ring][side of the barrier][groups in sequence]
};

// A turn that yields to a movement from the opposite approach, for the opposed-turn trap.
struct OpposedPair {
  std::string turn, opposing;  // movement ids
  bool operator==(const OpposedPair&) const = default;
};

struct SignalDesign {
  std::string signal;
  TrafficSide traffic_side = TrafficSide::right;
  std::vector<LaneGroup> lane_groups;
  std::vector<Group> groups;
  std::vector<Conflict> conflicts;        // complete: every conflicting pair; pairs that do not stand here may share green
  std::optional<RingBarrier> ring_barrier;  // absent: general signal groups
  int reference_group = 0;                // coordinated group by default
  std::vector<OpposedPair> opposed;       // every opposed turn with the movements it must yield to where it is permissive
  std::vector<std::string> assumptions;   // loud ones, for sheets
};

// What the project fixes about groups of one signal.
struct DesignRequest {
  bool ring_barrier_wanted = true;
  std::optional<std::string> phase_2_label;             // approach label that gets phase 2 ("EB")
  std::map<std::string, std::string> crossing_service;  // crossing id -> every_cycle | on_call
  struct CrossingChange { std::optional<double> walk_s, walking_speed_mps, button_distance_m; std::string group; };
  std::map<std::string, CrossingChange> crossing_changes;  // by leg id
  struct Exception { std::string group, movement, crossing, key, reason, author; double value = 0; };
  std::vector<Exception> exceptions;
};

// Local timing from geometry. `periods`: the demand of every period; clearances, walk and minimum green hold for the worst of them.
// Errors: a movement no group can serve, an exception shorter than the standard without reason and author, ...; all at once.
[[nodiscard]] Result<Noted<SignalDesign>> design_signal(const network::Signal& signal, const std::vector<demand::SignalDemand>& periods,
                                                        const standards::DesignStandard& standard, const DesignRequest& request);

// Flows of the lane groups of `design`, in their order, for one period's demand. vehicles per hour.
std::vector<double> lane_group_flows(const SignalDesign& design, const demand::SignalDemand& demand);

// True if the two movements' paths cross or merge, from leg bearings alone (chords between entry and exit points on a circle).
bool paths_conflict(const network::Signal& signal, const network::Movement& a, const network::Movement& b);
// True if the movement's path lies over the crossing (its from-leg or its to-leg).
bool path_meets_crossing(const network::Movement& movement, const network::Crossing& crossing);

}  // namespace entrain::timing
