#include "drafting/band_problem.hpp"

#include <map>

#include "drafting/delay_problem.hpp"
#include "drafting/running.hpp"

namespace entrain::drafting {
namespace {

bands::Station station_of(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, std::size_t s) {
  const SignalGreens& greens = candidate.signals[s];
  bands::Station station;
  station.option_count = static_cast<int>(greens.orders.size());
  station.half_period = greens.cycle_s * 2 == candidate.cycle_s;
  if (local.signals[s].offset_fixed) station.fixed_offset_s = running_offset_s(inputs, local.signals[s], candidate.period, greens, 0);
  return station;
}

std::vector<std::vector<bands::Window>> windows_of(const timing::SignalDesign& design, const SignalGreens& greens, std::size_t group, int cycle_s) {
  std::vector<std::vector<bands::Window>> by_option;
  for (std::size_t order = 0; order < greens.orders.size(); ++order) {
    auto& windows = by_option.emplace_back();
    for (const traffic::GreenTime& green : stream_of(design, greens, static_cast<int>(order), group, cycle_s).greens) windows.push_back({green.start_s, green.duration_s});
  }
  return by_option;
}

std::size_t group_of(const timing::SignalDesign& design, const std::string& id) {
  std::size_t g = 0;
  while (g + 1 < design.groups.size() && design.groups[g].id != id) ++g;
  return g;
}

struct Builder {
  const Inputs& inputs;
  const LocalTiming& local;
  const Candidate& candidate;
  std::map<std::string, std::size_t> signal_index;
  BandProblem out;

  int station(std::size_t signal) {
    int& index = out.station_of_signal[signal];
    if (index >= 0) return index;
    index = static_cast<int>(out.problem.stations.size());
    out.problem.stations.push_back(station_of(inputs, local, candidate, signal));
    out.signal_of_station.push_back(static_cast<int>(signal));
    return index;
  }

  bands::Direction direction(const plan::Direction& from) {
    bands::Direction to;
    to.weight = from.weight;
    for (const plan::Stop& stop : from.stops) {
      const std::size_t s = signal_index.at(stop.signal);
      const auto& design = local.signals[s].design;
      const auto windows = windows_of(design, candidate.signals[s], group_of(design, stop.group), candidate.cycle_s);
      to.stops.push_back({station(s), to.stops.empty() ? 0.0 : stop.travel_time_s, stop.queue_clearance_s, windows});
    }
    return to;
  }
};

}  // namespace

BandProblem band_problem(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Corridor>& corridors) {
  Builder builder{inputs, local, candidate, {}, {}};
  for (std::size_t s = 0; s < local.signals.size(); ++s) builder.signal_index[inputs.network.signals[static_cast<std::size_t>(local.signals[s].network_signal)].id] = s;
  builder.out.problem.cycle_s = candidate.cycle_s;
  builder.out.station_of_signal.assign(local.signals.size(), -1);
  for (std::size_t c = 0; c < corridors.size(); ++c) {
    bands::Corridor corridor;
    std::vector<std::size_t> kept;
    for (std::size_t d = 0; d < corridors[c].directions.size(); ++d) {
      if (corridors[c].directions[d].stops.empty()) continue;
      corridor.directions.push_back(builder.direction(corridors[c].directions[d]));
      kept.push_back(d);
    }
    if (corridor.directions.empty()) continue;
    builder.out.problem.corridors.push_back(std::move(corridor));
    builder.out.corridor.push_back(c);
    builder.out.direction.push_back(std::move(kept));
  }
  return std::move(builder.out);
}

}  // namespace entrain::drafting
