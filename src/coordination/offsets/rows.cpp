#include "coordination/offsets/rows.hpp"

#include <algorithm>

#if defined(__x86_64__) && defined(__GNUC__)
#define ENTRAIN_WIDE_LANES 1
#if defined(__clang__)
#define ENTRAIN_WIDE __attribute__((target("avx2")))
#else
#define ENTRAIN_WIDE __attribute__((target("avx2"), optimize("O3")))
#endif
#endif
#define ENTRAIN_INLINE inline __attribute__((always_inline))

namespace entrain::offsets {
namespace {

ENTRAIN_INLINE void take_rest_loop(Lane* __restrict theta, Lane* __restrict rest, Lane kept, int cycle) {
  for (int d = 0; d < cycle; ++d) {
    const Lane total = theta[d] + rest[d], taken = std::min(total - kept, theta_top);
    theta[d] = taken;
    rest[d] = total - taken;
  }
}

ENTRAIN_INLINE Lane add_reversed_loop(const Lane* __restrict theta, const Lane* __restrict others, int cycle, Lane* __restrict m) {
  m[0] = theta[0] + others[0];
  for (int d = 1; d < cycle; ++d) m[d] = theta[d] + others[cycle - d];
  Lane least = m[0];
  for (int d = 1; d < cycle; ++d) least = std::min(least, m[d]);
  return least;
}

// The share is rounded down through double precision and, to be safe from its rounding, may be one unit short.
ENTRAIN_INLINE void give_back_loop(Lane* __restrict theta, Lane* __restrict rest, const Lane* __restrict m, Lane least, double share, int cycle) {
  for (int d = 0; d < cycle; ++d) {
    const Lane given = std::min(static_cast<Lane>(static_cast<double>(m[d] - least) * share), theta[d] - theta_floor);
    theta[d] -= given;
    rest[d] = std::min(rest[d] + given, lane_ceiling);
  }
}

ENTRAIN_INLINE void give_all_back_loop(Lane* __restrict theta, Lane* __restrict rest, const Lane* __restrict m, Lane least, int cycle) {
  for (int d = 0; d < cycle; ++d) {
    const Lane given = std::min(m[d] - least, theta[d] - theta_floor);
    theta[d] -= given;
    rest[d] = std::min(rest[d] + given, lane_ceiling);
  }
}

ENTRAIN_INLINE void lower_by_loop(Lane* row, Lane least, int cycle) {
  for (int d = 0; d < cycle; ++d) row[d] = std::min(row[d] - least, lane_ceiling);
}

ENTRAIN_INLINE void add_shifted_loop(const Lane* __restrict table, int shift, int cycle, Lane* __restrict row) {
  const int tail = cycle - shift;
  for (int x = 0; x < shift; ++x) row[x] = std::min(row[x] + table[x + tail], lane_ceiling);
  for (int x = 0; x < tail; ++x) row[x + shift] = std::min(row[x + shift] + table[x], lane_ceiling);
}

#ifdef ENTRAIN_WIDE_LANES
ENTRAIN_WIDE void add_shifted_wide(const Lane* table, int shift, int cycle, Lane* row) { add_shifted_loop(table, shift, cycle, row); }
ENTRAIN_WIDE void take_rest_wide(Lane* theta, Lane* rest, Lane kept, int cycle) { take_rest_loop(theta, rest, kept, cycle); }
ENTRAIN_WIDE Lane add_reversed_wide(const Lane* theta, const Lane* others, int cycle, Lane* m) { return add_reversed_loop(theta, others, cycle, m); }
ENTRAIN_WIDE void give_back_wide(Lane* theta, Lane* rest, const Lane* m, Lane least, double share, int cycle) { give_back_loop(theta, rest, m, least, share, cycle); }
ENTRAIN_WIDE void give_all_back_wide(Lane* theta, Lane* rest, const Lane* m, Lane least, int cycle) { give_all_back_loop(theta, rest, m, least, cycle); }
ENTRAIN_WIDE void lower_by_wide(Lane* row, Lane least, int cycle) { lower_by_loop(row, least, cycle); }

bool wide() {
  static const bool known = __builtin_cpu_supports("avx2") != 0;
  return known;
}
#define ENTRAIN_RUN(name, ...) (wide() ? name##_wide(__VA_ARGS__) : name##_loop(__VA_ARGS__))
#else
#define ENTRAIN_RUN(name, ...) name##_loop(__VA_ARGS__)
#endif

}  // namespace

void take_rest(Lane* theta, Lane* rest, Lane kept, int cycle) { ENTRAIN_RUN(take_rest, theta, rest, kept, cycle); }
Lane add_reversed(const Lane* theta, const Lane* others, int cycle, Lane* m) { return ENTRAIN_RUN(add_reversed, theta, others, cycle, m); }
void give_back(Lane* theta, Lane* rest, const Lane* m, Lane least, int parts, int cycle) {
  if (parts == 1) ENTRAIN_RUN(give_all_back, theta, rest, m, least, cycle);
  else ENTRAIN_RUN(give_back, theta, rest, m, least, 1.0 / parts * (1 - 1e-12), cycle);
}
void add_shifted(const Lane* table, int shift, int cycle, Lane* row) { ENTRAIN_RUN(add_shifted, table, shift, cycle, row); }
void lower_by(Lane* row, Lane least, int cycle) { ENTRAIN_RUN(lower_by, row, least, cycle); }

}  // namespace entrain::offsets
