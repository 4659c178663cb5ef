// Ids of one signal and whether its legs, movements and crossings are complete enough to derive conflicts from. Private to the review.
#pragma once

#include "review/signal_view.hpp"

namespace entrain::review {

// Fills the view's indices; reports ids that stand twice and names of things that are not there.
void resolve_ids(SignalView& view, Findings& findings);

// Sets has_geometry and why_no_geometry; reports legs that lie on each other and turns that their legs contradict.
void check_geometry(SignalView& view, Findings& findings);

// Degrees from straight on, -180 .. 180, positive to the right, of a movement from the leg of one bearing to that of another.
double deflection_deg(double from_bearing_deg, double to_bearing_deg);

}  // namespace entrain::review
