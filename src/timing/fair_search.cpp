#include "timing/fair_search.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "timing/group_times.hpp"

namespace entrain::timing {
namespace {

constexpr std::int64_t most_nodes = 10'000;  // of all order searches together, so that no signal takes more than about a second

// Fixes the level of the worst group, then of the next, trying every group that can be the one where several tie.
class FairSearch {
 public:
  FairSearch(const PeriodicModel& model, const Closure& base, const std::vector<FlowDemand>& flows)
      : m_model(model), m_base(base), m_flows(flows), m_fixed(flows.size(), false), m_levels(all_levels()) {}

  void hold(const Closure& order) { m_held = order; }

  std::optional<FairSplits> run() {
    if (!feasible(m_model.least_split_s)) return std::nullopt;
    descend(m_model.least_split_s, {}, 0, m_levels.size());
    m_best.proved = m_complete;
    return m_best;
  }

 private:
  bool feasible(const std::vector<int>& splits) {
    if (!may_fit(m_model, splits)) return false;
    if (m_held) {
      Closure closure = *m_held;
      return add_splits(m_model, splits, closure);
    }
    if (m_last_order) {
      Closure closure = *m_last_order;
      if (add_splits(m_model, splits, closure)) return true;
    }
    Closure closure = m_base;
    if (!add_splits(m_model, splits, closure)) return false;
    const SearchResult result = find_order(m_model.problem.choices, closure, m_nodes_left);
    m_complete = m_complete && result.complete;
    if (!result.picks) return false;
    m_last_picks = *result.picks;
    m_last_order = closure_of(m_model.problem.choices, m_base, m_last_picks);
    return true;
  }

  double level_of(std::size_t f, int split_s) const { return degree_of_saturation(m_flows[f].ratio, m_model.cycle_s, split_s - m_flows[f].lost_s); }

  // All degrees that a group can have, ascending.
  std::vector<double> all_levels() const {
    std::vector<double> all;
    for (std::size_t f = 0; f < m_flows.size(); ++f) {
      const int least = m_model.least_split_s[m_flows[f].group];
      for (int split = least; split <= std::max(least, m_model.cycle_s); ++split) all.push_back(level_of(f, split));
    }
    std::sort(all.begin(), all.end());
    all.erase(std::unique(all.begin(), all.end()), all.end());
    return all;
  }

  std::vector<int> raised(std::vector<int> splits, double degree) const {
    for (std::size_t f = 0; f < m_flows.size(); ++f) {
      const std::size_t g = m_flows[f].group;
      if (!m_fixed[f]) splits[g] = split_for(m_flows[f], degree, m_model.least_split_s[g], m_model.cycle_s);
    }
    return splits;
  }

  // Index of the smallest level, below index `from`, at which all open groups can stand; the highest open level always is feasible.
  std::size_t least_level(const std::vector<int>& splits, std::size_t from) {
    std::size_t low = 0, high = std::min(from, m_levels.size() - 1);
    while (low < high) {
      const std::size_t middle = (low + high) / 2;
      if (feasible(raised(splits, m_levels[middle])))
        high = middle;
      else
        low = middle + 1;
    }
    return low;
  }

  bool is_worse_already(const std::vector<double>& vector) const {
    const auto& best = m_best.saturation_descending;
    if (best.empty()) return false;
    return std::lexicographical_compare(best.begin(), best.begin() + static_cast<std::ptrdiff_t>(vector.size()), vector.begin(), vector.end());
  }

  void descend(const std::vector<int>& splits, std::vector<double> vector, std::size_t first, std::size_t level_before) {
    if (vector.size() == m_flows.size()) {
      if (m_best.split_s.empty() || vector < m_best.saturation_descending) keep(splits, vector);
      return;
    }
    const std::size_t level = least_level(splits, level_before);
    vector.push_back(m_levels[level]);
    if (is_worse_already(vector)) return;
    const std::vector<int> at_level = raised(splits, m_levels[level]);
    for (std::size_t f = level == level_before ? first : 0; f < m_flows.size(); ++f) {
      const std::size_t g = m_flows[f].group;
      if (m_fixed[f] || level_of(f, at_level[g]) != m_levels[level]) continue;
      m_fixed[f] = true;
      std::vector<int> next = splits;
      next[g] = at_level[g];
      descend(next, vector, f + 1, level);
      m_fixed[f] = false;
    }
  }

  void keep(const std::vector<int>& splits, const std::vector<double>& vector) {
    if (!feasible(splits)) return;
    m_best.saturation_descending = vector;
    m_best.split_s = splits;
    m_best.picks = m_last_picks;
  }

  const PeriodicModel& m_model;
  const Closure& m_base;
  const std::vector<FlowDemand>& m_flows;
  std::vector<bool> m_fixed;
  std::vector<double> m_levels;
  std::optional<Closure> m_held, m_last_order;
  std::vector<int> m_last_picks;
  FairSplits m_best;
  bool m_complete = true;
  std::int64_t m_nodes_left = most_nodes;
};

}  // namespace

int split_for(const FlowDemand& flow, double degree, int least_s, int cycle_s) {
  int split = least_s;
  const double guess = degree > 0 ? flow.lost_s + flow.ratio * cycle_s / degree : 0;
  if (std::isfinite(guess) && guess - 2 > split) split = static_cast<int>(std::min(guess - 2, 1e6));
  while (degree_of_saturation(flow.ratio, cycle_s, split - flow.lost_s) > degree) ++split;
  return split;
}

std::optional<FairSplits> fair_splits(const PeriodicModel& model, const Closure& base, const std::vector<FlowDemand>& flows) {
  return FairSearch(model, base, flows).run();
}

std::optional<FairSplits> fair_splits_in_order(const PeriodicModel& model, const Closure& base, const std::vector<FlowDemand>& flows,
                                               const std::vector<int>& picks) {
  const auto order = closure_of(model.problem.choices, base, picks);
  if (!order) return std::nullopt;
  FairSearch search(model, base, flows);
  search.hold(*order);
  auto found = search.run();
  if (found) found->picks = picks;
  return found;
}

}  // namespace entrain::timing
