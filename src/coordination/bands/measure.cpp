#include "coordination/bands/measure.hpp"

#include <algorithm>
#include <limits>

namespace entrain::bands {
namespace {

const std::vector<Slot>& slots_of(const Compiled& problem, const StopKey& stop, const Setting& setting) {
  const auto station = static_cast<std::size_t>(stop.station);
  return problem.stations[station]
      .visits[static_cast<std::size_t>(stop.visit)]
      .slots[static_cast<std::size_t>(setting.options[station])];
}

// When the slot opens, seen from the first stop.
Tick opening(const Compiled& problem, const StopKey& stop, const Slot& slot, const Setting& setting) {
  const auto station = static_cast<std::size_t>(stop.station);
  return setting.offsets[station] + slot.start -
         problem.stations[station].visits[static_cast<std::size_t>(stop.visit)].shift;
}

// Edges of the band's windows around the band, leading edge at 0: the band is [max left, min right].
struct Edges {
  int station = 0;
  Tick left = 0, right = 0;
};

// The largest left edge (or the smallest right edge, negated) among stations other than one.
class Extreme {
 public:
  void add(int station, Tick value) {
    if (station == m_station)
      m_first = std::max(m_first, value);
    else if (value > m_first)
      m_second = m_first, m_first = value, m_station = station;
    else
      m_second = std::max(m_second, value);
  }
  Tick without(int station) const { return station == m_station ? m_second : m_first; }

 private:
  Tick m_first = -unlimited, m_second = -unlimited;
  int m_station = -1;
};

class Describer {
 public:
  Describer(const Compiled& problem, const Setting& setting) : m_problem(problem), m_setting(setting) {}

  Answer run() {
    const std::size_t count = m_problem.stations.size();
    m_early.assign(count, unlimited);
    m_late.assign(count, unlimited);
    m_early_loss.assign(count, 0);
    m_late_loss.assign(count, 0);
    for (const auto& frames : m_problem.corridors) {
      m_answer.corridors.emplace_back();
      for (const int frame : frames) m_answer.corridors.back().directions.push_back(describe_frame(frame));
    }
    for (std::size_t i = 0; i < count; ++i) m_answer.stations.push_back(station_answer(i));
    return m_answer;
  }

 private:
  StationAnswer station_answer(std::size_t index) const {
    const Tick period = m_problem.stations[index].period;
    StationAnswer answer{
        m_setting.options[index], to_seconds(m_setting.offsets[index]), to_seconds(period), to_seconds(period), 0, 0};
    if (m_early[index] + 0 < period)
      answer.early_s = to_seconds(m_early[index]), answer.early_loss = m_early_loss[index];
    if (m_late[index] < period) answer.late_s = to_seconds(m_late[index]), answer.late_loss = m_late_loss[index];
    return answer;
  }

  DirectionAnswer describe_frame(int index) {
    const Frame& frame = m_problem.frames[static_cast<std::size_t>(index)];
    const FrameBand band = measure(m_problem, index, m_setting);
    DirectionAnswer answer;
    answer.width_s = to_seconds(band.width);
    answer.start_s = to_seconds(band.start);
    Tick least = m_problem.cycle;
    std::vector<Edges> edges;
    for (std::size_t s = 0; s < frame.stops.size(); ++s) {
      Tick longest = 0;
      for (const Slot& slot : slots_of(m_problem, frame.stops[s], m_setting))
        longest = std::max(longest, slot.duration);
      least = std::min(least, longest);
      answer.stops.push_back(band.width > 0 ? stop_answer(frame.stops[s], band, edges) : StopAnswer{});
      const StopAnswer& stop = answer.stops.back();
      if (stop.window >= 0 && !stop.always_open && (edges.back().left == 0 || edges.back().right == band.width))
        answer.pinching.push_back(static_cast<int>(s));
    }
    answer.least_window_s = to_seconds(least);
    if (band.width > 0) limit_freedom(edges, band.width);
    return answer;
  }

