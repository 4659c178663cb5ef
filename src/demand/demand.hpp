// Design flows by lane group for one period, from counts or from stated defaults.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "base/result.hpp"
#include "network/network.hpp"
#include "project/tables.hpp"

namespace entrain::demand {

enum class Origin { counted, assumed };
enum class TurnTreatment { not_stated, with_protection, permissive, protected_permissive };
enum class Control { signal, yield, free, prohibited };

struct MovementFlow {
  std::string movement;      // network movement id
  double flow_vph = 0;       // design hourly rate: volume / peak-hour factor
  double heavy_vehicle_pct = 0;
  Origin origin = Origin::assumed;
  Control control = Control::signal;
  TurnTreatment treatment = TurnTreatment::not_stated;
  std::string group;         // group the project names; may be empty
};

struct LaneGroup {
  std::string id;                       // "EB-TR"
  std::vector<std::string> movements;   // ids
  int lanes = 1;
  double flow_vph = 0;
  std::optional<double> saturation_flow_vph;  // of the whole lane group, where given
  double heavy_vehicle_pct = 0;
  std::optional<double> storage_m;
  Origin flow_origin = Origin::assumed, lanes_origin = Origin::assumed;
};

struct SignalDemand {
  std::string signal;
  std::vector<MovementFlow> movements;  // every network movement that is not prohibited, in network order
  std::vector<LaneGroup> lane_groups;   // cover every movement under signal control exactly once
};

struct Demand {
  std::string period;
  std::vector<SignalDemand> signals;    // in network order
};

struct DemandDefaults {
  double through_vph_per_lane_major = 500, through_vph_per_lane_minor = 200;  // assumed where nothing was counted
  double left_share = 0.10, right_share = 0.10;
  double peak_hour_factor = 0.92;
  double heavy_vehicle_pct = 2;
};

// Errors: rows that name an unknown signal, approach or turn at that signal, contradictory rows; all of them.
// Notes: every assumption, counted, and rows left out.
[[nodiscard]] Result<Noted<Demand>> design_flows(const network::Network& network, const std::vector<project::MovementRow>& rows,
                                                 const std::string& rows_source, const DemandDefaults& defaults, const std::string& period);

}  // namespace entrain::demand
