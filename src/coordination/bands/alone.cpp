#include "coordination/bands/alone.hpp"

#include <algorithm>

#include "coordination/bands/band_network.hpp"

namespace entrain::bands {
namespace {

// Fixed offsets or repeated visits: the largest widths by halving, each decided exactly.
class FixedCorridor {
 public:
  FixedCorridor(const Compiled& problem, int corridor, const OptionLists& options, std::int64_t most_nodes)
      : m_problem(problem),
        m_frames(problem.corridors[static_cast<std::size_t>(corridor)]),
        m_corridors{corridor},
        m_options(options),
        m_nodes(most_nodes) {
    m_demands.resize(problem.frames.size());
    m_best = m_demands;
  }

  Alone run() {
    Alone alone;
    alone.anchored = true;
    if (m_frames.size() == 2 && weight(0) > 0 && weight(1) > 0) {
      const Widths widths = widths_at({}, weight(0), weight(1), climb({}, weight(0), weight(1), {true, true}));
      if (widths.first > 0 && widths.second > 0) return finish(alone, extend(widths));
    }
    const int leading = leading_direction();
    alone.single = leading;
    alone.all_directions = m_frames.size() == 1;
    Widths widths{leading == 0 ? m_single[0] : 0, leading == 1 ? m_single[1] : 0};
    if (m_frames.size() == 1 || (weight(0) > 0 && weight(1) > 0) || !(weight(leading) > 0))
      return finish(alone, widths);
    alone.all_directions = fits(widths, {true, true});
    return finish(alone, alone.all_directions ? extend(widths) : widths);
  }

 private:
  struct Active {
    bool first = false, second = false;
  };

  double weight(int direction) const {
    const double own = m_problem.frames[static_cast<std::size_t>(m_frames[static_cast<std::size_t>(direction)])].weight;
    double largest = own;
    for (const int frame : m_frames)
      largest = std::max(largest, m_problem.frames[static_cast<std::size_t>(frame)].weight);
    return own / largest;
  }

  // The direction with a weight that gets the wider band alone, another if that has none; fills m_single.
  int leading_direction() {
    int leading = -1;
    const auto take = [&](int d) {
      m_single[d] = climb({}, d == 0 ? 1 : 0, d == 1 ? 1 : 0, {d == 0, d == 1});
      if (leading < 0 || m_single[d] > m_single[leading]) leading = d;
    };
    for (int d = 0; d < static_cast<int>(m_frames.size()); ++d)
      if (weight(d) > 0) take(d);
    for (int d = 0; d < static_cast<int>(m_frames.size()); ++d)
      if (!(weight(d) > 0) && m_single[leading] == 0) take(d);
    return leading;
  }

  Widths widths_at(Widths base, double first_rate, double second_rate, Tick t) const {
    return {base.first + static_cast<Tick>(first_rate * static_cast<double>(t)),
            base.second + static_cast<Tick>(second_rate * static_cast<double>(t))};
  }

  bool fits(const Widths& widths, Active active) {
    for (std::size_t i = 0; i < m_frames.size(); ++i) {
      BandDemand& demand = m_demands[static_cast<std::size_t>(m_frames[i])];
      demand.active = i == 0 ? active.first : active.second;
      demand.width = i == 0 ? widths.first : widths.second;
    }
    const Verdict verdict = decide(m_problem, m_corridors, m_demands, m_options, m_nodes);
    if (verdict == Verdict::unknown) m_proved = false;
    if (verdict == Verdict::fits) m_best = m_demands;
    return verdict == Verdict::fits;
  }

  // The largest t at which base + rate t fits; 0 also where nothing fits.
  Tick climb(Widths base, double first_rate, double second_rate, Active active) {
    Tick low = 0, high = m_problem.cycle + 1;
    while (high - low > 1) {
      const Tick middle = low + (high - low) / 2;
      if (fits(widths_at(base, first_rate, second_rate, middle), active))
        low = middle;
      else
        high = middle;
    }
    return low;
  }

  Widths extend(const Widths& base) {
    const Tick first = climb(base, 1, 0, {true, true}), second = climb(base, 0, 1, {true, true});
    return first >= second ? Widths{base.first + first, base.second} : Widths{base.first, base.second + second};
  }

  Alone finish(Alone alone, const Widths& widths) {
    alone.widths = widths;
    const bool both = m_frames.size() == 2 && alone.all_directions;
    fits(widths, {both || alone.single == 0, both || alone.single == 1});
    alone.placed = place_all(m_problem, m_best, m_options);
    alone.proved = m_proved;
    alone.share = -1;
    for (std::size_t i = 0; i < m_frames.size(); ++i) {
      const double own = m_problem.frames[static_cast<std::size_t>(m_frames[i])].weight;
      if (!(own > 0)) continue;
      const double share = static_cast<double>(i == 0 ? widths.first : widths.second) / own;
      alone.share = alone.share < 0 ? share : std::min(alone.share, share);
    }
    return alone;
  }

  const Compiled& m_problem;
  const std::vector<int>& m_frames;
  std::vector<int> m_corridors;
  const OptionLists& m_options;
  std::int64_t m_nodes;
  std::vector<BandDemand> m_demands, m_best;
  Tick m_single[2] = {0, 0};
  bool m_proved = true;
};

// Moves all offsets together so that the fixed station, if there is one, is where it must be.
void anchor(const Compiled& problem, Alone& alone) {
  for (const Placed& fixed : alone.placed) {
    const CompiledStation& station = problem.stations[static_cast<std::size_t>(fixed.station)];
    if (!station.is_fixed) continue;
    const Tick shift = fixed.length >= station.period ? 0 : station.fixed - fixed.from - fixed.length / 2;
    for (Placed& placed : alone.placed)
      placed.from = wrap(placed.from + shift, problem.stations[static_cast<std::size_t>(placed.station)].period);
    alone.anchored = true;
  }
  for (Placed& placed : alone.placed) {
    const CompiledStation& station = problem.stations[static_cast<std::size_t>(placed.station)];
    if (station.is_fixed) placed.from = station.fixed, placed.length = 0;
  }
}

}  // namespace

OptionLists allowed_options(const Compiled& problem) {
  OptionLists lists;
  for (const CompiledStation& station : problem.stations) lists.push_back(station.options);
  return lists;
}

std::vector<int> stations_of(const Compiled& problem, int corridor) {
  std::vector<int> met;
  for (const int frame : problem.corridors[static_cast<std::size_t>(corridor)])
    for (const StopKey& stop : problem.frames[static_cast<std::size_t>(frame)].stops) met.push_back(stop.station);
  std::sort(met.begin(), met.end());
  met.erase(std::unique(met.begin(), met.end()), met.end());
  return met;
}

int fixed_count(const Compiled& problem, int corridor) {
  int count = 0;
  for (const int station : stations_of(problem, corridor))
    count += problem.stations[static_cast<std::size_t>(station)].is_fixed ? 1 : 0;
  return count;
}

Alone solve_alone(const Compiled& problem, int corridor, const OptionLists& options, std::int64_t most_nodes) {
  if (!is_simple(problem, corridor) || fixed_count(problem, corridor) > 1)
    return FixedCorridor(problem, corridor, options, most_nodes).run();
  CorridorBands bands(problem, corridor, options);
  const CorridorOptimum optimum = bands.best();
  Alone alone;
  alone.widths = optimum.widths;
  alone.share = optimum.share;
  alone.all_directions = optimum.all_directions;
  alone.single = optimum.single;
  alone.placed = bands.place(optimum);
  alone.witness = bands.witness(optimum);
  anchor(problem, alone);
  return alone;
}

}  // namespace entrain::bands
