// The best whole-second offsets of one corridor. A band may be moved earlier until its leading edge meets the start of
// a window, so only the fractions of a second at which windows can start need be tried for each direction's edge; of
// their combinations only those the continuous problem admits.
#include <algorithm>
#include <cmath>

#include "coordination/bands/alone.hpp"
#include "coordination/bands/fit_station.hpp"

namespace entrain::bands {
namespace {

class WholeSeconds {
 public:
  WholeSeconds(const Compiled& problem, int corridor, const OptionLists& options, const Alone& bound)
      : m_problem(problem),
        m_corridor(corridor),
        m_frames(problem.corridors[static_cast<std::size_t>(corridor)]),
        m_options(options),
        m_bound(bound),
        m_met(stations_of(problem, corridor)),
        m_simple(is_simple(problem, corridor)) {
    for (const int station : m_met)
      if (m_problem.stations[static_cast<std::size_t>(station)].is_fixed) m_fixed.push_back(station);
    m_shifts = m_fixed.size() < 2;
    m_order = m_met;  // those that cannot move refuse first
    std::stable_partition(m_order.begin(), m_order.end(), [&](int s) { return station(s).is_fixed; });
    m_demands.resize(problem.frames.size());
  }

  Alone run();

 private:
  struct Active {
    bool first = false, second = false;
  };
  const CompiledStation& station(int index) const { return m_problem.stations[static_cast<std::size_t>(index)]; }
  double weight(std::size_t direction) const {
    return m_problem.frames[static_cast<std::size_t>(m_frames[direction])].weight;
  }
  Grid grid_of(int index) const {
    return {true, m_shifts && station(index).is_fixed ? wrap(station(index).fixed, ticks_per_second) : 0};
  }
  void find_fractions(std::size_t direction);
  void keep_if_better(const Widths& widths, bool extended);
  bool fits(const Widths& widths, Active active);
  std::optional<Placed> fit(int index) {
    const CompiledStation& s = station(index);
    return m_fit.fit(s, index, m_options[static_cast<std::size_t>(index)], m_demands, grid_of(index),
                     !m_shifts && s.is_fixed, s.fixed);
  }
  bool try_edges(Tick first, Tick second);
  bool fixed_admit(Tick first);
  bool try_first(const Widths& widths, Active active, const std::vector<CorridorBands::PhiArc>& arcs, Tick first);
  Widths achieved(Active active) const;
  Widths raise_share(Active active, double bound);
  Widths raise_axis(Widths base, int direction, Active active, Tick bound);
  Widths widest_single(int direction);
  Widths extend(const Widths& base, Active active);
  double share(const Widths& widths, Active active) const;
  Alone finish(const Widths& widths, Active active);

