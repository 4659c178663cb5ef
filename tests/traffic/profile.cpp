// Dispersion and green against published recurrences and laws of conservation.
#include "traffic/profile.hpp"

#include <rapidcheck.h>

#include <catch2/catch.hpp>
#include <cmath>

using namespace entrain::traffic;

namespace {

Profile any_profile(std::size_t n) {
  Profile profile{1.0, {}};
  for (std::size_t k = 0; k < n; ++k) profile.vehicles.push_back(*rc::gen::inRange(0, 1000) / 1000.0);
  return profile;
}

}  // namespace

TEST_CASE("dispersion follows Robertson's recurrence") {
  // T.V. Mathew, lecture 19: step 10 s, F = .783, lag of one step. A long empty stretch stands for "no wrap".
  // F = 1/(1 + alpha beta T) with beta T = 1 step: alpha = 1/F - 1.
  Profile flow{10.0, std::vector<double>(200, 0.0)};
  const double upstream[] = {20, 10, 15, 18, 14, 12};
  for (std::size_t k = 0; k < 6; ++k) flow.vehicles[k] = upstream[k];
  const Profile out = disperse(flow, 10.0, 1 / .783 - 1, 1.0);
  const double expected[] = {0, 15.66, 11.23, 14.18, 17.17, 14.69, 12.58, 2.73, .59, .13};
  for (std::size_t k = 0; k < 10; ++k) CHECK(out.vehicles[k] == Approx(expected[k]).margin(0.006));
}

TEST_CASE("the periodic solution equals many cycles of the plain recurrence") {
  CHECK(rc::check([] {
    const auto n = static_cast<std::size_t>(*rc::gen::inRange(5, 60));
    const Profile flow = any_profile(n);
    const double time = *rc::gen::inRange(1, 400) / 10.0;
    const Profile out = disperse(flow, time, 0.35, 0.8);
    const Profile arriving = shifted(flow, 0.8 * time);
    const double f = 1 / (1 + 0.35 * 0.8 * time);
    double y = 0;
    std::vector<double> last(n);
    for (int cycle = 0; cycle < 400; ++cycle)
      for (std::size_t k = 0; k < n; ++k) last[k] = y = f * arriving.vehicles[k] + (1 - f) * y;
    for (std::size_t k = 0; k < n; ++k) RC_ASSERT(std::fabs(last[k] - out.vehicles[k]) < 1e-6);
  }));
}

TEST_CASE("no vehicle is lost or made by shifting, dispersing or waiting") {
  CHECK(rc::check([] {
    const auto n = static_cast<std::size_t>(*rc::gen::inRange(5, 60));
    const Profile flow = any_profile(n);
    const double time = *rc::gen::inRange(-300, 1200) / 10.0;
    RC_ASSERT(std::fabs(shifted(flow, time).total() - flow.total()) < 1e-9);
    RC_ASSERT(std::fabs(disperse(flow, std::fabs(time), 0.35, 0.8).total() - flow.total()) < 1e-9);
    RC_ASSERT(std::fabs(disperse_normal(flow, 20, *rc::gen::inRange(0, 9)).total() - flow.total()) < 1e-9);
    Profile capacity = any_profile(n);
    capacity = scaled(capacity, (flow.total() + 1) / (capacity.total() + 1e-3) * 1.01);
    RC_ASSERT(std::fabs(departures(flow, capacity).total() - std::min(flow.total(), capacity.total())) < 1e-9);
  }));
}

TEST_CASE("capacity counts effective green to the tenth, wraps, and counts overlapping greens once") {
  const Profile plain = capacity_profile({{88.5, 10.0}}, 90, 2.0, 2.0, 0.5, 1.0);  // effective [0.5, 10.5)
  CHECK(plain.vehicles[0] == Approx(0.25));
  CHECK(plain.vehicles[1] == Approx(0.5));
  CHECK(plain.vehicles[10] == Approx(0.25));
  CHECK(plain.vehicles[89] == 0.0);
  CHECK(plain.total() == Approx(5.0));
  CHECK(capacity_profile({{0, 10}, {5, 10}}, 60, 0, 0, 1.0, 1.0).total() == Approx(15.0));
  CHECK(capacity_profile({{7, 60}}, 60, 2, 2, 1.0, 1.0).total() == Approx(60.0));
  CHECK(capacity_profile({{0, 1}}, 60, 2, 0, 1.0, 1.0).total() == 0.0);
}
