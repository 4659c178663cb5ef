#include "judge.hpp"

#include <algorithm>
#include <cmath>
#include <sstream>

namespace entrain::bands::judge {
namespace {

using Mask = std::uint64_t;

class Cells {
 public:
  Cells(double cycle_s, int cells_per_s)
      : m_per_s(cells_per_s), m_count(cells(cycle_s)), m_all(m_count == 64 ? ~Mask{0} : (Mask{1} << m_count) - 1) {}

  int cells(double seconds) const { return static_cast<int>(std::lround(seconds * m_per_s)); }
  int count() const { return m_count; }

  // Open cells in local time, after clearance.
  Mask mask(const std::vector<Window>& windows, double clearance_s) const {
    Mask open = 0;
    for (const Window& window : windows) {
      const int duration = cells(window.duration_s);
      if (duration == m_count) return m_all;
      for (int i = 0; i < duration; ++i)
        open |= Mask{1} << (((cells(window.start_s) + i) % m_count + m_count) % m_count);
    }
    for (int i = 0; i < cells(clearance_s); ++i) open &= rotate(open, 1);  // every run loses its first cell
    return open;
  }

  Mask rotate(Mask mask, int by) const {
    by = (by % m_count + m_count) % m_count;
    return by == 0 ? mask : ((mask << by) | (mask >> (m_count - by))) & m_all;
  }

  int longest_run(Mask mask) const {
    if (mask == m_all) return m_count;
    int run = 0;
    for (; mask; mask &= rotate(mask, 1)) ++run;
    return run;
  }

  Mask all() const { return m_all; }

 private:
  int m_per_s, m_count;
  Mask m_all;
};

class Search {
 public:
  Search(const TwoWayInput& input, int cells_per_s, double offset_step_s)
      : m_input(input),
        m_cells(input.cycle_s, cells_per_s),
        m_per_s(cells_per_s),
        m_step(m_cells.cells(offset_step_s)) {
    int forward = 0, backward = 0;
    for (std::size_t i = 0; i < input.stations.size(); ++i) {
      m_forward_shift.push_back(forward);
      m_backward_shift.push_back(-backward);  // seen from the first station, where the backward band ends
      if (i + 1 < input.stations.size()) {
        forward += m_cells.cells(input.forward_travel_s[i]);
        if (!input.one_way) backward += m_cells.cells(input.backward_travel_s[i]);
      }
    }
  }

  Best run() {
    descend(0, m_cells.all(), m_cells.all());
    return {m_share, m_total};
  }

 private:
  void descend(std::size_t i, Mask forward, Mask backward) {
    if (i == m_input.stations.size()) return keep(forward, backward);
    const TwoWayStation& station = m_input.stations[i];
    for (std::size_t o = 0; o < station.options.size(); ++o) {
      if (station.fixed_option && static_cast<std::size_t>(*station.fixed_option) != o) continue;
      const Mask f = m_cells.mask(station.options[o].forward, station.forward_clearance_s);
      const Mask b =
          m_input.one_way ? m_cells.all() : m_cells.mask(station.options[o].backward, station.backward_clearance_s);
      const auto place = [&](int x) {
        descend(i + 1, forward & m_cells.rotate(f, x - m_forward_shift[i]),
                backward & m_cells.rotate(b, x - m_backward_shift[i]));
      };
      if (station.fixed_offset_s)
        place(m_cells.cells(*station.fixed_offset_s));
      else if (i == 0 && !any_fixed())
        place(0);
      else
        for (int x = 0; x < m_cells.count() / (station.half_period ? 2 : 1); x += m_step) place(x);
    }
  }

  bool any_fixed() const {
    return std::any_of(m_input.stations.begin(), m_input.stations.end(),
                       [](const TwoWayStation& s) { return s.fixed_offset_s.has_value(); });
  }

  void keep(Mask forward, Mask backward) {
    const double f = static_cast<double>(m_cells.longest_run(forward)) / m_per_s;
    const double b = m_input.one_way ? 0 : static_cast<double>(m_cells.longest_run(backward)) / m_per_s;
    double share = 1e9;
    if (m_input.forward_weight > 0) share = std::min(share, f / m_input.forward_weight);
    if (!m_input.one_way && m_input.backward_weight > 0) share = std::min(share, b / m_input.backward_weight);
    if (share > m_share + 1e-9 || (share > m_share - 1e-9 && f + b > m_total)) m_share = share, m_total = f + b;
  }

