#include "coordination/bands/cycle_scan.hpp"

#include <algorithm>
#include <cmath>

#include "coordination/bands/compiled.hpp"
#include "coordination/bands/solve.hpp"
#include "coordination/bands/sweep.hpp"

namespace entrain::bands {
namespace {

constexpr double most_steps = 1e6;

// A window of each direction, as shares of the cycle, before queue clearance.
struct ScaledPair {
  double g = 0, h = 0;
  double phase = 0;  // backward start + duration - forward start
  bool first_open = false, second_open = false;
};

struct ScaledStation {
  double travel_s = 0;  // T forward from the first station + T backward to it
  Tick first_clearance = 0, second_clearance = 0;
  bool half_period = false;
  int begin = 0, end = 0;
};

class CycleScan {
 public:
  CycleScan(const TwoWayInput& input, const Compiled& compiled) : m_input(input) {
    double travel_s = 0;
    for (std::size_t s = 0; s < input.stations.size(); ++s) {
      if (s > 0) travel_s += input.forward_travel_s[s - 1] + input.backward_travel_s[s - 1];
      add_station(input.stations[s], compiled.stations[s], travel_s, to_seconds(compiled.cycle));
    }
  }

  double share(double cycle_s) {
    const Tick cycle = to_ticks(cycle_s) / 2 * 2;
    double share = 0;
    return quick(cycle, share) ? share : careful(cycle_s);
  }

 private:
  void add_station(const TwoWayStation& station, const CompiledStation& compiled, double travel_s, double cycle_s) {
    const double scale = 1 / cycle_s / static_cast<double>(ticks_per_second);
    const int begin = static_cast<int>(m_pairs.size());
    for (const int o : compiled.options)
      for (const Slot& a : compiled.visits[0].slots[static_cast<std::size_t>(o)])
        for (const Slot& b : compiled.visits[1].slots[static_cast<std::size_t>(o)])
          m_pairs.push_back({static_cast<double>(a.duration) * scale, static_cast<double>(b.duration) * scale,
                             static_cast<double>(b.start + b.duration - a.start) * scale, a.open, b.open});
    m_stations.push_back({travel_s, to_ticks(station.forward_clearance_s), to_ticks(station.backward_clearance_s),
                          station.half_period, begin, static_cast<int>(m_pairs.size())});
  }

  // The peak over all pairs of windows; false where a pair too narrow for the share may have made it.
  bool quick(Tick cycle, double& share) {
    m_sweep_stations.clear();
    m_terms.clear();
    double cap = static_cast<double>(unlimited), narrowest = cap;
    for (const ScaledStation& station : m_stations) {
      double best = -1;
      if (!add_terms(station, cycle, best, narrowest)) return share = 0, true;
      cap = std::min(cap, best);
    }
    const Peak peak = m_sweep.highest(m_sweep_stations, m_terms, cycle);
    const double t =
        std::min(cap, static_cast<double>(peak.value) / (m_input.forward_weight + m_input.backward_weight));
    share = std::max(0.0, t / static_cast<double>(ticks_per_second));
    return t <= narrowest || t <= 0;
  }

  bool add_terms(const ScaledStation& station, Tick cycle, double& best, double& narrowest) {
    const Tick period = station.half_period ? cycle / 2 : cycle;
    const Tick shift = wrap(to_ticks(station.travel_s), period);
    const auto length = static_cast<double>(cycle);
    const int begin = static_cast<int>(m_terms.size());
    bool any = false, open = false;
    for (int p = station.begin; p < station.end; ++p) {
      const ScaledPair& pair = m_pairs[static_cast<std::size_t>(p)];
      const Tick g = static_cast<Tick>(pair.g * length + 0.5) - (pair.first_open ? 0 : station.first_clearance);
      const Tick h = static_cast<Tick>(pair.h * length + 0.5) - (pair.second_open ? 0 : station.second_clearance);
      if (g <= 0 || h <= 0) continue;
      const double own = std::min(limit(g, m_input.forward_weight), limit(h, m_input.backward_weight));
      best = std::max(best, own);
      narrowest = std::min(narrowest, own);
      any = true;
      open = open || pair.first_open || pair.second_open;
      // Clearance moves the forward start; the backward end stays.
      Tick c = shift + static_cast<Tick>(pair.phase * length + 0.5 * (pair.phase < 0 ? -1 : 1)) -
               (pair.first_open ? 0 : station.first_clearance);
      m_terms.push_back({wrap(c, period), g + h});
    }
    if (open)
      m_terms.resize(static_cast<std::size_t>(begin));
    else if (any)
      m_sweep_stations.push_back({period, begin, static_cast<int>(m_terms.size())});
    return any;
  }

  static double limit(Tick length, double weight) {
    return weight == 1 ? static_cast<double>(length) : static_cast<double>(length) / weight;
  }

  double careful(double cycle_s) const {
    TwoWayInput scaled = m_input;
    const double scale = cycle_s / m_input.cycle_s;
    scaled.cycle_s = cycle_s;
    for (TwoWayStation& station : scaled.stations) {
      station.fixed_offset_s.reset();
      for (StationOption& option : station.options)
        for (auto* windows : {&option.forward, &option.backward})
          for (Window& window : *windows)
            window.start_s *= scale, window.duration_s = std::min(cycle_s, window.duration_s * scale);
    }
    const auto answer = solve_two_way(scaled);
    return answer ? answer->corridors[0].share_s : 0;
  }

  const TwoWayInput& m_input;
  std::vector<ScaledStation> m_stations;
  std::vector<ScaledPair> m_pairs;
  std::vector<SweepStation> m_sweep_stations;
  std::vector<SweepTerm> m_terms;
  Sweep m_sweep;
};

Diagnostics check_steps(const TwoWayInput& input, const CycleSteps& steps) {
  Diagnostics found;
  if (!(steps.from_s >= 0.001) || !(steps.to_s >= steps.from_s) || !(steps.to_s <= 100'000.0))
    found.push_back(error("cycle range", "from and to", "0.001 <= from <= to <= 100000 s",
                          "Give the shortest and the longest cycle."));
  if (!(steps.step_s > 0) || (steps.to_s - steps.from_s) / steps.step_s > most_steps)
    found.push_back(
        error("cycle range, step", "a step too small", "above 0 and at most a million steps", "Give a larger step."));
  if (input.one_way || !(input.forward_weight > 0) || !(input.backward_weight > 0))
    found.push_back(error("weights", "a direction that does not count", "two directions with weights above 0",
                          "Scan two-way corridors only."));
  return found;
}

}  // namespace

Result<std::vector<CycleShare>> scan_cycles(const TwoWayInput& input, const CycleSteps& steps) {
  Diagnostics found = check_steps(input, steps);
  append(found, check_lengths(input));
  TwoWayInput bare = input;  // windows merged, nothing cleared yet
  for (TwoWayStation& station : bare.stations)
    station.forward_clearance_s = station.backward_clearance_s = 0, station.fixed_offset_s.reset();
  const Result<Compiled> compiled = compile(to_problem(bare));
  append(found, check(to_problem(input)));
  if (!compiled && found.empty()) found = compiled.error();
  if (!found.empty()) return failure(std::move(found));
  CycleScan scan(input, *compiled);
  std::vector<CycleShare> shares;
  for (int k = 0; steps.from_s + k * steps.step_s <= steps.to_s + 1e-9; ++k) {
    const double cycle_s = steps.from_s + k * steps.step_s;
    shares.push_back({cycle_s, scan.share(cycle_s)});
  }
  return shares;
}

}  // namespace entrain::bands
