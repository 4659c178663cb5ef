#include "review/traffic_figures.hpp"

#include <algorithm>
#include <cmath>

namespace entrain::review {

double degree_of_saturation(const plan::Group& g, double cycle_s) {
  if (!g.flow_vph || !g.saturation_flow_vph || !(*g.saturation_flow_vph > 0) || !(cycle_s > 0)) return -1;
  double effective = 0;
  for (const plan::Green& green : g.greens) {
    if (!std::isfinite(green.duration_s)) continue;
    effective += green.duration_s >= cycle_s - 1e-6 ? cycle_s : std::max(0.0, green.duration_s - g.start_up_lost_s.value_or(0) + g.end_gain_s.value_or(0));
  }
  const double capacity = *g.saturation_flow_vph * std::min(1.0, effective / cycle_s);
  return capacity > 0 ? *g.flow_vph / capacity : (*g.flow_vph > 0 ? INFINITY : 0);
}

double degree_of_saturation(const SignalView& view, std::size_t i) { return degree_of_saturation(view.signal.groups[i], view.signal.cycle_s); }

int longest_red(const Row& green) {
  int longest = 0, run = 0;
  for (int t = 0; t < 2 * green.cycle(); ++t) {  // twice round: a red over the end of the cycle is one
    run = green.at(t % green.cycle()) ? 0 : run + 1;
    longest = std::max(longest, std::min(run, green.cycle()));
  }
  return longest;
}

double even_queue_veh(double flow_vph, double saturation_flow_vph, double red_s) {
  if (!(flow_vph > 0)) return 0;
  if (!(saturation_flow_vph > flow_vph)) return flow_vph;
  return flow_vph / 3600 * red_s / (1 - flow_vph / saturation_flow_vph);
}

}  // namespace entrain::review
