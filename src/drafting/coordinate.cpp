#include "drafting/coordinate.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "coordination/bands/evaluate.hpp"
#include "coordination/bands/solve.hpp"
#include "drafting/band_problem.hpp"
#include "drafting/delay_problem.hpp"
#include "drafting/keep_bands.hpp"
#include "drafting/running.hpp"

namespace entrain::drafting {
namespace {

// Orders and offsets before any band is thought of: the fairest order, offset 0 or what is fixed.
void start_from_fixed(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, Coordination& out) {
  out.order.assign(local.signals.size(), 0);
  out.offset_s.assign(local.signals.size(), 0);
  out.freedom_s.assign(local.signals.size(), std::nullopt);
  for (std::size_t s = 0; s < local.signals.size(); ++s) {
    if (!local.signals[s].offset_fixed) continue;
    const auto offset = running_offset_s(inputs, local.signals[s], candidate.period, candidate.signals[s], 0);
    const auto& id = inputs.network.signals[static_cast<std::size_t>(local.signals[s].network_signal)].id;
    if (offset) out.offset_s[s] = static_cast<int>(std::lround(*offset)) % candidate.signals[s].cycle_s;
    else out.remarks.push_back(fmt::format("{}: its offset is to stay, but the timing table does not say which it is; it was set to 0", id));
  }
}

void take_answer(const BandProblem& bands, const bands::Answer& answer, Coordination& out) {
  for (std::size_t i = 0; i < bands.signal_of_station.size(); ++i) {
    const auto s = static_cast<std::size_t>(bands.signal_of_station[i]);
    out.order[s] = answer.stations[i].option;
    out.offset_s[s] = static_cast<int>(std::lround(answer.stations[i].offset_s));
  }
}

std::vector<int> options_of(const BandProblem& bands, const Coordination& out) {
  std::vector<int> options;
  for (const int s : bands.signal_of_station) options.push_back(out.order[static_cast<std::size_t>(s)]);
  return options;
}

std::vector<double> offsets_of(const BandProblem& bands, const Coordination& out) {
  std::vector<double> offsets;
  for (const int s : bands.signal_of_station) offsets.push_back(out.offset_s[static_cast<std::size_t>(s)]);
  return offsets;
}

// Claims are what the offsets on the street give, evaluated anew; the bound is the best of the whole problem.
void claim(const BandProblem& bands, const bands::Answer& best, const std::vector<plan::Corridor>& corridors, Coordination& out) {
  out.bands.resize(corridors.size());
  for (std::size_t c = 0; c < corridors.size(); ++c) out.bands[c].resize(corridors[c].directions.size());
  const auto achieved = bands::evaluate_bands(bands.problem, options_of(bands, out), offsets_of(bands, out));
  if (!achieved) return;
  for (std::size_t c = 0; c < bands.corridor.size(); ++c)
    for (std::size_t d = 0; d < bands.direction[c].size(); ++d) {
      const bands::DirectionAnswer& from = achieved->corridors[c].directions[d];
      DirectionBand& to = out.bands[bands.corridor[c]][bands.direction[c][d]];
      to.bandwidth_s = from.width_s;
      to.start_s = from.start_s;
      to.least_green_s = from.least_window_s;
      to.bound_s = best.corridors.empty() ? from.width_s : std::max(best.corridors[c].directions[d].bound_s, from.width_s);
    }
  for (std::size_t i = 0; i < bands.signal_of_station.size(); ++i)
    out.freedom_s[static_cast<std::size_t>(bands.signal_of_station[i])] = {achieved->stations[i].early_s, achieved->stations[i].late_s};
}

void remark_bands(const BandProblem& bands, const bands::Answer& best, const std::vector<plan::Corridor>& corridors, Coordination& out) {
  for (std::size_t c = 0; c < bands.corridor.size(); ++c) {
    const auto& corridor = corridors[bands.corridor[c]];
    const bands::CorridorAnswer& answer = best.corridors[c];
    if (!answer.all_directions)
      out.remarks.push_back(fmt::format("{}: NO BAND in every direction at once at a cycle of {} s with these greens; the widest single one was taken", corridor.name,
                                        number_text(bands.problem.cycle_s)));
    if (best.corridors.size() > 1 && answer.own_best_share_s > 0 && answer.share_s < answer.own_best_share_s - 1.05)
      out.remarks.push_back(fmt::format("{}: gives up band to the other corridors at shared signals: share {} s of {} s it would have alone", corridor.name,
                                        number_text(answer.share_s, 1), number_text(answer.own_best_share_s, 1)));
  }
  for (const Diagnostic& d : best.notes) out.remarks.push_back(d.found);
}

}  // namespace

void claim_running_bands(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Corridor>& corridors, Coordination& running) {
  const BandProblem bands = band_problem(inputs, local, candidate, corridors);
  if (!bands.problem.corridors.empty()) claim(bands, {}, corridors, running);
}

Coordination coordinate(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Link>& links,
                        const std::vector<plan::Corridor>& corridors, const CoordinateOptions& options) {
  Coordination out;
  start_from_fixed(inputs, local, candidate, out);
  const BandProblem bands = band_problem(inputs, local, candidate, corridors);
  bands::Answer best;
  if (!bands.problem.corridors.empty()) {
    auto answer = bands::solve_joint_whole_seconds(bands.problem);
    if (answer) best = std::move(*answer);
    else for (const Diagnostic& d : answer.error()) out.remarks.push_back(to_text(d));
    if (answer) take_answer(bands, best, out);
  }
  const bool has_bands = !best.corridors.empty();
  minimise_delay(inputs, local, candidate, links, bands, has_bands ? &best : nullptr, options, out);
  if (has_bands) {
    claim(bands, best, corridors, out);
    remark_bands(bands, best, corridors, out);
  } else {
    out.bands.resize(corridors.size());
    for (std::size_t c = 0; c < corridors.size(); ++c) out.bands[c].resize(corridors[c].directions.size());
  }
  return out;
}

}  // namespace entrain::drafting
