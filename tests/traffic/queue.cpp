// The periodic queue against the deterministic queueing triangle and brute force.
#include "traffic/queue.hpp"

#include <rapidcheck.h>

#include <catch2/catch.hpp>
#include <cmath>

using namespace entrain::traffic;

TEST_CASE("the deterministic queue of one approach") {
  // Wikibooks, Fundamentals of Transportation, Traffic signals: 500/h against 3000/h, r = 70, C = 100: clears in 14.0 s,
  // longest queue 9.722, 408.33 veh-s, 84 % stop.
  const Profile arrivals = uniform_profile(500 / 3600.0, 100, 1), capacity = capacity_profile({{70, 30}}, 100, 0, 0, 3000 / 3600.0, 1);
  const QueueFigures figures = periodic_queue(arrivals, capacity);
  CHECK(figures.longest_veh == Approx(9.722).epsilon(1e-3));
  CHECK(figures.delay_veh_s == Approx(408.33).epsilon(1e-4));
  CHECK(figures.stops_veh / arrivals.total() == Approx(0.84).epsilon(1e-6));
  CHECK_FALSE(figures.oversaturated);
}

TEST_CASE("20/min against 50/min, r = 30, C = 60: 12.5 s a vehicle on average") {
  // Wikibooks, Fundamentals of Transportation, Traffic signals (same family of examples).
  const Profile arrivals = uniform_profile(20 / 60.0, 60, 1), capacity = capacity_profile({{30, 30}}, 60, 0, 0, 50 / 60.0, 1);
  CHECK(periodic_queue(arrivals, capacity).delay_veh_s / arrivals.total() == Approx(12.5));
}

TEST_CASE("an even shift of arrivals equals a shift of the green") {
  CHECK(rc::check([] {
    const int n = *rc::gen::inRange(4, 50);
    Profile arrivals{1, {}}, green{1, {}};
    for (int k = 0; k < n; ++k) {
      arrivals.vehicles.push_back(*rc::gen::inRange(0, 100) / 300.0);
      green.vehicles.push_back(*rc::gen::inRange(0, 2) / 2.0);
    }
    const int shift = *rc::gen::inRange(0, n);
    const QueueFigures a = periodic_queue(arrivals, green, static_cast<std::size_t>(shift));
    const QueueFigures b = periodic_queue(arrivals, shifted(green, shift));
    RC_ASSERT(std::fabs(a.delay_veh_s - b.delay_veh_s) < 1e-6);
    RC_ASSERT(std::fabs(a.stops_veh - b.stops_veh) < 1e-6);
    RC_ASSERT(a.longest_veh >= 0 && a.stops_veh <= arrivals.total() + 1e-9);
  }));
}

TEST_CASE("no capacity and too much flow give finite figures and say so") {
  const Profile arrivals = uniform_profile(0.2, 60, 1);
  const QueueFigures none = periodic_queue(arrivals, uniform_profile(0, 60, 1));
  CHECK(none.delay_veh_s == Approx(12 * 60.0));
  CHECK(none.oversaturated);
  const QueueFigures over = periodic_queue(arrivals, capacity_profile({{0, 20}}, 60, 0, 0, 0.5, 1));
  CHECK(over.oversaturated);
  CHECK(std::isfinite(over.delay_veh_s));
}

TEST_CASE("all shifts at once equal each shift played whole") {
  CHECK(rc::check([] {
    const int n = *rc::gen::inRange(4, 60);
    Profile arrivals{1, {}};
    for (int k = 0; k < n; ++k) arrivals.vehicles.push_back(*rc::gen::inRange(0, 100) / 400.0);
    const double start = *rc::gen::inRange(0, 10 * n) / 10.0, length = *rc::gen::inRange(0, 10 * n + 1) / 10.0;
    std::vector<GreenTime> greens = {{start, length}};
    if (*rc::gen::inRange(0, 4) == 0) greens.push_back({start + n / 2.0, n / 8.0});
    const Profile capacity = capacity_profile(greens, n, 0, 0, *rc::gen::inRange(1, 10) / 10.0, 1);
    const auto all = periodic_queues(arrivals, capacity);
    for (int d = 0; d < n; ++d) {
      const QueueFigures one = periodic_queue(arrivals, capacity, static_cast<std::size_t>(d));
      const QueueFigures& other = all[static_cast<std::size_t>(d)];
      RC_ASSERT(std::fabs(one.delay_veh_s - other.delay_veh_s) < 1e-7 * (1 + one.delay_veh_s));
      RC_ASSERT(std::fabs(one.stops_veh - other.stops_veh) < 1e-7 * (1 + one.stops_veh));
      RC_ASSERT(std::fabs(one.longest_veh - other.longest_veh) < 1e-7 * (1 + one.longest_veh));
      RC_ASSERT(one.oversaturated == other.oversaturated);
    }
  }));
}