  const TwoWayInput& m_input;
  Cells m_cells;
  int m_per_s, m_step;
  std::vector<int> m_forward_shift, m_backward_shift;
  double m_share = 0, m_total = 0;
};

class JointSearch {
 public:
  JointSearch(const Problem& problem, const std::vector<double>& own_best_s, int cells_per_s, double offset_step_s)
      : m_problem(problem),
        m_own(own_best_s),
        m_cells(problem.cycle_s, cells_per_s),
        m_per_s(cells_per_s),
        m_step(m_cells.cells(offset_step_s)) {}

  std::vector<double> run() {
    std::vector<std::vector<Mask>> open;
    for (const Corridor& corridor : m_problem.corridors) open.emplace_back(corridor.directions.size(), m_cells.all());
    descend(0, open);
    return m_best;
  }

 private:
  void descend(std::size_t s, const std::vector<std::vector<Mask>>& open) {
    if (s == m_problem.stations.size()) return keep(open);
    const Station& station = m_problem.stations[s];
    for (int option = 0; option < station.option_count; ++option) {
      if (station.fixed_option && *station.fixed_option != option) continue;
      if (station.fixed_offset_s)
        place(s, option, m_cells.cells(*station.fixed_offset_s), open);
      else
        for (int x = 0; x < m_cells.count() / (station.half_period ? 2 : 1); x += m_step) place(s, option, x, open);
    }
  }

  void place(std::size_t s, int option, int x, std::vector<std::vector<Mask>> open) {
    for (std::size_t c = 0; c < open.size(); ++c)
      for (std::size_t d = 0; d < open[c].size(); ++d) {
        double travel_s = 0;
        for (const Stop& stop : m_problem.corridors[c].directions[d].stops) {
          travel_s += stop.travel_s;
          if (static_cast<std::size_t>(stop.station) != s) continue;
          open[c][d] &= m_cells.rotate(m_cells.mask(stop.windows[static_cast<std::size_t>(option)], stop.clearance_s),
                                       x - m_cells.cells(travel_s));
        }
      }
    descend(s + 1, open);
  }

  void keep(const std::vector<std::vector<Mask>>& open) {
    std::vector<double> ratios;
    for (std::size_t c = 0; c < open.size(); ++c) {
      double share = 1e9;
      for (std::size_t d = 0; d < open[c].size(); ++d)
        if (m_problem.corridors[c].directions[d].weight > 0)
          share = std::min(share, static_cast<double>(m_cells.longest_run(open[c][d])) / m_per_s /
                                      m_problem.corridors[c].directions[d].weight);
      ratios.push_back(m_own[c] > 0 ? std::min(1.0, share / m_own[c]) : 1.0);
    }
    std::sort(ratios.begin(), ratios.end());
    if (m_best.empty() || m_best < ratios) m_best = ratios;
  }

