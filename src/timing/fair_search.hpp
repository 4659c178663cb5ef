// Max-min fair whole-second splits over all orders of a periodic model, or within one given order.
#pragma once

#include "timing/general_allocation.hpp"

namespace entrain::timing {

struct FlowDemand {  // of one vehicle group that has any
  std::size_t group = 0;
  double ratio = 0, lost_s = 0;
};

struct FairSplits {
  std::vector<int> split_s;                   // by group; 0 for groups without an end
  std::vector<int> picks;                     // a choice of orders that holds them
  std::vector<double> saturation_descending;  // of the groups with flow
  bool proved = true;                         // false: a search met its limit
};

// The lexicographically least vector of degrees of saturation over all orders; nothing if the minimums do not fit.
// `base`: what always holds, without splits.
std::optional<FairSplits> fair_splits(const PeriodicModel& model, const Closure& base, const std::vector<FlowDemand>& flows);

// The same within one order.
std::optional<FairSplits> fair_splits_in_order(const PeriodicModel& model, const Closure& base, const std::vector<FlowDemand>& flows,
                                               const std::vector<int>& picks);

// Least split that keeps the degree of saturation at or below `degree`.
int split_for(const FlowDemand& flow, double degree, int least_s, int cycle_s);

}  // namespace entrain::timing
