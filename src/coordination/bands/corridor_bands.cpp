#include "coordination/bands/corridor_bands.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace entrain::bands {
namespace {

constexpr double infinite = std::numeric_limits<double>::infinity();

// The largest t with base + rate t <= length.
double limit(Tick length, Tick base, double rate) {
  if (rate == 1) return static_cast<double>(length - base);
  if (rate > 0) return static_cast<double>(length - base) / rate;
  return length >= base ? infinite : -infinite;
}

const Visit* visit_of(const CompiledStation& station, int frame) {
  for (const Visit& visit : station.visits)
    if (visit.frame == frame) return &visit;
  return nullptr;
}

// The part of [end - (length - width), end] where an offset serves a band of this width.
Placed arc(int station, int option, Tick end, Tick spare, Tick period) {
  return {station, option, wrap(end - spare, period), spare};
}

}  // namespace

bool is_simple(const Compiled& problem, int corridor) {
  for (const int frame : problem.corridors[static_cast<std::size_t>(corridor)]) {
    std::vector<int> met;
    for (const StopKey& stop : problem.frames[static_cast<std::size_t>(frame)].stops) met.push_back(stop.station);
    std::sort(met.begin(), met.end());
    if (std::adjacent_find(met.begin(), met.end()) != met.end()) return false;
  }
  return true;
}

CorridorBands::CorridorBands(const Compiled& problem, int corridor, const std::vector<std::vector<int>>& options,
                             const std::vector<bool>* include)
    : m_problem(problem), m_corridor(corridor), m_options(options) {
  const auto& frames = problem.corridors[static_cast<std::size_t>(corridor)];
  m_two_way = frames.size() == 2;
  std::vector<int> met;
  for (const int frame : frames)
    for (const StopKey& stop : problem.frames[static_cast<std::size_t>(frame)].stops) met.push_back(stop.station);
  std::sort(met.begin(), met.end());
  met.erase(std::unique(met.begin(), met.end()), met.end());
  for (const int station : met)
    if (!include || (*include)[static_cast<std::size_t>(station)]) add_station(station, options_of(station));
  prepare_shares();
}

// What the first look at the shares needs: every pair's terms, the share at which each pair becomes too narrow.
void CorridorBands::prepare_shares() {
  if (!m_two_way) return;
  const auto& frames = m_problem.corridors[static_cast<std::size_t>(m_corridor)];
  const double w0 = m_problem.frames[static_cast<std::size_t>(frames[0])].weight,
               w1 = m_problem.frames[static_cast<std::size_t>(frames[1])].weight;
  m_cap = m_narrowest = infinite;
  for (const CapGroup& group : m_cap_groups) m_cap = std::min(m_cap, limit(group.longest, 0, group.second ? w1 : w0));
  for (const Group& group : m_groups) {
    double best = -infinite;
    for (int p = group.begin; p < group.end; ++p) {
      const Pair& pair = m_pairs[static_cast<std::size_t>(p)];
      const double own = std::min(limit(pair.g, 0, w0), limit(pair.h, 0, w1));
      best = std::max(best, own);
      m_narrowest = std::min(m_narrowest, own);
    }
    m_cap = std::min(m_cap, best);
  }
  m_complete = m_cap >= 0 && filter(0, {}, 0, 0);
  m_all_stations = m_sweep_stations;
  m_all_terms = m_terms;
}

// True if the widths fit at this phi; one look at every station.
bool CorridorBands::fits_at(const Widths& widths, Tick phi) const {
  const Tick total = widths.first + widths.second;
  for (const CapGroup& group : m_cap_groups)
    if (group.longest < (group.second ? widths.second : widths.first)) return false;
  return std::all_of(m_groups.begin(), m_groups.end(), [&](const Group& group) {
    return std::any_of(m_pairs.begin() + group.begin, m_pairs.begin() + group.end, [&](const Pair& pair) {
      if (pair.g < widths.first || pair.h < widths.second) return false;
      Tick z = phi + pair.c;
      while (z >= group.period) z -= group.period;
      return z <= pair.reserve - total || pair.first_open || pair.second_open;
    });
  });
}

