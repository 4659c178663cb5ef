#include "drafting/local_timing.hpp"

#include <fmt/format.h>

#include <algorithm>

namespace entrain::drafting {
namespace {

const project::SignalRow* row_of(const Inputs& inputs, const std::string& signal) {
  for (const auto& row : inputs.tables.signals)
    if (row.signal == signal) return &row;
  return nullptr;
}

const network::Movement* find_movement(const network::Signal& signal, const std::string& id) {
  for (const auto& movement : signal.movements)
    if (movement.id == id) return &movement;
  return nullptr;
}

// The approach that gets phase 2: the project's word, else the forward direction of the first corridor through the signal.
std::optional<std::string> phase_2_label(const Inputs& inputs, std::size_t signal) {
  if (inputs.project.phase_2) return inputs.project.phase_2;
  for (const auto& corridor : inputs.network.corridors)
    for (const auto& direction : corridor.directions)
      for (const auto& stop : direction.stops) {
        if (stop.signal != static_cast<int>(signal)) continue;
        if (const auto* movement = find_movement(inputs.network.signals[signal], stop.movement)) return movement->approach;
      }
  if (inputs.network.corridors.empty() || inputs.network.corridors[0].directions.empty()) return std::nullopt;
  return inputs.network.corridors[0].directions[0].label;
}

timing::DesignRequest design_request(const Inputs& inputs, std::size_t index) {
  const network::Signal& signal = inputs.network.signals[index];
  timing::DesignRequest request;
  request.ring_barrier_wanted = inputs.project.control != "signal_group";
  request.phase_2_label = phase_2_label(inputs, index);
  for (const auto& row : inputs.tables.crossings) {
    if (row.signal != signal.id) continue;
    if (!row.service.empty()) request.crossing_service["X-" + row.leg] = row.service;
    request.crossing_changes[row.leg] = {row.walk_s, row.walking_speed_mps, row.button_distance_m, row.group};
  }
  for (const auto& e : inputs.project.exceptions)
    if (e.signal.empty() || e.signal == signal.id)
      request.exceptions.push_back({e.group, e.movement, e.crossing, e.key, e.reason, e.author, e.value});
  return request;
}

void apply_row(const project::SignalRow& row, PlannedSignal& planned) {
  if (row.operation == "free") planned.operation = Operation::free;
  if (row.operation == "coordinated_actuated") planned.operation = Operation::coordinated_actuated;
  if (!row.clock.empty()) planned.clock = row.clock;
  planned.half_cycle = row.half_cycle;
  planned.minimum_cycle_s = row.minimum_cycle_s.value_or(planned.minimum_cycle_s);
  planned.maximum_cycle_s = row.maximum_cycle_s.value_or(planned.maximum_cycle_s);
  planned.offset_fixed = row.offset_fixed;
  planned.sequence_fixed = row.sequence_fixed;
  planned.splits_fixed = row.splits_fixed;
}

void add_coordinated(const Inputs& inputs, PlannedSignal& planned) {
  const auto& corridors = inputs.network.corridors;
  for (std::size_t c = 0; c < corridors.size(); ++c)
    for (const auto& direction : corridors[c].directions)
      for (const auto& stop : direction.stops) {
        if (stop.signal != planned.network_signal) continue;
        const int group = corridor_group(inputs, planned.design, c, direction.name, stop);
        if (group < 0) continue;
        const std::string& id = planned.design.groups[static_cast<std::size_t>(group)].id;
        if (std::find(planned.coordinated.begin(), planned.coordinated.end(), id) == planned.coordinated.end()) planned.coordinated.push_back(id);
      }
}

// The reference group is the first coordinated one; elsewhere the design's own.
void settle_reference(PlannedSignal& planned) {
  auto& design = planned.design;
  if (planned.coordinated.empty() && !design.groups.empty())
    planned.coordinated.push_back(design.groups[static_cast<std::size_t>(design.reference_group)].id);
  for (std::size_t g = 0; g < design.groups.size(); ++g)
    if (!planned.coordinated.empty() && design.groups[g].id == planned.coordinated.front()) design.reference_group = static_cast<int>(g);
}

// Without a signals table a project that names corridors plans their signals and no others.
bool is_planned(const Inputs& inputs, int signal) {
  if (!inputs.tables.signals.empty() || inputs.network.corridors.empty()) return true;
  for (const auto& corridor : inputs.network.corridors)
    for (const auto& direction : corridor.directions)
      for (const auto& stop : direction.stops)
        if (stop.signal == signal) return true;
  return false;
}

struct Collected {
  Diagnostics problems, notes;
};

void read_demands(const Inputs& inputs, LocalTiming& local, Collected& collected) {
  for (const auto& period : inputs.project.periods) {
    auto demand = demand::design_flows(inputs.network, inputs.tables.movements, inputs.tables.movements_source, {}, period.id);
    if (!demand) {
      append(collected.problems, demand.error());
      continue;
    }
    append(collected.notes, std::move(demand->notes));
    local.demands.push_back(std::move(demand->value));
  }
}

void design_one(const Inputs& inputs, std::size_t s, LocalTiming& local, Collected& collected) {
  const network::Signal& signal = inputs.network.signals[s];
  std::vector<demand::SignalDemand> periods;
  for (const auto& demand : local.demands) periods.push_back(demand.signals.at(s));
  auto design = timing::design_signal(signal, periods, inputs.standard, design_request(inputs, s));
  if (!design) return append(collected.problems, design.error());
  append(collected.notes, std::move(design->notes));
  PlannedSignal planned;
  planned.network_signal = static_cast<int>(s);
  planned.design = std::move(design->value);
  apply_signal_row(inputs, signal.id, planned);
  settle_coordinated(inputs, planned);
  local.planned_of_network[s] = static_cast<int>(local.signals.size());
  local.signals.push_back(std::move(planned));
}

}  // namespace

void settle_coordinated(const Inputs& inputs, PlannedSignal& planned) {
  add_coordinated(inputs, planned);
  settle_reference(planned);
}

void apply_signal_row(const Inputs& inputs, const std::string& signal, PlannedSignal& planned) {
  if (const auto* row = row_of(inputs, signal)) apply_row(*row, planned);
}

int serving_group(const timing::SignalDesign& design, const std::string& movement) {
  int permissive = -1;
  for (std::size_t g = 0; g < design.groups.size(); ++g)
    for (const auto& served : design.groups[g].serves) {
      if (served.movement != movement) continue;
      if (served.right_of_way == timing::RightOfWay::with_protection) return static_cast<int>(g);
      if (permissive < 0) permissive = static_cast<int>(g);
    }
  return permissive;
}

int corridor_group(const Inputs& inputs, const timing::SignalDesign& design, std::size_t corridor, const std::string& direction,
                   const network::CorridorStop& stop) {
  std::string wanted;
  if (corridor < inputs.project.corridors.size()) {
    const auto& asked = inputs.project.corridors[corridor];
    if (const auto found = asked.groups.find(direction); found != asked.groups.end()) wanted = found->second;
    const auto& id = inputs.network.signals[static_cast<std::size_t>(stop.signal)].id;
    if (const auto at = asked.groups_at.find(id); at != asked.groups_at.end())
      if (const auto found = at->second.find(direction); found != at->second.end()) wanted = found->second;
  }
  if (wanted.empty()) return serving_group(design, stop.movement);
  for (std::size_t g = 0; g < design.groups.size(); ++g)
    if (design.groups[g].id == wanted) return static_cast<int>(g);
  return -1;
}

Result<Noted<LocalTiming>> local_timing(const Inputs& inputs) {
  LocalTiming local;
  Collected collected;
  local.planned_of_network.assign(inputs.network.signals.size(), -1);
  read_demands(inputs, local, collected);
  if (!collected.problems.empty()) return failure(collected.problems);
  int elsewhere = 0;
  for (std::size_t s = 0; s < inputs.network.signals.size(); ++s) {
    const network::Signal& signal = inputs.network.signals[s];
    if (!is_planned(inputs, static_cast<int>(s))) ++elsewhere;
    else if (signal.pedestrian_only) collected.notes.push_back(note(signal.id, "a signal for pedestrians only: not planned"));
    else design_one(inputs, s, local, collected);
  }
  if (elsewhere > 0)
    collected.notes.push_back(note("roads", fmt::format("{} signals lie on no corridor and were not planned; name them in a signals table to plan them too", elsewhere)));
  if (!collected.problems.empty()) return failure(collected.problems);
  return Noted<LocalTiming>{std::move(local), std::move(collected.notes)};
}

}  // namespace entrain::drafting
