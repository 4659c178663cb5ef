#include "coordination/bands/compiled.hpp"

#include <algorithm>

#include "base/number_text.hpp"

namespace entrain::bands {
namespace {

constexpr double shortest_cycle_s = 0.001, longest_cycle_s = 100'000.0;
constexpr double longest_travel_s = 1'000'000.0;

std::string text(double value) {
  if (std::isnan(value)) return "not a number";
  if (std::isinf(value)) return value > 0 ? "infinity" : "minus infinity";
  return number_text(value, 9);
}

class Checker {
 public:
  explicit Checker(const Problem& problem) : m_problem(problem) {}

  Diagnostics run() {
    const double cycle = m_problem.cycle_s;
    if (!(cycle >= shortest_cycle_s) || !(cycle <= longest_cycle_s))
      add("cycle", text(cycle), "0.001 to 100000 s", "Give the cycle length in seconds.");
    if (m_problem.stations.empty()) add("stations", "none", "at least one", "Name the stations.");
    if (m_problem.corridors.empty()) add("corridors", "none", "at least one", "Name a corridor.");
    for (std::size_t i = 0; i < m_problem.stations.size(); ++i) check_station(i);
    for (std::size_t i = 0; i < m_problem.corridors.size(); ++i) check_corridor(i);
    return m_found;
  }

 private:
  void add(std::string where, std::string found, std::string expected, std::string mend) {
    m_found.push_back(error(std::move(where), std::move(found), std::move(expected), std::move(mend)));
  }

  void check_station(std::size_t index) {
    const Station& station = m_problem.stations[index];
    const auto where = [&] { return "station " + std::to_string(index); };
    if (station.option_count < 1) add(where(), "no option", "at least one", "Give the station its windows.");
    if (station.fixed_option && (*station.fixed_option < 0 || *station.fixed_option >= station.option_count))
      add(where() + ", fixed option", std::to_string(*station.fixed_option),
          "an index below " + std::to_string(station.option_count), "Fix an option that the station has.");
    if (station.fixed_offset_s && !(std::abs(*station.fixed_offset_s) <= longest_travel_s))
      add(where() + ", fixed offset", text(*station.fixed_offset_s), "a finite number of seconds",
          "Give the offset in seconds.");
  }

  void check_corridor(std::size_t index) {
    const Corridor& corridor = m_problem.corridors[index];
    if (corridor.directions.empty() || corridor.directions.size() > 2)
      add("corridor " + std::to_string(index), std::to_string(corridor.directions.size()) + " directions", "one or two",
          "Give a corridor one or two directions.");
    double weights = 0;
    for (std::size_t d = 0; d < corridor.directions.size(); ++d) {
      const Direction& direction = corridor.directions[d];
      m_place = {index, d, 0, 0, 0};
      if (!(direction.weight >= 0) || !(direction.weight <= 1e6))
        add(direction_text() + ", weight", text(direction.weight), "0 to 1000000", "Give a share of the band.");
      weights += direction.weight;
      if (direction.stops.empty()) add(direction_text(), "no station", "at least one", "List the stations in order.");
      for (m_place.stop = 0; m_place.stop < direction.stops.size(); ++m_place.stop)
        check_stop(direction.stops[m_place.stop]);
    }
    if (!corridor.directions.empty() && weights == 0)
      add("corridor " + std::to_string(index) + ", weights", "all 0", "at least one above 0",
          "Give the direction that counts a weight.");
  }

  void check_stop(const Stop& stop) {
    if (stop.station < 0 || static_cast<std::size_t>(stop.station) >= m_problem.stations.size()) {
      add(stop_text(), "station " + std::to_string(stop.station),
          "an index below " + std::to_string(m_problem.stations.size()), "Name a station of the list.");
      return;
    }
    const int options = m_problem.stations[static_cast<std::size_t>(stop.station)].option_count;
    if (!(stop.travel_s >= 0) || !(stop.travel_s <= longest_travel_s))
      add(stop_text() + ", travel time", text(stop.travel_s), "0 or more, finite", "Give the travel time in seconds.");
    if (!(stop.clearance_s >= 0) || !(stop.clearance_s <= longest_travel_s))
      add(stop_text() + ", queue clearance", text(stop.clearance_s), "0 or more, finite", "Give the time in seconds.");
    if (static_cast<int>(stop.windows.size()) != options)
      add(stop_text(), "windows for " + std::to_string(stop.windows.size()) + " options", std::to_string(options),
          "Give windows for every option of the station.");
    for (m_place.option = 0; m_place.option < stop.windows.size(); ++m_place.option)
      for (m_place.window = 0; m_place.window < stop.windows[m_place.option].size(); ++m_place.window)
        check_window(stop.windows[m_place.option][m_place.window]);
  }

