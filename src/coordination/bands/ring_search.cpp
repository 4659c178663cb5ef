// Corridors in rings, step by step: one station's offset or option at a time, kept where the fairness vector grows.
#include <algorithm>
#include <cmath>

#include "coordination/bands/joint.hpp"

namespace entrain::bands {
namespace {

constexpr int most_rounds = 40;

class RingSearch {
 public:
  RingSearch(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own, Setting setting,
             Tick step)
      : m_problem(problem),
        m_corridors(corridors),
        m_own(own),
        m_setting(std::move(setting)),
        m_step(step),
        m_bands(measure_all(problem, m_setting)),
        m_worth(worth_of(problem, corridors, own, m_bands)) {
    for (const int c : corridors)
      for (const int s : stations_of(problem, c)) m_free.push_back(s);
    std::sort(m_free.begin(), m_free.end());
    m_free.erase(std::unique(m_free.begin(), m_free.end()), m_free.end());
  }

  void run() {
    for (int round = 0; round < most_rounds; ++round) {
      bool better = false;
      for (const int s : m_free) better = nudge(static_cast<std::size_t>(s)) || better;
      if (!better) better = scan_worst();
      if (!better) return;
    }
  }

  const Setting& setting() const { return m_setting; }
  const Worth& worth() const { return m_worth; }

 private:
  bool try_place(std::size_t s, int option, Tick offset) {
    const CompiledStation& station = m_problem.stations[s];
    const int option_before = m_setting.options[s];
    const Tick before = m_setting.offsets[s];
    m_saved.clear();
    for (const Visit& visit : station.visits) m_saved.push_back(m_bands[static_cast<std::size_t>(visit.frame)]);
    m_setting.options[s] = option;
    m_setting.offsets[s] = wrap(offset, station.period);
    for (const Visit& visit : station.visits)
      m_bands[static_cast<std::size_t>(visit.frame)] = m_measure(m_problem, visit.frame, m_setting);
    Worth now = worth_of(m_problem, m_corridors, m_own, m_bands);
    if (m_worth < now) {
      m_worth = std::move(now);
      return true;
    }
    m_setting.options[s] = option_before;
    m_setting.offsets[s] = before;
    for (std::size_t i = station.visits.size(); i-- > 0;)
      m_bands[static_cast<std::size_t>(station.visits[i].frame)] = m_saved[i];
    return false;
  }

  bool nudge(std::size_t s) {
    if (m_problem.stations[s].is_fixed) return false;
    bool better = false;
    for (const Tick step : {1, -1, 2, -2, 5, -5})
      while (try_place(s, m_setting.options[s], m_setting.offsets[s] + step * m_step)) better = true;
    return better;
  }

  // Every offset and option of the stations of the corridor that is worst off.
  bool scan_worst() {
    const std::vector<double> ratios = ratios_of(m_problem, m_corridors, m_own, m_bands);
    const auto worst = std::min_element(ratios.begin(), ratios.end()) - ratios.begin();
    bool better = false;
    for (const int index : stations_of(m_problem, m_corridors[static_cast<std::size_t>(worst)])) {
      const auto s = static_cast<std::size_t>(index);
      const CompiledStation& station = m_problem.stations[s];
      for (const int option : station.options) {
        if (station.is_fixed) {
          better = try_place(s, option, station.fixed) || better;
          continue;
        }
        for (Tick offset = 0; offset < station.period; offset += m_step)
          better = try_place(s, option, offset) || better;
      }
    }
    return better;
  }

