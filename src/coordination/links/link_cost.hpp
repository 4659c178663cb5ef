// The cost of a link as a function of the relative offset of its two signals, in whole numbers for the offset engine.
//
// Definition (the review recomputes it by other code): arrivals at the downstream stop line are traffic::link_arrivals, in the upstream
// signal's local time, in steps of `step_s` = 1 s. With d = x_to - x_from (seconds, modulo the cycle), the downstream step tau meets
// the arrivals of upstream step (tau + d) mod C. periodic_queue() gives, a cycle: delay D (veh s), stops S (veh), longest queue Q (veh).
//   cost(d) = round(scale * (D + stop_weight_s * S + spillback_weight_s * max(0, Q - storage_veh)) / C)
// so scale = 1000 counts thousandths of a vehicle delayed on average.
#pragma once

#include <cstdint>
#include <optional>
#include <vector>

#include "traffic/platoon.hpp"

namespace entrain::links {

struct CostModel {
  double stop_weight_s = 10;
  double spillback_weight_s = 0;
  double scale = 1000;
};

struct LinkInput {
  std::vector<traffic::Feed> feeds;
  double uniform_flow_vph = 0;
  traffic::Spread spread;      // step_s must be 1
  traffic::Stream downstream;  // its flow_vph is not used
  std::optional<double> storage_veh;
};

// Costs for d = 0 .. cycle_s - 1. `cycle_s` is positive; all entries are at least 0 and at most 10^12.
std::vector<std::int64_t> cost_table(const LinkInput& link, int cycle_s, const CostModel& model);

// Arrivals exceed what the downstream green can discharge: the table then only compares offsets for the flow that fits.
bool is_oversaturated(const LinkInput& link, int cycle_s);

}  // namespace entrain::links