  StopAnswer stop_answer(const StopKey& stop, const FrameBand& band, std::vector<Edges>& edges) const {
    const Tick period = m_problem.stations[static_cast<std::size_t>(stop.station)].period;
    for (const Slot& slot : slots_of(m_problem, stop, m_setting)) {
      if (slot.open) return {slot.window, 0, 0, true};
      const Tick lead = wrap(band.start - opening(m_problem, stop, slot, m_setting), period);
      if (lead + band.width > slot.duration) continue;
      edges.push_back({stop.station, -lead, slot.duration - lead});
      return {slot.window, to_seconds(lead), to_seconds(slot.duration - lead - band.width), false};
    }
    return {};
  }

  void limit_freedom(const std::vector<Edges>& edges, Tick width) {
    Extreme left, right;
    for (const Edges& e : edges) left.add(e.station, e.left), right.add(e.station, -e.right);
    std::vector<Edges> own = edges;  // by station: largest left, smallest right
    std::sort(own.begin(), own.end(), [](const Edges& a, const Edges& b) { return a.station < b.station; });
    for (std::size_t i = 0; i < own.size();) {
      Edges all = own[i];
      for (++i; i < own.size() && own[i].station == all.station; ++i)
        all.left = std::max(all.left, own[i].left), all.right = std::min(all.right, own[i].right);
      const auto station = static_cast<std::size_t>(all.station);
      narrow(m_early[station], m_early_loss[station], all.right - left.without(all.station) - width);
      narrow(m_late[station], m_late_loss[station], -right.without(all.station) - all.left - width);
    }
  }

  static void narrow(Tick& range, double& loss, Tick limit) {
    if (limit < range)
      range = limit, loss = 1;
    else if (limit == range)
      loss += 1;
  }

  const Compiled& m_problem;
  const Setting& m_setting;
  Answer m_answer;
  std::vector<Tick> m_early, m_late;
  std::vector<double> m_early_loss, m_late_loss;
};

}  // namespace

FrameBand Measure::operator()(const Compiled& problem, int frame, const Setting& setting) {
  m_stations.clear();
  m_terms.clear();
  for (const StopKey& stop : problem.frames[static_cast<std::size_t>(frame)].stops) {
    const Tick period = problem.stations[static_cast<std::size_t>(stop.station)].period;
    const std::vector<Slot>& slots = slots_of(problem, stop, setting);
    if (slots.empty()) return {};
    if (slots.front().open) continue;
    const int begin = static_cast<int>(m_terms.size());
    for (const Slot& slot : slots)
      m_terms.push_back({wrap(-opening(problem, stop, slot, setting), period), slot.duration});
    m_stations.push_back({period, begin, static_cast<int>(m_terms.size())});
  }
  const Peak peak = m_sweep.highest(m_stations, m_terms, problem.cycle);
  if (peak.value <= 0) return {};
  return {std::min(peak.value, problem.cycle), peak.phi};
}

FrameBand measure(const Compiled& problem, int frame, const Setting& setting) {
  return Measure()(problem, frame, setting);
}

std::vector<FrameBand> measure_all(const Compiled& problem, const Setting& setting) {
  std::vector<FrameBand> bands;
  for (std::size_t f = 0; f < problem.frames.size(); ++f)
    bands.push_back(measure(problem, static_cast<int>(f), setting));
  return bands;
}

Answer describe(const Compiled& problem, const Setting& setting) { return Describer(problem, setting).run(); }

double share_of(const Compiled& problem, int corridor, const std::vector<FrameBand>& bands) {
  double share = std::numeric_limits<double>::infinity();
  for (const int frame : problem.corridors[static_cast<std::size_t>(corridor)]) {
    const double weight = problem.frames[static_cast<std::size_t>(frame)].weight;
    if (weight > 0) share = std::min(share, static_cast<double>(bands[static_cast<std::size_t>(frame)].width) / weight);
  }
  return share;
}

}  // namespace entrain::bands