  const Compiled& m_problem;
  const std::vector<int>& m_corridors;
  const std::vector<Alone>& m_own;
  Setting m_setting;
  Tick m_step;
  std::vector<FrameBand> m_bands, m_saved;
  Worth m_worth;
  std::vector<int> m_free;
  Measure m_measure;
};

// The root's own best; then whichever corridor meets a station already placed is moved there and places the rest of its
// own.
Setting glued(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
              Setting setting, std::size_t root, Tick step) {
  std::vector<bool> placed(problem.stations.size(), false), done(corridors.size(), false);
  for (std::size_t s = 0; s < placed.size(); ++s) placed[s] = problem.stations[s].is_fixed;
  for (std::size_t count = 0; count < corridors.size(); ++count) {
    std::size_t next = corridors.size();
    Tick shift = 0;
    for (std::size_t k = 0; k < corridors.size() && (count == 0 ? k <= root : next == corridors.size()); ++k) {
      if (done[k] || (count == 0 && k != root)) continue;
      const auto& shape = own[static_cast<std::size_t>(corridors[k])].placed;
      const auto met = std::find_if(shape.begin(), shape.end(),
                                    [&](const Placed& p) { return placed[static_cast<std::size_t>(p.station)]; });
      if (met == shape.end() && count > 0) continue;
      next = k;
      shift = met == shape.end()
                  ? 0
                  : setting.offsets[static_cast<std::size_t>(met->station)] - met->from - met->length / 2;
    }
    if (next == corridors.size()) break;
    done[next] = true;
    for (const Placed& p : own[static_cast<std::size_t>(corridors[next])].placed) {
      const auto s = static_cast<std::size_t>(p.station);
      if (placed[s]) continue;
      placed[s] = true;
      setting.options[s] = p.option;
      const Tick at = p.from + p.length / 2 + shift + step / 2;
      setting.offsets[s] = wrap(at - wrap(at, step), problem.stations[s].period);
    }
  }
  return setting;
}

}  // namespace

bool Worth::operator<(const Worth& other) const {
  for (std::size_t i = 0; i < ratios.size(); ++i)
    if (std::abs(ratios[i] - other.ratios[i]) > 1e-11) return ratios[i] < other.ratios[i];
  return total < other.total;
}

std::vector<double> ratios_of(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                              const std::vector<FrameBand>& bands) {
  std::vector<double> ratios;
  for (const int c : corridors) {
    const Alone& alone = own[static_cast<std::size_t>(c)];
    const int frame = problem.corridors[static_cast<std::size_t>(c)][static_cast<std::size_t>(alone.single)];
    const Tick most = alone.single == 0 ? alone.widths.first : alone.widths.second;
    if (alone.all_directions)
      ratios.push_back(ratio_of(share_of(problem, c, bands), alone));
    else
      ratios.push_back(most > 0 ? std::min(1.0, static_cast<double>(bands[static_cast<std::size_t>(frame)].width) /
                                                    static_cast<double>(most))
                                : 1.0);
  }
  return ratios;
}

Worth worth_of(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
               const std::vector<FrameBand>& bands) {
  Worth worth{ratios_of(problem, corridors, own, bands), 0};
  std::sort(worth.ratios.begin(), worth.ratios.end());
  for (const int c : corridors)
    for (const int frame : problem.corridors[static_cast<std::size_t>(c)])
      worth.total += bands[static_cast<std::size_t>(frame)].width;
  return worth;
}

Setting search_ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                    const Setting& base, Tick step) {
  Setting best = base;
  Worth best_worth = worth_of(problem, corridors, own, measure_all(problem, base));
  for (std::size_t root = 0; root < corridors.size(); ++root) {
    RingSearch search(problem, corridors, own, glued(problem, corridors, own, base, root, step), step);
    search.run();
    if (best_worth < search.worth()) best = search.setting(), best_worth = search.worth();
  }
  return best;
}

Setting round_ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                   Setting setting) {
  for (const int c : corridors)
    for (const int index : stations_of(problem, c)) {
      const auto s = static_cast<std::size_t>(index);
      if (!problem.stations[s].is_fixed)
        setting.offsets[s] = wrap(second_floor(setting.offsets[s] + ticks_per_second / 2), problem.stations[s].period);
    }
  RingSearch search(problem, corridors, own, std::move(setting), ticks_per_second);
  search.run();
  return search.setting();
}

}  // namespace entrain::bands
