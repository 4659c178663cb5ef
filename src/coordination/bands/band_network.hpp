// Do bands of given widths fit in several corridors at once? Free stations of one corridor become arcs of its frame,
// shared and fixed ones points of an arc network.
#pragma once

#include <cstdint>
#include <vector>

#include "coordination/bands/arc_network.hpp"
#include "coordination/bands/fit_station.hpp"

namespace entrain::bands {

// `demands` by frame: active and width are read; after `fits` the leading edges are set, in system time where a station
// is fixed. Frames of corridors that are not listed must be inactive. `options`: allowed options by station.
Verdict decide(const Compiled& problem, const std::vector<int>& corridors, std::vector<BandDemand>& demands,
               const std::vector<std::vector<int>>& options, std::int64_t& nodes);

// Offsets of every station met by an active frame, ascending; stations met by none are left out.
std::vector<Placed> place_all(const Compiled& problem, const std::vector<BandDemand>& demands,
                              const std::vector<std::vector<int>>& options);

}  // namespace entrain::bands
