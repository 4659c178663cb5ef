#include "timing/general_allocation.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <functional>
#include <rapidcheck.h>

#include "lamp_table.hpp"
#include "sample_designs.hpp"

using namespace entrain;
using namespace entrain::timing;

namespace {

struct Small {
  SignalDesign design;
  std::vector<double> ratios;
};

// A random conflict graph with order-dependent intergreens; whole seconds, so that every start and split can be tried.
Small random_small(int groups) {
  Small out;
  std::vector<Group> list;
  for (int g = 0; g < groups; ++g) {
    list.push_back(sample::vehicle("g" + std::to_string(g), *rc::gen::inRange(1, 3), 1, 0, g));
    out.ratios.push_back(0.04 * *rc::gen::inRange(0, 8));
  }
  out.design = sample::bare(list);
  for (int a = 0; a < groups; ++a)
    for (int b = a + 1; b < groups; ++b)
      if (*rc::gen::inRange(0, 10) < 7) out.design.conflicts.push_back({a, b, Tenths::from_seconds(*rc::gen::inRange(0, 4)), Tenths::from_seconds(*rc::gen::inRange(0, 4))});
  return out;
}

int gap_s(const Conflict& c, int first) { return (c.a == first ? c.intergreen_ab : c.intergreen_ba).count / 10; }

// For given starts each green can last until its intergreen before the next conflicting start; -1: two conflicting starts coincide.
int longest_green_s(const SignalDesign& design, const std::vector<int>& starts, int g, int cycle_s) {
  int longest = cycle_s;
  for (const Conflict& c : design.conflicts) {
    if (c.a != g && c.b != g) continue;
    const int other = c.a == g ? c.b : c.a;
    const int distance = (starts[other] - starts[g] + cycle_s) % cycle_s;
    if (distance == 0) return -1;
    longest = std::min(longest, distance - gap_s(c, g));
  }
  return longest;
}

// Best fairness vector over all whole-second starts; nothing if no start fits the minimums.
std::optional<std::vector<double>> best_by_hand(const SignalDesign& design, const std::vector<double>& ratios, int cycle_s) {
  const int n = static_cast<int>(design.groups.size());
  std::vector<int> starts(n, 0);
  std::optional<std::vector<double>> best;
  const std::function<void(int)> place = [&](int g) {
    if (g < n) {
      for (starts[g] = 0; starts[g] < (g == 0 ? 1 : cycle_s); ++starts[g]) place(g + 1);
      return;
    }
    std::vector<double> degrees;
    for (int i = 0; i < n; ++i) {
      const int green = longest_green_s(design, starts, i, cycle_s);
      if (green < design.groups[i].minimum_green.count / 10) return;
      if (ratios[i] > 0) degrees.push_back(ratios[i] * cycle_s / green);
    }
    std::sort(degrees.begin(), degrees.end(), std::greater<>());
    if (!best || degrees < *best) best = degrees;
  };
  place(0);
  return best;
}

bool close(const std::vector<double>& a, const std::vector<double>& b) {
  return a.size() == b.size() && std::equal(a.begin(), a.end(), b.begin(), [](double x, double y) { return std::abs(x - y) < 1e-9; });
}

SignalDesign ring_of_five() {
  std::vector<Group> groups;
  for (int g = 0; g < 5; ++g) groups.push_back(sample::vehicle("r" + std::to_string(g), 1, 0, 0, g));
  for (Group& group : groups) group.start_up_lost_s = group.end_gain_s = 0;
  SignalDesign design = sample::bare(groups);
  for (int g = 0; g < 5; ++g) design.conflicts.push_back({std::min(g, (g + 1) % 5), std::max(g, (g + 1) % 5), {}, {}});
  return design;
}

}  // namespace

TEST_CASE("general greens equal the best of all whole-second starts", "[timing]") {
  CHECK(rc::check("four groups", [] {
    const Small small = random_small(4);
    const int cycle_s = *rc::gen::inRange(8, 17);
    const auto plans = allocate(small.design, sample::request(cycle_s, small.ratios));
    const auto best = best_by_hand(small.design, small.ratios, cycle_s);
    RC_ASSERT(plans.has_value() == best.has_value());
    if (!best) return;
    RC_ASSERT(plans->front().proved);
    RC_ASSERT(close(plans->front().saturation_descending, *best));
    for (const Allocation& plan : *plans) RC_ASSERT(judge::faults(small.design, cycle_s, plan).empty());
  }));
}

TEST_CASE("five groups, a longer cycle", "[timing]") {
  CHECK(rc::check([] {
    const Small small = random_small(5);
    const int cycle_s = *rc::gen::inRange(12, 15);
    const auto plans = allocate(small.design, sample::request(cycle_s, small.ratios));
    const auto best = best_by_hand(small.design, small.ratios, cycle_s);
    RC_ASSERT(plans.has_value() == best.has_value());
    if (best) RC_ASSERT(close(plans->front().saturation_descending, *best));
  }));
}

