// Steps that ring-and-barrier and general allocation share.
#pragma once

#include "timing/allocation.hpp"

namespace entrain::timing {

// Errors of a request that no allocation could answer: values out of range, sizes that differ, indices that point nowhere.
Diagnostics request_errors(const SignalDesign& design, const AllocationRequest& request);
Diagnostics design_errors(const SignalDesign& design);

// Walks start with their parents' greens (exclusive pedestrian groups are left as they are); an on-call walk is listed only where it
// fits without touching a conflicting green.
void place_walks(const SignalDesign& design, Tenths cycle, Allocation& allocation);

// Moves local zero to the start of the reference group's first green.
void rotate_to_reference(const SignalDesign& design, Tenths cycle, Allocation& allocation);

// Degrees of saturation of every group from its own greens, the fairness vector, and the oversaturated mark.
void rate(const SignalDesign& design, const AllocationRequest& request, Allocation& allocation);

// The first pair of conflicting groups whose greens stand closer than their intergreen.
struct Clash {
  int a = -1, b = -1;  // b starts too early after a
  Tenths gap, needed;
};
std::optional<Clash> find_clash(const SignalDesign& design, Tenths cycle, const std::vector<GroupGreen>& groups);

std::vector<std::vector<Arc>> arcs_of(const Allocation& allocation);

}  // namespace entrain::timing
