// Which edges contradict each other, told so that a person can mend it.
#pragma once

#include <vector>

#include "coordination/offsets/reduce.hpp"

namespace entrain::offsets {

// Edges of the problem (and fixed labels, numbered after them) that together admit nothing, as few as leaving them out one by one allows;
// in walking order if they form one cycle. `reduction` is the problem's and has a contradiction.
std::vector<int> conflict_of(const Problem& problem, const Reduction& reduction);

}  // namespace entrain::offsets
