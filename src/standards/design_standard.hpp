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
  std::optional<double> least = {}, most = {};  // what a project may set; nothing: by the key's unit
  std::string cautious = {};                    // higher | lower: the side that lengthens intervals; empty: neither
};

// Yellow by posted speed where a practice states it as a table: the first step that reaches the speed holds.
struct YellowStep {
  double up_to_mps = 0, yellow_s = 0;
  std::string source;
};

// What drives or walks, for intergreens by clearing and entering: how long it may still start after the end of green, how fast
// and how long it is when it clears, how fast the next one enters.
struct ClearingKind {
  double passing_s = 0, clearing_mps = 0, length_m = 0, entering_mps = 0;
  std::string source;
};

enum class Rounding { up_to_second, up_to_tenth, nearest_tenth, up_to_half_second };

struct DesignStandard {
  std::string id, title;
  std::map<std::string, StandardValue> values;   // key -> value; keys end in their SI unit
  std::map<std::string, Rounding> rounding;      // yellow_s, red_clearance_s, walk_s, pedestrian_clearance_s, minimum_green_s
  std::map<std::string, bool> allowed;           // yields: "opposed_turn", "turn_over_crossing", "turn_on_red", ...
  std::map<std::string, std::string> words;      // other choices; "author" and "reason": who takes on the project's changes, and why
  std::vector<YellowStep> yellow_steps;          // ascending; empty: the kinematic equation alone
  std::map<std::string, ClearingKind> clearing;  // through, turn, bicycle, pedestrian ...; empty: the practice has no such rule

  // The value under `key`; the key must be one of required_keys() (checked when the standard is read).
  double value(std::string_view key) const;
  bool allows(std::string_view yield) const;
};

// Keys every standard must have. Missing ones are errors when read.
const std::vector<std::string>& required_keys();

// Errors: no TOML, missing keys, a value without its source, outside its own range or with a rule that would shorten.
[[nodiscard]] Result<DesignStandard> read_standard(std::string_view toml_text, const std::string& file);

// Overrides by key; a key in ft, ft/s, mph or km/h (walking_speed_ft_per_s) sets its SI key; rounding_KEY names another rounding rule; the
// truth of [allowed] keys may be set. Unknown keys, values out of the key's range and two units of one key are errors; so is a value that
// shortens intervals below the standard's, unless the words "author" and "reason" say who takes it on and why.
struct Change {
  std::string key, where;
  std::optional<double> number;
  std::optional<std::string> word;
  std::optional<bool> truth;
};
[[nodiscard]] Result<DesignStandard> with_changes(DesignStandard standard, const std::vector<Change>& changes);

// Values that the project changed to the less cautious side, a sentence each: for sheets and messages. Sorted by key.
std::vector<std::string> shortened_values(const DesignStandard& changed, const DesignStandard& base);

// Yellow change by the kinematic equation t + v / (2a + 2gG) (or the standard's table, if longer), kept within the standard's limits and
// rounded by its rule.
Tenths yellow_change(const DesignStandard& standard, double speed_mps, double grade);
// The same before rounding and limits, seconds.
double kinematic_yellow_s(const DesignStandard& standard, double speed_mps, double grade);
// Turning vehicles, extended kinematic: t + (v0 - vE/2) / (a + gG) (ITE Journal, March 2020).
double turning_yellow_s(const DesignStandard& standard, double approach_speed_mps, double entry_speed_mps, double grade);
// The same within the standard's limits and rounded by its rule.
Tenths turning_yellow(const DesignStandard& standard, double approach_speed_mps, double entry_speed_mps, double grade);

// Red clearance (W + L) / v less the standard's reduction, at least its minimum, rounded by its rule. Where the practice states a clearing
// speed, the slower of both counts. Never cut: a value above red_clearance_max_s is for the engineer to judge.
Tenths red_clearance(const DesignStandard& standard, double width_m, double speed_mps);

struct ChangeInterval {
  Tenths yellow, red_clearance;
  bool yellow_cut = false;           // the equation asked for more than yellow_max_s: the rest was put into red clearance
  bool red_above_maximum = false;    // red clearance is above red_clearance_max_s
};
// Both together: what the limit takes from yellow is given to red clearance, so that the interval is never shorter than the equations ask.
ChangeInterval change_interval(const DesignStandard& standard, double speed_mps, double clearing_speed_mps, double grade, double width_m);

// Intergreen at one conflict point, whole seconds: passing time + (clearing distance + length) / clearing speed - entering distance / entering
// speed (RiLSA, FGSV, from memory). `clearing` and `entering` are keys of DesignStandard::clearing; nothing where the standard has none of
// that name. At least 0; distances below 0 count as 0.
std::optional<Tenths> clearing_entering_intergreen(const DesignStandard& standard, const std::string& clearing, double clearing_distance_m,
                                                   const std::string& entering, double entering_distance_m);

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

// Applies a rounding rule to seconds (finite, within +-10^6 s, else 0 or that limit); values that are already on the grid (within 1e-9) stay.
Tenths round_by(Rounding rule, double seconds);

}  // namespace entrain::standards
