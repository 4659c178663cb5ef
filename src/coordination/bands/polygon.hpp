// Convex polygons in the plane, just what reachable sets need.
#pragma once

#include <vector>

namespace entrain::bands {

struct Corner {
  double x = 0, y = 0;
};

// Counter-clockwise, no repeated corners; one or two corners are a point or a segment; none is empty.
using Polygon = std::vector<Corner>;

Polygon hull(std::vector<Corner> corners);
// The part with a x + b y <= c.
Polygon cut(const Polygon& polygon, double a, double b, double c);
// (x, y) -> (x + by y, y)
Polygon sheared(Polygon polygon, double by);
Polygon moved(Polygon polygon, double dx);
// Every point moved by anything in [-dy, dy] upwards.
Polygon widened(const Polygon& polygon, double dy);
bool contains(const Polygon& outer, const Polygon& inner, double tolerance);

}  // namespace entrain::bands
