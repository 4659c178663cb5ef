// Inside the engine time is whole ticks of 0.1 ns: 240 s are 2.4e12, sums stay far below 2^63, and equal means equal.
#pragma once

#include <cmath>
#include <cstdint>

#include "base/circle.hpp"

namespace entrain::bands {

using Tick = std::int64_t;
inline constexpr Tick ticks_per_second = 10'000'000'000;

inline Tick to_ticks(double seconds) { return std::llround(seconds * static_cast<double>(ticks_per_second)); }
inline double to_seconds(Tick ticks) { return static_cast<double>(ticks) / static_cast<double>(ticks_per_second); }

// `t` in [-period, 2 period) brought into [0, period) without a division.
inline Tick wrap_near(Tick t, Tick period) { return t < 0 ? t + period : t >= period ? t - period : t; }

// Whole seconds, as ticks.
inline Tick second_floor(Tick t) { return t - wrap(t, ticks_per_second); }
inline Tick second_ceil(Tick t) { return -second_floor(-t); }

}  // namespace entrain::bands
