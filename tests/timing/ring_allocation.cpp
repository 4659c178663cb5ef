#include <algorithm>
#include <catch2/catch.hpp>
#include <functional>
#include <map>
#include <rapidcheck.h>

#include "lamp_table.hpp"
#include "sample_designs.hpp"
#include "timing/fair_splits.hpp"

using namespace entrain;
using namespace entrain::timing;

namespace {

std::vector<double> sorted_degrees(const RingNeeds& needs, const std::vector<int>& splits, int cycle_s) {
  std::vector<double> out;
  std::size_t at = 0;
  for (const auto& ring : needs)
    for (const auto& side : ring)
      for (const SplitNeed& need : side) {
        if (need.ratio > 0) out.push_back(need.ratio * cycle_s / (splits[at] - need.lost_s));
        ++at;
      }
  std::sort(out.begin(), out.end(), std::greater<>());
  return out;
}

// Every way to cut the cycle into whole-second splits of two rings with two sides of two groups.
std::vector<double> best_by_hand(const RingNeeds& needs, int cycle_s) {
  std::vector<double> best;
  for (int first = 0; first <= cycle_s; ++first)
    for (int a = 0; a <= first; ++a)
      for (int c = 0; c <= first; ++c)
        for (int b = 0; b <= cycle_s - first; ++b)
          for (int d = 0; d <= cycle_s - first; ++d) {
            const std::vector<int> splits{a, first - a, b, cycle_s - first - b, c, first - c, d, cycle_s - first - d};
            std::size_t at = 0;
            bool fits = true;
            for (const auto& ring : needs)
              for (const auto& side : ring)
                for (const SplitNeed& need : side) fits = fits && splits[at++] >= need.least_s;
            if (!fits) continue;
            const auto here = sorted_degrees(needs, splits, cycle_s);
            if (best.empty() || here < best) best = here;
          }
  return best;
}

std::vector<int> flat(const RingSplits& splits) {
  std::vector<int> out;
  for (const auto& ring : splits.split_s)
    for (const auto& side : ring) out.insert(out.end(), side.begin(), side.end());
  return out;
}

SplitNeed need(int least_s, double ratio, double lost_s) { return {least_s, ratio, lost_s, false}; }

}  // namespace

TEST_CASE("fair splits equal the best of all whole-second splits", "[timing]") {
  CHECK(rc::check("two rings, two sides", [] {
    RingNeeds needs(2, std::vector<std::vector<SplitNeed>>(2));
    for (auto& ring : needs)
      for (auto& side : ring)
        for (int i = 0; i < 2; ++i) side.push_back(need(*rc::gen::inRange(2, 5), 0.05 * *rc::gen::inRange(0, 6), 1.0));
    const int cycle_s = *rc::gen::inRange(14, 23);
    const auto fair = fair_splits(needs, cycle_s);
    const auto best = best_by_hand(needs, cycle_s);
    const auto least = least_sides_s(needs);
    RC_ASSERT(fair.has_value() == (least[0] + least[1] <= cycle_s));
    if (!fair) return;
    RC_ASSERT(fair->saturation_descending == best);
    RC_ASSERT(sorted_degrees(needs, flat(*fair), cycle_s) == best);
  }));
}

TEST_CASE("splits go to the ring's worst-off group second by second", "[timing]") {
  // One ring, two groups, 30 s: y = 0.3 and 0.15, 5 s lost each: 20 s of effective green shared 13 : 7 -> x = 9/13 and 4.5/7.
  const RingNeeds needs{{{need(6, 0.3, 5), need(6, 0.15, 5)}}};
  const auto fair = fair_splits(needs, 30);
  REQUIRE(fair.has_value());
  CHECK(fair->split_s[0][0] == std::vector<int>{18, 12});
  CHECK(fair->saturation_descending[0] == Approx(9.0 / 13));
  CHECK(fair->saturation_descending[1] == Approx(4.5 / 7));
}

TEST_CASE("a dual ring gets sixteen orders, all sound, splits to the cycle", "[timing]") {
  const SignalDesign design = sample::dual_ring();
  const auto plans = allocate(design, sample::request(90, {.08, .22, .06, .18, .05, .28, .09, .14}));
  REQUIRE(plans.has_value());
  CHECK(plans->size() == 16);
  CHECK(plans->front().order == "lead-lead|lead-lead");
  CHECK(plans->front().sequence == "1 2|3 4 / 5 6|7 8");
  CHECK_FALSE(plans->front().oversaturated);
  for (const Allocation& plan : *plans) {
    INFO(plan.order);
    CHECK(judge::ring_faults(design, 90, plan) == std::vector<std::string>{});
  }
}