TEST_CASE("a ring of five groups gets half the reserve that its cliques promise", "[timing]") {
  // Flow ratios 0.2, no intergreens: pairs alone would allow a degree of saturation of 0.4, the odd ring only 0.5.
  const SignalDesign design = ring_of_five();
  const auto plans = allocate(design, sample::request(100, {.2, .2, .2, .2, .2}));
  REQUIRE(plans.has_value());
  for (const double x : plans->front().saturation_descending) CHECK(x == Approx(0.5));
}

TEST_CASE("order matters: intergreens differ by sequence", "[timing]") {
  // Three mutually conflicting streams; A>B 5, B>C 4, C>A 6 against A>C 7, C>B 3, B>A 8: lost 15 s in order ABC, 18 s in ACB.
  std::vector<Group> groups;
  for (const char* id : {"A", "B", "C"}) groups.push_back(sample::vehicle(id, 1, 0, 0, static_cast<int>(groups.size())));
  SignalDesign design = sample::bare(groups);
  for (Group& group : design.groups) group.start_up_lost_s = group.end_gain_s = 0;
  design.conflicts = {{0, 1, Tenths::from_seconds(5), Tenths::from_seconds(8)}, {0, 2, Tenths::from_seconds(7), Tenths::from_seconds(6)}, {1, 2, Tenths::from_seconds(4), Tenths::from_seconds(3)}};
  CHECK(least_general_cycle_s(design, 600) == 18);  // 15 s and three greens of 1 s
  const auto plans = allocate(design, sample::request(40, {.20, .25, .15}));
  REQUIRE(plans.has_value());
  CHECK(plans->front().order == "A>B>C");
  CHECK(judge::faults(design, 40, plans->front()).empty());
}

TEST_CASE("the dual ring's fairness is found by the general search as well", "[timing]") {
  CHECK(rc::check([] {
    SignalDesign rings = sample::dual_ring();
    std::vector<double> ratios;
    for (int i = 0; i < 8; ++i) ratios.push_back(0.01 * *rc::gen::inRange(1, 30));
    SignalDesign general = rings;
    general.ring_barrier.reset();
    const auto a = allocate(rings, sample::request(70, ratios)), b = allocate(general, sample::request(70, ratios));
    RC_ASSERT(a.has_value() && b.has_value());
    RC_ASSERT(b->front().saturation_descending <= a->front().saturation_descending);
    for (const Allocation& plan : *b) RC_ASSERT(judge::faults(general, 70, plan).empty());
  }));
}

TEST_CASE("opposed greens end together where a turn yields, in general groups too", "[timing]") {
  std::vector<Group> groups{sample::vehicle("E", 5, 3, 1, 0), sample::vehicle("W", 5, 3, 1, 1), sample::vehicle("W-arrow", 4, 3, 1, 2), sample::vehicle("S", 5, 3, 1, 3)};
  groups[0].serves = {{"EB-T", RightOfWay::with_protection, false}, {"EB-L", RightOfWay::permissive, false}};
  groups[1].serves = {{"WB-T", RightOfWay::with_protection, false}};
  SignalDesign design = sample::bare(groups);
  for (const auto& [a, b] : std::vector<std::pair<int, int>>{{0, 2}, {0, 3}, {1, 3}, {2, 3}}) sample::conflict(design, a, b);
  design.opposed = {{"EB-L", "WB-T"}};
  const auto plans = allocate(design, sample::request(60, {.2, .3, .1, .2}));
  REQUIRE(plans.has_value());
  for (const Allocation& plan : *plans) CHECK(judge::faults(design, 60, plan) == std::vector<std::string>{});
}

TEST_CASE("adding a conflict never shortens the least cycle", "[timing]") {
  CHECK(rc::check([] {
    Small small = random_small(6);
    const auto before = least_general_cycle_s(small.design, 300);
    const int a = *rc::gen::inRange(0, 5);
    const int b = *rc::gen::inRange(a + 1, 6);
    const bool known = std::any_of(small.design.conflicts.begin(), small.design.conflicts.end(), [&](const Conflict& c) { return c.a == a && c.b == b; });
    if (!known) small.design.conflicts.push_back({a, b, Tenths{15}, Tenths{20}});
    const auto after = least_general_cycle_s(small.design, 300);
    RC_ASSERT(before.has_value() && after.has_value());
    RC_ASSERT(*after >= *before);
  }));
}

