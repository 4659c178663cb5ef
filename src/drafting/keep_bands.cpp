#include "drafting/keep_bands.hpp"

#include <algorithm>
#include <cmath>

#include "base/circle.hpp"
#include "coordination/bands/evaluate.hpp"
#include "drafting/delay_problem.hpp"
#include "drafting/offset_search.hpp"

namespace entrain::drafting {
namespace {

constexpr double slack_s = 1e-6;  // of an arc's end against a whole second

// Signals become nodes 0 .. n-1 in order; every band's leading edge becomes a node behind them.
struct Build {
  const BandProblem& bands;
  const Candidate& candidate;
  OffsetSearch search;
  std::vector<int> node_of_signal;
};

void add_signals(const LocalTiming& local, const Coordination& start, Build& build) {
  build.node_of_signal.assign(local.signals.size(), -1);
  for (std::size_t s = 0; s < local.signals.size(); ++s) {
    const bool in_step = build.candidate.signals[s].cycle_s == build.candidate.cycle_s || 2 * build.candidate.signals[s].cycle_s == build.candidate.cycle_s;
    if (local.signals[s].operation == Operation::free || !in_step) continue;
    build.node_of_signal[s] = static_cast<int>(build.search.start.size());
    build.search.start.push_back(start.offset_s[s]);
    build.search.fixed.push_back(local.signals[s].offset_fixed);
  }
}

void add_delays(const std::vector<DelayEdge>& edges, Build& build) {
  for (const DelayEdge& edge : edges) {
    const int from = build.node_of_signal[static_cast<std::size_t>(edge.from)], to = build.node_of_signal[static_cast<std::size_t>(edge.to)];
    if (from >= 0 && to >= 0 && from != to) build.search.edges.push_back({from, to, edge.costs});
  }
}

// Costs 0 where the stop's station may lie relative to the band's edge node, forbidden elsewhere.
std::vector<std::int64_t> arc_table(const std::vector<bands::OffsetArc>& arcs, double fraction, int cycle_s, bool half_period) {
  std::vector<std::int64_t> table(static_cast<std::size_t>(cycle_s), OffsetSearch::forbidden);
  const int period = half_period ? cycle_s / 2 : cycle_s;
  for (const bands::OffsetArc& arc : arcs) {
    if (arc.everywhere) return std::vector<std::int64_t>(static_cast<std::size_t>(cycle_s), 0);
    const auto first = static_cast<std::int64_t>(std::ceil(arc.start_s + fraction - slack_s));
    const auto last = static_cast<std::int64_t>(std::floor(arc.start_s + arc.length_s + fraction + slack_s));
    for (std::int64_t d = first; d <= std::min(last, first + period - 1); ++d)
      for (int shift = 0; shift < cycle_s; shift += period) table[static_cast<std::size_t>(wrap(d + shift, std::int64_t{cycle_s}))] = 0;
  }
  return table;
}

void add_band(std::size_t corridor, std::size_t direction, const bands::DirectionAnswer& answer, const std::vector<int>& options, double keep, Build& build) {
  const auto arcs = bands::admissible_offsets(build.bands.problem, static_cast<int>(corridor), static_cast<int>(direction), options, keep * answer.width_s);
  if (!arcs) return;
  const int node = static_cast<int>(build.search.start.size());
  const double whole = std::floor(answer.start_s + slack_s);
  build.search.start.push_back(static_cast<int>(wrap(static_cast<std::int64_t>(whole), std::int64_t{build.candidate.cycle_s})));
  build.search.fixed.push_back(false);
  const auto& stops = build.bands.problem.corridors[corridor].directions[direction].stops;
  for (std::size_t i = 0; i < stops.size(); ++i) {
    const auto signal = static_cast<std::size_t>(build.bands.signal_of_station[static_cast<std::size_t>(stops[i].station)]);
    const bool half = build.bands.problem.stations[static_cast<std::size_t>(stops[i].station)].half_period;
    if (build.node_of_signal[signal] >= 0)
      build.search.edges.push_back({node, build.node_of_signal[signal], arc_table((*arcs)[i], answer.start_s - whole, build.candidate.cycle_s, half)});
  }
}

void add_bands(const bands::Answer& best, double keep, const Coordination& start, Build& build) {
  std::vector<int> options;
  std::vector<double> offsets;
  for (const int s : build.bands.signal_of_station) {
    options.push_back(start.order[static_cast<std::size_t>(s)]);
    offsets.push_back(start.offset_s[static_cast<std::size_t>(s)]);
  }
  const auto achieved = bands::evaluate_bands(build.bands.problem, options, offsets);
  if (!achieved) return;
  for (std::size_t c = 0; c < best.corridors.size(); ++c)
    for (std::size_t d = 0; d < best.corridors[c].directions.size(); ++d)
      if (achieved->corridors[c].directions[d].width_s > slack_s) add_band(c, d, achieved->corridors[c].directions[d], options, keep, build);
}

}  // namespace

void minimise_delay(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Link>& links, const BandProblem& bands,
                    const bands::Answer* best, const CoordinateOptions& options, Coordination& out) {
  Build build{bands, candidate, {}, {}};
  build.search.cycle = candidate.cycle_s;
  add_signals(local, out, build);
  add_delays(delay_edges(inputs, local, candidate, links, out.order), build);
  if (build.search.edges.empty()) return;
  if (best != nullptr && options.keep_band > 0) add_bands(*best, options.keep_band, out, build);
  const OffsetSearchAnswer answer = search_offsets(build.search, options);
  out.has_delay_cost = answer.solved;
  out.delay_cost = static_cast<double>(answer.value);
  out.delay_bound = static_cast<double>(answer.bound);
  out.certificate = answer.certificate;
  out.problem = answer.problem;
  for (std::size_t s = 0; s < local.signals.size(); ++s)
    if (build.node_of_signal[s] >= 0) out.offset_s[s] = answer.labels[static_cast<std::size_t>(build.node_of_signal[s])] % candidate.signals[s].cycle_s;
}

}  // namespace entrain::drafting
