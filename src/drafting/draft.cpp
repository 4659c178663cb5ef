#include "drafting/draft.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <set>

#include "drafting/greens.hpp"
#include "drafting/hold.hpp"

namespace entrain::drafting {
namespace {

bool is_wanted(const DraftOptions& options, const std::string& period) {
  return options.periods.empty() || std::find(options.periods.begin(), options.periods.end(), period) != options.periods.end();
}

Diagnostics unknown_periods(const Inputs& inputs, const DraftOptions& options) {
  Diagnostics problems;
  std::string known;
  for (const auto& period : inputs.project.periods) known += (known.empty() ? "" : ", ") + period.id;
  for (const std::string& wanted : options.periods) {
    const bool found = std::any_of(inputs.project.periods.begin(), inputs.project.periods.end(), [&](const auto& period) { return period.id == wanted; });
    if (!found) problems.push_back(error("--period", wanted, "one of " + known, "Name a period of the project"));
  }
  return problems;
}

// Every reason once, with the cycles it stands against; what would do is part of the reasons.
Diagnostics clashes_of(const Sweep& sweep, const std::string& where) {
  Diagnostics problems;
  std::set<std::string> said;
  for (auto row = sweep.rows.rbegin(); row != sweep.rows.rend(); ++row)
    for (const Diagnostic& d : row->why_not)
      if (said.insert(d.where + d.expected).second) problems.push_back(error(fmt::format("{}, cycle {} s, {}", where, row->cycle_s, d.where), d.found, d.expected, d.mend));
  return problems;
}

void add_assumptions(const Inputs& inputs, const LocalTiming& local, const Diagnostics& notes, plan::Plan& plan) {
  for (const auto& use : inputs.network.defaults) plan.assumptions.push_back(fmt::format("ASSUMED {} times: {} = {}", use.times, use.what, use.value));
  if (inputs.network.traffic_side_assumed) plan.assumptions.push_back("ASSUMED: traffic keeps right");
  for (const Diagnostic& d : notes) plan.assumptions.push_back(d.where.empty() ? d.found : d.where + ": " + d.found);
  for (const PlannedSignal& planned : local.signals)
    for (const std::string& text : planned.design.assumptions)
      plan.assumptions.push_back(inputs.network.signals[static_cast<std::size_t>(planned.network_signal)].id + ": " + text);
  std::vector<std::string> unique;
  std::set<std::string> said;
  for (std::string& text : plan.assumptions)
    if (said.insert(text).second) unique.push_back(std::move(text));
  plan.assumptions = std::move(unique);
}

struct Drafting {
  const Inputs& inputs;
  const DraftOptions& options;
  const std::function<void(int, int)>& progress;
  LocalTiming local;
  Diagnostics notes;
};

bool draft_period(Drafting& work, std::size_t period, Draft& draft, Diagnostics& problems) {
  const auto& id = work.inputs.project.periods[period].id;
  const auto cycles = work.options.cycle_s ? std::vector<int>{*work.options.cycle_s} : cycles_of(work.inputs.project.periods[period].cycle);
  Sweep sweep = sweep_cycles(work.inputs, work.local, period, cycles, work.options.coordinate, work.progress);
  if (sweep.recommended < 0) {
    append(problems, clashes_of(sweep, "period " + id));
    return false;
  }
  CoordinateOptions full = work.options.coordinate;
  full.want_certificate = true;
  finish_row(work.inputs, work.local, period, full, sweep.recommended, sweep);
  CyclePlan& chosen = sweep.rows[static_cast<std::size_t>(sweep.recommended)];
  chosen.plan.cycle_reason = sweep.reason;
  add_assumptions(work.inputs, work.local, work.notes, chosen.plan);
  draft.plans.push_back(std::move(chosen));
  draft.reasons.push_back(sweep.reason);
  return true;
}

}  // namespace

std::vector<int> cycles_of(const project::CycleRange& range) {
  std::vector<int> cycles;
  for (int cycle = range.minimum_s; cycle <= range.maximum_s; cycle += std::max(1, range.step_s)) cycles.push_back(cycle);
  return cycles;
}

tl::expected<Noted<Draft>, DraftProblem> draft(const Inputs& inputs, const DraftOptions& options, const std::function<void(int, int)>& progress) {
  Diagnostics problems = unknown_periods(inputs, options);
  if (inputs.project.periods.empty())
    problems.push_back(error(inputs.project.file, "no [[period]]", "at least one period with an id and a cycle range", "Add a [[period]] table, e.g. id = \"am\""));
  if (!problems.empty()) return tl::unexpected(DraftProblem{std::move(problems), false});
  if (options.hold != Hold::nothing) return draft_held(inputs, options);
  auto local = local_timing(inputs);
  if (!local) return tl::unexpected(DraftProblem{local.error(), false});
  Drafting work{inputs, options, progress, std::move(local->value), std::move(local->notes)};
  Draft draft;
  bool fits = true;
  for (std::size_t period = 0; period < inputs.project.periods.size(); ++period)
    if (is_wanted(options, inputs.project.periods[period].id)) fits = draft_period(work, period, draft, problems) && fits;
  if (!fits) return tl::unexpected(DraftProblem{std::move(problems), true});
  return Noted<Draft>{std::move(draft), std::move(work.notes)};
}

}  // namespace entrain::drafting
