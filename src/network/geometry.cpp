#include "network/geometry.hpp"

#include <cmath>

#include "base/circle.hpp"

namespace entrain::network {
namespace {

constexpr double radians_per_degree = 0.017453292519943295;

struct Metric {
  double east_m, north_m;  // metres a degree of longitude, of latitude
};

// WGS 84: a = 6378137 m, e2 = 0.00669437999014.
Metric metric_at(double lat_deg) {
  constexpr double a = 6378137.0, e2 = 0.00669437999014;
  const double s = std::sin(lat_deg * radians_per_degree), w2 = 1 - e2 * s * s, w = std::sqrt(w2);
  return {a / w * std::cos(lat_deg * radians_per_degree) * radians_per_degree, a * (1 - e2) / (w2 * w) * radians_per_degree};
}

}  // namespace

double distance_m(Point a, Point b) {
  const Metric metric = metric_at((a.lat + b.lat) / 2);
  return std::hypot((b.lon - a.lon) * metric.east_m, (b.lat - a.lat) * metric.north_m);
}

double length_m(const std::vector<Point>& shape) {
  double length = 0;
  for (std::size_t i = 1; i < shape.size(); ++i) length += distance_m(shape[i - 1], shape[i]);
  return length;
}

double bearing_deg(Point from, Point to) {
  const Metric metric = metric_at((from.lat + to.lat) / 2);
  return wrap(std::atan2((to.lon - from.lon) * metric.east_m, (to.lat - from.lat) * metric.north_m) / radians_per_degree, 360.0);
}

Point point_along(const std::vector<Point>& shape, double along_m) {
  for (std::size_t i = 1; i < shape.size(); ++i) {
    const double step = distance_m(shape[i - 1], shape[i]);
    if (along_m <= step && step > 0) {
      const double t = along_m / step;
      return {shape[i - 1].lon + t * (shape[i].lon - shape[i - 1].lon), shape[i - 1].lat + t * (shape[i].lat - shape[i - 1].lat)};
    }
    along_m -= step;
  }
  return shape.back();
}

double turn_deg(double a_deg, double b_deg) {
  const double turn = wrap(b_deg - a_deg, 360.0);
  return turn > 180 ? turn - 360 : turn;
}

}  // namespace entrain::network
