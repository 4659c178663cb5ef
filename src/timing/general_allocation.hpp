// Green for general signal groups: exact over all orders of conflicting groups, whole seconds, max-min fair.
#pragma once

#include "timing/allocation.hpp"
#include "timing/order_search.hpp"

namespace entrain::timing {

// Times of the problem: start and end (of split: green, yellow, red clearance) of every vehicle group that conflicts with something,
// start of every pedestrian group without a parent. Whole seconds.
struct PeriodicModel {
  int cycle_s = 0;
  OrderProblem problem;                 // without the splits' lower limits
  std::vector<int> start, end;          // by group; -1: none (always green, or pedestrian: no end)
  std::vector<int> least_split_s;       // by group; 0 for pedestrians
  std::size_t conflict_choices = 0;     // the first so many choices are orders of conflicting groups, the rest guard against traps
  bool contradictory = false;           // a group conflicts with what it must run with
  int anchor = -1;                      // group whose start is time 0; -1: nothing conflicts
};

PeriodicModel periodic_model(const SignalDesign& design, int cycle_s);

// The problem with `split_s[g]` as least split of vehicle group g.
OrderProblem with_splits(const PeriodicModel& model, const std::vector<int>& split_s);

[[nodiscard]] Result<std::vector<Allocation>> allocate_general(const SignalDesign& design, const AllocationRequest& request);

// Smallest whole-second cycle, at most `longest_s`, at which every minimum fits; nothing if there is none.
std::optional<int> least_general_cycle_s(const SignalDesign& design, int longest_s);

}  // namespace entrain::timing
