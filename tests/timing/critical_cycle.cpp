#include <catch2/catch.hpp>
#include <cmath>
#include <rapidcheck.h>

#include "sample_designs.hpp"
#include "timing/cliques.hpp"

using namespace entrain;
using namespace entrain::timing;

namespace {

double worst(const SignalDesign& design, const std::vector<double>& ratios, int cycle_s) {
  const auto plans = allocate(design, sample::request(cycle_s, ratios));
  return plans ? plans->front().saturation_descending.front() : HUGE_VAL;
}

}  // namespace

TEST_CASE("the least cycle is the first at which an allocation exists", "[timing]") {
  CHECK(rc::check([] {
    SignalDesign design = sample::dual_ring();
    for (Group& group : design.groups) group.minimum_green = Tenths::from_seconds(*rc::gen::inRange(4, 20));
    if (*rc::gen::inRange(0, 2)) design.ring_barrier.reset();
    const std::vector<double> ratios(8, .05);
    const auto critical = critical_cycle(design, sample::flows(ratios), .9);
    RC_ASSERT(critical.has_value());
    RC_ASSERT(allocate(design, sample::request(critical->minimum_s, ratios)).has_value());
    RC_ASSERT(!allocate(design, sample::request(critical->minimum_s - 1, ratios)).has_value());
  }));
}

TEST_CASE("the target cycle is the first at which no degree of saturation is above the target", "[timing]") {
  CHECK(rc::check([] {
    const SignalDesign design = sample::dual_ring();
    std::vector<double> ratios;
    for (int i = 0; i < 8; ++i) ratios.push_back(0.01 * *rc::gen::inRange(1, 22));
    const auto critical = critical_cycle(design, sample::flows(ratios), .9);
    RC_ASSERT(critical.has_value());
    if (critical->saturation_minimum_s == 0) {
      RC_ASSERT(critical->flow_ratio > 0.75);
      return;
    }
    RC_ASSERT(worst(design, ratios, critical->saturation_minimum_s) <= .9);
    if (critical->saturation_minimum_s > critical->minimum_s) RC_ASSERT(worst(design, ratios, critical->saturation_minimum_s - 1) > .9);
  }));
}

TEST_CASE("the critical groups come with their arithmetic", "[timing]") {
  SignalDesign design = sample::dual_ring(6, 3, 1);
  // At 59 s, 0.9: 10 (least) + ceil(.28 x 59 / .9) + 4 and 10 (least) + ceil(.18 x 59 / .9) + 4 = 59; at 58 s the same splits do not fit.
  const auto critical = critical_cycle(design, sample::flows({.08, .22, .06, .18, .05, .28, .09, .14}), .9);
  REQUIRE(critical.has_value());
  CHECK(critical->critical_groups == std::vector<int>{4, 5, 2, 3});
  CHECK(critical->text ==
        "groups 1 (10 s) and 2 (10 s), then 3 (10 s) and 4 (10 s) need 40 s; critical groups 5, 6, 3 and 4: flow ratios 0.050 + 0.280 + 0.060 + 0.180 = 0.570, "
        "lost time 16 s; Webster (1958): (1.5 x 16 + 5) / (1 - 0.570) = 67.4 s; degree of saturation 0.9 or less from 59 s on");
}

TEST_CASE("cliques: the cheapest cyclic order is the least of all permutations", "[timing]") {
  CHECK(rc::check([] {
    const auto n = *rc::gen::inRange<std::size_t>(2, 7);
    std::vector<std::vector<double>> change(n, std::vector<double>(n, 0));
    for (auto& row : change)
      for (double& c : row) c = *rc::gen::inRange(0, 12);
    std::vector<int> order(n);
    for (std::size_t i = 0; i < n; ++i) order[i] = static_cast<int>(i);
    double best = HUGE_VAL;
    do {
      double sum = 0;
      for (std::size_t i = 0; i < n; ++i) sum += change[order[i]][order[(i + 1) % n]];
      best = std::min(best, sum);
    } while (std::next_permutation(order.begin(), order.end()));
    const CyclicOrder found = cheapest_cyclic_order(order, change);
    RC_ASSERT(found.sum == best);
    double again = 0;
    for (std::size_t i = 0; i < n; ++i) again += change[found.order[i]][found.order[(i + 1) % n]];
    RC_ASSERT(again == best);
  }));
}
