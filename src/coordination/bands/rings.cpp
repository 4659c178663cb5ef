// Corridors whose sharing forms rings: shares of own best raised together, then those that can rise further, then the totals.
#include <algorithm>
#include <cmath>

#include "coordination/bands/band_network.hpp"
#include "coordination/bands/joint.hpp"

namespace entrain::bands {
namespace {

constexpr double ratio_step = 1e-9;

class Ring {
 public:
  Ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own, std::int64_t most_nodes)
      : m_problem(problem), m_corridors(corridors), m_own(own), m_nodes(most_nodes), m_options(allowed_options(problem)) {}

  RingAnswer run() {
    std::vector<double> ratios(m_corridors.size(), 0.0);
    if (!fits(demands_at(ratios))) {  // not even bands of width 0 meet: nothing can be promised
      m_answer.demands.assign(m_problem.frames.size(), {});
      m_answer.proved = m_answer.proved && !m_unknown;
      m_answer.least_ratio_bound = m_unknown ? 1 : 0;
      return m_answer;
    }
    std::vector<bool> frozen(m_corridors.size(), false);
    double level = raise(ratios, frozen);
    m_answer.least_ratio_bound = m_least_fail;
    while (level < 1) {
      level = freeze_one(ratios, frozen);
      if (std::find(frozen.begin(), frozen.end(), false) == frozen.end()) break;
    }
    fits(demands_at(ratios));
    const bool proved = m_answer.proved;
    widen();
    m_answer.proved = proved;
    m_answer.demands = m_found;
    return m_answer;
  }

 private:
  std::vector<BandDemand> demands_at(const std::vector<double>& ratios) const {
    std::vector<BandDemand> demands(m_problem.frames.size());
    for (std::size_t i = 0; i < m_corridors.size(); ++i) {
      const Alone& own = m_own[static_cast<std::size_t>(m_corridors[i])];
      const auto& frames = m_problem.corridors[static_cast<std::size_t>(m_corridors[i])];
      for (std::size_t d = 0; d < frames.size(); ++d) {
        const double weight = m_problem.frames[static_cast<std::size_t>(frames[d])].weight;
        BandDemand& demand = demands[static_cast<std::size_t>(frames[d])];
        demand.active = own.all_directions ? weight > 0 : static_cast<int>(d) == own.single;
        const double share = own.all_directions ? own.share * weight : static_cast<double>(d == 0 ? own.widths.first : own.widths.second);
        demand.width = demand.active ? static_cast<Tick>(std::floor(ratios[i] * share + 0.25)) : 0;
      }
    }
    return demands;
  }

  bool fits(std::vector<BandDemand> demands) {
    std::int64_t nodes = std::min<std::int64_t>(m_nodes, 4000);
    m_nodes -= nodes;
    const Verdict verdict = decide(m_problem, m_corridors, demands, m_options, nodes);
    m_nodes += std::max<std::int64_t>(0, nodes);
    m_unknown = verdict == Verdict::unknown;
    if (m_unknown) m_answer.proved = false;
    if (verdict == Verdict::fits) m_found = std::move(demands);
    return verdict == Verdict::fits;
  }

  // Raises all that are not frozen to one common ratio, as high as it goes.
  double raise(std::vector<double>& ratios, const std::vector<bool>& frozen) {
    const auto at = [&](double level) {
      std::vector<double> tried = ratios;
      for (std::size_t i = 0; i < tried.size(); ++i)
        if (!frozen[i]) tried[i] = std::max(tried[i], level);
      return tried;
    };
    double low = 0, high = 1;
    m_least_fail = 1;
    if (fits(demands_at(at(1)))) low = 1;
    while (high - low > ratio_step) {
      const double middle = (low + high) / 2;
      if (fits(demands_at(at(middle)))) low = middle;
      else {
        high = middle;
        if (!m_unknown) m_least_fail = middle;
      }
    }
    ratios = at(low);
    return low;
  }

  // One corridor stays where it is; the one whose staying lets the others rise the most.
  double freeze_one(std::vector<double>& ratios, std::vector<bool>& frozen) {
    double best = -1;
    std::size_t chosen = 0;
    std::vector<double> best_ratios = ratios;
    for (std::size_t i = 0; i < ratios.size(); ++i) {
      if (frozen[i]) continue;
      frozen[i] = true;
      std::vector<double> tried = ratios;
      const double level = std::find(frozen.begin(), frozen.end(), false) == frozen.end() ? ratios[i] : raise(tried, frozen);
      frozen[i] = false;
      if (level > best + 10 * ratio_step) best = level, chosen = i, best_ratios = tried;
    }
    frozen[chosen] = true;
    ratios = best_ratios;
    return best;
  }

  // What the shares leave, direction by direction, to a millisecond.
  void widen() {
    for (const int corridor : m_corridors) {
      const Alone& own = m_own[static_cast<std::size_t>(corridor)];
      const auto& frames = m_problem.corridors[static_cast<std::size_t>(corridor)];
      if (!own.all_directions) continue;
      for (std::size_t d = 0; d < frames.size(); ++d) widen_direction(static_cast<std::size_t>(frames[d]));
    }
  }

