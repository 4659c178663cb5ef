// Conflict-free greens for one cycle length: every sound phase order, each with its fair share of green.
#pragma once

#include <string>
#include <vector>

#include "base/circle.hpp"
#include "timing/signal_design.hpp"

namespace entrain::timing {

struct GroupGreen {
  std::vector<Arc> greens;           // local time; usually one
  Tenths split;                      // vehicle: green + yellow + red clearance (whole seconds)
  double degree_of_saturation = 0;   // worst lane group; 0 without flow
};

struct Allocation {
  std::string order;     // "lead-lead", "lead-lag", "lag-lead", "lag-lag" by side, or a general order's listing
  std::string sequence;  // "1 2|3 4 / 5 6|7 8" where ring-and-barrier
  std::vector<GroupGreen> groups;              // in the order of SignalDesign::groups
  std::vector<double> saturation_descending;   // the fairness vector
  bool oversaturated = false;
  bool proved = true;  // false: the exact search over orders met its limit, a better order may exist (general signal groups only)
};

struct AllocationRequest {
  Tenths cycle;
  std::vector<double> flows_vph;     // by lane group
  double keep_share = 0.05;          // orders whose worst degree of saturation is within this share of the best are kept
  std::string fixed_sequence;        // only this order, where not empty
  std::vector<Tenths> fixed_splits;  // by group, where not empty
};

// All orders that are kept, best first (ties: fewer lagging turns, then order name); never one that would trap an opposed turn.
// Degrees of saturation are max-min fair in whole-second splits: the vector sorted descending is lexicographically least, exactly.
// Where several splits give the same vector: barriers nearest to the sides' needs in proportion, then the earlier group of the ring.
// Green that no flow asks for goes to the group with an even phase number (ring-and-barrier), or to each group in order (general).
// Errors: cycle too short (names the critical groups, their needs, and the cycle that would do), contradictory requests.
[[nodiscard]] Result<std::vector<Allocation>> allocate(const SignalDesign& design, const AllocationRequest& request);

struct CriticalCycle {
  int minimum_s = 0;           // smallest whole second at which every minimum, walk and clearance fits
  int saturation_minimum_s = 0;  // smallest at which every degree of saturation is at most the target; 0: none does
  double webster_s = 0;        // Webster (1958) optimum; infinite if the flow ratios reach 1
  std::vector<int> critical_groups;
  double flow_ratio = 0, lost_time_s = 0;
  std::string text;            // the arithmetic in words
};
[[nodiscard]] Result<CriticalCycle> critical_cycle(const SignalDesign& design, const std::vector<double>& flows_vph, double target_saturation);

}  // namespace entrain::timing