  void check_window(const Window& window) {
    if (!(std::abs(window.start_s) <= longest_travel_s))
      add(window_text() + ", start", text(window.start_s), "a finite number of seconds", "Give the start in seconds.");
    if (!(window.duration_s >= 0))
      add(window_text() + ", duration", text(window.duration_s), "0 or more", "Give the duration in seconds.");
    else if (m_problem.cycle_s > 0 && to_excess(window.duration_s) > 0)
      add(window_text() + ", duration", text(window.duration_s), "at most the cycle, " + text(m_problem.cycle_s),
          "Shorten the window or lengthen the cycle.");
  }

  std::string direction_text() const {
    return "corridor " + std::to_string(m_place.corridor) + ", direction " + std::to_string(m_place.direction);
  }
  std::string stop_text() const { return direction_text() + ", stop " + std::to_string(m_place.stop); }
  std::string window_text() const {
    return stop_text() + ", option " + std::to_string(m_place.option) + ", window " + std::to_string(m_place.window);
  }

  // Above 0 where the duration is longer than the cycle by more than rounding.
  double to_excess(double duration_s) const {
    return duration_s - m_problem.cycle_s > 1e-9 ? duration_s - m_problem.cycle_s : 0;
  }

  struct Place {
    std::size_t corridor = 0, direction = 0, stop = 0, option = 0, window = 0;
  };

  const Problem& m_problem;
  Diagnostics m_found;
  Place m_place;
};

// Windows in ticks modulo `period`, merged where they overlap or touch, in order of start.
std::vector<Slot> merged(const std::vector<Window>& windows, Tick cycle, Tick period) {
  std::vector<Slot> slots;
  for (std::size_t w = 0; w < windows.size(); ++w) {
    const Tick duration = to_ticks(windows[w].duration_s);
    if (duration <= 0) continue;
    if (duration >= period) return {Slot{0, cycle, static_cast<int>(w), true}};
    slots.push_back({wrap(to_ticks(windows[w].start_s), period), duration, static_cast<int>(w), false});
  }
  std::sort(slots.begin(), slots.end(),
            [](const Slot& a, const Slot& b) { return a.start != b.start ? a.start < b.start : a.window < b.window; });
  // A window that touches its successor takes it in; at most one round more than there are windows settles the wrap.
  for (std::size_t i = 0, unchanged = 0; slots.size() > 1 && unchanged < slots.size();) {
    const std::size_t next = (i + 1) % slots.size();
    const Tick gap = wrap(slots[next].start - slots[i].start, period);
    if (gap > slots[i].duration) {
      i = next;
      ++unchanged;
      continue;
    }
    slots[i].duration = std::max(slots[i].duration, gap + slots[next].duration);
    if (slots[i].duration >= period) return {Slot{0, cycle, slots[i].window, true}};
    slots.erase(slots.begin() + static_cast<std::ptrdiff_t>(next));
    if (next < i) --i;
    unchanged = 0;
  }
  return slots;
}

void shorten(std::vector<Slot>& slots, Tick clearance, Tick period) {
  for (Slot& slot : slots) {
    if (slot.open) continue;
    slot.start = wrap(slot.start + clearance, period);
    slot.duration -= clearance;
  }
  std::erase_if(slots, [](const Slot& slot) { return slot.duration <= 0; });
}

bool repeats(const std::vector<Window>& windows, Tick cycle) {
  const std::vector<Slot> full = merged(windows, cycle, cycle);
  return std::all_of(full.begin(), full.end(), [&](const Slot& a) {
    return a.open || std::any_of(full.begin(), full.end(), [&](const Slot& b) {
             return b.duration == a.duration && b.start == wrap(a.start + cycle / 2, cycle);
           });
  });
}

class Compiler {
 public:
  explicit Compiler(const Problem& problem) : m_problem(problem) {}

