// Lengths and bearings against a geodesic library and by hand.
#include "network/geometry.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <random>

#ifdef ENTRAIN_HAS_GEODESIC
#include <GeographicLib/Geodesic.hpp>
#endif

using namespace entrain::network;

TEST_CASE("turns are signed, clockwise positive") {
  CHECK(turn_deg(350, 10) == Approx(20));
  CHECK(turn_deg(10, 350) == Approx(-20));
  CHECK(turn_deg(0, 180) == Approx(180));
  CHECK(bearing_deg({0, 45}, {0, 46}) == Approx(0).margin(1e-9));
  CHECK(bearing_deg({0, 45}, {-0.001, 45}) == Approx(270).margin(0.01));
}

TEST_CASE("a point along a shape lies where it should, and at the end beyond it") {
  const std::vector<Point> shape = {{0, 45}, {0, 45.001}, {0.001, 45.001}};
  const double first = distance_m(shape[0], shape[1]);
  CHECK(point_along(shape, first / 2).lat == Approx(45.0005));
  CHECK(point_along(shape, 1e6).lon == Approx(0.001));
  CHECK(length_m(shape) == Approx(first + distance_m(shape[1], shape[2])));
}

#ifdef ENTRAIN_HAS_GEODESIC
TEST_CASE("street lengths agree with a geodesic library to one in a million") {
  // GeographicLib (Karney, Algorithms for geodesics, J. Geodesy 87, 2013).
  std::mt19937 random(3);
  const auto draw = [&](double low, double high) { return low + (high - low) * std::generate_canonical<double, 32>(random); };
  for (int i = 0; i < 2000; ++i) {
    const Point a{draw(-179, 179), draw(-70, 70)};
    const Point b{a.lon + draw(-0.01, 0.01), a.lat + draw(-0.01, 0.01)};
    double exact = 0;
    GeographicLib::Geodesic::WGS84().Inverse(a.lat, a.lon, b.lat, b.lon, exact);
    CAPTURE(a.lon, a.lat, b.lon, b.lat);
    CHECK(std::fabs(distance_m(a, b) - exact) <= 1e-6 * exact + 1e-6);
  }
}
#endif
