#include "timing/cliques.hpp"

#include <algorithm>
#include <limits>

#include "timing/group_times.hpp"

namespace entrain::timing {
namespace {

constexpr std::size_t most_cliques = 4096;

class CliqueSearch {
 public:
  CliqueSearch(const SignalDesign& design, const std::vector<int>& groups) : m_adjacent(design.groups.size(), std::vector<bool>(design.groups.size())) {
    for (const Conflict& c : design.conflicts) {
      m_adjacent[static_cast<std::size_t>(c.a)][static_cast<std::size_t>(c.b)] = true;
      m_adjacent[static_cast<std::size_t>(c.b)][static_cast<std::size_t>(c.a)] = true;
    }
    grow({}, groups, {});
    std::sort(m_found.begin(), m_found.end());
  }
  const std::vector<std::vector<int>>& found() const { return m_found; }

 private:
  std::vector<int> neighbours(const std::vector<int>& of, int g) const {
    std::vector<int> out;
    std::copy_if(of.begin(), of.end(), std::back_inserter(out), [&](int h) { return m_adjacent[static_cast<std::size_t>(g)][static_cast<std::size_t>(h)]; });
    return out;
  }

  void grow(const std::vector<int>& clique, std::vector<int> open, std::vector<int> closed) {  // Bron and Kerbosch (1973)
    if (m_found.size() >= most_cliques) return;
    if (open.empty() && closed.empty()) {
      m_found.push_back(clique);
      std::sort(m_found.back().begin(), m_found.back().end());
      return;
    }
    while (!open.empty()) {
      const int g = open.front();
      std::vector<int> with = clique;
      with.push_back(g);
      grow(with, neighbours(open, g), neighbours(closed, g));
      open.erase(open.begin());
      closed.push_back(g);
    }
  }

  std::vector<std::vector<bool>> m_adjacent;
  std::vector<std::vector<int>> m_found;
};

CyclicOrder as_given(const std::vector<int>& clique, const std::vector<std::vector<double>>& change) {
  CyclicOrder order{0, clique};
  for (std::size_t i = 0; clique.size() > 1 && i < clique.size(); ++i) order.sum += change[i][(i + 1) % clique.size()];
  return order;
}

}  // namespace

std::vector<std::vector<int>> maximal_cliques(const SignalDesign& design, const std::vector<int>& groups) {
  if (groups.empty()) return {};
  return CliqueSearch(design, groups).found();
}

CyclicOrder cheapest_cyclic_order(const std::vector<int>& clique, const std::vector<std::vector<double>>& change) {
  const std::size_t n = clique.size();
  if (n < 3 || n > 12) return as_given(clique, change);
  const std::size_t sets = std::size_t{1} << (n - 1);  // of members 1..n-1; member 0 comes first
  const double unknown = std::numeric_limits<double>::infinity();
  std::vector<std::vector<double>> best(sets, std::vector<double>(n - 1, unknown));
  std::vector<std::vector<int>> before(sets, std::vector<int>(n - 1, -1));
  for (std::size_t last = 0; last + 1 < n; ++last) best[std::size_t{1} << last][last] = change[0][last + 1];
  for (std::size_t set = 1; set < sets; ++set)
    for (std::size_t last = 0; last + 1 < n; ++last) {
      if (best[set][last] == unknown) continue;
      for (std::size_t next = 0; next + 1 < n; ++next) {
        const std::size_t with = set | (std::size_t{1} << next);
        const double sum = best[set][last] + change[last + 1][next + 1];
        if (with != set && sum < best[with][next]) best[with][next] = sum, before[with][next] = static_cast<int>(last);
      }
    }
  CyclicOrder result{unknown, {}};
  std::size_t end = 0;
  for (std::size_t last = 0; last + 1 < n; ++last) {
    const double sum = best[sets - 1][last] + change[last + 1][0];
    if (sum < result.sum) result.sum = sum, end = last;
  }
  for (std::size_t set = sets - 1, last = end; set != 0;) {
    result.order.push_back(clique[last + 1]);
    const int previous = before[set][last];
    set &= ~(std::size_t{1} << last);
    last = static_cast<std::size_t>(previous);
  }
  result.order.push_back(clique[0]);
  std::reverse(result.order.begin(), result.order.end());
  return result;
}

CyclicOrder clique_lost_time(const SignalDesign& design, const std::vector<int>& clique) {
  std::vector<std::vector<double>> change(clique.size(), std::vector<double>(clique.size(), 0));
  for (std::size_t i = 0; i < clique.size(); ++i)
    for (std::size_t j = 0; j < clique.size(); ++j) {
      const Conflict* conflict = i == j ? nullptr : find_conflict(design, clique[i], clique[j]);
      if (!conflict) continue;
      const Group& group = design.groups[static_cast<std::size_t>(clique[i])];
      const Tenths intergreen = conflict->a == clique[i] ? conflict->intergreen_ab : conflict->intergreen_ba;
      change[i][j] = intergreen.seconds() + group.start_up_lost_s - group.end_gain_s;
    }
  return cheapest_cyclic_order(clique, change);
}

}  // namespace entrain::timing