// The usual case: the peak over all pairs of windows is also the answer. False where narrow pairs interfere.
bool CorridorBands::best_at_peak(CorridorOptimum& optimum, double first_weight, double second_weight) {
  const Peak peak = m_sweep.highest(m_all_stations, m_all_terms, m_problem.cycle);
  const double t = std::min(m_cap, static_cast<double>(peak.value) / (first_weight + second_weight));
  if (!(t > 0)) return false;
  Widths widths{std::llround(first_weight * t), std::llround(second_weight * t)};
  while (widths.first + widths.second > peak.value) --(widths.second > 0 ? widths.second : widths.first);
  if (t > m_narrowest && !fits_at(widths, peak.phi)) return false;
  optimum.share = t;
  optimum.widths = widths;
  optimum.phi = peak.phi;
  if (widths.first + widths.second < peak.value) extend(optimum);
  return true;
}

void CorridorBands::add_station(int station, const std::vector<int>& options) {
  const CompiledStation& compiled = m_problem.stations[static_cast<std::size_t>(station)];
  const auto& frames = m_problem.corridors[static_cast<std::size_t>(m_corridor)];
  const Visit* first = visit_of(compiled, frames[0]);
  const Visit* second = m_two_way ? visit_of(compiled, frames[1]) : nullptr;
  if (first && second)
    add_pairs(station, *first, *second, options);
  else
    add_caps(station, first ? *first : *second, first == nullptr, options);
}

void CorridorBands::add_pairs(int station, const Visit& first, const Visit& second, const std::vector<int>& options) {
  const Tick period = m_problem.stations[static_cast<std::size_t>(station)].period;
  const int begin = static_cast<int>(m_pairs.size());
  for (const int option : options)
    for (const Slot& a : first.slots[static_cast<std::size_t>(option)])
      for (const Slot& b : second.slots[static_cast<std::size_t>(option)]) {
        Pair pair{0,
                  a.duration + b.duration,
                  a.duration,
                  b.duration,
                  first.shift - a.start,
                  second.shift - b.start,
                  option,
                  a.open,
                  b.open};
        pair.c = wrap(pair.first_end - pair.second_end + b.duration, period);
        m_pairs.push_back(pair);
      }
  m_groups.push_back({station, period, begin, static_cast<int>(m_pairs.size())});
}

void CorridorBands::add_caps(int station, const Visit& visit, bool second, const std::vector<int>& options) {
  CapGroup group{
      station, second, m_problem.stations[static_cast<std::size_t>(station)].period, 0, static_cast<int>(m_caps.size()),
      0};
  for (const int option : options)
    for (const Slot& slot : visit.slots[static_cast<std::size_t>(option)]) {
      m_caps.push_back({slot.duration, visit.shift - slot.start, option, slot.open});
      group.longest = std::max(group.longest, slot.duration);
    }
  group.end = static_cast<int>(m_caps.size());
  m_cap_groups.push_back(group);
}

// Keeps the pairs of windows that hold the widths at t; false if a station keeps none.
bool CorridorBands::filter(double t, Widths base, double first_rate, double second_rate) {
  m_sweep_stations.clear();
  m_terms.clear();
  m_owner.clear();
  m_kept = 0;
  const auto holds = [&](Tick g, Tick h) {
    return std::min(limit(g, base.first, first_rate), limit(h, base.second, second_rate)) >= t;
  };
  for (const CapGroup& group : m_cap_groups) {
    const bool fits = group.second ? limit(group.longest, base.second, second_rate) >= t
                                   : limit(group.longest, base.first, first_rate) >= t;
    if (!fits) return false;
  }
  for (const Group& group : m_groups) {
    const int begin = static_cast<int>(m_terms.size());
    bool any = false, open = false;
    for (int p = group.begin; p < group.end; ++p) {
      const Pair& pair = m_pairs[static_cast<std::size_t>(p)];
      if (!holds(pair.g, pair.h)) continue;
      any = true;
      ++m_kept;
      open = open || pair.first_open || pair.second_open;
      m_terms.push_back({pair.c, pair.reserve});
    }
    if (!any) return false;
    if (open)
      m_terms.resize(static_cast<std::size_t>(begin));
    else
      m_sweep_stations.push_back({group.period, begin, static_cast<int>(m_terms.size())}),
          m_owner.push_back(group.station);
  }
  return true;
}

