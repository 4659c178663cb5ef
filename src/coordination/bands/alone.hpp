// One corridor by itself, fixed offsets and repeated visits included: the best widths and where its stations go.
#pragma once

#include <vector>

#include "coordination/bands/corridor_bands.hpp"
#include "coordination/bands/measure.hpp"

namespace entrain::bands {

using OptionLists = std::vector<std::vector<int>>;  // allowed options by station

struct Alone {
  Widths widths;
  double share = 0;  // ticks per weight
  bool all_directions = true;
  int single = 0;              // the direction that has its band where not all have
  std::vector<Placed> placed;  // stations met, ascending, options and arcs of offsets for one position of the bands
  bool anchored = false;       // a fixed station: the offsets are where they must be; otherwise they may shift together
  bool proved = true;
  std::vector<int> witness;
};

OptionLists allowed_options(const Compiled& problem);
// Stations the corridor meets, ascending, and how many of them are fixed.
std::vector<int> stations_of(const Compiled& problem, int corridor);
int fixed_count(const Compiled& problem, int corridor);

Alone solve_alone(const Compiled& problem, int corridor, const OptionLists& options, std::int64_t most_nodes);

// The same with offsets in whole seconds (fixed ones as they are): placed arcs have length 0. `bound` is the continuous
// answer.
Alone solve_alone_whole_seconds(const Compiled& problem, int corridor, const OptionLists& options, const Alone& bound);

}  // namespace entrain::bands
