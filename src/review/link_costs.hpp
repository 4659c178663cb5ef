// The cost of a link as a function of its signals' offsets, recomputed second by second from the plan alone: slow, and plain to follow.
//
// The model (`cost_model` of the plan, name platoon-queue). Everything happens in steps of one second of the plan's cycle C.
//  - A feed's vehicles arrive evenly behind their own stop line at the flow of their group, and leave at saturation flow while the effective
//    green [start + start-up lost, end + end gain) lasts; what leaves is scaled to the feed's own flow. A group without flow leaves as its
//    effective green alone, one without green evenly.
//  - They spread over the travel time T: Robertson (1969), q'(t + lag) = F q(t) + (1 - F) q'(t + lag - 1) with F = 1 / (1 + alpha beta T), lag = beta T; or,
//    where a standard deviation was measured, a normal travel time cut at T / 2 and T + 4 sd. Parts of a second are split in proportion.
//  - With d = offset(to) - offset(from) they meet the downstream green, as a vertical queue in the periodic state: delay D (veh s), stops S (veh),
//    longest queue Q (veh) a cycle. Flows above the capacity are cut to it.
//  - cost(d) = round(scale (D + stop_weight S + spillback_weight max(0, Q - storage)) / C).
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "plan/plan.hpp"

namespace entrain::review {

struct LinkCosts {
  std::size_t link = 0;  // index in the plan
  std::vector<double> arrivals;  // vehicles a second at the downstream stop line, in the upstream signal's local time
  std::vector<double> capacity;  // vehicles a second that the downstream green can discharge, in its signal's local time
  double stop_weight_s = 0, spillback_weight_s = 0, scale = 0;
  std::optional<double> storage_veh;

  std::int64_t at(int difference) const;  // cost of offset(to) - offset(from) = difference, any whole number of seconds
  std::vector<std::int64_t> table() const;  // differences 0 .. C - 1
};

// Nothing for a link that has no cost: a signal or group that is not there, runs free, or runs neither at the plan's cycle nor at its half;
// a cycle that is no whole number of seconds up to 3600; numbers that are out of every range.
std::optional<LinkCosts> link_costs(const plan::Plan& plan, std::size_t link);

struct PlanCost {
  std::int64_t value = 0;  // all links at the plan's offsets
  int links = 0;           // how many have a cost
};
PlanCost cost_of_links(const plan::Plan& plan);

}  // namespace entrain::review