// The largest t >= 0 at which bands base + rate t fit; negative if they do not fit at 0.
double CorridorBands::climb(Widths base, double first_rate, double second_rate) {
  double cap = infinite;
  for (const CapGroup& group : m_cap_groups)
    cap = std::min(cap, group.second ? limit(group.longest, base.second, second_rate)
                                     : limit(group.longest, base.first, first_rate));
  for (const Group& group : m_groups) {
    double best = -infinite;
    for (int p = group.begin; p < group.end; ++p) {
      const Pair& pair = m_pairs[static_cast<std::size_t>(p)];
      best = std::max(best, std::min(limit(pair.g, base.first, first_rate), limit(pair.h, base.second, second_rate)));
    }
    cap = std::min(cap, best);
  }
  if (cap < 0 || !filter(0, base, first_rate, second_rate)) return -1;
  const double total = static_cast<double>(base.first + base.second), rate = first_rate + second_rate;
  double t = std::min(cap, (static_cast<double>(peak_of_filtered().value) - total) / rate);
  if (t < 0) return -1;
  const int kept = m_kept;
  if (filter(t, base, first_rate, second_rate) &&
      (m_kept == kept || static_cast<double>(peak_of_filtered().value) >= total + rate * t - 0.5))
    return t;
  std::vector<double> limits;
  for (const Pair& pair : m_pairs) {
    const double value = std::min(limit(pair.g, base.first, first_rate), limit(pair.h, base.second, second_rate));
    if (value >= 0 && value < t) limits.push_back(value);
  }
  return search(limits, base, first_rate, second_rate);
}

// Between two neighbouring limits the pairs that hold do not change: find the last limit that fits, then climb from it.
double CorridorBands::search(std::vector<double>& limits, Widths base, double first_rate, double second_rate) {
  const double total = static_cast<double>(base.first + base.second), rate = first_rate + second_rate;
  const auto room_at = [&](double t) {
    return filter(t, base, first_rate, second_rate) ? (static_cast<double>(peak_of_filtered().value) - total) / rate
                                                    : -infinite;
  };
  limits.push_back(0);
  std::sort(limits.begin(), limits.end());
  limits.erase(std::unique(limits.begin(), limits.end()), limits.end());
  std::size_t fits = 0, fails = limits.size();  // limits[0] == 0 is known to fit
  while (fails - fits > 1) {
    const std::size_t middle = (fits + fails) / 2;
    if (room_at(limits[middle]) >= limits[middle] - 0.25)
      fits = middle;
    else
      fails = middle;
  }
  const double above = std::nextafter(limits[fits], infinite);
  const double reach = room_at(above);
  const double ceiling = fails < limits.size() ? limits[fails] : infinite;
  return std::max(limits[fits], std::min(reach, ceiling));
}

// Whole ticks, never more than the room there is.
Widths CorridorBands::settle(double t, Widths base, double first_rate, double second_rate) {
  Widths widths{base.first + std::llround(first_rate * t), base.second + std::llround(second_rate * t)};
  for (int step = 0; step < 4; ++step) {
    if (filter(0, widths, 0, 0) && peak_of_filtered().value >= widths.first + widths.second) return widths;
    Tick& shrinking = second_rate > 0 && (step % 2 == 0 || first_rate == 0) ? widths.second : widths.first;
    if (shrinking > 0) --shrinking;
  }
  return widths;
}

Peak CorridorBands::room(const Widths& widths) {
  if (!filter(0, widths, 0, 0)) return {-unlimited, 0};
  return peak_of_filtered();
}

Tick CorridorBands::widest(int direction) const {
  const int frame = m_problem.corridors[static_cast<std::size_t>(m_corridor)][static_cast<std::size_t>(direction)];
  Tick width = m_problem.cycle;
  for (const StopKey& stop : m_problem.frames[static_cast<std::size_t>(frame)].stops) {
    const CompiledStation& station = m_problem.stations[static_cast<std::size_t>(stop.station)];
    width =
        std::min(width, longest_slot(station.visits[static_cast<std::size_t>(stop.visit)], options_of(stop.station)));
  }
  return width;
}

CorridorOptimum CorridorBands::one_direction(int direction) const {
  CorridorOptimum optimum;
  const Tick width = widest(direction);
  (direction == 0 ? optimum.widths.first : optimum.widths.second) = width;
  optimum.single = direction;
  optimum.all_directions = !m_two_way;
  return optimum;
}

// What is left beyond the shares goes to one direction: both cannot gain, or the share was not the largest.
void CorridorBands::extend(CorridorOptimum& optimum) {
  const Widths base = optimum.widths;
  if (room(base).value > base.first + base.second) {
    const double first = climb(base, 1, 0), second = climb(base, 0, 1);
    if (first > 0 && first >= second)
      optimum.widths = settle(first, base, 1, 0);
    else if (second > 0)
      optimum.widths = settle(second, base, 0, 1);
  }
  optimum.phi = room(optimum.widths).phi;
}

