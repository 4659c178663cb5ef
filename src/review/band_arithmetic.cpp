#include "review/band_arithmetic.hpp"

#include <algorithm>
#include <cmath>

namespace entrain::review {
namespace {

Micros rest(Micros value, Micros cycle) {
  const Micros r = value % cycle;
  return r < 0 ? r + cycle : r;
}

OpenSet joined(OpenSet pieces) {
  std::sort(pieces.begin(), pieces.end(), [](const Open& a, const Open& b) { return a.from < b.from; });
  OpenSet out;
  for (const Open& o : pieces) {
    if (!out.empty() && o.from <= out.back().to) out.back().to = std::max(out.back().to, o.to);
    else out.push_back(o);
  }
  return out;
}

}  // namespace

Micros to_micros(double seconds) { return std::llround(seconds * 1e6); }

OpenSet whole_circle(Micros cycle) { return {{0, cycle}}; }

OpenSet on_circle(const std::vector<Open>& intervals, Micros cycle) {
  OpenSet pieces;
  for (const Open& o : intervals) {
    const Micros length = o.to - o.from;
    if (length <= 0) continue;
    if (length >= cycle) return whole_circle(cycle);
    const Micros from = rest(o.from, cycle), to = from + length;
    pieces.push_back({from, std::min(to, cycle)});
    if (to > cycle) pieces.push_back({0, to - cycle});
  }
  return joined(std::move(pieces));
}

OpenSet common(const OpenSet& a, const OpenSet& b) {
  OpenSet out;
  for (std::size_t i = 0, j = 0; i < a.size() && j < b.size();) {
    const Open both{std::max(a[i].from, b[j].from), std::min(a[i].to, b[j].to)};
    if (both.from < both.to) out.push_back(both);
    a[i].to < b[j].to ? ++i : ++j;
  }
  return out;
}

std::vector<Open> stretches(const OpenSet& set, Micros cycle) {
  std::vector<Open> out = set;
  if (out.size() > 1 && out.front().from == 0 && out.back().to == cycle) {
    out.back().to = cycle + out.front().to;
    out.erase(out.begin());
  }
  return out;
}

Open longest(const OpenSet& set, Micros cycle) {
  Open best{0, 0};
  for (const Open& o : stretches(set, cycle))
    if (o.to - o.from > best.to - best.from) best = o;
  return best;
}

Open stretch_at(const OpenSet& set, Micros instant, Micros cycle) {
  for (const Open& o : stretches(set, cycle)) {
    const Micros into = rest(instant - o.from, cycle);
    if (into < o.to - o.from || o.to - o.from >= cycle) return {instant - into, instant - into + (o.to - o.from)};
  }
  return {0, 0};
}

}  // namespace entrain::review