TEST_CASE("a turn that yields is never trapped", "[timing]") {
  SignalDesign design = sample::dual_ring();
  // 1 and 5 protected-permissive: EB through 2 with EB-L permissive, WB through 6 with WB-L permissive.
  design.groups[1].serves = {{"EB-T", RightOfWay::with_protection, false}, {"EB-L", RightOfWay::permissive, false}};
  design.groups[5].serves = {{"WB-T", RightOfWay::with_protection, false}, {"WB-L", RightOfWay::permissive, false}};
  design.groups[0].serves = {{"WB-L", RightOfWay::with_protection, false}};
  design.groups[4].serves = {{"EB-L", RightOfWay::with_protection, false}};
  design.opposed = {{"EB-L", "WB-T"}, {"WB-L", "EB-T"}};
  const auto request = sample::request(90, {.08, .22, .06, .18, .05, .28, .09, .14});
  const auto plans = allocate(design, request);
  REQUIRE(plans.has_value());
  for (const Allocation& plan : *plans) {
    INFO(plan.order);
    CHECK(judge::ring_faults(design, 90, plan) == std::vector<std::string>{});
    CHECK(plan.order.substr(0, 10) == "lead-lead|");  // a lagging turn, or unequal ends of both throughs, would trap
  }
  CHECK(plans->size() == 4);

  SECTION("a flashing yellow arrow frees the order") {
    for (Group* group : {&design.groups[1], &design.groups[5]}) group->serves[1].flashing_yellow_arrow = true;
    CHECK(allocate(design, request)->size() == 16);
  }
  SECTION("a fixed order that traps is refused with the reason") {
    auto fixed = request;
    fixed.fixed_sequence = "2 1|3 4 / 5 6|7 8";
    const auto refused = allocate(design, fixed);
    REQUIRE_FALSE(refused.has_value());
    CHECK(sample::text_of(refused.error()).find("EB-L would see its green of group 2 end while WB-T of group 6 stays green") != std::string::npos);
  }
}

TEST_CASE("three legs: one ring rests on the side street", "[timing]") {
  std::vector<Group> groups{sample::vehicle("1", 6, 3.6, 1.4, 0), sample::vehicle("2", 10, 3.6, 1.4, 1), sample::vehicle("4", 6, 3.6, 1.4, 2), sample::vehicle("6", 10, 3.6, 1.4, 3)};
  SignalDesign design = sample::bare(groups);
  for (const auto& [a, b] : std::vector<std::pair<int, int>>{{0, 1}, {0, 2}, {1, 2}, {2, 3}}) sample::conflict(design, a, b);
  design.ring_barrier = RingBarrier{{{{0, 1}, {2}}, {{3}, {}}}};
  design.reference_group = 1;
  const auto plans = allocate(design, sample::request(70, {.1, .3, .2, .3}));
  REQUIRE(plans.has_value());
  CHECK(plans->size() == 2);
  CHECK(plans->front().sequence == "1 2|4 / 6|");
  for (const Allocation& plan : *plans) CHECK(judge::ring_faults(design, 70, plan) == std::vector<std::string>{});
}

TEST_CASE("too short a cycle names the groups, their needs and the cycle that would do", "[timing]") {
  const SignalDesign design = sample::dual_ring(10);
  const auto plans = allocate(design, sample::request(50, {.1, .1, .1, .1, .1, .1, .1, .1}));
  REQUIRE_FALSE(plans.has_value());
  CHECK(to_text(plans.error().front()) ==
        "error: signal Test: a cycle of 50 s; expected enough for every minimum: 1 (15 s) and 2 (15 s), then 3 (15 s) and 4 (15 s) need 60 s. "
        "Choose a cycle of at least 60 s, or shorten a crossing or a minimum.");
  CHECK(allocate(design, sample::request(60, {.1, .1, .1, .1, .1, .1, .1, .1})).has_value());
}

TEST_CASE("flow above capacity still gets greens and says so", "[timing]") {
  const SignalDesign design = sample::dual_ring();
  const auto plans = allocate(design, sample::request(90, {.3, .4, .3, .4, .3, .4, .3, .4}));
  REQUIRE(plans.has_value());
  CHECK(plans->front().oversaturated);
  CHECK(judge::ring_faults(design, 90, plans->front()).empty());
}

