#include "timing/order_search.hpp"

#include <algorithm>
#include <limits>

namespace entrain::timing {

Closure::Closure(int times) : m_times(static_cast<std::size_t>(times)), m_gap(m_times * m_times, unrelated) {
  for (std::size_t i = 0; i < m_times; ++i) m_gap[i * m_times + i] = 0;
}

bool Closure::admits(const Difference& d) const {
  const int back = gap(d.to, d.from);
  return back == unrelated || back + d.least <= 0;
}

bool Closure::add(const Difference& d) {
  if (!admits(d)) return false;
  if (gap(d.from, d.to) >= d.least) return true;
  const auto from = static_cast<std::size_t>(d.from), to = static_cast<std::size_t>(d.to);
  for (std::size_t a = 0; a < m_times; ++a) {
    const int lead = m_gap[a * m_times + from];
    if (lead == unrelated) continue;
    int* row = &m_gap[a * m_times];
    const int* tail = &m_gap[to * m_times];
    if (row[to] >= lead + d.least) continue;
    for (std::size_t b = 0; b < m_times; ++b)
      if (tail[b] != unrelated) row[b] = std::max(row[b], lead + d.least + tail[b]);
  }
  return true;
}

namespace {

bool admits(const Closure& closure, const std::vector<Difference>& alternative) {
  return std::all_of(alternative.begin(), alternative.end(), [&](const Difference& d) { return closure.admits(d); });
}

bool add(Closure& closure, const std::vector<Difference>& alternative) {
  return std::all_of(alternative.begin(), alternative.end(), [&](const Difference& d) { return closure.add(d); });
}


// Room an alternative leaves: the least over its differences of how far they could still grow.
int room(const Closure& closure, const std::vector<Difference>& alternative) {
  int least = std::numeric_limits<int>::max();
  for (const Difference& d : alternative) {
    const int back = closure.gap(d.to, d.from);
    if (back != Closure::unrelated) least = std::min(least, -back - d.least);
  }
  return least;
}

class Search {
 public:
  Search(const OrderProblem& problem, std::int64_t limit) : m_problem(problem), m_left(limit) {}

  // Calls `found` at every complete order; stops when it returns false. Returns false when stopped or out of nodes.
  bool run(Closure closure, std::vector<int> picks, const std::function<bool(const std::vector<int>&)>& found) {
    if (--m_left < 0) return m_complete = false;
    if (!draw_consequences(closure, picks)) return true;
    const auto open = tightest(closure, picks);
    if (!open) return found(picks);
    const auto& alternatives = m_problem.choices[*open].alternatives;
    for (const int pick : by_room(closure, alternatives)) {
      Closure next = closure;
      if (!add(next, alternatives[static_cast<std::size_t>(pick)])) continue;
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
        const auto& alternatives = m_problem.choices[c].alternatives;
        for (std::size_t a = 0; a < alternatives.size(); ++a)
          if (admits(closure, alternatives[a])) only = static_cast<int>(a), ++count;
        if (count == 0) return false;
        if (count > 1) continue;
        if (!add(closure, alternatives[static_cast<std::size_t>(only)])) return false;
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
      for (const auto& alternative : m_problem.choices[c].alternatives)
        if (admits(closure, alternative)) widest = std::max(widest, room(closure, alternative));
      if (!best || widest < best_room) best = c, best_room = widest;
    }
    return best;
  }

  std::vector<int> by_room(const Closure& closure, const std::vector<std::vector<Difference>>& alternatives) const {
    std::vector<int> order;
    for (std::size_t a = 0; a < alternatives.size(); ++a)
      if (admits(closure, alternatives[a])) order.push_back(static_cast<int>(a));
    std::stable_sort(order.begin(), order.end(), [&](int a, int b) {
      return room(closure, alternatives[static_cast<std::size_t>(a)]) > room(closure, alternatives[static_cast<std::size_t>(b)]);
    });
    return order;
  }

  const OrderProblem& m_problem;
  std::int64_t m_left;
  bool m_complete = true;
};

std::optional<Closure> base_closure(const OrderProblem& problem) {
  Closure closure(problem.times);
  if (!add(closure, problem.always)) return std::nullopt;
  return closure;
}

}  // namespace

std::optional<Closure> closure_of(const OrderProblem& problem, const std::vector<int>& picks) {
  auto closure = base_closure(problem);
  for (std::size_t c = 0; closure && c < problem.choices.size(); ++c)
    if (!add(*closure, problem.choices[c].alternatives[static_cast<std::size_t>(picks[c])])) closure.reset();
  return closure;
}

SearchResult find_order(const OrderProblem& problem, const std::vector<int>& hint, std::int64_t limit) {
  if (hint.size() == problem.choices.size() && closure_of(problem, hint)) return {true, hint};
  const auto closure = base_closure(problem);
  if (!closure) return {};
  SearchResult result;
  Search search(problem, limit);
  search.run(*closure, std::vector<int>(problem.choices.size(), -1), [&](const std::vector<int>& picks) {
    result.picks = picks;
    return false;
  });
  result.complete = result.picks.has_value() || search.complete();
  return result;
}

Orders all_orders(const OrderProblem& problem, std::size_t most, std::int64_t limit) {
  Orders orders;
  const auto closure = base_closure(problem);
  if (!closure) return orders;
  Search search(problem, limit);
  bool cut = false;
  search.run(*closure, std::vector<int>(problem.choices.size(), -1), [&](const std::vector<int>& picks) {
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
