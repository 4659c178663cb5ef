// Row-wise arithmetic of the bound and the search: a few loops over lanes, compiled for vector instructions where the processor has them.
#pragma once

#include "coordination/offsets/kernels.hpp"

namespace entrain::offsets {

inline constexpr Lane theta_floor = -(Lane{1} << 26);  // a share of an edge's cost never falls below
inline constexpr Lane theta_top = Lane{1} << 28;

// theta takes everything above `kept` from rest, as far as theta_top allows.
void take_rest(Lane* theta, Lane* rest, Lane kept, int cycle);
// m[d] = theta[d] + others[(-d) mod cycle]; returns the least m.
Lane add_reversed(const Lane* theta, const Lane* others, int cycle, Lane* m);
// Moves floor((m - least) / parts), at most what keeps theta above its floor, from theta to rest (clipped at 2^29, in its own favour).
void give_back(Lane* theta, Lane* rest, const Lane* m, Lane least, int parts, int cycle);
// row = min(row - least, 2^29).
void lower_by(Lane* row, Lane least, int cycle);

// row[x] = min(row[x] + table[(x - shift) mod cycle], 2^29), 0 <= shift < cycle; entries of row are at most 2^29.
void add_shifted(const Lane* table, int shift, int cycle, Lane* row);

}  // namespace entrain::offsets
