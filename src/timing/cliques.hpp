// Sets of groups that all conflict with each other, and the cheapest order in which such a set can follow one another round the cycle.
#pragma once

#include <vector>

#include "timing/signal_design.hpp"

namespace entrain::timing {

// Maximal cliques of the conflict graph over the given groups, each ascending, in lexicographic order (at most 4096 of them).
std::vector<std::vector<int>> maximal_cliques(const SignalDesign& design, const std::vector<int>& groups);

// Least sum of change[a][b] over the cyclic orders of the clique (a followed by b); positions index `clique`. Exact for up to 12 members
// (dynamic programming over subsets, Held and Karp 1962), the given order beyond. One member: 0 and itself.
struct CyclicOrder {
  double sum = 0;
  std::vector<int> order;  // members in sequence
};
CyclicOrder cheapest_cyclic_order(const std::vector<int>& clique, const std::vector<std::vector<double>>& change);

// Lost time of a clique of vehicle groups: cheapest cyclic sum of intergreen + start-up lost - end gain, seconds.
CyclicOrder clique_lost_time(const SignalDesign& design, const std::vector<int>& clique);

}  // namespace entrain::timing
