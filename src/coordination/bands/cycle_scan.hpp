// The best share of a corridor at every cycle length of a range, windows in proportion to the cycle.
#pragma once

#include "base/result.hpp"
#include "coordination/bands/model.hpp"

namespace entrain::bands {

struct CycleSteps {
  double from_s = 40, to_s = 240, step_s = 1;
};

struct CycleShare {
  double cycle_s = 0;
  double share_s = 0;  // least of width / weight; 0: no band in every direction at once
};

// Ascending, both ends included where the step meets them. Windows are scaled by cycle / input.cycle_s; travel times
// and queue clearances stay as they are. Fixed offsets are not looked at (they belong to one cycle); fixed options are.
// Two-way inputs only; exact.
[[nodiscard]] Result<std::vector<CycleShare>> scan_cycles(const TwoWayInput& input, const CycleSteps& steps);

}  // namespace entrain::bands
