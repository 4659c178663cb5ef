// Bands recomputed by interval arithmetic: what is open at every stop, in the frame of a vehicle that passes the first one. Private to the
// review.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "review/band_arithmetic.hpp"
#include "review/signal_view.hpp"

namespace entrain::review {

// Earlier and later, seconds; never above the signal's cycle.
struct Freedom {
  double early_s = 0, late_s = 0;
};

struct Bands {
  std::vector<BandCheck> checks;            // of the directions whose stops can be followed, plan order
  std::map<std::string, Freedom> freedom;   // by signal on some band
};

// Measures every direction. `findings` collects stops that can't be followed and claims that do not hold.
Bands check_bands(const plan::Plan& plan, std::vector<Finding>& findings);

// check of the claims alone, in band_claims.cpp.
// `common_set`: what is open at all stops.
void check_band_claims(const plan::Plan& plan, const plan::Direction& direction, const OpenSet& common_set, const BandCheck& check, Findings& findings);
void check_freedom_claims(const plan::Plan& plan, const Bands& bands, std::vector<Finding>& findings);

}  // namespace entrain::review
