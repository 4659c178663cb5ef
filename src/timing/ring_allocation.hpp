// Green for ring-and-barrier control: fair whole-second splits, then every lead/lag order of every side of the barrier.
#pragma once

#include "timing/allocation.hpp"
#include "timing/fair_splits.hpp"

namespace entrain::timing {

[[nodiscard]] Result<std::vector<Allocation>> allocate_rings(const SignalDesign& design, const AllocationRequest& request);

// What every group of every ring asks of a split.
RingNeeds ring_needs(const SignalDesign& design, const std::vector<double>& flows_vph);

// "1 2|3 4 / 5 6|7 8": rings by " / ", sides by "|", groups by blanks.
std::string sequence_text(const SignalDesign& design, const std::vector<std::vector<std::vector<int>>>& rings);

// The longest ring of every side by minimums: "1 (12 s) and 2 (28 s) before the barrier, 4 (31 s) after it: 71 s".
struct LongestSides {
  std::vector<int> groups;
  int total_s = 0;
  std::string text;
};
LongestSides longest_sides(const SignalDesign& design, const std::vector<double>& flows_vph);

}  // namespace entrain::timing
