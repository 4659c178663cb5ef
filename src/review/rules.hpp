// The rules of the review, each a function from a view to findings, in the order of rules.cpp's list.
#pragma once

#include <vector>

#include "review/signal_view.hpp"

namespace entrain::review {

using Rule = void (*)(const SignalView& view, Findings& findings);

// Every rule that looks at one signal.
const std::vector<Rule>& signal_rules();

// cycle_rules.cpp: cycle, offset, references of time
void check_cycle(const SignalView& view, Findings& findings);
void check_offset(const SignalView& view, Findings& findings);
// green_rules.cpp: greens, minimums, clearances
void check_greens(const SignalView& view, Findings& findings);
void check_minimums(const SignalView& view, Findings& findings);
void check_yellow_and_red(const SignalView& view, Findings& findings);
void check_pedestrian_times(const SignalView& view, Findings& findings);
// ring_rules.cpp: splits, rings, barriers
void check_splits(const SignalView& view, Findings& findings);
void check_rings(const SignalView& view, Findings& findings);
// conflict_rules.cpp: conflicts from geometry, intergreens, lamps, the opposed-turn trap
void check_conflicts(const SignalView& view, Findings& findings);
void check_trap(const SignalView& view, Findings& findings);
// traffic_rules.cpp: saturation, service, waits
void check_saturation(const SignalView& view, Findings& findings);
void check_service(const SignalView& view, Findings& findings);

// How many conflicting pairs the last look at this signal found (for the summary).
int count_conflicts(const SignalView& view);

// plan_rules.cpp: what concerns the plan as a whole
void check_plan(const plan::Plan& plan, std::vector<Finding>& findings);
void check_same_in_all_periods(const std::vector<plan::Plan>& plans, std::vector<Finding>& findings);

// bands.cpp
std::vector<BandCheck> check_bands(const plan::Plan& plan, std::vector<Finding>& findings);

}  // namespace entrain::review
