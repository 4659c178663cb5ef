// Exact search over orders: whole-number times with "t_to - t_from >= least" constraints and choices between sets of them.
// Knows no traffic: a choice is, for example, which of two groups goes first round the cycle.
#pragma once

#include <cstdint>
#include <functional>
#include <optional>
#include <vector>

namespace entrain::timing {

// time[to] - time[from] >= least
struct Difference {
  int from = 0, to = 0, least = 0;
};

// One of these sets must hold.
struct Choice {
  std::vector<std::vector<Difference>> alternatives;
};

struct OrderProblem {
  int times = 0;
  std::vector<Difference> always;
  std::vector<Choice> choices;
};

// All-pairs tightest consequences of differences: gap(a, b) is the least time[b] - time[a] that they imply.
class Closure {
 public:
  explicit Closure(int times);
  // False if the difference contradicts what holds; the closure must not be used afterwards then.
  bool add(const Difference& difference);
  bool add(const std::vector<Difference>& differences);
  // Each on its own; together they may still contradict.
  bool admits(const std::vector<Difference>& differences) const;
  bool admits(const Difference& difference) const { return gap(difference.to, difference.from) + difference.least <= 0; }
  int gap(int from, int to) const { return m_gap[static_cast<std::size_t>(from) * m_times + static_cast<std::size_t>(to)]; }
  // Nothing bounds time[to] - time[from] from below.
  bool is_free(int from, int to) const { return gap(from, to) < unrelated / 2; }

 private:
  static constexpr int unrelated = -100'000'000;  // sums of two stay within int
  std::size_t m_times;
  std::vector<int> m_gap;
};

struct SearchResult {
  bool complete = true;                   // false: the limit was met before the answer was certain
  std::optional<std::vector<int>> picks;  // per choice the alternative taken; nothing: no order satisfies all
};

// Depth first over the choices from what holds in `base`, the tightest first, every consequence drawn at once. `nodes_left`: nodes the
// search may still open; what it uses is taken off.
SearchResult find_order(const std::vector<Choice>& choices, const Closure& base, std::int64_t& nodes_left);

// Every combination of picks that satisfies all, at most `most` of them.
struct Orders {
  bool complete = true;
  std::vector<std::vector<int>> picks;
};
Orders all_orders(const std::vector<Choice>& choices, const Closure& base, std::size_t most, std::int64_t& nodes_left);

// What always holds; nothing if it contradicts itself.
std::optional<Closure> closure_of(const OrderProblem& problem);
// `base` and the picked alternatives; nothing if they contradict.
std::optional<Closure> closure_of(const std::vector<Choice>& choices, const Closure& base, const std::vector<int>& picks);

}  // namespace entrain::timing
