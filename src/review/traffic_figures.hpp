// Plain arithmetic on flows and greens. Private to the review.
#pragma once

#include "review/signal_view.hpp"

namespace entrain::review {

// Flow over capacity of a group by its own figures and greens; negative where they are not given, infinite without green.
double degree_of_saturation(const SignalView& view, std::size_t group_index);
// The same for any group and its cycle, without a view; greens are taken as they stand.
double degree_of_saturation(const plan::Group& group, double cycle_s);

// Longest stretch round the cycle that is not green, tenths.
int longest_red(const Row& green);

// Largest queue, vehicles, of even arrivals behind a red of that length in the periodic state; all arrivals of an hour where they
// exceed the saturation flow.
double even_queue_veh(double flow_vph, double saturation_flow_vph, double red_s);

}  // namespace entrain::review
