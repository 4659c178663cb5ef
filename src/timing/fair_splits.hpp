// Whole-second splits of ring-and-barrier control with max-min fair degrees of saturation.
#pragma once

#include <optional>
#include <vector>

#include "timing/signal_design.hpp"

namespace entrain::timing {

// What one group of a ring asks for: degree of saturation = ratio * cycle / (split - lost), where ratio > 0.
struct SplitNeed {
  int least_s = 0;     // least split
  double ratio = 0;    // flow over saturation flow
  double lost_s = 0;   // part of the split that serves nobody
  bool takes_spare = false;  // gets what no flow asks for
};

// [ring][side][group in sequence]; sides may be empty in a ring.
using RingNeeds = std::vector<std::vector<std::vector<SplitNeed>>>;

struct RingSplits {
  std::vector<std::vector<std::vector<int>>> split_s;  // as the needs
  std::vector<double> saturation_descending;
};

// Least whole-second length of every side: the longest ring of each.
std::vector<int> least_sides_s(const RingNeeds& needs);

// The splits of a cycle of `cycle_s` whole seconds whose degrees of saturation, sorted descending, are lexicographically least;
// nothing if the minimums do not fit. Exact: in one ring and side, seconds go one by one to the group that is worst off (no other way
// lowers the largest degree); over the sides by dynamic programming on their lengths (sorted union keeps the order of vectors).
std::optional<RingSplits> fair_splits(const RingNeeds& needs, int cycle_s);

}  // namespace entrain::timing
