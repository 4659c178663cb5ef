// Complete plans written by hand, with the arithmetic beside them. No planner has a part in them.
#pragma once

#include "plan/plan.hpp"

namespace entrain::review::samples {

// Two corridors that share T2: Tessaly Avenue (T1, T2, T3) and Kiln Street (K1, T2). Cycle 90 s, dual rings, protected turns, people on every leg.
plan::Plan two_corridors();
// T1 at 90 s and H1 at 45 s on one corridor; H1 has permissive turns on circular greens.
plan::Plan half_cycle();
// One three-leg signal whose main street is green twice a cycle.
plan::Plan double_service();
// two_corridors() as it would come from a spreadsheet: groups, greens and a list of conflicts.
plan::Plan without_geometry();
// One four-leg signal whose westbound left turn yields on its through's circular green and has its own arrow before it.
plan::Plan protected_permissive();

// Seen in a mirror: bearings, turns and the traffic side change sides.
plan::Plan mirrored(plan::Plan plan);

plan::Signal& signal(plan::Plan& plan, const std::string& id);
plan::Group& group(plan::Plan& plan, const std::string& signal_id, const std::string& id);
plan::Conflict& conflict(plan::Signal& signal, const std::string& a, const std::string& b);

}  // namespace entrain::review::samples
