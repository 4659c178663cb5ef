#include "drafting/assemble.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "drafting/delay_problem.hpp"

namespace entrain::drafting {
namespace {

plan::Turn turn_of(network::TurnKind turn) {
  switch (turn) {
    case network::TurnKind::left: return plan::Turn::left;
    case network::TurnKind::through: return plan::Turn::through;
    case network::TurnKind::right: return plan::Turn::right;
    case network::TurnKind::u_turn: return plan::Turn::u_turn;
  }
  return plan::Turn::through;
}

void put_geometry(const network::Signal& from, const timing::SignalDesign& design, const std::vector<double>& flows, plan::Signal& to) {
  for (const auto& leg : from.legs) to.legs.push_back({leg.id, leg.bearing_deg, leg.street});
  for (const auto& movement : from.movements) {
    if (serving_group(design, movement.id) < 0) continue;
    to.movements.push_back({movement.id, from.legs[static_cast<std::size_t>(movement.from_leg)].id, from.legs[static_cast<std::size_t>(movement.to_leg)].id, turn_of(movement.turn)});
  }
  for (const auto& crossing : from.crossings) to.crossings.push_back({crossing.id, from.legs[static_cast<std::size_t>(crossing.leg)].id, crossing.length_m});
  for (std::size_t g = 0; g < design.lane_groups.size(); ++g) {
    const auto& lane_group = design.lane_groups[g];
    to.lane_groups.push_back({lane_group.id, lane_group.movements, lane_group.lanes, flows[g], lane_group.saturation_flow_vph, lane_group.storage_m});
  }
}

plan::ClearanceBasis basis_of(const timing::ClearanceBasis& from, double vehicle_length_m) {
  plan::ClearanceBasis basis;
  basis.speed_mps = from.speed_mps;
  basis.grade = from.grade;
  basis.width_m = from.width_m;
  basis.vehicle_length_m = vehicle_length_m;
  basis.clearing_speed_mps = from.clearing_speed_mps;
  if (!from.override_what.empty()) basis.override_by = plan::Override{from.override_what, from.override_reason, from.override_author};
  return basis;
}

void put_flow(const timing::Group& from, const timing::SignalDesign& design, const std::vector<double>& flows, plan::Group& to) {
  if (!from.lane_groups.empty()) {
    const FlowPair worst = worst_flow(from, design, flows);
    to.flow_vph = worst.flow_vph;
    to.saturation_flow_vph = worst.saturation_flow_vph;
  }
  to.start_up_lost_s = from.start_up_lost_s;
  to.end_gain_s = from.end_gain_s;
}

void put_vehicle(const timing::Group& from, const timing::SignalDesign& design, const SignalGreens& greens, const timing::GroupGreen& green, double vehicle_length_m,
                 plan::Group& to) {
  to.phase_number = from.phase_number;
  for (const auto& served : from.serves)
    to.serves.push_back({served.movement, served.right_of_way == timing::RightOfWay::with_protection ? plan::RightOfWay::with_protection : plan::RightOfWay::permissive,
                         served.flashing_yellow_arrow});
  to.yellow_s = from.yellow.seconds();
  to.red_clearance_s = from.red_clearance.seconds();
  if (green.split.count > 0) to.split_s = green.split.seconds();
  put_flow(from, design, greens.flows_vph, to);
  if (!from.lane_groups.empty()) to.degree_of_saturation = green.degree_of_saturation;
  if (from.basis) to.clearance_basis = basis_of(*from.basis, vehicle_length_m);
}

plan::Group group_of(std::size_t index, const timing::SignalDesign& design, const SignalGreens& greens, const timing::Allocation& order, double vehicle_length_m) {
  const timing::Group& from = design.groups[index];
  const timing::GroupGreen& green = order.groups[index];
  plan::Group to;
  to.id = from.id;
  to.minimum_green_s = from.minimum_green.seconds();
  for (const Arc& arc : green.greens) to.greens.push_back({arc.start.seconds(), arc.duration.seconds()});
  if (from.kind == timing::GroupKind::vehicle) {
    put_vehicle(from, design, greens, green, vehicle_length_m, to);
    return to;
  }
  to.kind = from.kind == timing::GroupKind::pedestrian ? plan::GroupKind::pedestrian : plan::GroupKind::bicycle;
  to.crossings = from.crossings;
  if (from.parent >= 0) to.parent = design.groups[static_cast<std::size_t>(from.parent)].id;
  to.service = from.on_call ? plan::Service::on_call : plan::Service::every_cycle;
  to.clearance_s = from.clearance.seconds();
  return to;
}

// Rings, sides and groups of "1 2|3 4 / 5 6|7 8"; empty parts are sides at which a ring rests.
std::vector<std::vector<std::vector<std::string>>> parts_of(const std::string& sequence) {
  std::vector<std::vector<std::vector<std::string>>> rings{{{}}};
  std::string word;
  const auto finish = [&] {
    if (!word.empty()) rings.back().back().push_back(word);
    word.clear();
  };
  for (const char c : sequence) {
    if (c != ' ' && c != '|' && c != '/') word += c;
    else finish();
    if (c == '|') rings.back().emplace_back();
    if (c == '/') rings.push_back({{}});
  }
  finish();
  return rings;
}

void put_controller(const PlannedSignal& planned, const timing::Allocation& order, plan::Signal& to) {
  to.controller.coordinated = planned.coordinated;
  if (!planned.design.ring_barrier || order.sequence.empty()) return;
  to.controller.kind = "ring_barrier";
  plan::RingBarrier& rings = to.controller.ring_barrier.emplace();
  for (const auto& ring : parts_of(order.sequence)) {
    auto& sequence = rings.rings.emplace_back();
    rings.barriers_after.resize(std::max(rings.barriers_after.size(), ring.size()));
    for (std::size_t side = 0; side < ring.size(); ++side) {
      sequence.insert(sequence.end(), ring[side].begin(), ring[side].end());
      if (!ring[side].empty()) rings.barriers_after[side].push_back(ring[side].back());
    }
  }
}

void put_oversaturation(const SignalGreens& greens, const timing::Allocation& order, const timing::SignalDesign& design, plan::Signal& to) {
  for (std::size_t g = 0; g < design.groups.size(); ++g) {
    if (order.groups[g].degree_of_saturation <= 1) continue;
    for (const int index : design.groups[g].lane_groups) {
      const auto i = static_cast<std::size_t>(index);
      double green_s = 0;
      for (const Arc& arc : order.groups[g].greens) green_s += arc.duration.seconds() - design.groups[g].start_up_lost_s + design.groups[g].end_gain_s;
      const double capacity = design.lane_groups[i].saturation_flow_vph * green_s / greens.cycle_s;
      if (capacity > 0 && greens.flows_vph[i] > capacity)
        to.oversaturated.push_back({design.lane_groups[i].id, greens.flows_vph[i] / capacity, greens.flows_vph[i] - capacity});
    }
  }
}

plan::Evidence evidence_of(const timing::CriticalCycle& critical, const timing::SignalDesign& design) {
  plan::Evidence evidence;
  for (const int g : critical.critical_groups) evidence.critical_groups.push_back(design.groups[static_cast<std::size_t>(g)].id);
  evidence.critical_flow_ratio = critical.flow_ratio;
  evidence.critical_lost_time_s = critical.lost_time_s;
  evidence.minimum_cycle_s = critical.minimum_s;
  evidence.text = critical.text;
  return evidence;
}

plan::Operation operation_of(Operation operation) {
  if (operation == Operation::free) return plan::Operation::free;
  return operation == Operation::coordinated_actuated ? plan::Operation::coordinated_actuated : plan::Operation::pretimed;
}

plan::Signal signal_of(const Inputs& inputs, const PlannedSignal& planned, const SignalGreens& greens, const timing::Allocation& order, int offset_s) {
  const network::Signal& from = inputs.network.signals[static_cast<std::size_t>(planned.network_signal)];
  const auto& design = planned.design;
  plan::Signal to;
  to.id = from.id;
  to.name = from.name;
  if (from.has_place) to.lon = from.place.lon, to.lat = from.place.lat;
  to.traffic_side = design.traffic_side;
  to.operation = operation_of(planned.operation);
  to.cycle_s = greens.cycle_s;
  to.offset_s = offset_s;
  to.reference_group = design.groups.empty() ? "" : design.groups[static_cast<std::size_t>(design.reference_group)].id;
  put_controller(planned, order, to);
  put_geometry(from, design, greens.flows_vph, to);
  const double vehicle_length_m = inputs.standard.value("vehicle_length_m");
  for (std::size_t g = 0; g < design.groups.size(); ++g) to.groups.push_back(group_of(g, design, greens, order, vehicle_length_m));
  for (const auto& c : design.conflicts)
    to.conflicts.push_back({design.groups[static_cast<std::size_t>(c.a)].id, design.groups[static_cast<std::size_t>(c.b)].id, c.intergreen_ab.seconds(), c.intergreen_ba.seconds()});
  to.conflicts_given = planned.conflicts_given;
  if (greens.critical.minimum_s > 0) to.evidence = evidence_of(greens.critical, design);
  put_oversaturation(greens, order, design, to);
  to.clock = planned.clock;
  to.offset_fixed = planned.offset_fixed;
  to.sequence_fixed = planned.sequence_fixed;
  to.splits_fixed = planned.splits_fixed;
  return to;
}

// Rounding rules and allowed yields as numbers, so that the review applies the same.
void put_rules(const standards::DesignStandard& standard, plan::StandardInUse& to) {
  for (const auto& [value, rule] : standard.rounding) {
    const bool second = rule == standards::Rounding::up_to_second, half = rule == standards::Rounding::up_to_half_second;
    to.values[value + "_rounding_step"] = second ? 1.0 : half ? 0.5 : 0.1;
    to.values[value + "_rounding_up"] = rule == standards::Rounding::nearest_tenth ? 0 : 1;
  }
  for (const auto& [yield, is_allowed] : standard.allowed) to.values["allow_" + yield] = is_allowed ? 1 : 0;
}

void put_frame(const Inputs& inputs, const Candidate& candidate, plan::Plan& plan) {
  const auto& period = inputs.project.periods[candidate.period];
  plan.program = "entrain " ENTRAIN_VERSION;
  plan.project = inputs.project.name;
  plan.period = period.id;
  plan.cycle_s = candidate.cycle_s;
  if (!period.days.empty() || !period.from.empty()) plan.schedule = plan::Schedule{period.days, period.from, period.to};
  plan.clock = {inputs.project.clock.reference, inputs.project.clock.time_zone};
  plan.units = inputs.project.units == project::Units::us ? "us" : "metric";
  plan.standard.id = inputs.standard.id;
  for (const auto& [key, value] : inputs.standard.values) plan.standard.values[key] = value.value;
  put_rules(inputs.standard, plan.standard);
  plan.cost_model.alpha = inputs.standard.value("dispersion_alpha");
  plan.cost_model.beta = inputs.standard.value("dispersion_beta");
  plan.cost_model.stop_weight_s = inputs.standard.value("stop_weight_s");
}

// Stops of signals that run free or have no group for the corridor are passed over; their travel time and distance stay.
plan::Direction direction_of(const Inputs& inputs, const LocalTiming& local, std::size_t c, std::size_t d, std::size_t period) {
  const auto& from = inputs.network.corridors[c].directions[d];
  const auto& asked = inputs.project.corridors[c];
  plan::Direction to;
  to.name = from.name;
  to.label = from.label;
  to.weight = corridor_weight(asked, from.name, inputs.project.periods[period].id);
  double distance = 0, time = 0;
  for (const auto& stop : from.stops) {
    distance += stop.distance_m;
    for (const int link : stop.links) time += network::travel_time(inputs.network.links[static_cast<std::size_t>(link)], inputs.project.periods[period].id).mean_s;
    const int index = local.planned_of_network[static_cast<std::size_t>(stop.signal)];
    if (index < 0) continue;
    const PlannedSignal& planned = local.signals[static_cast<std::size_t>(index)];
    const int group = corridor_group(inputs, planned.design, c, from.name, stop);
    if (planned.operation == Operation::free || group < 0) continue;
    if (to.stops.empty()) distance = time = 0;
    to.stops.push_back({inputs.network.signals[static_cast<std::size_t>(stop.signal)].id, planned.design.groups[static_cast<std::size_t>(group)].id, stop.movement, distance, time, 0});
    distance = time = 0;
  }
  return to;
}

void claim_bands(const DirectionBand& band, double cycle_s, plan::Direction& direction) {
  direction.bandwidth_s = band.bandwidth_s;
  direction.band_start_s = band.start_s;
  direction.bandwidth_bound_s = band.bound_s;
  direction.efficiency = cycle_s > 0 ? band.bandwidth_s / cycle_s : 0;
  direction.attainability = band.least_green_s > 0 ? std::min(1.0, band.bandwidth_s / band.least_green_s) : 0;
}

}  // namespace

double corridor_weight(const project::Corridor& corridor, const std::string& direction, const std::string& period) {
  if (const auto by = corridor.weights_by_period.find(period); by != corridor.weights_by_period.end())
    if (const auto found = by->second.find(direction); found != by->second.end()) return found->second;
  const auto found = corridor.weights.find(direction);
  return found == corridor.weights.end() ? 1.0 : found->second;
}

std::vector<plan::Corridor> plan_corridors(const Inputs& inputs, const LocalTiming& local, std::size_t period) {
  std::vector<plan::Corridor> corridors;
  for (std::size_t c = 0; c < inputs.network.corridors.size(); ++c) {
    const auto& from = inputs.network.corridors[c];
    plan::Corridor& to = corridors.emplace_back();
    to.id = from.id;
    to.name = from.name;
    for (std::size_t d = 0; d < from.directions.size(); ++d) to.directions.push_back(direction_of(inputs, local, c, d, period));
  }
  return corridors;
}

std::vector<std::string> standing_cautions() {
  return {
      "A draft for engineering review, not a timing order: a licensed engineer checks it, signs it and answers for it.",
      "Local standards and law come first. Clearance intervals, walk and pedestrian clearance follow the design standard named here and are never shortened to fit a wave.",
      "Verify in the field before and after download: clearances by stop-watch, conflicts by the cabinet's conflict monitor, progression by driving it.",
      "Offsets mean nothing without a common clock: check clock reference, time zone and the offset's reference instant of every controller.",
      "Bands and delay assume that every phase uses its full split; actuated phases that end early change the start of the coordinated green.",
  };
}

plan::Plan assemble(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const Coordination& coordination) {
  plan::Plan plan;
  put_frame(inputs, candidate, plan);
  for (std::size_t s = 0; s < local.signals.size(); ++s) {
    const SignalGreens& greens = candidate.signals[s];
    plan::Signal signal = signal_of(inputs, local.signals[s], greens, greens.orders[static_cast<std::size_t>(coordination.order[s])], coordination.offset_s[s]);
    if (s < coordination.freedom_s.size() && coordination.freedom_s[s]) {
      signal.freedom_early_s = coordination.freedom_s[s]->first;
      signal.freedom_late_s = coordination.freedom_s[s]->second;
    }
    plan.signals.push_back(std::move(signal));
  }
  plan.links = plan_links(inputs, local, candidate.period);
  plan.corridors = plan_corridors(inputs, local, candidate.period);
  for (std::size_t c = 0; c < plan.corridors.size(); ++c)
    for (std::size_t d = 0; d < plan.corridors[c].directions.size(); ++d)
      if (c < coordination.bands.size() && d < coordination.bands[c].size()) claim_bands(coordination.bands[c][d], plan.cycle_s, plan.corridors[c].directions[d]);
  plan.cautions = standing_cautions();
  return plan;
}

}  // namespace entrain::drafting