  void widen_direction(std::size_t frame) {
    Tick low = m_found[frame].width, high = low;
    for (const StopKey& stop : m_problem.frames[frame].stops) {
      const auto station = static_cast<std::size_t>(stop.station);
      const Tick longest = longest_slot(m_problem.stations[station].visits[static_cast<std::size_t>(stop.visit)], m_options[station]);
      high = &stop == &m_problem.frames[frame].stops.front() ? longest : std::min(high, longest);
    }
    const auto reach = [&](Tick width) {
      std::vector<BandDemand> wider = m_found;
      wider[frame].active = true;
      wider[frame].width = width;
      return fits(std::move(wider));
    };
    if (low >= high || !reach(low + 1) || reach(high)) return;
    while (high - low > ticks_per_second / 1000) {
      const Tick middle = low + (high - low) / 2;
      if (reach(middle)) low = middle;
      else high = middle;
    }
  }

  const Compiled& m_problem;
  const std::vector<int>& m_corridors;
  const std::vector<Alone>& m_own;
  std::int64_t m_nodes;
  OptionLists m_options;
  std::vector<BandDemand> m_found;
  RingAnswer m_answer;
  double m_least_fail = 1;
  bool m_unknown = false;
};

// Sorted ratios of the corridors, then the sum of all widths: larger is better.
struct Worth {
  std::vector<double> ratios;
  Tick total = 0;
  bool operator<(const Worth& other) const {
    for (std::size_t i = 0; i < ratios.size(); ++i)
      if (std::abs(ratios[i] - other.ratios[i]) > 1e-11) return ratios[i] < other.ratios[i];
    return total < other.total;
  }
};

class Rounding {
 public:
  Rounding(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own, Setting& setting)
      : m_problem(problem), m_corridors(corridors), m_own(own), m_setting(setting), m_bands(problem.frames.size()) {}

  void run() {
    for (std::size_t s = 0; s < m_problem.stations.size(); ++s)
      if (is_ours(s) && !m_problem.stations[s].is_fixed) m_free.push_back(s);
    for (const std::size_t s : m_free) {
      const Tick half = ticks_per_second / 2;
      m_setting.offsets[s] = wrap(second_floor(m_setting.offsets[s] + half), m_problem.stations[s].period);
    }
    for (std::size_t f = 0; f < m_bands.size(); ++f) m_bands[f] = measure(m_problem, static_cast<int>(f), m_setting);
    m_worth = worth();
    for (int round = 0; round < 50 && improve(); ++round) {}
  }

 private:
  bool is_ours(std::size_t station) const {
    const auto& visits = m_problem.stations[station].visits;
    return std::any_of(visits.begin(), visits.end(), [&](const Visit& visit) {
      return std::find(m_corridors.begin(), m_corridors.end(), m_problem.frames[static_cast<std::size_t>(visit.frame)].corridor) != m_corridors.end();
    });
  }

  Worth worth() const {
    Worth worth;
    for (const int c : m_corridors) {
      const Alone& own = m_own[static_cast<std::size_t>(c)];
      const auto& frames = m_problem.corridors[static_cast<std::size_t>(c)];
      const FrameBand& single = m_bands[static_cast<std::size_t>(frames[static_cast<std::size_t>(own.single)])];
      const Tick alone = own.single == 0 ? own.widths.first : own.widths.second;
      worth.ratios.push_back(own.all_directions ? ratio_of(share_of(m_problem, c, m_bands), own) : alone > 0 ? static_cast<double>(single.width) / static_cast<double>(alone) : 1.0);
      for (const int frame : frames) worth.total += m_bands[static_cast<std::size_t>(frame)].width;
    }
    std::sort(worth.ratios.begin(), worth.ratios.end());
    return worth;
  }

  bool try_offset(std::size_t station, Tick offset) {
    const Tick before = m_setting.offsets[station];
    const std::vector<FrameBand> bands = m_bands;
    m_setting.offsets[station] = wrap(offset, m_problem.stations[station].period);
    for (const Visit& visit : m_problem.stations[station].visits) m_bands[static_cast<std::size_t>(visit.frame)] = measure(m_problem, visit.frame, m_setting);
    Worth now = worth();
    if (m_worth < now) {
      m_worth = std::move(now);
      return true;
    }
    m_setting.offsets[station] = before;
    m_bands = bands;
    return false;
  }

  bool improve() {
    bool better = false;
    for (const std::size_t station : m_free)
      for (const Tick step : {1, -1, 2, -2})
        while (try_offset(station, m_setting.offsets[station] + step * ticks_per_second)) better = true;
    return better;
  }

  const Compiled& m_problem;
  const std::vector<int>& m_corridors;
  const std::vector<Alone>& m_own;
  Setting& m_setting;
  std::vector<FrameBand> m_bands;
  std::vector<std::size_t> m_free;
  Worth m_worth;
};

}  // namespace

RingAnswer solve_ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own, std::int64_t most_nodes) {
  return Ring(problem, corridors, own, most_nodes).run();
}

void round_ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own, Setting& setting) {
  Rounding(problem, corridors, own, setting).run();
}

}  // namespace entrain::bands
