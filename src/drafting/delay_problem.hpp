// The delay of every link as a function of the offsets of its two signals, for the orders chosen.
#pragma once

#include <cstdint>
#include <vector>

#include "drafting/candidate.hpp"
#include "plan/plan.hpp"
#include "traffic/platoon.hpp"

namespace entrain::drafting {

struct FlowPair {
  double flow_vph = 0, saturation_flow_vph = 0;
};
// Flow and saturation flow of the group's worst lane group, by flow ratio; zeros without lane groups.
FlowPair worst_flow(const timing::Group& group, const timing::SignalDesign& design, const std::vector<double>& flows_vph);

// The stream through a group under an order, over the plan's cycle (greens repeat where the signal runs at half of it).
traffic::Stream stream_of(const timing::SignalDesign& design, const SignalGreens& greens, int order, std::size_t group, int cycle_s);

// Costs by d = x_to - x_from = 0 .. cycle - 1, see coordination/links/link_cost.hpp; indices are those of LocalTiming::signals.
struct DelayEdge {
  int from = 0, to = 0;
  std::vector<std::int64_t> costs;
};

// One edge a plan link between signals that both run at the plan's cycle or its half; the rest is left out.
std::vector<DelayEdge> delay_edges(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Link>& links,
                                   const std::vector<int>& orders);

}  // namespace entrain::drafting
