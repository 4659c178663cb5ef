// Which option each shared station takes: shares of own best, sorted ascending, lexicographically largest.
#include <algorithm>
#include <map>

#include "coordination/bands/joint.hpp"

namespace entrain::bands {
namespace {

class SharedOptions {
 public:
  SharedOptions(const Compiled& problem, const std::vector<int>& corridors, const std::vector<Alone>& own,
                std::int64_t most_nodes, bool whole_seconds)
      : m_whole_seconds(whole_seconds),
        m_problem(problem),
        m_corridors(corridors),
        m_own(own),
        m_nodes(most_nodes),
        m_options(allowed_options(problem)) {
    for (std::size_t s = 0; s < problem.stations.size(); ++s)
      if (is_shared(problem.stations[s]) && m_options[s].size() > 1) m_shared.push_back(static_cast<int>(s));
  }

  OptionLists run(bool& proved) {
    m_best.assign(m_corridors.size(), -1);
    descend(0);
    proved = m_nodes > 0;
    return m_best_options.empty() ? narrowed_to_first() : m_best_options;
  }

 private:
  bool is_shared(const CompiledStation& station) const {
    int first = -1;
    for (const Visit& visit : station.visits) {
      const int corridor = m_problem.frames[static_cast<std::size_t>(visit.frame)].corridor;
      if (std::find(m_corridors.begin(), m_corridors.end(), corridor) == m_corridors.end()) return false;
      if (first >= 0 && corridor != first) return true;
      first = corridor;
    }
    return false;
  }

  OptionLists narrowed_to_first() {
    for (const int s : m_shared) m_options[static_cast<std::size_t>(s)].resize(1);
    return m_options;
  }

  // Ratio of a corridor with the option lists as they are now: an upper bound while shared stations are open.
  double ratio(std::size_t i) {
    const int corridor = m_corridors[i];
    std::vector<int> key = {corridor};
    for (const int s : stations_of(m_problem, corridor)) {
      const auto& list = m_options[static_cast<std::size_t>(s)];
      key.push_back(std::binary_search(m_shared.begin(), m_shared.end(), s) && list.size() == 1 ? list.front() : -1);
    }
    const auto known = m_known.find(key);
    if (known != m_known.end()) return known->second;
    Alone alone = solve_alone(m_problem, corridor, m_options, 20'000);
    if (m_whole_seconds) alone = solve_alone_whole_seconds(m_problem, corridor, m_options, alone);
    const double value = ratio_of(alone.share, m_own[static_cast<std::size_t>(corridor)]);
    m_known.emplace(std::move(key), value);
    return value;
  }

  std::vector<double> sorted_ratios() {
    std::vector<double> ratios;
    for (std::size_t i = 0; i < m_corridors.size(); ++i) ratios.push_back(ratio(i));
    std::sort(ratios.begin(), ratios.end());
    return ratios;
  }

  // a is larger than b by more than rounding.
  static bool larger(const std::vector<double>& a, const std::vector<double>& b) {
    for (std::size_t i = 0; i < a.size(); ++i)
      if (std::abs(a[i] - b[i]) > 1e-11) return a[i] > b[i];
    return false;
  }

  void descend(std::size_t depth) {
    if (--m_nodes <= 0 && !m_best_options.empty()) return;
    const std::vector<double> bound = sorted_ratios();
    if (!larger(bound, m_best)) return;
    if (depth == m_shared.size()) {
      m_best = bound;
      m_best_options = m_options;
      return;
    }
    std::vector<int>& list = m_options[static_cast<std::size_t>(m_shared[depth])];
    const std::vector<int> all = list;
    for (const int option : all) {
      list = {option};
      descend(depth + 1);
    }
    m_options[static_cast<std::size_t>(m_shared[depth])] = all;
  }

  bool m_whole_seconds;
  const Compiled& m_problem;
  const std::vector<int>& m_corridors;
  const std::vector<Alone>& m_own;
  std::int64_t m_nodes;
  OptionLists m_options, m_best_options;
  std::vector<int> m_shared;
  std::vector<double> m_best;
  std::map<std::vector<int>, double> m_known;
};

}  // namespace

OptionLists choose_shared_options(const Compiled& problem, const std::vector<int>& corridors,
                                  const std::vector<Alone>& own, std::int64_t most_nodes, bool whole_seconds,
                                  bool& proved) {
  return SharedOptions(problem, corridors, own, most_nodes, whole_seconds).run(proved);
}

}  // namespace entrain::bands
