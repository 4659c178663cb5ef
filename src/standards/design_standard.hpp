// A design standard as data: every value with its source. `data/standards/*.toml` holds them; projects override values.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "base/result.hpp"
#include "base/tenths.hpp"

namespace entrain::standards {

struct StandardValue {
  double value = 0;    // SI: s, m, m/s, m/s2, or a ratio
  std::string source;  // publication, page, or "common practice, no source"
  bool overridden = false;
};

enum class Rounding { up_to_second, up_to_tenth, nearest_tenth, up_to_half_second };

struct DesignStandard {
  std::string id, title;
  std::map<std::string, StandardValue> values;   // key -> value; keys end in their SI unit
  std::map<std::string, Rounding> rounding;      // yellow_s, red_clearance_s, walk_s, pedestrian_clearance_s, minimum_green_s
  std::map<std::string, bool> allowed;           // yields: "opposed_turn", "turn_over_crossing", "turn_on_red", ...
  std::map<std::string, std::string> words;      // other choices

  // The value under `key`; the key must be one of required_keys() (checked when the standard is read).
  double value(std::string_view key) const;
  bool allows(std::string_view yield) const;
};

// Keys every standard must have. Missing ones are errors when read.
const std::vector<std::string>& required_keys();

[[nodiscard]] Result<DesignStandard> read_standard(std::string_view toml_text, const std::string& file);

// Overrides by key; a key in ft, ft/s, mph or km/h (walking_speed_ft_per_s) sets its SI key. Unknown keys and values out of the key's range are errors.
struct Change {
  std::string key, where;
  std::optional<double> number;
  std::optional<std::string> word;
  std::optional<bool> truth;
};
[[nodiscard]] Result<DesignStandard> with_changes(DesignStandard standard, const std::vector<Change>& changes);

// Yellow change by the kinematic equation t + v / (2a + 2gG), kept within the standard's limits and rounded by its rule.
Tenths yellow_change(const DesignStandard& standard, double speed_mps, double grade);
// The same before rounding and limits, seconds.
double kinematic_yellow_s(const DesignStandard& standard, double speed_mps, double grade);
// Turning vehicles, extended kinematic: t + (v0 - vE/2) / (a + gG) (ITE Journal, March 2020).
double turning_yellow_s(const DesignStandard& standard, double approach_speed_mps, double entry_speed_mps, double grade);

// Red clearance (W + L) / v less the standard's reduction, at least its minimum, rounded by its rule.
Tenths red_clearance(const DesignStandard& standard, double width_m, double speed_mps);

struct PedestrianTimes {
  Tenths walk, clearance;  // both whole seconds
  std::string basis;       // the arithmetic in words
};
// Walk and pedestrian clearance (displayed) from crossing length, by both walking-speed rules of the standard.
PedestrianTimes pedestrian_times(const DesignStandard& standard, double length_m, std::optional<double> button_distance_m,
                                 std::optional<double> walking_speed_mps);

enum class ApproachKind { major_arterial_fast, major_arterial, minor_arterial, collector, left_turn };
// Minimum green by driver expectancy (and queue where `queued_vehicles` >= 0), whole seconds.
Tenths minimum_green(const DesignStandard& standard, ApproachKind kind, int queued_vehicles = -1);
// Bicycle minimum green for a crossing of that width, whole seconds.
Tenths bicycle_minimum_green(const DesignStandard& standard, double width_m);

struct LaneGroupConditions {
  int lanes = 1;
  double lane_width_m = 3.66, heavy_vehicle_pct = 0, grade = 0;  // grade rise over run
  double left_share = 0, right_share = 0;                        // of the lane group's flow
  bool exclusive_left = false, exclusive_right = false;
  bool with_protection = true;                                   // of the opposed turn
  double opposing_flow_vph = 0;                                  // for permissive opposed turns
  int opposing_lanes = 0;
};
// Saturation flow of the whole lane group, veh/h of green, by the Highway Capacity Manual's factors (HCM 2000, chapter 16).
double saturation_flow_vph(const DesignStandard& standard, const LaneGroupConditions& conditions);

// Applies a rounding rule to seconds; values that are already on the grid (within 1e-9) stay.
Tenths round_by(Rounding rule, double seconds);

}  // namespace entrain::standards
