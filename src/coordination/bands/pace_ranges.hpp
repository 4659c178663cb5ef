// Bands where the pace (time per length) of every link may be chosen within limits: Little's problem, J. D. C. Little,
// Operations Research 14(4), 568-594, 1966, with the cycle length free in a range.
//
// Only the sum of the two directions' paces matters for how wide both bands can be together, so where both directions
// have the same limits they may as well run at the same pace. For a target share the states (phase of a station, pace
// of the next link) that can be reached are convex polygons, carried from station to station: sheared by the link, cut
// by the station's windows, widened by the change of pace allowed. The largest target is found by halving.
#pragma once

#include <vector>

#include "base/result.hpp"
#include "coordination/bands/cycle_scan.hpp"
#include "coordination/bands/model.hpp"

namespace entrain::bands {

struct PaceLink {
  double length_m = 0;
  double least_s_per_m = 0, most_s_per_m = 0;  // both directions
};

struct PaceInput {
  TwoWayInput
      corridor;  // two directions with weights above 0; its travel times are not looked at, fixed offsets neither
  std::vector<PaceLink> links;       // one between each two stations
  double most_change_s_per_m = 1e9;  // between neighbouring links, each direction
};

struct PaceAnswer {
  double cycle_s = 0;
  std::vector<double> pace_s_per_m;  // by link, both directions
  Answer bands;                      // at that cycle and pace
};

// At the corridor's own cycle. The share is within 1e-9 of the cycle of the best.
[[nodiscard]] Result<PaceAnswer> solve_pace_ranges(const PaceInput& input);
// Over a range of cycles, windows in proportion: the largest share / cycle. The steps are a first look; around each
// local best the cycle is refined (for one set of whole turns the share / cycle is concave in 1 / cycle), so a peak
// narrower than a step can be missed.
[[nodiscard]] Result<PaceAnswer> solve_pace_ranges(const PaceInput& input, const CycleSteps& steps);

}  // namespace entrain::bands
