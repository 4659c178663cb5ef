#include <algorithm>
#include <map>

#include "drafting/assemble.hpp"

namespace entrain::drafting {
namespace {

constexpr double queued_vehicle_m = 7.5;  // front to front; common practice, no source

double flow_of(const demand::SignalDemand& demand, const std::string& movement) {
  for (const auto& flow : demand.movements)
    if (flow.movement == movement) return flow.flow_vph;
  return 0;
}

// Flow by serving group of the movements that leave (or enter) by a leg; groups in design order.
std::map<int, double> flows_by_group(const network::Signal& signal, const timing::SignalDesign& design, const demand::SignalDemand& demand, int leg, bool leaving) {
  std::map<int, double> flows;
  for (const auto& movement : signal.movements) {
    if ((leaving ? movement.to_leg : movement.from_leg) != leg) continue;
    const int group = serving_group(design, movement.id);
    if (group >= 0) flows[group] += flow_of(demand, movement.id);
  }
  return flows;
}

double saturation_of(const network::Signal& signal, const timing::SignalDesign& design, int group, int leg) {
  double total = 0;
  for (const auto& lane_group : design.lane_groups) {
    const bool here = std::any_of(signal.movements.begin(), signal.movements.end(), [&](const network::Movement& movement) {
      return movement.from_leg == leg && serving_group(design, movement.id) == group &&
             std::find(lane_group.movements.begin(), lane_group.movements.end(), movement.id) != lane_group.movements.end();
    });
    if (here) total += lane_group.saturation_flow_vph;
  }
  return total;
}

double sum(const std::map<int, double>& flows) {
  double total = 0;
  for (const auto& [group, flow] : flows) total += flow;
  return total;
}

struct LinkEnds {
  const network::SignalLink& link;
  const PlannedSignal& from;
  const PlannedSignal& to;
};

plan::Link plan_link(const Inputs& inputs, const LinkEnds& ends, std::size_t period, int group) {
  const auto& network = inputs.network;
  const auto& time = network::travel_time(ends.link, inputs.project.periods[period].id);
  const std::string& to_group = ends.to.design.groups[static_cast<std::size_t>(group)].id;
  plan::Link out;
  out.from_signal = network.signals[static_cast<std::size_t>(ends.link.from_signal)].id;
  out.to_signal = network.signals[static_cast<std::size_t>(ends.link.to_signal)].id;
  out.to_group = to_group;
  out.id = ends.link.id + ":" + to_group;
  out.length_m = ends.link.length_m;
  out.travel_time_s = time.mean_s;
  out.travel_time_origin = time.origin;
  out.travel_time_sd_s = time.sd_s;
  return out;
}

void add_links(const Inputs& inputs, const LocalTiming& local, const LinkEnds& ends, std::size_t period, std::vector<plan::Link>& links) {
  const auto& network = inputs.network;
  const auto from_index = static_cast<std::size_t>(ends.link.from_signal), to_index = static_cast<std::size_t>(ends.link.to_signal);
  const auto& demand = local.demands[period].signals;
  const auto upstream = flows_by_group(network.signals[from_index], ends.from.design, demand[from_index], ends.link.from_leg, true);
  const auto downstream = flows_by_group(network.signals[to_index], ends.to.design, demand[to_index], ends.link.to_leg, false);
  const double inflow = sum(upstream), arrivals = sum(downstream);
  if (arrivals <= 0) return;
  const double kept = inflow > arrivals ? arrivals / inflow : 1.0;  // what turns off between the signals
  for (const auto& [group, flow] : downstream) {
    if (flow <= 0) continue;
    const double share = flow / arrivals;
    plan::Link link = plan_link(inputs, ends, period, group);
    link.saturation_flow_vph = saturation_of(network.signals[to_index], ends.to.design, group, ends.link.to_leg);
    link.storage_veh = ends.link.length_m * std::max(1, ends.link.lanes) * share / queued_vehicle_m;
    link.uniform_flow_vph = std::max(0.0, arrivals - inflow) * share;
    for (const auto& [from_group, from_flow] : upstream)
      if (from_flow > 0) link.feeds.push_back({ends.from.design.groups[static_cast<std::size_t>(from_group)].id, from_flow * kept * share});
    links.push_back(std::move(link));
  }
}

}  // namespace

std::vector<plan::Link> plan_links(const Inputs& inputs, const LocalTiming& local, std::size_t period) {
  std::vector<plan::Link> links;
  for (const auto& link : inputs.network.links) {
    const int from = local.planned_of_network[static_cast<std::size_t>(link.from_signal)];
    const int to = local.planned_of_network[static_cast<std::size_t>(link.to_signal)];
    if (from < 0 || to < 0 || from == to || link.from_leg < 0 || link.to_leg < 0) continue;
    const LinkEnds ends{link, local.signals[static_cast<std::size_t>(from)], local.signals[static_cast<std::size_t>(to)]};
    add_links(inputs, local, ends, period, links);
  }
  return links;
}

}  // namespace entrain::drafting
