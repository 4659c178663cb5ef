// The cycle is a circle: points and half-open intervals modulo the cycle length. The only place that takes remainders of time.
#pragma once

#include <cstdint>
#include <vector>

#include "base/tenths.hpp"

namespace entrain {

// The representative of `t` in [0, cycle). `cycle` must be positive (and finite for doubles).
std::int64_t wrap(std::int64_t t, std::int64_t cycle);
inline std::int32_t wrap(std::int32_t t, std::int32_t cycle) { const std::int32_t r = t % cycle; return r < 0 ? r + cycle : r; }
Tenths wrap(Tenths t, Tenths cycle);
// Never returns `cycle` itself, also where rounding would.
double wrap(double t, double cycle);

// A half-open interval [start, start + duration) on the circle.
// Invariant inside a Circle: 0 <= start < cycle and 0 <= duration <= cycle; duration == cycle is the full circle, 0 is empty.
struct Arc {
  Tenths start;
  Tenths duration;
  bool operator==(const Arc&) const = default;
};

class Circle {
 public:
  // `cycle` must be positive.
  explicit Circle(Tenths cycle);

  Tenths cycle() const { return m_cycle; }
  Tenths point(Tenths t) const { return wrap(t, m_cycle); }
  // Time from `from` forward to `to`, in [0, cycle).
  Tenths forward(Tenths from, Tenths to) const { return wrap(to - from, m_cycle); }
  // Normalises the start; clamps nothing: `duration` must lie in [0, cycle].
  Arc arc(Tenths start, Tenths duration) const;
  Tenths end(const Arc& arc) const { return point(arc.start + arc.duration); }
  bool contains(const Arc& arc, Tenths t) const;
  // Total time that lies in both arcs (their intersection may have two parts).
  Tenths overlap(const Arc& a, const Arc& b) const;
  // The parts common to both, at most two, in order of start.
  std::vector<Arc> intersection(const Arc& a, const Arc& b) const;

 private:
  Tenths m_cycle;
};

}  // namespace entrain
