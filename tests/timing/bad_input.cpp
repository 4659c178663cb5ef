#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "sample_designs.hpp"

using namespace entrain;
using namespace entrain::timing;

namespace {

std::string errors_of(const SignalDesign& design, const AllocationRequest& request) {
  const auto plans = allocate(design, request);
  return plans ? "" : sample::text_of(plans.error());
}

bool has(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

}  // namespace

TEST_CASE("bad requests are errors, all at once", "[timing]") {
  SignalDesign design = sample::dual_ring();
  auto request = sample::request(90, {.1, .1, .1, .1, .1, .1, .1, .1});
  request.cycle = Tenths{905};
  request.flows_vph[2] = std::numeric_limits<double>::quiet_NaN();
  request.flows_vph[3] = -1;
  design.lane_groups[5].saturation_flow_vph = 0;
  const std::string errors = errors_of(design, request);
  CHECK(has(errors, "a cycle of 90.5 s"));
  CHECK(has(errors, "lane group 3: flow -"));
  CHECK(has(errors, "lane group 4: flow -1"));
  CHECK(has(errors, "lane group 6: saturation flow 0"));
}

TEST_CASE("contradictory designs are errors", "[timing]") {
  const auto request = sample::request(90, {.1, .1, .1, .1, .1, .1, .1, .1});
  SECTION("a group missing from the rings") {
    SignalDesign design = sample::dual_ring();
    design.ring_barrier->rings[0][0].pop_back();
    CHECK(has(errors_of(design, request), "group 2: not exactly one place in the rings"));
  }
  SECTION("rings with different sides") {
    SignalDesign design = sample::dual_ring();
    design.ring_barrier->rings[1].push_back({});
    CHECK(has(errors_of(design, request), "rings that do not fit together"));
  }
  SECTION("no group at all") { CHECK(has(errors_of(SignalDesign{}, sample::request(90, {})), "no signal group")); }
  SECTION("a conflict of a group with itself") {
    SignalDesign design = sample::dual_ring();
    design.conflicts.push_back({3, 3, {}, {}});
    CHECK(has(errors_of(design, request), "names no two groups"));
  }
  SECTION("too few flows") { CHECK(has(errors_of(sample::dual_ring(), sample::request(90, {.1})), "1 flows")); }
  SECTION("a negative minimum") {
    SignalDesign design = sample::dual_ring();
    design.groups[0].minimum_green = Tenths{-10};
    CHECK(has(errors_of(design, request), "group 1: a negative or missing time"));
  }
  SECTION("a minimum larger than the cycle") {
    SignalDesign design = sample::dual_ring();
    design.groups[0].minimum_green = Tenths::from_seconds(200);
    CHECK(has(errors_of(design, request), "1 (205 s) and 2 (11 s)"));
  }
  SECTION("a pedestrian group that conflicts with its parent") {
    SignalDesign design = sample::bare({sample::vehicle("A", 5, 3, 1, 0), sample::vehicle("B", 5, 3, 1, 1)});
    Group walk;
    walk.id = "PA", walk.kind = GroupKind::pedestrian, walk.parent = 0, walk.minimum_green = Tenths{70};
    design.groups.push_back(walk);
    sample::conflict(design, 0, 1);
    design.conflicts.push_back({0, 2, {}, {}});
    CHECK(has(errors_of(design, sample::request(60, {.1, .1})), "conflicts with the group it runs with"));
  }
  SECTION("a target that is none") {
    CHECK_FALSE(critical_cycle(sample::dual_ring(), request.flows_vph, 0).has_value());
    CHECK_FALSE(critical_cycle(sample::dual_ring(), request.flows_vph, std::nan("")).has_value());
  }
}
