// Green for general signal groups: exact over all orders of conflicting groups, whole seconds, max-min fair.
#pragma once

#include "timing/allocation.hpp"
#include "timing/order_search.hpp"

namespace entrain::timing {

// Times of the problem: start and end (of split: green, yellow, red clearance) of every vehicle group that conflicts with something,
// start of every pedestrian group without a parent. Whole seconds.
struct CliqueBound {
  std::vector<std::size_t> groups;  // vehicle groups that all conflict
  int between_s = 0;                // least total of the whole seconds between their splits, over their cyclic orders; may be negative
};

struct PeriodicModel {
  int cycle_s = 0;
  OrderProblem problem;                 // without the splits' lower limits
  std::vector<int> start, end;          // by group; -1: none (always green, or pedestrian: no end)
  std::vector<int> least_split_s;       // by group; 0 for pedestrians
  std::size_t conflict_choices = 0;     // the first so many choices are orders of conflicting groups, the rest guard against traps
  bool contradictory = false;           // a group conflicts with what it must run with
  int anchor = -1;                      // group whose start is time 0; -1: nothing conflicts
  std::vector<CliqueBound> cliques;     // splits of each plus between_s must fit the cycle: a quick way to say no
};

PeriodicModel periodic_model(const SignalDesign& design, int cycle_s);

// False if a clique alone shows that vehicle groups with these least splits do not fit.
bool may_fit(const PeriodicModel& model, const std::vector<int>& split_s);

// Adds `split_s[g]` as least split of every vehicle group g; false if that contradicts what holds.
bool add_splits(const PeriodicModel& model, const std::vector<int>& split_s, Closure& closure);

// Whether some order holds vehicle groups with these least splits. Where the nodes run out the answer is no: the safe side.
bool fits_some_order(const PeriodicModel& model, const std::vector<int>& split_s, std::int64_t& nodes_left);

[[nodiscard]] Result<std::vector<Allocation>> allocate_general(const SignalDesign& design, const AllocationRequest& request);

// A smallest set of groups whose minimums and conflicts alone do not fit the cycle (without any one of them they would); empty if all fit.
std::vector<int> clashing_groups(const SignalDesign& design, int cycle_s);

// Smallest whole-second cycle, at most `longest_s`, at which every minimum fits; nothing if there is none.
std::optional<int> least_general_cycle_s(const SignalDesign& design, int longest_s);

}  // namespace entrain::timing
