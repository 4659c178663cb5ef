// Distances and bearings on the ellipsoid, from the local radii of curvature: good to 1e-6 over street lengths.
#pragma once

#include <vector>

#include "network/network.hpp"

namespace entrain::network {

// Metres between two places at most some kilometres apart (WGS 84; meridional and prime-vertical radii at the mean latitude).
double distance_m(Point a, Point b);
double length_m(const std::vector<Point>& shape);
// Clockwise from north, [0, 360).
double bearing_deg(Point from, Point to);
// The point `along_m` from the start of the shape; its end if the shape is shorter.
Point point_along(const std::vector<Point>& shape, double along_m);
// Difference b - a in (-180, 180]; positive is clockwise (to the right).
double turn_deg(double a_deg, double b_deg);

}  // namespace entrain::network
