#include "drafting/delay_problem.hpp"

#include <map>

#include "coordination/links/link_cost.hpp"

namespace entrain::drafting {
namespace {

std::map<std::string, int> index_of_signals(const Inputs& inputs, const LocalTiming& local) {
  std::map<std::string, int> index;
  for (std::size_t s = 0; s < local.signals.size(); ++s) index[inputs.network.signals[static_cast<std::size_t>(local.signals[s].network_signal)].id] = static_cast<int>(s);
  return index;
}

std::optional<std::size_t> group_index(const timing::SignalDesign& design, const std::string& id) {
  for (std::size_t g = 0; g < design.groups.size(); ++g)
    if (design.groups[g].id == id) return g;
  return std::nullopt;
}

bool runs_at(const PlannedSignal& planned, const SignalGreens& greens, int cycle_s) {
  return planned.operation != Operation::free && (greens.cycle_s == cycle_s || 2 * greens.cycle_s == cycle_s);
}

links::CostModel cost_model(const Inputs& inputs) {
  links::CostModel model;
  model.stop_weight_s = inputs.standard.value("stop_weight_s");
  return model;
}

links::LinkInput link_input(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const plan::Link& link, const std::vector<int>& orders, std::size_t from,
                            std::size_t to, std::size_t to_group) {
  links::LinkInput input;
  input.spread = {link.travel_time_s, link.travel_time_sd_s, inputs.standard.value("dispersion_alpha"), inputs.standard.value("dispersion_beta"), 1};
  input.uniform_flow_vph = link.uniform_flow_vph;
  input.storage_veh = link.storage_veh;
  input.downstream = stream_of(local.signals[to].design, candidate.signals[to], orders[to], to_group, candidate.cycle_s);
  if (link.saturation_flow_vph) input.downstream.saturation_flow_vph = *link.saturation_flow_vph;
  for (const plan::LinkFeed& feed : link.feeds)
    if (const auto group = group_index(local.signals[from].design, feed.from_group))
      input.feeds.push_back({stream_of(local.signals[from].design, candidate.signals[from], orders[from], *group, candidate.cycle_s), feed.flow_vph, {}});
  return input;
}

}  // namespace

FlowPair worst_flow(const timing::Group& group, const timing::SignalDesign& design, const std::vector<double>& flows_vph) {
  FlowPair worst;
  double worst_ratio = -1;
  for (const int index : group.lane_groups) {
    const auto i = static_cast<std::size_t>(index);
    const double saturation = design.lane_groups[i].saturation_flow_vph;
    const double ratio = saturation > 0 ? flows_vph[i] / saturation : 0;
    if (ratio <= worst_ratio) continue;
    worst_ratio = ratio;
    worst = {flows_vph[i], saturation};
  }
  return worst;
}

traffic::Stream stream_of(const timing::SignalDesign& design, const SignalGreens& greens, int order, std::size_t group, int cycle_s) {
  traffic::Stream stream;
  for (int shift = 0; shift < cycle_s; shift += greens.cycle_s)
    for (const Arc& arc : greens.orders[static_cast<std::size_t>(order)].groups[group].greens) {
      const bool always = arc.duration >= Tenths::from_seconds(greens.cycle_s);
      stream.greens.push_back({arc.start.seconds() + shift, always ? static_cast<double>(cycle_s) : arc.duration.seconds()});
    }
  const timing::Group& from = design.groups[group];
  stream.start_up_lost_s = from.start_up_lost_s;
  stream.end_gain_s = from.end_gain_s;
  const FlowPair flow = worst_flow(from, design, greens.flows_vph);
  stream.flow_vph = flow.flow_vph;
  stream.saturation_flow_vph = flow.saturation_flow_vph;
  return stream;
}

std::vector<DelayEdge> delay_edges(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Link>& links, const std::vector<int>& orders) {
  const auto index = index_of_signals(inputs, local);
  const links::CostModel model = cost_model(inputs);
  std::vector<DelayEdge> edges;
  for (const plan::Link& link : links) {
    const auto from = static_cast<std::size_t>(index.at(link.from_signal)), to = static_cast<std::size_t>(index.at(link.to_signal));
    if (!runs_at(local.signals[from], candidate.signals[from], candidate.cycle_s) || !runs_at(local.signals[to], candidate.signals[to], candidate.cycle_s)) continue;
    const auto to_group = group_index(local.signals[to].design, link.to_group);
    if (!to_group) continue;
    const links::LinkInput input = link_input(inputs, local, candidate, link, orders, from, to, *to_group);
    edges.push_back({static_cast<int>(from), static_cast<int>(to), links::cost_table(input, candidate.cycle_s, model)});
  }
  return edges;
}

}  // namespace entrain::drafting