  Result<Compiled> run() {
    m_out.cycle = to_ticks(m_problem.cycle_s);
    m_out.cycle += m_out.cycle % 2;
    for (const Station& station : m_problem.stations) add_station(station);
    for (std::size_t c = 0; c < m_problem.corridors.size(); ++c) add_corridor(c);
    if (!m_found.empty()) return failure(std::move(m_found));
    return std::move(m_out);
  }

 private:
  void add_station(const Station& station) {
    CompiledStation out;
    out.period = station.half_period ? m_out.cycle / 2 : m_out.cycle;
    out.is_fixed = station.fixed_offset_s.has_value();
    if (out.is_fixed) out.fixed = wrap(to_ticks(*station.fixed_offset_s), out.period);
    out.option_count = station.option_count;
    for (int o = 0; o < station.option_count; ++o)
      if (!station.fixed_option || *station.fixed_option == o) out.options.push_back(o);
    m_out.stations.push_back(std::move(out));
  }

  void add_corridor(std::size_t corridor) {
    m_out.corridors.emplace_back();
    const auto& directions = m_problem.corridors[corridor].directions;
    for (std::size_t d = 0; d < directions.size(); ++d) {
      Frame frame{static_cast<int>(corridor), static_cast<int>(d), directions[d].weight, {}};
      const int index = static_cast<int>(m_out.frames.size());
      double travel_s = 0;  // summed before rounding, so that thirds of a second add up to whole ones
      for (std::size_t s = 0; s < directions[d].stops.size(); ++s) {
        const Stop& stop = directions[d].stops[s];
        if (s > 0) travel_s += stop.travel_s;
        if (travel_s > longest_travel_s) travel_s = entrain::wrap(travel_s, to_seconds(m_out.cycle));
        const Tick shift = wrap(to_ticks(travel_s), m_out.cycle);
        const auto station = static_cast<std::size_t>(stop.station);
        frame.stops.push_back({stop.station, static_cast<int>(m_out.stations[station].visits.size())});
        m_out.stations[station].visits.push_back(visit(stop, index, static_cast<int>(s), shift));
      }
      m_out.corridors.back().push_back(index);
      m_out.frames.push_back(std::move(frame));
    }
  }

  Visit visit(const Stop& stop, int frame, int index, Tick shift) {
    const auto station = static_cast<std::size_t>(stop.station);
    const Tick period = m_out.stations[station].period;
    Visit out{frame, index, shift, {}};
    for (std::size_t o = 0; o < stop.windows.size(); ++o) {
      if (period != m_out.cycle && !repeats(stop.windows[o], m_out.cycle))
        m_found.push_back(error("station " + std::to_string(station) + ", option " + std::to_string(o),
                                "windows that differ between the two halves of the cycle",
                                "windows that repeat after half the cycle",
                                "Repeat the windows or run the station at the full cycle."));
      out.slots.push_back(merged(stop.windows[o], m_out.cycle, period));
      shorten(out.slots.back(), to_ticks(stop.clearance_s), period);
    }
    return out;
  }

  const Problem& m_problem;
  Compiled m_out;
  Diagnostics m_found;
};

}  // namespace

Diagnostics check(const Problem& problem) { return Checker(problem).run(); }

Diagnostics check_lengths(const TwoWayInput& input) {
  Diagnostics found;
  const std::size_t links = input.stations.empty() ? 0 : input.stations.size() - 1;
  const auto expected = std::to_string(links) + ", one between each two stations";
  if (input.forward_travel_s.size() != links)
    found.push_back(error("forward travel times", std::to_string(input.forward_travel_s.size()), expected,
                          "Give one travel time for each link."));
  if (!input.one_way && input.backward_travel_s.size() != links)
    found.push_back(error("backward travel times", std::to_string(input.backward_travel_s.size()), expected,
                          "Give one travel time for each link, or say one_way."));
  return found;
}

Result<Compiled> compile(const Problem& problem) {
  Diagnostics found = check(problem);
  if (!found.empty()) return failure(std::move(found));
  return Compiler(problem).run();
}

Tick longest_slot(const Visit& visit, const std::vector<int>& options) {
  Tick longest = 0;
  for (const int option : options)
    for (const Slot& slot : visit.slots[static_cast<std::size_t>(option)]) longest = std::max(longest, slot.duration);
  return longest;
}

}  // namespace entrain::bands
