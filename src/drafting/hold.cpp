#include "drafting/hold.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "drafting/assemble.hpp"
#include "drafting/held_signal.hpp"
#include "drafting/keep_bands.hpp"

namespace entrain::drafting {
namespace {

struct HeldPeriod {
  LocalTiming local;
  Candidate candidate;
  Coordination running;  // the offsets that run
  Diagnostics notes;
  bool offsets_whole = true;
};

// Right of way, conflicts and lane groups by geometry, where there are roads; a signal that can't be designed is held without.
LocalTiming designs_of(const Inputs& inputs, Diagnostics& notes) {
  LocalTiming local;
  auto designed = local_timing(inputs);
  if (designed) {
    append(notes, std::move(designed->notes));
    return std::move(designed->value);
  }
  local.planned_of_network.assign(inputs.network.signals.size(), -1);
  for (const auto& period : inputs.project.periods) {
    auto demand = demand::design_flows(inputs.network, inputs.tables.movements, inputs.tables.movements_source, {}, period.id);
    if (demand) local.demands.push_back(std::move(demand->value));
  }
  return local;
}

void take(HeldSignal held, std::size_t network_signal, HeldPeriod& out) {
  out.local.planned_of_network[network_signal] = static_cast<int>(out.local.signals.size());
  const double offset = held.offset_s.value_or(0);
  out.offsets_whole = out.offsets_whole && std::fabs(offset - std::round(offset)) < 1e-6;
  if (!held.offset_s) out.notes.push_back(warning(held.planned.design.signal, "ASSUMED: no offset in the timing table, taken as 0"));
  out.running.order.push_back(0);
  out.running.offset_s.push_back(static_cast<int>(std::lround(offset)) % std::max(1, held.greens.cycle_s));
  out.running.freedom_s.emplace_back();
  out.local.signals.push_back(std::move(held.planned));
  out.candidate.signals.push_back(std::move(held.greens));
}

// The longest cycle is the plan's; the others run at it, at its half, or are named.
void settle_cycle(const Inputs& inputs, HeldPeriod& out, Diagnostics& problems) {
  for (std::size_t s = 0; s < out.local.signals.size(); ++s)
    if (out.local.signals[s].operation != Operation::free) out.candidate.cycle_s = std::max(out.candidate.cycle_s, out.candidate.signals[s].cycle_s);
  for (std::size_t s = 0; s < out.local.signals.size(); ++s) {
    const int own = out.candidate.signals[s].cycle_s;
    if (out.local.signals[s].operation == Operation::free || own == out.candidate.cycle_s || 2 * own == out.candidate.cycle_s) continue;
    problems.push_back(error(inputs.tables.timing_source, fmt::format("{} runs at {} s, others at {} s", out.local.signals[s].design.signal, own, out.candidate.cycle_s), "one cycle length, or its exact half",
                             "Hold one pattern at a time, or say operation = free in the signals table"));
  }
}

HeldPeriod hold_period(const Inputs& inputs, std::size_t period, Diagnostics& problems) {
  HeldPeriod out;
  const LocalTiming designed = designs_of(inputs, out.notes);
  out.local.demands = designed.demands;
  out.local.planned_of_network.assign(inputs.network.signals.size(), -1);
  out.candidate.period = period;
  for (std::size_t s = 0; s < inputs.network.signals.size(); ++s) {
    if (inputs.network.signals[s].pedestrian_only) continue;
    const int index = designed.planned_of_network[s];
    const bool has_geometry = index >= 0 && !inputs.network.signals[s].legs.empty();
    static const demand::SignalDemand nothing;
    const demand::SignalDemand& demand = period < designed.demands.size() ? designed.demands[period].signals[s] : nothing;
    auto held = held_signal(inputs, s, period, has_geometry ? &designed.signals[static_cast<std::size_t>(index)] : nullptr, demand);
    if (!held) {
      append(problems, held.error());
      continue;
    }
    append(out.notes, std::move(held->notes));
    take(std::move(held->value), s, out);
  }
  if (problems.empty()) settle_cycle(inputs, out, problems);
  return out;
}

CyclePlan plan_of(const Inputs& inputs, const HeldPeriod& held, const DraftOptions& options) {
  CoordinateOptions how = options.coordinate;
  how.want_certificate = true;
  if (options.hold == Hold::greens) return complete_plan(inputs, held.local, held.candidate, how);
  return complete_plan_as_it_runs(inputs, held.local, held.candidate, held.running);
}

}  // namespace

tl::expected<Noted<Draft>, DraftProblem> draft_held(const Inputs& inputs, const DraftOptions& options) {
  Draft draft;
  Diagnostics problems, notes;
  for (std::size_t period = 0; period < inputs.project.periods.size(); ++period) {
    const std::string& id = inputs.project.periods[period].id;
    if (!options.periods.empty() && std::find(options.periods.begin(), options.periods.end(), id) == options.periods.end()) continue;
    HeldPeriod held = hold_period(inputs, period, problems);
    if (!problems.empty()) continue;
    CyclePlan row = plan_of(inputs, held, options);
    row.plan.cycle_reason = options.hold == Hold::all ? "the timing that runs, as the timing table gives it" : "cycle, greens and clearances as they run; offsets alone are new";
    for (const Diagnostic& d : held.notes) row.plan.assumptions.push_back(d.where + ": " + d.found);
    if (!held.offsets_whole) row.plan.assumptions.push_back("running offsets converted to begin of green were rounded to whole seconds");
    append(notes, std::move(held.notes));
    draft.reasons.push_back(row.plan.cycle_reason);
    draft.plans.push_back(std::move(row));
  }
  if (!problems.empty()) return tl::unexpected(DraftProblem{std::move(problems), false});
  return Noted<Draft>{std::move(draft), std::move(notes)};
}

}  // namespace entrain::drafting
