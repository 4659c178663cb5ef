#include "traffic/delay.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

namespace entrain::traffic {

double webster_delay_s(double cycle_s, double effective_green_s, double flow_vps, double saturation_flow_vps) {
  const double l = effective_green_s / cycle_s, x = flow_vps / (l * saturation_flow_vps);
  if (!(x < 1)) return std::numeric_limits<double>::infinity();
  const double uniform = cycle_s * (1 - l) * (1 - l) / (2 * (1 - l * x));
  const double random = x * x / (2 * flow_vps * (1 - x));
  return uniform + random - 0.65 * std::cbrt(cycle_s / (flow_vps * flow_vps)) * std::pow(x, 2 + 5 * l);
}

double uniform_delay_s(double cycle_s, double effective_green_s, double degree_of_saturation) {
  const double ratio = std::clamp(effective_green_s / cycle_s, 0.0, 1.0);
  if (ratio >= 1) return 0;
  return 0.5 * cycle_s * (1 - ratio) * (1 - ratio) / (1 - std::min(1.0, degree_of_saturation) * ratio);
}

double overflow_delay_s(double degree_of_saturation, double capacity_vph, double period_h, double k, double i) {
  if (capacity_vph <= 0) return std::numeric_limits<double>::infinity();
  const double over = degree_of_saturation - 1;
  return 900 * period_h * (over + std::sqrt(over * over + 8 * k * i * degree_of_saturation / (capacity_vph * period_h)));
}

double progression_factor(int arrival_type, double green_ratio) {
  constexpr std::array platoon_ratio = {.333, .667, 1.0, 1.333, 1.667, 2.0};
  constexpr std::array adjustment = {1.0, .93, 1.0, 1.15, 1.0, 1.0};
  const auto type = static_cast<std::size_t>(std::clamp(arrival_type, 1, 6) - 1);
  const double in_green = std::min(1.0, platoon_ratio[type] * green_ratio);
  return (1 - in_green) * adjustment[type] / (1 - green_ratio);
}

double pedestrian_delay_s(double cycle_s, double walk_s) {
  const double red = std::max(0.0, cycle_s - walk_s);
  return red * red / (2 * cycle_s);
}

double webster_cycle_s(double lost_time_s, double flow_ratio_sum) {
  if (flow_ratio_sum >= 1) return std::numeric_limits<double>::infinity();
  return (1.5 * lost_time_s + 5) / (1 - flow_ratio_sum);
}

}  // namespace entrain::traffic
