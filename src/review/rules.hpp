// The rules of the review, each a function from a view to findings. Private to the review.
#pragma once

#include <vector>

#include "review/signal_view.hpp"

namespace entrain::review {

using Rule = void (*)(const SignalView& view, Findings& findings);

// Every rule that looks at one signal, in the order they run.
const std::vector<Rule>& signal_rules();

// cycle_rules.cpp: cycle, offset, references of time
void check_cycle(const SignalView& view, Findings& findings);
void check_offset(const SignalView& view, Findings& findings);
void check_clock(const SignalView& view, Findings& findings);
// green_rules.cpp: greens and minimums
void check_greens(const SignalView& view, Findings& findings);
void check_minimums(const SignalView& view, Findings& findings);
// clearance_rules.cpp: yellow, red clearance, overrides
void check_change_intervals(const SignalView& view, Findings& findings);
void check_overrides(const SignalView& view, Findings& findings);
// pedestrian_rules.cpp: walk, pedestrian clearance, parents
void check_pedestrian_times(const SignalView& view, Findings& findings);
void check_parents(const SignalView& view, Findings& findings);
// ring_rules.cpp: splits, rings, barriers
void check_splits(const SignalView& view, Findings& findings);
void check_rings(const SignalView& view, Findings& findings);
// conflict_rules.cpp: conflicts from geometry, intergreens, lamps
void find_conflicts(SignalView& view, Findings& findings);  // fills view.conflicts
void check_listed_conflicts(const SignalView& view, Findings& findings);
void check_intergreens(const SignalView& view, Findings& findings);
void check_lamps(const SignalView& view, Findings& findings);
int count_green_pairs(const SignalView& view);
// trap_rules.cpp
void check_trap(const SignalView& view, Findings& findings);
// traffic_rules.cpp: saturation, queues, service, evidence
void check_saturation(const SignalView& view, Findings& findings);
void check_flows(const SignalView& view, Findings& findings);
void check_queues(const SignalView& view, Findings& findings);
void check_service(const SignalView& view, Findings& findings);
void check_evidence(const SignalView& view, Findings& findings);

// clearance_rules.cpp: the override of that value, if it names who takes it on and why.
bool is_taken_on(const plan::Group& group, const std::string& what);
// Least displayed value that the standard's rounding of `computed` allows; `step` and `up` where the plan names no rounding.
double least_rounded(const SignalView& view, const std::string& value, double computed, double step, bool up);

// plan_rules.cpp: what concerns the plan as a whole
void check_plan(const plan::Plan& plan, std::vector<Finding>& findings);
// standard_rules.cpp: the standard's own values
void check_standard(const plan::Plan& plan, std::vector<Finding>& findings);
// period_rules.cpp
void check_same_in_all_periods(const std::vector<plan::Plan>& plans, std::vector<Finding>& findings);

}  // namespace entrain::review