CorridorOptimum CorridorBands::best() {
  const auto& frames = m_problem.corridors[static_cast<std::size_t>(m_corridor)];
  const double w0 = m_problem.frames[static_cast<std::size_t>(frames[0])].weight;
  if (!m_two_way) {
    CorridorOptimum optimum = one_direction(0);
    optimum.share = static_cast<double>(optimum.widths.first) / w0;
    return optimum;
  }
  const double w1 = m_problem.frames[static_cast<std::size_t>(frames[1])].weight;
  CorridorOptimum optimum;
  if (w0 > 0 && w1 > 0) {
    if (m_complete && best_at_peak(optimum, w0, w1)) return optimum;
    const double t = climb({}, w0, w1);
    if (!(t > 0)) return one_direction(widest(0) != widest(1) ? (widest(0) > widest(1) ? 0 : 1) : (w0 >= w1 ? 0 : 1));
    optimum.share = t;
    optimum.widths = settle(t, {}, w0, w1);
  } else {
    const int leading = w0 > 0 ? 0 : 1;
    if (widest(leading) == 0) return one_direction(1 - leading);
    optimum = one_direction(leading);
    optimum.share = static_cast<double>(widest(leading)) / std::max(w0, w1);
    if (room(optimum.widths).value <= optimum.widths.first + optimum.widths.second) return optimum;
    optimum.all_directions = true;
  }
  extend(optimum);
  return optimum;
}

bool CorridorBands::place_pair(const Group& group, const Widths& widths, Tick phi, Placed& placed) const {
  for (int p = group.begin; p < group.end; ++p) {
    const Pair& pair = m_pairs[static_cast<std::size_t>(p)];
    const Tick g = pair.g - widths.first, h = pair.h - widths.second;
    if (g < 0 || h < 0) continue;
    const Tick second_end = pair.second_end - widths.second - phi;
    if (pair.first_open && pair.second_open)
      placed = {group.station, pair.option, 0, group.period};
    else if (pair.first_open)
      placed = arc(group.station, pair.option, second_end, h, group.period);
    else if (pair.second_open)
      placed = arc(group.station, pair.option, pair.first_end, g, group.period);
    else {
      const Tick z = wrap(phi + pair.c, group.period);
      if (z > g + h) continue;
      const Tick latest = pair.first_end - std::max(Tick{0}, z - h);
      placed = arc(group.station, pair.option, latest, std::min(z, g) - std::max(Tick{0}, z - h), group.period);
    }
    return true;
  }
  return false;
}

std::vector<Placed> CorridorBands::place(const CorridorOptimum& optimum) const {
  if (!m_two_way || !optimum.all_directions) return place_one(optimum);
  std::vector<Placed> all;
  for (const Group& group : m_groups) {
    Placed placed;
    if (place_pair(group, optimum.widths, optimum.phi, placed)) all.push_back(placed);
  }
  for (const CapGroup& group : m_cap_groups) {
    const Tick width = group.second ? optimum.widths.second : optimum.widths.first;
    const Tick edge = group.second ? -width - optimum.phi : 0;
    for (int i = group.begin; i < group.end; ++i) {
      const Cap& cap = m_caps[static_cast<std::size_t>(i)];
      if (cap.length < width) continue;
      all.push_back(cap.open ? Placed{group.station, cap.option, 0, group.period}
                             : arc(group.station, cap.option, edge + cap.end, cap.length - width, group.period));
      break;
    }
  }
  std::sort(all.begin(), all.end(), [](const Placed& a, const Placed& b) { return a.station < b.station; });
  return all;
}

// One direction has its band, the stations of the other alone may lie anywhere.
std::vector<Placed> CorridorBands::place_one(const CorridorOptimum& optimum) const {
  const auto& frames = m_problem.corridors[static_cast<std::size_t>(m_corridor)];
  const Tick width = optimum.single == 0 ? optimum.widths.first : optimum.widths.second;
  std::vector<Placed> all;
  const auto add = [&](int index, bool placed_by_band) {
    const CompiledStation& station = m_problem.stations[static_cast<std::size_t>(index)];
    const Visit* visit = visit_of(station, frames[static_cast<std::size_t>(optimum.single)]);
    if (visit && placed_by_band)
      for (const int option : options_of(index))
        for (const Slot& slot : visit->slots[static_cast<std::size_t>(option)])
          if (slot.duration >= width) {
            all.push_back(slot.open
                              ? Placed{index, option, 0, station.period}
                              : arc(index, option, visit->shift - slot.start, slot.duration - width, station.period));
            return;
          }
    all.push_back({index, options_of(index).front(), 0, station.period});
  };
  for (const Group& group : m_groups) add(group.station, true);
  for (const CapGroup& group : m_cap_groups) add(group.station, true);
  std::sort(all.begin(), all.end(), [](const Placed& a, const Placed& b) { return a.station < b.station; });
  return all;
}

