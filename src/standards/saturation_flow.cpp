#include <algorithm>
#include <cmath>

#include "base/quantity.hpp"
#include "standards/design_standard.hpp"

namespace entrain::standards {
namespace {

// Turning through gaps of an opposing flow q (veh/s): q e^(-q tc) / (1 - e^(-q tf)), critical gap and follow-up time from HCM 2000,
// chapter 16 (from memory): 4.5 s and 2.5 s; opposing lanes share the flow's gaps.
double through_gaps_vph(double opposing_vph) {
  constexpr double critical_gap_s = 4.5, follow_up_s = 2.5;
  const double q = opposing_vph / seconds_per_hour;
  if (q < 1e-6) return seconds_per_hour / follow_up_s;
  return seconds_per_hour * q * std::exp(-q * critical_gap_s) / (1 - std::exp(-q * follow_up_s));
}

double permissive_left_factor(const LaneGroupConditions& c, double lane_vph) {
  if (c.left_share <= 0) return 1;
  const double equivalent = lane_vph / std::max(60.0, through_gaps_vph(c.opposing_flow_vph));  // through cars one turning car is worth
  return 1 / (1 + c.left_share * std::max(0.0, equivalent - 1));
}

}  // namespace

double saturation_flow_vph(const DesignStandard& standard, const LaneGroupConditions& c) {
  const double width = 1 + (c.lane_width_m / metres_per_foot - 12) / 30;
  const double heavy = 100 / (100 + c.heavy_vehicle_pct * (standard.value("heavy_vehicle_equivalent") - 1));
  const double grade = 1 - 100 * c.grade / 200;
  const double right = c.exclusive_right ? 0.85 : 1 - 0.15 * c.right_share;
  const double base = standard.value("base_saturation_flow_vph") * std::clamp(width, 0.8, 1.2) * heavy * std::clamp(grade, 0.9, 1.1) * right;
  const double left = c.with_protection ? (c.exclusive_left ? 0.95 : 1 / (1 + 0.05 * c.left_share)) : permissive_left_factor(c, base);
  return std::max(100.0, base * left) * std::max(1, c.lanes);
}

}  // namespace entrain::standards
