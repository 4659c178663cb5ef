// Offsets and phase orders: the widest bands for the given shares in all corridors together, then the least delay among the
// whole-second offsets that keep them.
#pragma once

#include "drafting/candidate.hpp"
#include "drafting/sweep.hpp"
#include "plan/plan.hpp"

namespace entrain::drafting {

// `links` and `corridors` are those of assemble.hpp for the candidate's period. Never fails: where nothing can be chosen
// (no corridor, no two-way band, contradictory fixed offsets) it says so in the remarks.
Coordination coordinate(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Link>& links,
                        const std::vector<plan::Corridor>& corridors, const CoordinateOptions& options);

// Sets the bands and freedoms that the given orders and offsets have; the bound is the band itself.
void claim_running_bands(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Corridor>& corridors, Coordination& running);

}  // namespace entrain::drafting