  const Problem& m_problem;
  const std::vector<double>& m_own;
  Cells m_cells;
  int m_per_s, m_step;
  std::vector<double> m_best;
};

}  // namespace

std::vector<double> exhaustive_joint(const Problem& problem, const std::vector<double>& own_best_s, int cells_per_s,
                                     double offset_step_s) {
  return JointSearch(problem, own_best_s, cells_per_s, offset_step_s).run();
}

Problem random_joint(std::mt19937& random, Shape shape, bool orders, int fixed) {
  const auto pick = [&](int from, int to) { return std::uniform_int_distribution<int>(from, to)(random); };
  std::vector<std::vector<int>> lists;
  switch (shape) {
    case Shape::cross:
      lists = {{0, 1, 2}, {3, 1}};
      break;
    case Shape::two_shared:
      lists = {{0, 1, 2}, {2, 0}};
      break;
    case Shape::triangle:
      lists = {{0, 1}, {1, 2}, {2, 0}};
      break;
    case Shape::chain:
      lists = {{0, 1}, {1, 2}, {2, 3}};
      break;
  }
  Problem problem;
  problem.cycle_s = 2 * pick(4, 5);
  const int cycle = static_cast<int>(problem.cycle_s);
  int stations = 0;
  for (const auto& list : lists) stations = std::max(stations, *std::max_element(list.begin(), list.end()) + 1);
  for (int s = 0; s < stations; ++s) problem.stations.push_back({orders ? pick(1, 2) : 1, {}, {}, false});
  for (int f = 0; f < fixed; ++f)
    problem.stations[static_cast<std::size_t>(pick(0, stations - 1))].fixed_offset_s = pick(0, cycle - 1);
  for (const auto& list : lists) {
    Corridor corridor;
    for (const bool forward : {true, false}) {
      Direction direction;
      for (std::size_t i = 0; i < list.size(); ++i) {
        const int station = list[forward ? i : list.size() - 1 - i];
        Stop stop{station, i == 0 ? 0.0 : pick(0, 15), 0, {}};
        for (int o = 0; o < problem.stations[static_cast<std::size_t>(station)].option_count; ++o)
          stop.windows.push_back({{static_cast<double>(pick(0, cycle - 1)), static_cast<double>(pick(2, cycle - 2))}});
        direction.stops.push_back(stop);
      }
      corridor.directions.push_back(direction);
    }
    problem.corridors.push_back(corridor);
  }
  return problem;
}

Best exhaustive(const TwoWayInput& input, int cells_per_s, double offset_step_s) {
  return Search(input, cells_per_s, offset_step_s).run();
}

TwoWayInput random_corridor(std::mt19937& random, const Kind& kind) {
  const auto pick = [&](int from, int to) { return std::uniform_int_distribution<int>(from, to)(random); };
  const auto chance = [&](int percent) { return pick(1, 100) <= percent; };
  const auto time = [&](int from, int to) {
    return static_cast<double>(pick(from * kind.cells_per_s, to * kind.cells_per_s)) / kind.cells_per_s;
  };
  TwoWayInput input;
  const int half = pick(4, 6);
  input.cycle_s = 2 * half;
  input.forward_weight = kind.forward_weight;
  input.backward_weight = kind.backward_weight;
  const auto windows = [&](bool half_period) {
    const int period = half_period ? half : 2 * half;
    std::vector<Window> list;
    if (kind.open && chance(15))
      list.push_back({0, input.cycle_s});
    else
      list.push_back({time(0, 2 * half - 1), time(1, period - 2)});
    if (kind.second_windows && !half_period && chance(50)) list.push_back({time(0, 2 * half - 1), time(1, half - 1)});
    if (half_period && list[0].duration_s < input.cycle_s) list.push_back({list[0].start_s + half, list[0].duration_s});
    return list;
  };
  for (int i = 0; i < kind.stations; ++i) {
    TwoWayStation station;
    station.half_period = kind.half_periods && chance(30);
    const int options = kind.orders ? pick(1, 3) : 1;
    for (int o = 0; o < options; ++o)
      station.options.push_back({windows(station.half_period), windows(station.half_period)});
    if (kind.clearances && chance(50)) station.forward_clearance_s = time(0, 2);
    if (kind.clearances && chance(50)) station.backward_clearance_s = time(0, 2);
    if (kind.fixed && chance(40)) station.fixed_offset_s = pick(0, (station.half_period ? half : 2 * half) - 1);
    if (kind.fixed && options > 1 && chance(30)) station.fixed_option = pick(0, options - 1);
    input.stations.push_back(station);
    if (i > 0) input.forward_travel_s.push_back(time(0, 20)), input.backward_travel_s.push_back(time(0, 20));
  }
  return input;
}

std::string text(const TwoWayInput& input) {
  std::ostringstream out;
  const auto list = [&](const std::vector<Window>& windows) {
    for (const Window& window : windows) out << '[' << window.start_s << '+' << window.duration_s << ']';
  };
  out << "C " << input.cycle_s << " weights " << input.forward_weight << ':' << input.backward_weight;
  for (std::size_t i = 0; i < input.stations.size(); ++i) {
    const TwoWayStation& station = input.stations[i];
    if (i > 0)
      out << " -- " << input.forward_travel_s[i - 1] << '/' << (input.one_way ? 0 : input.backward_travel_s[i - 1])
          << " --";
    out << (station.half_period ? " half" : "") << " clear " << station.forward_clearance_s << '/'
        << station.backward_clearance_s;
    if (station.fixed_offset_s) out << " at " << *station.fixed_offset_s;
    if (station.fixed_option) out << " option " << *station.fixed_option;
    for (const StationOption& option : station.options) {
      out << " f";
      list(option.forward);
      out << " b";
      list(option.backward);
    }
  }
  return out.str();
}

}  // namespace entrain::bands::judge