// Adds stations that leave no place for bands of these widths (there is none).
void CorridorBands::add_witness(const Widths& widths, bool both, std::vector<int>& found) {
  for (const CapGroup& group : m_cap_groups)
    if (group.longest < (group.second ? widths.second : widths.first)) return found.push_back(group.station);
  for (const Group& group : m_groups) {
    const bool fits = std::any_of(m_pairs.begin() + group.begin, m_pairs.begin() + group.end,
                                  [&](const Pair& p) { return p.g >= widths.first && p.h >= widths.second; });
    if (!fits) return found.push_back(group.station);
  }
  if (!both || !filter(0, widths, 0, 0)) return;
  for (const int blocker :
       m_sweep.blockers(m_sweep_stations, m_terms, m_problem.cycle, widths.first + widths.second - 1))
    found.push_back(m_owner[static_cast<std::size_t>(blocker)]);
}

std::vector<int> CorridorBands::witness(const CorridorOptimum& optimum) {
  std::vector<int> found;
  const Widths base = optimum.widths;
  const bool both = m_two_way && optimum.all_directions;
  if (both) {
    const auto& frames = m_problem.corridors[static_cast<std::size_t>(m_corridor)];
    const double w0 = m_problem.frames[static_cast<std::size_t>(frames[0])].weight,
                 w1 = m_problem.frames[static_cast<std::size_t>(frames[1])].weight;
    const auto more = [&](double weight) {
      return weight > 0 ? static_cast<Tick>(std::floor(weight * optimum.share + 0.25)) + 1 : 0;
    };
    add_witness({more(w0), more(w1)}, w0 > 0 && w1 > 0, found);
  }
  if (both || optimum.single == 0) add_witness({base.first + 1, base.second}, both, found);
  if (both || optimum.single == 1) add_witness({base.first, base.second + 1}, both, found);
  std::sort(found.begin(), found.end());
  found.erase(std::unique(found.begin(), found.end()), found.end());
  return found;
}

std::vector<CorridorBands::PhiArc> CorridorBands::fitting(const Widths& widths) const {
  std::vector<PhiArc> fits = {{0, m_problem.cycle - 1}};
  for (const Group& group : m_groups) {
    std::vector<PhiArc> own;
    bool open = false;
    for (int p = group.begin; p < group.end; ++p) {
      const Pair& pair = m_pairs[static_cast<std::size_t>(p)];
      const Tick g = pair.g - widths.first, h = pair.h - widths.second;
      if (g < 0 || h < 0) continue;
      open = open || pair.first_open || pair.second_open;
      if (g + h >= group.period) open = true;
      for (Tick from = -pair.c - group.period; from < m_problem.cycle; from += group.period)
        own.push_back({std::max(Tick{0}, from), std::min(m_problem.cycle - 1, from + g + h)});
    }
    if (open) continue;
    std::erase_if(own, [](const PhiArc& a) { return a.to < a.from; });
    std::sort(own.begin(), own.end(), [](const PhiArc& a, const PhiArc& b) { return a.from < b.from; });
    std::vector<PhiArc> merged, both;
    for (const PhiArc& a : own)
      if (!merged.empty() && a.from <= merged.back().to + 1)
        merged.back().to = std::max(merged.back().to, a.to);
      else
        merged.push_back(a);
    for (std::size_t i = 0, j = 0; i < fits.size() && j < merged.size();) {
      const PhiArc common{std::max(fits[i].from, merged[j].from), std::min(fits[i].to, merged[j].to)};
      if (common.from <= common.to) both.push_back(common);
      if (fits[i].to < merged[j].to)
        ++i;
      else
        ++j;
    }
    fits = std::move(both);
  }
  for (const CapGroup& group : m_cap_groups)
    if (group.longest < (group.second ? widths.second : widths.first)) return {};
  return fits;
}

}  // namespace entrain::bands