TEST_CASE("fixed sequence and splits are honoured or refused", "[timing]") {
  const SignalDesign design = sample::dual_ring();
  auto request = sample::request(80, {.1, .2, .1, .2, .1, .2, .1, .2});
  request.fixed_sequence = " 2 1 | 3 4/5  6|8 7 ";
  const auto plans = allocate(design, request);
  REQUIRE(plans.has_value());
  REQUIRE(plans->size() == 1);
  CHECK(plans->front().order == "lag-lead|lead-lag");
  request.fixed_splits = {Tenths{150}, Tenths{250}, Tenths{150}, Tenths{250}, Tenths{200}, Tenths{200}, Tenths{200}, Tenths{200}};
  const auto fixed = allocate(design, request);
  REQUIRE(fixed.has_value());
  CHECK(fixed->front().groups[0].split == Tenths{150});
  CHECK(judge::ring_faults(design, 80, fixed->front()).empty());
  request.fixed_splits[0] = Tenths{140};
  const auto refused = allocate(design, request);
  REQUIRE_FALSE(refused.has_value());
  CHECK(sample::text_of(refused.error()).find("rings that meet at the barrier") != std::string::npos);
  request.fixed_splits.clear();
  request.fixed_sequence = "1 3|2 4 / 5 6|7 8";
  CHECK(sample::text_of(allocate(design, request).error()).find("\"1 2|3 4 / 5 6|7 8\"") != std::string::npos);
}

TEST_CASE("more flow on a group never lowers its own green", "[timing]") {
  CHECK(rc::check([] {
    const SignalDesign design = sample::dual_ring();
    std::vector<double> ratios;
    for (int i = 0; i < 8; ++i) ratios.push_back(0.01 * *rc::gen::inRange(1, 40));
    const auto g = *rc::gen::inRange<std::size_t>(0, 8);
    const auto before = allocate(design, sample::request(90, ratios));
    ratios[g] += 0.01 * *rc::gen::inRange(1, 20);
    const auto after = allocate(design, sample::request(90, ratios));
    RC_ASSERT(after->front().groups[g].split >= before->front().groups[g].split);
  }));
}

TEST_CASE("scaling all flows keeps the splits", "[timing]") {
  CHECK(rc::check([] {
    const SignalDesign design = sample::dual_ring();
    std::vector<double> ratios;
    for (int i = 0; i < 8; ++i) ratios.push_back(0.01 * *rc::gen::inRange(1, 40));
    const auto before = allocate(design, sample::request(100, ratios));
    for (double& ratio : ratios) ratio *= 2;  // exact in binary
    const auto after = allocate(design, sample::request(100, ratios));
    for (std::size_t g = 0; g < 8; ++g) RC_ASSERT(after->front().groups[g].split == before->front().groups[g].split);
  }));
}

TEST_CASE("people fit inside the green they walk with", "[timing]") {
  SignalDesign design = sample::dual_ring();
  Group walk;
  walk.id = "P4", walk.kind = GroupKind::pedestrian, walk.parent = 3, walk.minimum_green = Tenths{70}, walk.clearance = Tenths{170}, walk.crossings = {"X-W"};
  design.groups[3].pedestrian_need = Tenths{70 + 170 + 50};
  design.groups.push_back(walk);
  for (const int g : {0, 1, 4, 5}) design.conflicts.push_back({g, 8, design.groups[g].yellow + design.groups[g].red_clearance, Tenths{30}});
  const auto plans = allocate(design, sample::request(90, {.08, .22, .06, .02, .05, .28, .09, .02}));
  REQUIRE(plans.has_value());
  for (const Allocation& plan : *plans) {
    CHECK(plan.groups[3].split >= Tenths{290});
    CHECK(judge::ring_faults(design, 90, plan) == std::vector<std::string>{});
  }
  SECTION("on call: listed only where it fits") {
    design.groups[8].on_call = true;
    design.groups[3].pedestrian_need = {};
    const auto on_call = allocate(design, sample::request(60, {.08, .22, .06, .02, .05, .28, .09, .02}));
    REQUIRE(on_call.has_value());
    for (const Allocation& plan : *on_call) CHECK(judge::ring_faults(design, 60, plan) == std::vector<std::string>{});
  }
}
