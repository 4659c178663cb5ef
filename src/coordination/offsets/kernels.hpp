// Circular min-plus convolutions over 32-bit lanes, the inner loop of everything else.
//
// A row holds one entry for each of `cycle` labels, padded to a multiple of 16 lanes; what the pad lanes hold is never read as a result.
// Entries stay within [-2^29, 2^29], so that no sum of two wraps. Vector instructions are used where the processor has them; the results
// are the same on every machine.
#pragma once

#include <cstddef>
#include <cstdint>
#include <vector>

namespace entrain::offsets {

using Lane = std::int32_t;
inline constexpr Lane lane_ceiling = Lane{1} << 29;

// Lanes of a row: `cycle` rounded up to a multiple of 16.
inline int row_lanes(int cycle) { return (cycle + 15) / 16 * 16; }

// Room for one row twice over; one for each thread.
class ConvolutionSpace {
 public:
  explicit ConvolutionSpace(int cycle) : m_doubled(static_cast<std::size_t>(2 * row_lanes(cycle) + 32)), m_chosen(static_cast<std::size_t>(cycle)) {}
  Lane* doubled() { return m_doubled.data(); }
  int* chosen() { return m_chosen.data(); }

 private:
  std::vector<Lane> m_doubled;
  std::vector<int> m_chosen;
};

// out[k] = min(out[k], a[i] + b[(k - i) mod cycle] over i), k < cycle. `out` holds entries of at most 2^30 and overlaps neither a nor b.
void convolve_into(const Lane* a, const Lane* b, int cycle, Lane* out, ConvolutionSpace& space);

// The same by plain loops: what the fast one is judged by, and what runs where there are no vector instructions.
void convolve_into_plainly(const Lane* a, const Lane* b, int cycle, Lane* out);

// out[d] = in[(-d) mod cycle].
void reverse_row(const Lane* in, int cycle, Lane* out);
Lane least_of(const Lane* row, int cycle);

}  // namespace entrain::offsets
