// Cycle lengths and greens against published values; each names its source.
#include <catch2/catch.hpp>
#include <cmath>

#include "timing/allocation.hpp"
#include "timing/cliques.hpp"
#include "timing/cycle_length.hpp"

using namespace entrain;
using namespace entrain::timing;

namespace {

Group plain(const std::string& id, double lost_s, int lane_group) {
  Group group;
  group.id = id;
  group.minimum_green = Tenths{10};
  group.yellow = Tenths::nearest(lost_s);
  group.start_up_lost_s = group.end_gain_s = 0;
  group.lane_groups = {lane_group};
  return group;
}

// Groups with the given flow ratios (saturation flow 1800 veh/h) that lose `lost_s` each, one after the other in one ring.
SignalDesign one_ring(std::size_t groups, double lost_s) {
  SignalDesign design;
  design.signal = "published";
  design.ring_barrier = RingBarrier{{{{}}}};
  for (std::size_t g = 0; g < groups; ++g) {
    design.groups.push_back(plain(std::to_string(g + 1), lost_s, static_cast<int>(g)));
    design.lane_groups.push_back({std::to_string(g + 1), {}, 1, 1800, {}, false});
    design.ring_barrier->rings[0][0].push_back(static_cast<int>(g));
  }
  for (int a = 0; a < static_cast<int>(groups); ++a)
    for (int b = a + 1; b < static_cast<int>(groups); ++b) design.conflicts.push_back({a, b, Tenths::nearest(lost_s), Tenths::nearest(lost_s)});
  return design;
}

std::vector<double> flows(const std::vector<double>& ratios) {
  std::vector<double> out;
  for (const double ratio : ratios) out.push_back(1800 * ratio);
  return out;
}

}  // namespace

TEST_CASE("Webster (1958): two flows, L = 12", "[published]") {
  // Flows 1000/2500 and 900/3000: optimum 76.667 s, greens 36.95 and 27.71, least cycle 40 s (form and values: F. V. Webster, Traffic Signal
  // Settings, Road Research Technical Paper 39, 1958; recomputed).
  const double y1 = 1000.0 / 2500, y2 = 900.0 / 3000;
  SignalDesign design = one_ring(2, 6);
  const auto critical = critical_cycle(design, flows({y1, y2}), 1.0);
  REQUIRE(critical.has_value());
  CHECK(critical->webster_s == Approx(76.667).margin(0.001));
  CHECK(critical->lost_time_s == Approx(12));
  CHECK(cycle_for_saturation_s(12, y1 + y2, 1) == Approx(40));
  const auto greens = proportional_greens_s(critical->webster_s, 12, {y1, y2});
  CHECK(greens[0] == Approx(36.95).margin(0.005));
  CHECK(greens[1] == Approx(27.71).margin(0.005));
  CHECK(critical->saturation_minimum_s == 40);  // 16 s and 12 s of green: exact in whole seconds
}

TEST_CASE("Webster's optimum: y = .25 .25 .22, L = 12", "[published]") {
  // M. Rogers, Highway Engineering, example 5.6: 82.143 s.
  const auto critical = critical_cycle(one_ring(3, 4), flows({.25, .25, .22}), 0.95);
  REQUIRE(critical.has_value());
  CHECK(critical->webster_s == Approx(82.143).margin(0.001));
}

TEST_CASE("Least cycle for a target critical ratio: 170 s and greens 45 35 40 30", "[published]") {
  // Mannering et al., Principles of Highway Engineering and Traffic Analysis, problem 7.20: y = .225 .175 .200 .150, L = 20, Xc = .85.
  const std::vector<double> y{.225, .175, .200, .150};
  CHECK(cycle_for_saturation_s(20, .75, .85) == Approx(170));
  const SignalDesign design = one_ring(4, 5);
  AllocationRequest request;
  request.cycle = Tenths::from_seconds(170);
  request.flows_vph = flows(y);
  const auto plans = allocate(design, request);
  REQUIRE(plans.has_value());
  const std::vector<double> expected{45, 35, 40, 30};
  for (std::size_t g = 0; g < 4; ++g) {
    CHECK(plans->front().groups[g].greens.front().duration.seconds() == Approx(expected[g]));
    CHECK(plans->front().groups[g].degree_of_saturation == Approx(.85));
  }
}

TEST_CASE("Dual ring: critical .33 + .24, least cycle 37.21 s", "[published]") {
  // Form: Highway Capacity Manual Applications Guidebook, case 2; values derived: y1..y8, L = 16.
  std::vector<Group> groups;
  SignalDesign design;
  design.signal = "published";
  for (int g = 0; g < 8; ++g) {
    design.groups.push_back(plain(std::to_string(g + 1), 4, g));
    design.lane_groups.push_back({std::to_string(g + 1), {}, 1, 1800, {}, false});
  }
  design.ring_barrier = RingBarrier{{{{0, 1}, {2, 3}}, {{4, 5}, {6, 7}}}};
  const auto critical = critical_cycle(design, flows({.08, .22, .06, .18, .05, .28, .09, .14}), .9);
  REQUIRE(critical.has_value());
  CHECK(critical->flow_ratio == Approx(.33 + .24));
  CHECK(critical->lost_time_s == Approx(16));
  CHECK(cycle_for_saturation_s(critical->lost_time_s, critical->flow_ratio, 1) == Approx(37.21).margin(0.005));
  CHECK(cycle_for_saturation_s(critical->lost_time_s, critical->flow_ratio, .9) == Approx(43.64).margin(0.005));
}

TEST_CASE("Order matters: 37.5 s in order ABC, 45 s in order ACB", "[published]") {
  // Derived, exact: intergreens A>B 5, B>C 4, C>A 6 against A>C 7, C>B 3, B>A 8; y = .20 .25 .15; C >= sum of intergreens / (1 - sum of y).
  SignalDesign design;
  for (int g = 0; g < 3; ++g) design.groups.push_back(plain(std::string(1, static_cast<char>('A' + g)), 0, g));
  design.conflicts = {{0, 1, Tenths{50}, Tenths{80}}, {0, 2, Tenths{70}, Tenths{60}}, {1, 2, Tenths{40}, Tenths{30}}};
  const CyclicOrder cheapest = clique_lost_time(design, {0, 1, 2});
  CHECK(cheapest.sum == Approx(15));
  CHECK(cheapest.order == std::vector<int>{0, 1, 2});
  CHECK(cycle_for_saturation_s(cheapest.sum, .60, 1) == Approx(37.5));
  CHECK(cycle_for_saturation_s(7 + 3 + 8, .60, 1) == Approx(45.0));
}
