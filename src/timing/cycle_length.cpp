#include "timing/cycle_length.hpp"

#include <limits>
#include <numeric>

namespace entrain::timing {

double cycle_for_saturation_s(double lost_time_s, double flow_ratio, double degree_of_saturation) {
  if (flow_ratio >= degree_of_saturation) return std::numeric_limits<double>::infinity();
  return lost_time_s * degree_of_saturation / (degree_of_saturation - flow_ratio);
}

std::vector<double> proportional_greens_s(double cycle_s, double lost_time_s, const std::vector<double>& flow_ratios) {
  const double sum = std::accumulate(flow_ratios.begin(), flow_ratios.end(), 0.0);
  std::vector<double> greens;
  for (const double ratio : flow_ratios) greens.push_back(sum > 0 ? ratio / sum * (cycle_s - lost_time_s) : 0.0);
  return greens;
}

}  // namespace entrain::timing
