// Sets of instants on the circle of the cycle as sorted disjoint intervals of whole microseconds. Private to the review.
#pragma once

#include <cstdint>
#include <vector>

namespace entrain::review {

using Micros = std::int64_t;
inline constexpr Micros second = 1'000'000;

Micros to_micros(double seconds);  // nearest; the caller has seen to it that it is finite and below 10^9
inline double to_seconds(Micros micros) { return static_cast<double>(micros) / 1e6; }

struct Open {
  Micros from = 0, to = 0;  // [from, to)
};

// Everything open during [0, cycle): sorted, disjoint, none touching the next. An interval over the end of the cycle is two.
using OpenSet = std::vector<Open>;

OpenSet whole_circle(Micros cycle);
// `intervals` may start anywhere and overlap; lengths of the cycle and more are the whole circle, lengths of 0 and less nothing.
OpenSet on_circle(const std::vector<Open>& intervals, Micros cycle);
OpenSet common(const OpenSet& a, const OpenSet& b);

// The same with the piece at the end of the cycle joined to the one at its start: `to` may pass the cycle.
std::vector<Open> stretches(const OpenSet& set, Micros cycle);
// The longest stretch, the earliest of equally long ones; {0, 0} of nothing.
Open longest(const OpenSet& set, Micros cycle);
// The stretch that holds `instant`, moved by a whole number of cycles so that from <= instant < to; {0, 0} where none does.
Open stretch_at(const OpenSet& set, Micros instant, Micros cycle);

}  // namespace entrain::review
