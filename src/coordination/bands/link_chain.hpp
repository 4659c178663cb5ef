// Half widths along a chain of stations: what each station offers, and the best choice for given offers.
#pragma once

#include <vector>

namespace entrain::bands {

// Half widths a in [low, high] forward, total - a backward.
struct LinkOffer {
  double low = 0, high = 0, total = 0;
};

struct LinkWeights {
  double forward = 0, backward = 0;
};

// Maximises the sum over links of 2 forward min(a, a') + 2 backward min(total - a, total' - a'). One pass of concave
// piecewise linear functions, exact. `best_a` by station where not null.
double best_half_widths(const std::vector<LinkOffer>& offers, const std::vector<LinkWeights>& weights,
                        std::vector<double>* best_a);

}  // namespace entrain::bands
