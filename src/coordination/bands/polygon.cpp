#include "coordination/bands/polygon.hpp"

#include <algorithm>
#include <cmath>

namespace entrain::bands {
namespace {

double turn(const Corner& o, const Corner& a, const Corner& b) {
  return (a.x - o.x) * (b.y - o.y) - (a.y - o.y) * (b.x - o.x);
}

}  // namespace

// Monotone chain (Andrew 1979).
Polygon hull(std::vector<Corner> corners) {
  std::sort(corners.begin(), corners.end(),
            [](const Corner& a, const Corner& b) { return a.x != b.x ? a.x < b.x : a.y < b.y; });
  corners.erase(std::unique(corners.begin(), corners.end(),
                            [](const Corner& a, const Corner& b) { return a.x == b.x && a.y == b.y; }),
                corners.end());
  if (corners.size() < 3) return corners;
  Polygon out(2 * corners.size());
  std::size_t k = 0;
  const auto add = [&](const Corner& c, std::size_t least) {
    while (k >= least && turn(out[k - 2], out[k - 1], c) <= 0) --k;
    out[k++] = c;
  };
  for (const Corner& c : corners) add(c, 2);
  const std::size_t lower = k + 1;
  for (std::size_t i = corners.size() - 1; i-- > 0;) add(corners[i], lower);
  out.resize(k - 1);
  return out;
}

Polygon cut(const Polygon& polygon, double a, double b, double c) {
  Polygon out;
  for (std::size_t i = 0; i < polygon.size(); ++i) {
    const Corner& p = polygon[i];
    const Corner& q = polygon[(i + 1) % polygon.size()];
    const double at_p = a * p.x + b * p.y - c, at_q = a * q.x + b * q.y - c;
    if (at_p <= 0) out.push_back(p);
    if ((at_p < 0 && at_q > 0) || (at_p > 0 && at_q < 0)) {
      const double share = at_p / (at_p - at_q);
      out.push_back({p.x + share * (q.x - p.x), p.y + share * (q.y - p.y)});
    }
  }
  return out.size() < 3 ? hull(std::move(out)) : out;
}

Polygon sheared(Polygon polygon, double by) {
  for (Corner& c : polygon) c.x += by * c.y;
  return polygon;
}

Polygon moved(Polygon polygon, double dx) {
  for (Corner& c : polygon) c.x += dx;
  return polygon;
}

Polygon widened(const Polygon& polygon, double dy) {
  std::vector<Corner> corners;
  for (const Corner& c : polygon) corners.push_back({c.x, c.y - dy}), corners.push_back({c.x, c.y + dy});
  return hull(std::move(corners));
}

bool contains(const Polygon& outer, const Polygon& inner, double tolerance) {
  if (outer.size() < 3) return false;
  for (std::size_t i = 0; i < outer.size(); ++i) {
    const Corner& a = outer[i];
    const Corner& b = outer[(i + 1) % outer.size()];
    const double length = std::hypot(b.x - a.x, b.y - a.y);
    for (const Corner& c : inner)
      if (turn(a, b, c) < -tolerance * length) return false;
  }
  return true;
}

}  // namespace entrain::bands
