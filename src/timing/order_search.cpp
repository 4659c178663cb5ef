#include "timing/order_search.hpp"

#include <algorithm>
#include <limits>

namespace entrain::timing {

Closure::Closure(int times) : m_times(static_cast<std::size_t>(times)), m_gap(m_times * m_times, unrelated) {
  for (std::size_t i = 0; i < m_times; ++i) m_gap[i * m_times + i] = 0;
}

bool Closure::add(const Difference& d) {
  if (!admits(d)) return false;
  if (gap(d.from, d.to) >= d.least) return true;
  const auto from = static_cast<std::size_t>(d.from), to = static_cast<std::size_t>(d.to);
  const int* tail = &m_gap[to * m_times];
  for (std::size_t a = 0; a < m_times; ++a) {
    int* row = &m_gap[a * m_times];
    const int lead = row[from] + d.least;
    if (row[from] < unrelated / 2 || row[to] >= lead || a == to) continue;
    for (std::size_t b = 0; b < m_times; ++b) row[b] = std::max(row[b], lead + tail[b]);
  }
  return true;
}

bool Closure::add(const std::vector<Difference>& differences) {
  return std::all_of(differences.begin(), differences.end(), [&](const Difference& d) { return add(d); });
}

bool Closure::admits(const std::vector<Difference>& differences) const {
  return std::all_of(differences.begin(), differences.end(), [&](const Difference& d) { return admits(d); });
}

namespace {

// Room an alternative leaves: the least over its differences of how far they could still grow.
int room(const Closure& closure, const std::vector<Difference>& alternative) {
  int least = std::numeric_limits<int>::max();
  for (const Difference& d : alternative) {
    if (!closure.is_free(d.to, d.from)) least = std::min(least, -closure.gap(d.to, d.from) - d.least);
  }
  return least;
}

class Search {
 public:
  Search(const std::vector<Choice>& choices, std::int64_t& nodes_left) : m_choices(choices), m_left(nodes_left) {}

  // Calls `found` at every complete order; stops when it returns false. Returns false when stopped or out of nodes.
  bool run(Closure closure, std::vector<int> picks, const std::function<bool(const std::vector<int>&)>& found) {
    if (m_left <= 0) return m_complete = false;
    --m_left;
    if (!draw_consequences(closure, picks)) return true;
    const auto open = tightest(closure, picks);
    if (!open) return found(picks);
    const auto& alternatives = m_choices[*open].alternatives;
    for (const int pick : by_room(closure, alternatives)) {
      Closure next = closure;
      if (!next.add(alternatives[static_cast<std::size_t>(pick)])) continue;
      picks[*open] = pick;
      if (!run(std::move(next), picks, found)) return false;
    }
    return true;
  }

  bool complete() const { return m_complete; }

 private:
  // Takes every choice that has one alternative left; false if one has none.
  bool draw_consequences(Closure& closure, std::vector<int>& picks) const {
    for (bool changed = true; changed;) {
      changed = false;
      for (std::size_t c = 0; c < picks.size(); ++c) {
        if (picks[c] >= 0) continue;
        int only = -1, count = 0;
        const auto& alternatives = m_choices[c].alternatives;
        for (std::size_t a = 0; a < alternatives.size(); ++a)
          if (closure.admits(alternatives[a])) only = static_cast<int>(a), ++count;
        if (count == 0) return false;
        if (count > 1) continue;
        if (!closure.add(alternatives[static_cast<std::size_t>(only)])) return false;
        picks[c] = only;
        changed = true;
      }
    }
    return true;
  }

  std::optional<std::size_t> tightest(const Closure& closure, const std::vector<int>& picks) const {
    std::optional<std::size_t> best;
    int best_room = std::numeric_limits<int>::max();
    for (std::size_t c = 0; c < picks.size(); ++c) {
      if (picks[c] >= 0) continue;
      int widest = std::numeric_limits<int>::min();
      for (const auto& alternative : m_choices[c].alternatives)
        if (closure.admits(alternative)) widest = std::max(widest, room(closure, alternative));
      if (!best || widest < best_room) best = c, best_room = widest;
    }
    return best;
  }

  std::vector<int> by_room(const Closure& closure, const std::vector<std::vector<Difference>>& alternatives) const {
    std::vector<int> order;
    for (std::size_t a = 0; a < alternatives.size(); ++a)
      if (closure.admits(alternatives[a])) order.push_back(static_cast<int>(a));
    std::stable_sort(order.begin(), order.end(), [&](int a, int b) {
      return room(closure, alternatives[static_cast<std::size_t>(a)]) > room(closure, alternatives[static_cast<std::size_t>(b)]);
    });
    return order;
  }

  const std::vector<Choice>& m_choices;
  std::int64_t& m_left;
  bool m_complete = true;
};

}  // namespace

std::optional<Closure> closure_of(const OrderProblem& problem) {
  Closure closure(problem.times);
  if (!closure.add(problem.always)) return std::nullopt;
  return closure;
}

std::optional<Closure> closure_of(const std::vector<Choice>& choices, const Closure& base, const std::vector<int>& picks) {
  std::optional<Closure> closure = base;
  for (std::size_t c = 0; closure && c < choices.size(); ++c)
    if (!closure->add(choices[c].alternatives[static_cast<std::size_t>(picks[c])])) closure.reset();
  return closure;
}

SearchResult find_order(const std::vector<Choice>& choices, const Closure& base, std::int64_t& nodes_left) {
  SearchResult result;
  Search search(choices, nodes_left);
  search.run(base, std::vector<int>(choices.size(), -1), [&](const std::vector<int>& picks) {
    result.picks = picks;
    return false;
  });
  result.complete = result.picks.has_value() || search.complete();
  return result;
}

Orders all_orders(const std::vector<Choice>& choices, const Closure& base, std::size_t most, std::int64_t& nodes_left) {
  Orders orders;
  Search search(choices, nodes_left);
  bool cut = false;
  search.run(base, std::vector<int>(choices.size(), -1), [&](const std::vector<int>& picks) {
    if (orders.picks.size() == most) {
      cut = true;
      return false;
    }
    orders.picks.push_back(picks);
    return true;
  });
  orders.complete = search.complete() && !cut;
  return orders;
}

}  // namespace entrain::timing
