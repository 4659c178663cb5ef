// Which groups must not run together: crossing and merging paths, less the yields that right of way and the standard allow.
#pragma once

#include <set>

#include "timing/grouping.hpp"

namespace entrain::timing {

// Everything needed to judge pairs of groups of one signal.
struct ConflictRules {
  const network::Signal& signal;
  const standards::DesignStandard& standard;
};

bool groups_conflict(const ConflictRules& rules, const Group& a, const Group& b);

// True if vehicles of `group` conflict with people on the crossing.
bool conflicts_with_crossing(const ConflictRules& rules, const Group& group, const network::Crossing& crossing);

// Pedestrian groups appended to the design: each crossing runs with a vehicle group whose own conflicts keep off all that conflicts with
// the crossing, by preference the one whose through movement runs beside it; else it gets an exclusive group without parent.
Diagnostics add_pedestrian_groups(const ConflictRules& rules, const DesignRequest& request, SignalDesign& design);

// Conflicting pairs among all groups, without intergreens.
std::vector<Conflict> conflicting_pairs(const ConflictRules& rules, const SignalDesign& design);

// Rings and sides from phase numbers 1 to 8, if every pair that the structure lets run together is free of conflict.
std::optional<RingBarrier> ring_barrier_from_numbers(const SignalDesign& design);

}  // namespace entrain::timing
