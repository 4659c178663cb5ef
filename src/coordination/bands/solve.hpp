// The widest bands: for one corridor, for several that share stations, in continuous offsets and in whole seconds.
//
// Share rule: the least of width / weight over the directions is made as large as possible, then the total of the
// widths (ties: the first direction gets the extra). Several corridors: the vector of share / own best share, sorted
// ascending, is made lexicographically largest. For fixed travel times this is exact without integer programming: with
// phi the leading edge of one band minus the trailing edge of the other, every station leaves room g + h - ((phi + c)
// mod period) for the two widths together, and only the phi at which some station's term is zero can be best (for equal
// speeds and shares: Morgan and Little, Operations Research 12(6), 1964).
//
// Errors name every problem of the input at once; fixed offsets or options that leave no answer are not errors: the
// bands are then 0.
#pragma once

#include <cstdint>

#include "base/result.hpp"
#include "coordination/bands/model.hpp"

namespace entrain::bands {

// Limits work where sharing forms rings; beyond it the answer is the best found and its bound says how far it may be
// from the best.
struct Effort {
  std::int64_t most_nodes = 200'000;
};

// One corridor. Exact: bound == value. Without fixed offsets the first station's offset is 0; free offsets lie in the
// middle of their range.
[[nodiscard]] Result<Answer> solve_two_way(const TwoWayInput& input);
// The best whole-second offsets of the same problem, exact; bounds are those of solve_two_way. Needs a whole-second
// cycle (and half cycle where a station repeats). Ties: the least leading edges in the search order, the first option
// that serves, the middle offset.
[[nodiscard]] Result<Answer> solve_two_way_whole_seconds(const TwoWayInput& input);

// Any corridors. Exact where corridors, shared free stations and the clock of fixed offsets form a forest, and where
// the search ends within its effort; `proved` says so.
[[nodiscard]] Result<Answer> solve_joint(const Problem& problem, const Effort& effort = {});
[[nodiscard]] Result<Answer> solve_joint_whole_seconds(const Problem& problem, const Effort& effort = {});

}  // namespace entrain::bands
