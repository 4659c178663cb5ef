#include "base/circle.hpp"

#include <algorithm>
#include <cassert>
#include <cmath>

namespace entrain {

std::int64_t wrap(std::int64_t t, std::int64_t cycle) {
  const std::int64_t r = t % cycle;
  return r < 0 ? r + cycle : r;
}

Tenths wrap(Tenths t, Tenths cycle) { return {wrap(t.count, cycle.count)}; }

double wrap(double t, double cycle) {
  double r = std::fmod(t, cycle);
  if (r < 0) r += cycle;
  return r >= cycle ? 0.0 : r + 0.0;
}

Circle::Circle(Tenths cycle) : m_cycle(cycle) { assert(cycle.count > 0); }

Arc Circle::arc(Tenths start, Tenths duration) const {
  assert(duration.count >= 0 && duration <= m_cycle);
  return {point(start), duration};
}

bool Circle::contains(const Arc& arc, Tenths t) const { return forward(arc.start, t) < arc.duration; }

std::vector<Arc> Circle::intersection(const Arc& a, const Arc& b) const {
  if (a.duration.count == 0 || b.duration.count == 0) return {};
  if (a.duration == m_cycle) return {b};
  if (b.duration == m_cycle) return {a};
  std::vector<Arc> parts;
  const Tenths b_from_a = forward(a.start, b.start);
  const auto add = [&](Tenths from, Tenths to) {
    if (to > from) parts.push_back({point(a.start + from), to - from});
  };
  add(b_from_a, std::min(a.duration, b_from_a + b.duration));
  const Tenths wrapped = b_from_a - m_cycle;  // the copy of b one cycle earlier
  add(std::max(Tenths{0}, wrapped), std::min(a.duration, wrapped + b.duration));
  std::sort(parts.begin(), parts.end(), [](const Arc& x, const Arc& y) { return x.start < y.start; });
  return parts;
}

Tenths Circle::overlap(const Arc& a, const Arc& b) const {
  Tenths total{0};
  for (const Arc& part : intersection(a, b)) total += part.duration;
  return total;
}

}  // namespace entrain
