#include "drafting/greens.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "drafting/running.hpp"

namespace entrain::drafting {
namespace {

const std::string& id_of(const Inputs& inputs, const PlannedSignal& planned) {
  return inputs.network.signals[static_cast<std::size_t>(planned.network_signal)].id;
}

std::vector<double> flows_of(const LocalTiming& local, const PlannedSignal& planned, std::size_t period) {
  return timing::lane_group_flows(planned.design, local.demands[period].signals[static_cast<std::size_t>(planned.network_signal)]);
}

Result<timing::CriticalCycle> need_of(const Inputs& inputs, const LocalTiming& local, const PlannedSignal& planned, std::size_t period) {
  return timing::critical_cycle(planned.design, flows_of(local, planned, period), inputs.standard.value("target_saturation"));
}

// A free signal's own cycle: the least at which its saturation target holds, at least its minimum, within the period's range.
int free_cycle_s(const timing::CriticalCycle& critical, const project::CycleRange& range) {
  const int wanted = critical.saturation_minimum_s > 0 ? critical.saturation_minimum_s : range.maximum_s;
  return std::max(critical.minimum_s, std::clamp(wanted, range.minimum_s, range.maximum_s));
}

Result<std::vector<timing::Allocation>> allocate_at(const Inputs& inputs, const PlannedSignal& planned, const std::vector<double>& flows, std::size_t period, int cycle_s) {
  timing::AllocationRequest request;
  request.cycle = Tenths::from_seconds(cycle_s);
  request.flows_vph = flows;
  Diagnostics problems = fix_from_timing(inputs, planned, period, cycle_s, request);
  if (!problems.empty()) return failure(problems);
  return timing::allocate(planned.design, request);
}

bool half_serves(const std::vector<timing::Allocation>& orders, double target) {
  return !orders.empty() && (orders[0].saturation_descending.empty() || orders[0].saturation_descending[0] <= target);
}

Result<SignalGreens> signal_greens(const Inputs& inputs, const LocalTiming& local, const PlannedSignal& planned, std::size_t period, int cycle_s) {
  SignalGreens greens;
  greens.flows_vph = flows_of(local, planned, period);
  const std::string& id = id_of(inputs, planned);
  auto critical = need_of(inputs, local, planned, period);
  if (!critical) return failure(critical.error());
  greens.critical = std::move(*critical);
  const bool free = planned.operation == Operation::free;
  greens.cycle_s = free ? free_cycle_s(greens.critical, inputs.project.periods[period].cycle) : cycle_s;
  if (!free && (cycle_s < planned.minimum_cycle_s || cycle_s > planned.maximum_cycle_s))
    return failure(error(id, fmt::format("cycle {} s", cycle_s), fmt::format("{} to {} s, as the signals table asks", planned.minimum_cycle_s, planned.maximum_cycle_s),
                         "Choose a cycle inside that range or change min_cycle_s and max_cycle_s"));
  if (!free && planned.half_cycle != "never" && cycle_s % 2 == 0) {
    auto half = allocate_at(inputs, planned, greens.flows_vph, period, cycle_s / 2);
    const bool required = planned.half_cycle == "required";
    if (half && (required || half_serves(*half, inputs.standard.value("target_saturation")))) {
      greens.cycle_s = cycle_s / 2;
      greens.orders = std::move(*half);
      return greens;
    }
    if (required) return failure(half.error());
  } else if (!free && planned.half_cycle == "required") {
    return failure(error(id, fmt::format("cycle {} s", cycle_s), "an even cycle, since this signal must run at its half", "Choose an even cycle"));
  }
  auto orders = allocate_at(inputs, planned, greens.flows_vph, period, greens.cycle_s);
  if (!orders) return failure(orders.error());
  greens.orders = std::move(*orders);
  return greens;
}

}  // namespace

Result<Candidate> greens_at(const Inputs& inputs, const LocalTiming& local, std::size_t period, int cycle_s) {
  Candidate candidate{cycle_s, period, {}};
  Diagnostics problems;
  for (const PlannedSignal& planned : local.signals) {
    auto greens = signal_greens(inputs, local, planned, period, cycle_s);
    if (greens) candidate.signals.push_back(std::move(*greens));
    else append(problems, greens.error());
  }
  if (!problems.empty()) return failure(problems);
  return candidate;
}

Result<std::vector<CycleNeed>> cycle_needs(const Inputs& inputs, const LocalTiming& local, std::size_t period) {
  std::vector<CycleNeed> needs;
  Diagnostics problems;
  for (const PlannedSignal& planned : local.signals) {
    if (planned.operation == Operation::free) continue;
    auto critical = need_of(inputs, local, planned, period);
    if (critical) needs.push_back({id_of(inputs, planned), std::move(*critical)});
    else append(problems, critical.error());
  }
  if (!problems.empty()) return failure(problems);
  return needs;
}

}  // namespace entrain::drafting
