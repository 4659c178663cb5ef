// The tests' own judge of an allocation: lays every group out as lamps, tenth by tenth, and looks. Shares no code with the room.
#pragma once

#include <string>
#include <vector>

#include "timing/allocation.hpp"

namespace entrain::timing::judge {

// Everything that is wrong with the greens; empty: sound. Checks intergreens of every conflict, least greens and walks, whole-second
// splits, splits against greens, walks that start with their parents, the opposed-turn trap, and local zero.
std::vector<std::string> faults(const SignalDesign& design, int cycle_s, const Allocation& allocation);

// Also that the splits of each ring add up to the cycle and meet at the barrier.
std::vector<std::string> ring_faults(const SignalDesign& design, int cycle_s, const Allocation& allocation);

}  // namespace entrain::timing::judge
