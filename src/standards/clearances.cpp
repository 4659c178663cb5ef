#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "base/quantity.hpp"
#include "standards/design_standard.hpp"

namespace entrain::standards {
namespace {

Rounding rule(const DesignStandard& standard, const char* key) { return standard.rounding.at(key); }

// Deceleration that braking and grade give together; kept away from zero on absurd grades.
double braking_mps2(const DesignStandard& standard, double grade) {
  return std::max(0.3, standard.value("deceleration_mps2") + gravity_mps2 * std::clamp(grade, -0.25, 0.25));
}

double within_yellow_limits(const DesignStandard& standard, double seconds) {
  return std::clamp(seconds, standard.value("yellow_min_s"), std::max(standard.value("yellow_min_s"), standard.value("yellow_max_s")));
}

// What the practice's table asks at that speed, 0 without a table. Speeds printed with three digits count as the step's.
double step_yellow_s(const DesignStandard& standard, double speed_mps) {
  for (const YellowStep& step : standard.yellow_steps)
    if (speed_mps <= step.up_to_mps + 1e-3) return step.yellow_s;
  return standard.yellow_steps.empty() ? 0 : standard.yellow_steps.back().yellow_s;
}

double wanted_yellow_s(const DesignStandard& standard, double speed_mps, double grade) {
  return std::max(kinematic_yellow_s(standard, speed_mps, grade), step_yellow_s(standard, speed_mps));
}

// Before rounding. The slower of the two speeds where the practice states one.
double wanted_red_s(const DesignStandard& standard, double width_m, double speed_mps) {
  const auto stated = standard.values.find("clearing_speed_mps");
  const double speed = std::max(1.0, stated == standard.values.end() ? speed_mps : std::min(speed_mps, stated->second.value));
  const double computed = (std::max(0.0, width_m) + standard.value("vehicle_length_m")) / speed - standard.value("red_clearance_reduction_s");
  return std::max(computed, standard.value("red_clearance_min_s"));
}

}  // namespace

Tenths round_by(Rounding rounding, double seconds) {
  seconds = std::isfinite(seconds) ? std::clamp(seconds, -1e6, 1e6) : 0;
  const auto up = [&](double step) { return Tenths::nearest(std::ceil(seconds / step - 1e-9) * step); };
  switch (rounding) {
    case Rounding::up_to_second: return up(1.0);
    case Rounding::up_to_half_second: return up(0.5);
    case Rounding::up_to_tenth: return up(0.1);
    case Rounding::nearest_tenth: return Tenths::nearest(std::floor(seconds * 10 + 0.5 + 1e-9) / 10);
  }
  return up(1.0);
}

double kinematic_yellow_s(const DesignStandard& standard, double speed_mps, double grade) {
  return standard.value("perception_s") + speed_mps / (2 * braking_mps2(standard, grade));
}

double turning_yellow_s(const DesignStandard& standard, double approach_speed_mps, double entry_speed_mps, double grade) {
  return standard.value("perception_s") + (approach_speed_mps - entry_speed_mps / 2) / braking_mps2(standard, grade);
}

Tenths yellow_change(const DesignStandard& standard, double speed_mps, double grade) {
  return round_by(rule(standard, "yellow_s"), within_yellow_limits(standard, wanted_yellow_s(standard, speed_mps, grade)));
}

Tenths turning_yellow(const DesignStandard& standard, double approach_speed_mps, double entry_speed_mps, double grade) {
  return round_by(rule(standard, "yellow_s"), within_yellow_limits(standard, turning_yellow_s(standard, approach_speed_mps, entry_speed_mps, grade)));
}

Tenths red_clearance(const DesignStandard& standard, double width_m, double speed_mps) { return round_by(rule(standard, "red_clearance_s"), wanted_red_s(standard, width_m, speed_mps)); }

ChangeInterval change_interval(const DesignStandard& standard, double speed_mps, double clearing_speed_mps, double grade, double width_m) {
  const double wanted = wanted_yellow_s(standard, speed_mps, grade), most = std::max(standard.value("yellow_min_s"), standard.value("yellow_max_s"));
  ChangeInterval interval;
  interval.yellow = yellow_change(standard, speed_mps, grade);
  interval.yellow_cut = wanted > most + 1e-9;
  const double red = wanted_red_s(standard, width_m, clearing_speed_mps) + std::max(0.0, wanted - most);
  interval.red_clearance = round_by(rule(standard, "red_clearance_s"), red);
  interval.red_above_maximum = interval.red_clearance.seconds() > standard.value("red_clearance_max_s") + 1e-9;
  return interval;
}

std::optional<Tenths> clearing_entering_intergreen(const DesignStandard& standard, const std::string& clearing, double clearing_distance_m, const std::string& entering,
                                                   double entering_distance_m) {
  const auto leaves = standard.clearing.find(clearing), comes = standard.clearing.find(entering);
  if (leaves == standard.clearing.end() || comes == standard.clearing.end()) return std::nullopt;
  const ClearingKind& out = leaves->second;
  const double seconds = out.passing_s + (std::max(0.0, clearing_distance_m) + out.length_m) / out.clearing_mps - std::max(0.0, entering_distance_m) / comes->second.entering_mps;
  return round_by(Rounding::up_to_second, std::max(0.0, seconds));
}

PedestrianTimes pedestrian_times(const DesignStandard& standard, double length_m, std::optional<double> button_distance_m, std::optional<double> walking_speed_mps) {
  const double speed = walking_speed_mps.value_or(standard.value("walking_speed_mps"));
  const double slower = std::min(speed, standard.value("walking_speed_total_mps"));
  const double approach = button_distance_m.value_or(standard.value("curb_setback_m"));
  PedestrianTimes times;
  times.clearance = round_by(rule(standard, "pedestrian_clearance_s"), length_m / speed);
  const double total = (length_m + approach) / slower;
  const double walk = std::max(standard.value("walk_min_s"), total - times.clearance.seconds());
  times.walk = round_by(rule(standard, "walk_s"), walk);
  times.basis = fmt::format("clearance {} m / {} m/s = {} s; walk and clearance ({} + {}) m / {} m/s = {} s", number_text(length_m, 1), number_text(speed, 2),
                            number_text(length_m / speed, 1), number_text(length_m, 1), number_text(approach, 1), number_text(slower, 2), number_text(total, 1));
  return times;
}

Tenths minimum_green(const DesignStandard& standard, ApproachKind kind, int queued_vehicles) {
  constexpr const char* keys[] = {"minimum_green_major_fast_s", "minimum_green_major_s", "minimum_green_minor_s", "minimum_green_collector_s", "minimum_green_left_s"};
  double green = standard.value(keys[static_cast<int>(kind)]);
  if (queued_vehicles > 0) green = std::max(green, standard.value("minimum_green_queue_base_s") + standard.value("minimum_green_queue_each_s") * queued_vehicles);
  return round_by(rule(standard, "minimum_green_s"), green);
}

Tenths bicycle_minimum_green(const DesignStandard& standard, double width_m) {
  // Start-up, acceleration to rolling speed, then the rest at that speed.
  const double v = standard.value("bicycle_speed_mps"), a = standard.value("bicycle_acceleration_mps2");
  const double way = width_m + standard.value("bicycle_length_m"), gaining = v * v / (2 * a);
  const double riding = way <= gaining ? std::sqrt(2 * way / a) : v / a + (way - gaining) / v;
  return round_by(rule(standard, "minimum_green_s"), standard.value("bicycle_perception_s") + riding);
}

}  // namespace entrain::standards
