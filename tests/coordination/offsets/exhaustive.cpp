#include "exhaustive.hpp"

namespace entrain::offsets {
namespace {

// Counts the assignment up by one; false after the last. Node 0 keeps label 0 where no label is fixed: a common shift costs nothing.
bool next(const Problem& problem, Assignment& a) {
  for (int v = 0; v < problem.nodes; ++v) {
    const auto i = static_cast<std::size_t>(v);
    if (++a.orders[i] < orders_of(problem, v)) return true;
    a.orders[i] = 0;
    if (v == 0 && problem.fixed.empty()) continue;
    if (++a.labels[i] < problem.cycle) return true;
    a.labels[i] = 0;
  }
  return false;
}

}  // namespace

std::optional<std::int64_t> exhaustive_optimum(const Problem& problem) {
  Assignment a{std::vector<int>(static_cast<std::size_t>(problem.nodes), 0), std::vector<int>(static_cast<std::size_t>(problem.nodes), 0)};
  std::optional<std::int64_t> best;
  do {
    const auto value = cost(problem, a);
    if (value && (!best || *value < *best)) best = value;
  } while (next(problem, a));
  return best;
}

}  // namespace entrain::offsets
