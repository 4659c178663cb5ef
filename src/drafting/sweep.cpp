#include "drafting/sweep.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <atomic>
#include <cmath>
#include <mutex>
#include <thread>

#include "base/number_text.hpp"
#include "drafting/assemble.hpp"
#include "drafting/coordinate.hpp"
#include "drafting/greens.hpp"
#include "drafting/running.hpp"

namespace entrain::drafting {
namespace {

constexpr double sweep_effort = 0.25;  // of the search for one plan, where cycles are only compared
constexpr double near_share = 0.03;  // scores this close are told apart by their bands

void rate(CyclePlan& row) {
  const auto& total = row.evaluation.total;
  double flow_vph = 0;
  for (const auto& figures : row.evaluation.lane_groups) flow_vph += figures.flow_vph;
  const double stops = flow_vph > 0 ? total.stops_per_h / flow_vph : 0;
  row.score_s = total.delay_s_per_vehicle + row.plan.cost_model.stop_weight_s * stops;
  double efficiency = 0;
  int directions = 0;
  for (const auto& corridor : row.plan.corridors)
    for (const auto& direction : corridor.directions) {
      efficiency += direction.efficiency;
      ++directions;
      row.two_way = row.two_way && (direction.weight <= 0 || direction.bandwidth_s > 0);
    }
  row.band_efficiency = directions > 0 ? efficiency / directions : 0;
}

void claim_measures(CyclePlan& row) {
  row.plan.measures = row.evaluation.total;
}

std::string labels_of(const Diagnostics& problems) {
  std::string text;
  for (const Diagnostic& d : problems) {
    if (!text.empty()) text += "; ";
    text += d.where + ": " + d.found;
  }
  return text;
}

// Keeps the rows for which `figure` is least, up to `slack`.
template <class Figure>
void keep_least(const Sweep& sweep, std::vector<int>& rows, double slack, Figure figure) {
  double least = INFINITY;
  const auto value = [&](int i) { return figure(sweep.rows[static_cast<std::size_t>(i)]); };
  for (const int i : rows) least = std::min(least, value(i));
  rows.erase(std::remove_if(rows.begin(), rows.end(), [&](int i) { return value(i) > least + slack; }), rows.end());
}

// Target degree of saturation held, or the least over it; every band there; least score, up to near_share; widest bands; shortest.
int best_row(const Sweep& sweep, double target, int except) {
  std::vector<int> rows;
  for (int i = 0; i < static_cast<int>(sweep.rows.size()); ++i)
    if (sweep.rows[static_cast<std::size_t>(i)].fits && i != except) rows.push_back(i);
  if (rows.empty()) return -1;
  keep_least(sweep, rows, 0.01, [&](const CyclePlan& row) { return std::max(target, row.evaluation.total.worst_degree_of_saturation); });
  keep_least(sweep, rows, 0, [](const CyclePlan& row) { return row.two_way ? 0.0 : 1.0; });
  double least = INFINITY;
  for (const int i : rows) least = std::min(least, sweep.rows[static_cast<std::size_t>(i)].score_s);
  keep_least(sweep, rows, near_share * least, [](const CyclePlan& row) { return row.score_s; });
  keep_least(sweep, rows, 0.005, [](const CyclePlan& row) { return -row.band_efficiency; });
  return rows.front();
}

std::string row_text(const CyclePlan& row) {
  return fmt::format("{} s (delay {} s and {} s with stops a vehicle, mean band efficiency {} %, worst degree of saturation {})", row.cycle_s,
                     fixed_text(row.evaluation.total.delay_s_per_vehicle, 1), fixed_text(row.score_s, 1), fixed_text(100 * row.band_efficiency, 1),
                     fixed_text(row.evaluation.total.worst_degree_of_saturation, 2));
}

std::string reason_of(const Sweep& sweep, double target, const std::string& critical) {
  const auto fitting = std::count_if(sweep.rows.begin(), sweep.rows.end(), [](const CyclePlan& row) { return row.fits; });
  const CyclePlan& chosen = sweep.rows[static_cast<std::size_t>(sweep.recommended)];
  const bool over = chosen.evaluation.total.worst_degree_of_saturation > target + 1e-9;
  std::string text = fmt::format("{} of {} cycle lengths fit every minimum; {}. Chosen: {}", fitting, sweep.rows.size(), critical, row_text(chosen));
  text += over ? fmt::format(", the least saturated of them, since none holds the target degree of saturation {} everywhere", fixed_text(target, 2))
               : fmt::format(", the least delay with stops among those that hold the target degree of saturation {}{} (scores within {} % are told apart by their bands)",
                             fixed_text(target, 2), chosen.two_way ? " and have every band" : "", number_text(100 * near_share));
  if (sweep.runner_up >= 0) text += fmt::format(". Second: {}", row_text(sweep.rows[static_cast<std::size_t>(sweep.runner_up)]));
  if (std::fabs(std::remainder(86400.0, chosen.cycle_s)) > 1e-9) text += ". This cycle does not divide the day of 86,400 s";
  return text + ".";
}

std::string critical_text(const Inputs& inputs, const LocalTiming& local, std::size_t period) {
  const auto needs = cycle_needs(inputs, local, period);
  if (!needs || needs->empty()) return "no signal sets a least cycle";
  const auto highest = std::max_element(needs->begin(), needs->end(), [](const CycleNeed& a, const CycleNeed& b) { return a.critical.minimum_s < b.critical.minimum_s; });
  std::string text = fmt::format("the minimums of {} need {} s", highest->signal, highest->critical.minimum_s);
  const auto full = std::max_element(needs->begin(), needs->end(), [](const CycleNeed& a, const CycleNeed& b) { return a.critical.saturation_minimum_s < b.critical.saturation_minimum_s; });
  if (full->critical.saturation_minimum_s > 0) text += fmt::format(", the flows of {} need {} s", full->signal, full->critical.saturation_minimum_s);
  return text;
}

CyclePlan plan_cycle(const Inputs& inputs, const LocalTiming& local, std::size_t period, int cycle_s, const CoordinateOptions& options) {
  auto candidate = greens_at(inputs, local, period, cycle_s);
  if (candidate) return complete_plan(inputs, local, *candidate, options);
  CyclePlan row;
  row.cycle_s = cycle_s;
  row.why_not = std::move(candidate.error());
  return row;
}

// Runs `work(i)` for i = 0 .. n-1 on some threads; every i writes its own place, so the order of running changes nothing.
template <class Work>
void for_each_index(std::size_t n, int threads, Work work) {
  std::atomic<std::size_t> next{0};
  const auto loop = [&] {
    for (std::size_t i; (i = next.fetch_add(1)) < n;) work(i);
  };
  std::vector<std::thread> others;
  for (int t = 1; t < std::min<int>(threads, static_cast<int>(n)); ++t) others.emplace_back(loop);
  loop();
  for (std::thread& other : others) other.join();
}

}  // namespace

namespace {

CyclePlan rated_plan(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const Coordination& coordination) {
  CyclePlan row;
  row.cycle_s = candidate.cycle_s;
  row.fits = true;
  row.plan = assemble(inputs, local, candidate, coordination);
  put_running(inputs, local, candidate.period, row.plan);
  row.evaluation = evaluation::evaluate(row.plan);
  for (const std::string& remark : coordination.remarks) row.plan.assumptions.push_back(remark);
  claim_measures(row);
  rate(row);
  return row;
}

}  // namespace

CyclePlan complete_plan(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const CoordinateOptions& options) {
  const auto links = plan_links(inputs, local, candidate.period);
  const auto corridors = plan_corridors(inputs, local, candidate.period);
  const Coordination coordination = coordinate(inputs, local, candidate, links, corridors, options);
  CyclePlan row = rated_plan(inputs, local, candidate, coordination);
  row.certificate = coordination.certificate;
  row.problem = coordination.problem;
  if (!coordination.has_delay_cost) return row;
  const double value = coordination.delay_cost, bound = coordination.delay_bound;
  const std::string objective = corridors.empty() || options.keep_band <= 0 ? "delay" : "band, then delay";
  row.plan.quality = plan::Quality{objective, value, bound, bound > 0 ? (value - bound) / bound : (value > 0 ? 1.0 : 0.0), {}};
  if (!coordination.certificate.empty()) row.plan.quality->certificate = "plan.cert";
  return row;
}

CyclePlan complete_plan_as_it_runs(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, Coordination running) {
  claim_running_bands(inputs, local, candidate, plan_corridors(inputs, local, candidate.period), running);
  return rated_plan(inputs, local, candidate, running);
}

Sweep sweep_cycles(const Inputs& inputs, const LocalTiming& local, std::size_t period, const std::vector<int>& cycles, const CoordinateOptions& options,
                   const std::function<void(int, int)>& progress) {
  Sweep sweep;
  sweep.rows.resize(cycles.size());
  std::mutex told;
  int finished = 0;
  for_each_index(cycles.size(), options.threads, [&](std::size_t i) {
    CoordinateOptions single = options;
    single.threads = 1;
    single.effort = options.effort * sweep_effort;
    single.want_certificate = false;
    sweep.rows[i] = plan_cycle(inputs, local, period, cycles[i], single);
    const std::lock_guard<std::mutex> lock(told);
    if (progress) progress(++finished, static_cast<int>(cycles.size()));
  });
  const double target = inputs.standard.value("target_saturation");
  sweep.recommended = best_row(sweep, target, -1);
  if (sweep.recommended >= 0) {
    sweep.runner_up = best_row(sweep, target, sweep.recommended);
    sweep.reason = reason_of(sweep, target, critical_text(inputs, local, period));
  } else {
    sweep.reason = sweep.rows.empty() ? "no cycle length was asked for" : "no cycle length fits: " + labels_of(sweep.rows.back().why_not);
  }
  return sweep;
}

void finish_row(const Inputs& inputs, const LocalTiming& local, std::size_t period, const CoordinateOptions& options, int index, Sweep& sweep) {
  CyclePlan& row = sweep.rows[static_cast<std::size_t>(index)];
  row = plan_cycle(inputs, local, period, row.cycle_s, options);
  if (index == sweep.recommended) sweep.reason = reason_of(sweep, inputs.standard.value("target_saturation"), critical_text(inputs, local, period));
}

}  // namespace entrain::drafting
