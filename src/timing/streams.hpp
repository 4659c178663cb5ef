// The movements a signal controls, with what every period asks of them, before signal groups exist.
#pragma once

#include <string>
#include <vector>

#include "timing/signal_design.hpp"

namespace entrain::timing {

struct Stream {
  const network::Movement* movement = nullptr;
  bool opposed_kind = false;               // left (keeping right) or U
  std::vector<std::size_t> yields_to;      // streams from the opposite approach that an opposed turn must let pass
  demand::TurnTreatment treatment = demand::TurnTreatment::not_stated;  // of an opposed turn: stated or, for yields_to, the default
  std::string named_group;                 // by the project; may be empty
  double flow_vph = 0;                     // largest of the periods
  int lane_group = -1;
  bool own_lane = false;                   // its lane group holds opposed turns only
};

struct Streams {
  std::vector<Stream> list;
  std::vector<LaneGroup> lane_groups;
  std::vector<double> lane_group_flows_vph;          // largest of the periods
  std::vector<double> heavy_vehicle_pct;             // of lane groups, largest of the periods
  std::vector<bool> saturation_flow_is_given;
  std::vector<const network::Movement*> uncontrolled;  // yield or free
};

// Errors: unknown or unserved movements, contradictory lane groups, values that are no flows; all at once.
[[nodiscard]] Result<Noted<Streams>> collect_streams(const network::Signal& signal, const std::vector<demand::SignalDemand>& periods,
                                                     const standards::DesignStandard& standard, std::vector<std::string>& assumptions);

// The standard's value, or `otherwise` where it has no such key.
double value_or(const standards::DesignStandard& standard, std::string_view key, double otherwise);
// Whether a yield is allowed; absent: not.
bool is_allowed(const standards::DesignStandard& standard, const std::string& yield);

}  // namespace entrain::timing
