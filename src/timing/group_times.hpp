// Small arithmetic on the groups of a design that allocation and cycle bounds share. Whole seconds where named `_s` and int.
#pragma once

#include <vector>

#include "timing/signal_design.hpp"

namespace entrain::timing {

inline Tenths change_time(const Group& group) { return group.yellow + group.red_clearance; }

// Vehicle: least split (green + yellow + red clearance) in whole seconds that holds the minimum green and the pedestrians it carries.
int least_split_s(const Group& group);

// Time a group keeps others off before the intergreen counts: pedestrian walk and clearance. Vehicles: their green.
inline Tenths pedestrian_occupancy(const Group& group) { return group.minimum_green + group.clearance; }

// Largest flow ratio (flow over saturation flow) of the group's lane groups; 0 without flow.
double flow_ratio(const SignalDesign& design, const Group& group, const std::vector<double>& flows_vph);

// Start-up lost time less end gain, plus yellow and red clearance: the part of a split that serves nobody, seconds.
inline double lost_in_split_s(const Group& group) { return change_time(group).seconds() + group.start_up_lost_s - group.end_gain_s; }

// flow ratio x cycle / effective green; infinity where flow meets no effective green.
double degree_of_saturation(double ratio, double cycle_s, double effective_green_s);

// The conflict between groups a and b in either order, or nullptr.
const Conflict* find_conflict(const SignalDesign& design, int a, int b);

// Index of the group with that id, or -1.
int find_group(const SignalDesign& design, const std::string& id);

// "2", "2 and 6", "2, 4 and 6"
std::string list_of(const std::vector<std::string>& words);

}  // namespace entrain::timing