TEST_CASE("relabelling groups changes no degree of saturation", "[timing]") {
  CHECK(rc::check([] {
    const Small small = random_small(5);
    const int n = 5, cycle_s = 24;
    Small mirrored;
    std::vector<Group> groups;
    for (int g = 0; g < n; ++g) {
      groups.push_back(small.design.groups[n - 1 - g]);
      groups.back().lane_groups = {g};
      mirrored.ratios.push_back(small.ratios[n - 1 - g]);
    }
    mirrored.design = sample::bare(groups);
    for (const Conflict& c : small.design.conflicts) mirrored.design.conflicts.push_back({n - 1 - c.b, n - 1 - c.a, c.intergreen_ba, c.intergreen_ab});
    const auto a = allocate(small.design, sample::request(cycle_s, small.ratios)), b = allocate(mirrored.design, sample::request(cycle_s, mirrored.ratios));
    RC_ASSERT(a.has_value() == b.has_value());
    if (a) RC_ASSERT(close(a->front().saturation_descending, b->front().saturation_descending));
  }));
}

TEST_CASE("a group that conflicts with nothing is always green", "[timing]") {
  SignalDesign design = sample::bare({sample::vehicle("A", 5, 3, 1, 0), sample::vehicle("B", 5, 3, 1, 1), sample::vehicle("free", 5, 3, 1, 2)});
  sample::conflict(design, 0, 1);
  const auto plans = allocate(design, sample::request(40, {.2, .2, .5}));
  REQUIRE(plans.has_value());
  CHECK(plans->front().groups[2].greens.front().duration == Tenths{400});
  CHECK(plans->front().groups[2].degree_of_saturation == Approx(0.5));
}

TEST_CASE("people with a green of their own", "[timing]") {
  SignalDesign design = sample::bare({sample::vehicle("2", 10, 3.6, 1.4, 0), sample::vehicle("6", 10, 3.6, 1.4, 1)});
  Group walk;
  walk.id = "PW", walk.kind = GroupKind::pedestrian, walk.minimum_green = Tenths{70}, walk.clearance = Tenths{120};
  design.groups.push_back(walk);
  for (const int g : {0, 1}) design.conflicts.push_back({g, 2, Tenths{50}, Tenths{30}});
  const auto plans = allocate(design, sample::request(60, {.3, .4}));
  REQUIRE(plans.has_value());
  CHECK(judge::faults(design, 60, plans->front()) == std::vector<std::string>{});
  CHECK(plans->front().groups[0].split == Tenths{380});  // 60 - 7 - 12 - 3
  CHECK(least_general_cycle_s(design, 600) == 15 + 22);
}

TEST_CASE("the clashing groups are a smallest set", "[timing]") {
  CHECK(rc::check([] {
    const Small small = random_small(6);
    const auto least = least_general_cycle_s(small.design, 300);
    RC_ASSERT(least.has_value());
    if (*least < 2) return;
    const std::vector<int> clash = clashing_groups(small.design, *least - 1);
    RC_ASSERT(!clash.empty());
    RC_ASSERT(clashing_groups(small.design, *least).empty());
    for (const int leave_out : clash) {  // without any one of them the rest of the set fits
      SignalDesign part = small.design;
      std::erase_if(part.conflicts, [&](const Conflict& c) {
        const auto in = [&](int g) { return g != leave_out && std::find(clash.begin(), clash.end(), g) != clash.end(); };
        return !in(c.a) || !in(c.b);
      });
      RC_ASSERT(clashing_groups(part, *least - 1).empty());
    }
  }));
}

TEST_CASE("fixed order and splits of general groups are honoured or refused", "[timing]") {
  SignalDesign design = sample::bare({sample::vehicle("A", 5, 3, 1, 0), sample::vehicle("B", 5, 3, 1, 1), sample::vehicle("C", 5, 3, 1, 2)});
  for (const auto& [a, b] : std::vector<std::pair<int, int>>{{0, 1}, {0, 2}, {1, 2}}) sample::conflict(design, a, b);
  auto request = sample::request(60, {.2, .2, .2});
  CHECK(allocate(design, request)->size() == 2);
  request.fixed_sequence = "A>C>B";
  const auto plans = allocate(design, request);
  REQUIRE(plans.has_value());
  CHECK(plans->size() == 1);
  request.fixed_sequence = "A>B";
  CHECK(sample::text_of(allocate(design, request).error()).find("A>B>C and A>C>B") != std::string::npos);
  request.fixed_sequence.clear();
  request.fixed_splits = {Tenths{300}, Tenths{150}, Tenths{150}};
  const auto fixed = allocate(design, request);
  REQUIRE(fixed.has_value());
  for (const Allocation& plan : *fixed) {
    CHECK(plan.groups[0].split == Tenths{300});
    CHECK(judge::faults(design, 60, plan).empty());
  }
  request.fixed_splits[1] = Tenths{160};
  CHECK(sample::text_of(allocate(design, request).error()).find("no order fits") != std::string::npos);
  request.fixed_splits[1] = Tenths{80};
  CHECK(sample::text_of(allocate(design, request).error()).find("at least 9") != std::string::npos);
}