  const Compiled& m_problem;
  int m_corridor;
  const std::vector<int>& m_frames;
  const OptionLists& m_options;
  const Alone& m_bound;
  std::vector<int> m_met, m_fixed, m_order;
  bool m_simple, m_shifts = true;
  std::vector<BandDemand> m_demands;
  std::vector<Tick> m_fractions[2];
  std::vector<Placed> m_placed, m_trial;
  StationFit m_fit;
};

// Where within a second a window of the direction may start, seen from the first stop.
void WholeSeconds::find_fractions(std::size_t direction) {
  std::vector<Tick>& fractions = m_fractions[direction];
  for (const int index : m_met)
    for (const Visit& visit : station(index).visits)
      if (visit.frame == m_frames[direction])
        for (const int option : m_options[static_cast<std::size_t>(index)])
          for (const Slot& slot : visit.slots[static_cast<std::size_t>(option)]) {
            const Tick origin = station(index).is_fixed ? station(index).fixed : 0;
            if (!slot.open) fractions.push_back(wrap(origin + slot.start - visit.shift, ticks_per_second));
          }
  if (fractions.empty()) fractions.push_back(0);
  std::sort(fractions.begin(), fractions.end());
  fractions.erase(std::unique(fractions.begin(), fractions.end()), fractions.end());
}

bool WholeSeconds::try_edges(Tick first, Tick second) {
  m_demands[static_cast<std::size_t>(m_frames[0])].edge = first;
  if (m_frames.size() > 1) m_demands[static_cast<std::size_t>(m_frames[1])].edge = second;
  m_trial.clear();
  for (const int index : m_order) {
    const auto placed = fit(index);
    if (!placed) return false;
    m_trial.push_back(*placed);
  }
  m_placed = m_trial;
  return true;
}

// Whether the stations that cannot move admit the first direction's band there, whatever the second does.
bool WholeSeconds::fixed_admit(Tick first) {
  BandDemand& second = m_demands[static_cast<std::size_t>(m_frames[1])];
  m_demands[static_cast<std::size_t>(m_frames[0])].edge = first;
  second.active = false;
  const bool admit = std::all_of(m_fixed.begin(), m_fixed.end(), [&](int index) { return fit(index).has_value(); });
  second.active = true;
  return admit;
}

bool WholeSeconds::try_first(const Widths& widths, Active active, const std::vector<CorridorBands::PhiArc>& arcs,
                             Tick first) {
  if (!active.second) return try_edges(first, 0);
  if (!m_shifts && !fixed_admit(first)) return false;
  for (const auto& arc : arcs)
    for (const Tick fraction : m_fractions[1]) {
      // phi = first - second - width of the second, in [from, to]
      const Tick latest = first - widths.second - arc.from, earliest = first - widths.second - arc.to;
      for (Tick second = fraction + second_ceil(earliest - fraction); second <= latest; second += ticks_per_second)
        if (try_edges(first, wrap(second, m_problem.cycle))) return true;
    }
  return false;
}

bool WholeSeconds::fits(const Widths& widths, Active active) {
  for (std::size_t i = 0; i < m_frames.size(); ++i) {
    BandDemand& demand = m_demands[static_cast<std::size_t>(m_frames[i])];
    demand = {i == 0 ? active.first : active.second, i == 0 ? widths.first : widths.second, 0};
  }
  std::vector<CorridorBands::PhiArc> arcs = {{0, m_problem.cycle - 1}};
  if (m_simple && active.first && active.second) arcs = CorridorBands(m_problem, m_corridor, m_options).fitting(widths);
  if (!active.first) {  // the second direction alone
    for (Tick second = 0; second < (m_shifts ? ticks_per_second : m_problem.cycle); second += ticks_per_second)
      for (const Tick fraction : m_fractions[1])
        if (try_edges(0, second + fraction)) return true;
    return false;
  }
  for (Tick second = 0; second < (m_shifts ? ticks_per_second : m_problem.cycle); second += ticks_per_second)
    for (const Tick fraction : m_fractions[0])
      if (try_first(widths, active, arcs, second + fraction)) return true;
  return false;
}

// What the offsets found really give, at least what was asked for.
Widths WholeSeconds::achieved(Active active) const {
  Setting setting;
  for (const CompiledStation& s : m_problem.stations)
    setting.options.push_back(s.options.front()), setting.offsets.push_back(0);
  for (const Placed& placed : m_placed) {
    setting.options[static_cast<std::size_t>(placed.station)] = placed.option;
    setting.offsets[static_cast<std::size_t>(placed.station)] = placed.from;
  }
  Widths widths;
  if (active.first) widths.first = measure(m_problem, m_frames[0], setting).width;
  if (active.second) widths.second = measure(m_problem, m_frames[1], setting).width;
  return widths;
}

double WholeSeconds::share(const Widths& widths, Active active) const {
  double least = -1;
  for (std::size_t i = 0; i < m_frames.size(); ++i) {
    const bool counts = (i == 0 ? active.first : active.second) && weight(i) > 0;
    const double own = counts ? static_cast<double>(i == 0 ? widths.first : widths.second) / weight(i) : -1;
    if (counts) least = least < 0 ? own : std::min(least, own);
  }
  return least;
}

// The largest share: first by halving, then one tick more than what was reached until that fails, which proves it.
Widths WholeSeconds::raise_share(Active active, double bound) {
  Widths best;
  double low = 0, high = bound;
  const double w0 = active.first ? weight(0) : 0, w1 = active.second ? weight(1) : 0;
  const double fine = static_cast<double>(ticks_per_second) / 100;
  const auto reach = [&](const Widths& widths) {
    if (!fits(widths, active)) return false;
    best = achieved(active);
    low = share(best, active);
    return true;
  };
  const auto at = [&](double t) {
    return Widths{static_cast<Tick>(std::ceil(w0 * t - 0.25)), static_cast<Tick>(std::ceil(w1 * t - 0.25))};
  };
  if (!reach(at(high))) {
    double step = static_cast<double>(ticks_per_second);
    while (low == 0 && high - step > 0 && !reach(at(high - step))) high -= step, step *= 2;
    while (high - low > fine) {
      const double middle = (low + high) / 2;
      if (!reach(at(middle))) high = middle;
    }
  }
  while (reach({active.first && w0 > 0 ? static_cast<Tick>(std::floor(w0 * low + 0.25)) + 1 : 0,
                active.second && w1 > 0 ? static_cast<Tick>(std::floor(w1 * low + 0.25)) + 1 : 0})) {
  }
  return best;
}

Widths WholeSeconds::raise_axis(Widths base, int direction, Active active, Tick bound) {
  const auto raised = [&](Tick by) {
    return direction == 0 ? Widths{base.first + by, base.second} : Widths{base.first, base.second + by};
  };
  Tick low = 0, high = bound + 1;
  const auto reach = [&](Tick by) {
    if (!fits(raised(by), active)) return false;
    const Widths real = achieved(active);
    low = std::max(by, direction == 0 ? real.first - base.first : real.second - base.second);
    return true;
  };
  while (low < bound && reach(low + 1)) {
    while (high - low > ticks_per_second / 100) {
      const Tick middle = low + (high - low) / 2;
      if (!reach(middle)) high = middle;
    }
  }
  return raised(low);
}

// The share holds one direction at its least; the other takes what it can get.
Widths WholeSeconds::extend(const Widths& reached, Active active) {
  const double t = share(reached, active);
  const Widths base{static_cast<Tick>(std::ceil(weight(0) * t - 0.25)),
                    static_cast<Tick>(std::ceil(weight(1) * t - 0.25))};
  const Widths first = raise_axis(base, 0, active, m_problem.cycle - base.first);
  const Widths second = raise_axis(base, 1, active, m_problem.cycle - base.second);
  return first.first - base.first >= second.second - base.second ? first : second;
}

Widths WholeSeconds::widest_single(int direction) {
  const Active active{direction == 0, direction == 1};
  return raise_axis({}, direction, active, m_problem.cycle);
}

Alone WholeSeconds::finish(const Widths& widths, Active active) {
  Alone alone;
  alone.all_directions = m_frames.size() == 1 || (active.first && active.second);
  alone.single = active.first ? 0 : 1;
  alone.witness = m_bound.witness;
  alone.proved = m_bound.proved;
  fits(widths, active);
  alone.widths = achieved(active);
  alone.share = alone.all_directions
                    ? share(alone.widths, active)
                    : (m_frames.size() == 2 && weight(0) > 0 && weight(1) > 0 ? 0 : share(alone.widths, active));
  for (Placed placed : m_placed) {  // the middle second, the earlier of two
    const Tick period = station(placed.station).period;
    placed.from = wrap(placed.from + placed.length / ticks_per_second / 2 * ticks_per_second, period);
    placed.length = 0;
    alone.placed.push_back(placed);
  }
  std::sort(alone.placed.begin(), alone.placed.end(),
            [](const Placed& a, const Placed& b) { return a.station < b.station; });
  alone.anchored = !m_fixed.empty();
  if (m_fixed.size() == 1) {
    const int index = m_fixed.front();
    Tick shift = 0;
    for (const Placed& placed : alone.placed)
      if (placed.station == index) shift = station(index).fixed - placed.from;
    for (Placed& placed : alone.placed) placed.from = wrap(placed.from + shift, station(placed.station).period);
  }
  return alone;
}

Alone WholeSeconds::run() {
  for (std::size_t d = 0; d < m_frames.size(); ++d) find_fractions(d);
  const bool two = m_frames.size() == 2;
  const bool both_count = two && weight(0) > 0 && weight(1) > 0;
  if (both_count && m_bound.all_directions) {
    const Widths widths = raise_share({true, true}, m_bound.share);
    if (share(widths, {true, true}) > 0) return finish(extend(widths, {true, true}), {true, true});
  }
  const bool first_counts = weight(0) > 0, second_counts = two && weight(1) > 0;
  Widths first = first_counts ? widest_single(0) : Widths{}, second = second_counts ? widest_single(1) : Widths{};
  if (two && first.first + second.second == 0) (first_counts ? second : first) = widest_single(first_counts ? 1 : 0);
  const bool take_first = first.first != second.second ? first.first > second.second
                                                       : first_counts && (!second_counts || weight(0) >= weight(1));
  const Widths widths = take_first ? first : second;
  const Widths one_more = take_first ? Widths{widths.first, 1} : Widths{1, widths.second};
  if (two && !both_count && fits(one_more, {true, true})) return finish(extend(widths, {true, true}), {true, true});
  return finish(widths, {take_first, !take_first});
}

}  // namespace

Alone solve_alone_whole_seconds(const Compiled& problem, int corridor, const OptionLists& options, const Alone& bound) {
  return WholeSeconds(problem, corridor, options, bound).run();
}

}  // namespace entrain::bands
