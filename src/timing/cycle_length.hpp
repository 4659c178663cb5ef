// Cycle lengths and greens in closed form, without minimums or whole seconds.
#pragma once

#include <vector>

namespace entrain::timing {

// L X / (X - Y): the cycle at which a critical flow ratio Y and lost time L meet the degree of saturation X, seconds; infinity if Y >= X.
// X = 1 gives the least cycle L / (1 - Y) of Webster (1958).
double cycle_for_saturation_s(double lost_time_s, double flow_ratio, double degree_of_saturation);

// Webster (1958): effective greens in proportion to the flow ratios, (y_i / Y)(C - L), seconds. All zero if there is no flow.
std::vector<double> proportional_greens_s(double cycle_s, double lost_time_s, const std::vector<double>& flow_ratios);

}  // namespace entrain::timing
