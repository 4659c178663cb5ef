// Corridors whose sharing forms rings: shares of own best raised together, then those that can rise further, then the
// totals.
#include <algorithm>
#include <cmath>

#include "coordination/bands/band_network.hpp"
#include "coordination/bands/joint.hpp"

namespace entrain::bands {
namespace {

constexpr double ratio_step = 1e-9;
constexpr int most_undecided = 4;  // a level that needs more decisions like that is left where it is
constexpr std::int64_t most_nodes_a_decision = 4000;

class Ring {
 public:
  Ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own, const Setting& known,
       std::int64_t most_nodes)
      : m_problem(problem),
        m_corridors(corridors),
        m_own(own),
        m_nodes(most_nodes),
        m_options(allowed_options(problem)) {
    take_known(known);
  }

  RingAnswer run() {
    std::vector<double> ratios(m_corridors.size(), 0.0);
    std::vector<bool> frozen(m_corridors.size(), false);
    double level = raise(ratios, frozen, *std::min_element(m_known.begin(), m_known.end()));
    m_answer.least_ratio_bound = m_least_fail;
    while (level < 1) {
      level = freeze_one(ratios, frozen);
      if (std::find(frozen.begin(), frozen.end(), false) == frozen.end()) break;
    }
    fits(demands_at(ratios));
    const bool proved = m_answer.proved;
    widen();
    m_answer.proved = proved;
    m_answer.demands = m_best;
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
        const double share = own.all_directions ? own.share * weight
                                                : static_cast<double>(d == 0 ? own.widths.first : own.widths.second);
        demand.width = demand.active ? static_cast<Tick>(std::floor(ratios[i] * share + 0.25)) : 0;
      }
    }
    return demands;
  }

  bool fits(std::vector<BandDemand> demands) {
    std::int64_t nodes = std::min(m_nodes, most_nodes_a_decision);
    m_nodes -= nodes;
    const Verdict verdict = decide(m_problem, m_corridors, demands, m_options, nodes);
    m_nodes += std::max<std::int64_t>(0, nodes);
    m_unknown = verdict == Verdict::unknown;
    if (m_unknown) m_answer.proved = false;
    if (verdict == Verdict::fits) keep(std::move(demands));
    return verdict == Verdict::fits;
  }

  // The bands of a setting are demands that fit.
  void take_known(const Setting& known) {
    const std::vector<FrameBand> bands = measure_all(m_problem, known);
    m_known = ratios_of(m_problem, m_corridors, m_own, bands);
    m_best = demands_at(std::vector<double>(m_corridors.size(), 0.0));
    for (std::size_t f = 0; f < m_best.size(); ++f) {
      m_best[f].active = m_best[f].active && bands[f].width > 0;
      m_best[f].width = bands[f].width;
      m_best[f].edge = bands[f].start;
    }
    m_best_worth = worth_of(m_problem, m_corridors, m_own, bands);
  }

  void keep(std::vector<BandDemand> demands) {
    std::vector<FrameBand> bands;
    for (const BandDemand& demand : demands) bands.push_back({demand.active ? demand.width : 0, demand.edge});
    Worth worth = worth_of(m_problem, m_corridors, m_own, bands);
    if (!(m_best_worth < worth)) return;
    m_best_worth = std::move(worth);
    m_best = std::move(demands);
  }

  // Raises all that are not frozen to one common ratio, as high as it goes.
  double raise(std::vector<double>& ratios, const std::vector<bool>& frozen, double low) {
    const auto at = [&](double level) {
      std::vector<double> tried = ratios;
      for (std::size_t i = 0; i < tried.size(); ++i)
        if (!frozen[i]) tried[i] = std::max(tried[i], level);
      return tried;
    };
    double high = 1;
    m_least_fail = 1;
    if (low < 1 && fits(demands_at(at(1)))) low = 1;
    for (int undecided = 0; high - low > ratio_step && undecided < most_undecided;) {
      const double middle = (low + high) / 2;
      if (fits(demands_at(at(middle))))
        low = middle;
      else {
        high = middle;
        if (m_unknown)
          ++undecided;
        else
          m_least_fail = middle;
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
      const double level =
          std::find(frozen.begin(), frozen.end(), false) == frozen.end() ? ratios[i] : raise(tried, frozen, ratios[i]);
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
    Tick low = m_best[frame].width, high = low;
    for (const StopKey& stop : m_problem.frames[frame].stops) {
      const auto station = static_cast<std::size_t>(stop.station);
      const Tick longest =
          longest_slot(m_problem.stations[station].visits[static_cast<std::size_t>(stop.visit)], m_options[station]);
      high = &stop == &m_problem.frames[frame].stops.front() ? longest : std::min(high, longest);
    }
    const auto reach = [&](Tick width) {
      std::vector<BandDemand> wider = m_best;
      wider[frame].active = true;
      wider[frame].width = width;
      return fits(std::move(wider));
    };
    if (low >= high || !reach(low + 1) || reach(high)) return;
    while (high - low > ticks_per_second / 1000) {
      const Tick middle = low + (high - low) / 2;
      if (reach(middle))
        low = middle;
      else
        high = middle;
    }
  }

  const Compiled& m_problem;
  const std::vector<int>& m_corridors;
  const std::vector<Alone>& m_own;
  std::int64_t m_nodes;
  OptionLists m_options;
  std::vector<double> m_known;  // ratios that fit from the start
  std::vector<BandDemand> m_best;
  Worth m_best_worth;
  RingAnswer m_answer;
  double m_least_fail = 1;
  bool m_unknown = false;
};

}  // namespace

RingAnswer solve_ring(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                      const Setting& known, std::int64_t most_nodes) {
  return Ring(problem, corridors, own, known, most_nodes).run();
}

}  // namespace entrain::bands
