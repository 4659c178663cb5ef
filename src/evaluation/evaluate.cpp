#include "evaluation/evaluate.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>

#include "base/circle.hpp"
#include "base/number_text.hpp"
#include "evaluation/streams.hpp"
#include "traffic/delay.hpp"
#include "traffic/queue.hpp"

namespace entrain::evaluation {
namespace {

constexpr double vehicle_spacing_m = 7.5;  // queued, front to front; common practice, no source

// Longest time from the end of one green to the start of the next, over the group's greens.
double longest_red_s(const plan::Group& group, double cycle_s) {
  if (group.greens.empty()) return cycle_s;
  std::vector<std::pair<double, double>> greens;
  for (const plan::Green& green : group.greens) {
    if (green.duration_s >= cycle_s) return 0;
    greens.emplace_back(wrap(green.start_s, cycle_s), green.duration_s);
  }
  std::sort(greens.begin(), greens.end());
  double longest = 0;
  for (std::size_t i = 0; i < greens.size(); ++i) {
    const double next = i + 1 < greens.size() ? greens[i + 1].first : greens[0].first + cycle_s;
    longest = std::max(longest, next - greens[i].first - greens[i].second);
  }
  return longest;
}

double green_time_s(const plan::Group& group) {
  double total = 0;
  for (const plan::Green& green : group.greens) total += green.duration_s;
  return total;
}

LaneGroupFigures figures_of(const plan::Signal& signal, const plan::LaneGroup& lane_group, const LaneGroupStream& stream, double cycle_s) {
  LaneGroupFigures f;
  f.signal = signal.id;
  f.lane_group = lane_group.id;
  f.groups = stream.groups;
  f.storage_m = lane_group.storage_m;
  f.flow_vph = lane_group.flow_vph;
  f.platooned = stream.platooned;
  const traffic::Profile capacity = traffic::capacity_of(stream.stream, cycle_s, 1);
  f.capacity_vph = capacity.total() * seconds_per_hour / cycle_s;
  f.degree_of_saturation = f.capacity_vph > 0 ? f.flow_vph / f.capacity_vph : (f.flow_vph > 0 ? INFINITY : 0);
  const traffic::QueueFigures queue = traffic::periodic_queue(stream.arrivals, capacity);
  const double served = std::min(stream.arrivals.total(), std::max(capacity.total(), 1e-9));
  if (f.flow_vph > 0 && f.capacity_vph > 0) {
    f.uniform_delay_s = queue.delay_veh_s / served;
    f.overflow_delay_s = traffic::overflow_delay_s(f.degree_of_saturation, f.capacity_vph);
    f.stops_per_vehicle = std::min(1.0, queue.stops_veh / served);
  } else if (f.flow_vph > 0) {
    f.uniform_delay_s = cycle_s;
    f.stops_per_vehicle = 1;
  }
  f.delay_s = f.uniform_delay_s + f.overflow_delay_s;
  f.back_of_queue_m = queue.longest_veh / std::max(1, lane_group.lanes) * vehicle_spacing_m;
  f.level_of_service = f.degree_of_saturation > 1 ? "F" : level_of_service(f.delay_s);
  return f;
}

void add_pedestrian_figures(const plan::Group& group, double cycle_s, SignalFigures& figures, int& count) {
  figures.longest_pedestrian_wait_s = std::max(figures.longest_pedestrian_wait_s, longest_red_s(group, cycle_s));
  figures.mean_pedestrian_delay_s += traffic::pedestrian_delay_s(cycle_s, green_time_s(group));
  ++count;
}

bool is_coordinated(const plan::Signal& signal, const std::string& group) {
  const auto& list = signal.controller.coordinated;
  return std::find(list.begin(), list.end(), group) != list.end();
}

SignalFigures signal_figures(const plan::Signal& signal, const std::vector<LaneGroupFigures>& lane_groups) {
  SignalFigures figures;
  figures.signal = signal.id;
  double flow = 0, delay = 0;
  for (const LaneGroupFigures& f : lane_groups) {
    if (f.signal != signal.id) continue;
    flow += f.flow_vph;
    delay += f.flow_vph * f.delay_s;
    figures.worst_degree_of_saturation = std::max(figures.worst_degree_of_saturation, f.degree_of_saturation);
  }
  figures.delay_s = flow > 0 ? delay / flow : 0;
  figures.level_of_service = figures.worst_degree_of_saturation > 1 ? "F" : level_of_service(figures.delay_s);
  int crossings = 0;
  for (const plan::Group& group : signal.groups) {
    if (group.kind == plan::GroupKind::pedestrian) add_pedestrian_figures(group, signal.cycle_s, figures, crossings);
    else if (!is_coordinated(signal, group.id)) figures.longest_side_street_wait_s = std::max(figures.longest_side_street_wait_s, longest_red_s(group, signal.cycle_s));
  }
  if (crossings > 0) figures.mean_pedestrian_delay_s /= crossings;
  return figures;
}

void add_totals(Evaluation& evaluation) {
  double flow = 0;
  plan::Measures& total = evaluation.total;
  for (const LaneGroupFigures& f : evaluation.lane_groups) {
    flow += f.flow_vph;
    if (std::isfinite(f.delay_s)) total.delay_veh_h_per_h += f.flow_vph * f.delay_s / seconds_per_hour;
    total.stops_per_h += f.flow_vph * f.stops_per_vehicle;
    if (f.degree_of_saturation > total.worst_degree_of_saturation) {
      total.worst_degree_of_saturation = f.degree_of_saturation;
      total.worst_degree_at = f.signal + " " + f.lane_group;
    }
  }
  total.delay_s_per_vehicle = flow > 0 ? total.delay_veh_h_per_h * seconds_per_hour / flow : 0;
  for (const SignalFigures& f : evaluation.signals) {
    total.longest_pedestrian_wait_s = std::max(total.longest_pedestrian_wait_s, f.longest_pedestrian_wait_s);
    total.longest_side_street_wait_s = std::max(total.longest_side_street_wait_s, f.longest_side_street_wait_s);
  }
}

void add_lane_group_remarks(Evaluation& evaluation) {
  for (const LaneGroupFigures& f : evaluation.lane_groups) {
    if (f.degree_of_saturation > 1)
      evaluation.remarks.push_back(fmt::format("{} {}: OVERSATURATED, degree of saturation {}; the queue grows by {} vehicles an hour", f.signal, f.lane_group,
                                               fixed_text(f.degree_of_saturation, 2), number_text(f.flow_vph - f.capacity_vph, 0)));
    if (f.storage_m && f.back_of_queue_m > *f.storage_m)
      evaluation.remarks.push_back(fmt::format("{} {}: the queue reaches {} m, its storage is {} m", f.signal, f.lane_group, number_text(f.back_of_queue_m, 0),
                                               number_text(*f.storage_m, 0)));
  }
}

void add_clock_remarks(const plan::Plan& plan, Evaluation& evaluation) {
  const double cycle = plan.cycle_s;
  if (!(cycle > 0)) return;
  if (std::fabs(std::remainder(seconds_per_day, cycle)) > 1e-6)
    evaluation.remarks.push_back(fmt::format("the cycle of {} s does not divide the day: with a clock referenced to {} the offsets jump once a day",
                                             number_text(cycle), plan.clock.reference));
  else if (std::fabs(std::remainder(seconds_per_hour, cycle)) > 1e-6)
    evaluation.remarks.push_back(fmt::format("the cycle of {} s does not divide the hour: a change of the clock by an hour shifts the pattern", number_text(cycle)));
}

}  // namespace

std::string level_of_service(double control_delay_s) {
  constexpr std::pair<double, const char*> limits[] = {{10, "A"}, {20, "B"}, {35, "C"}, {55, "D"}, {80, "E"}};
  for (const auto& [limit, letter] : limits)
    if (control_delay_s <= limit) return letter;
  return "F";
}

Evaluation evaluate(const plan::Plan& plan, Platoons platoons) {
  Evaluation evaluation;
  StreamTable streams(plan);
  if (platoons == Platoons::through_network) streams.couple();
  for (const plan::Signal& signal : plan.signals) {
    if (!is_usable_cycle(signal.cycle_s)) {
      evaluation.remarks.push_back(fmt::format("{}: cycle {} s can't be evaluated", signal.id, number_text(signal.cycle_s)));
      continue;
    }
    for (const plan::LaneGroup& lane_group : signal.lane_groups)
      evaluation.lane_groups.push_back(figures_of(signal, lane_group, streams.of(signal, lane_group), streams.cycle_s(signal)));
    evaluation.signals.push_back(signal_figures(signal, evaluation.lane_groups));
  }
  add_totals(evaluation);
  add_lane_group_remarks(evaluation);
  add_clock_remarks(plan, evaluation);
  return evaluation;
}

}  // namespace entrain::evaluation
