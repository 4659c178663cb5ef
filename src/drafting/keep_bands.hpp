// Least delay among the whole-second offsets that keep every band.
#pragma once

#include "coordination/bands/model.hpp"
#include "drafting/band_problem.hpp"
#include "drafting/sweep.hpp"

namespace entrain::drafting {

// Changes the offsets in `out` (never the orders) so that the link costs are as small as the search finds them while every direction keeps
// at least `options.keep_band` times its width in `best`; fixed offsets stay. Sets the delay cost and its bound. `best` may be null.
void minimise_delay(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Link>& links, const BandProblem& bands,
                    const bands::Answer* best, const CoordinateOptions& options, Coordination& out);

}  // namespace entrain::drafting
