// The stages in order on towns made in code: a plan comes out, its claims hold, and the laws of circles and shares apply.
#include "drafting/draft.hpp"

#include <catch2/catch.hpp>
#include <cmath>

#include "made_town.hpp"
#include "plan/plan_text.hpp"

using namespace entrain;
using namespace entrain::drafting;

namespace {

const auto silent = [](int, int) {};

Draft drafted(const Inputs& inputs, const DraftOptions& options = {}) {
  auto result = draft(inputs, options, silent);
  if (!result)
    for (const Diagnostic& d : result.error().problems) UNSCOPED_INFO(to_text(d));
  REQUIRE(result.has_value());
  return result->value;
}

// Width of the widest band of a direction by trying every tenth of a second, from the plan's numbers alone.
double tried_band(const plan::Plan& plan, const plan::Direction& direction) {
  const int cycle = static_cast<int>(std::lround(plan.cycle_s * 10));
  std::vector<char> open(static_cast<std::size_t>(cycle), 1);
  double time = 0;
  for (const auto& stop : direction.stops) {
    time += stop.travel_time_s;
    for (const auto& signal : plan.signals) {
      if (signal.id != stop.signal) continue;
      for (const auto& group : signal.groups) {
        if (group.id != stop.group) continue;
        for (int k = 0; k < cycle; ++k) {
          const double local = std::fmod((k + 0.5) / 10 + time - signal.offset_s + 10 * signal.cycle_s, signal.cycle_s);
          bool green = false;
          for (const auto& g : group.greens) green = green || std::fmod(local - g.start_s + signal.cycle_s, signal.cycle_s) < g.duration_s;
          open[static_cast<std::size_t>(k)] &= green;
        }
      }
    }
  }
  int best = 0, run = 0;
  for (int k = 0; k < 2 * cycle; ++k) {
    run = open[static_cast<std::size_t>(k % cycle)] ? run + 1 : 0;
    best = std::max(best, std::min(run, cycle));
  }
  return best / 10.0;
}

}  // namespace

TEST_CASE("a main street gets a plan whose bands are as wide as claimed") {
  const Draft result = drafted(made_town::main_street({}));
  REQUIRE(result.plans.size() == 1);
  const plan::Plan& plan = result.plans[0].plan;
  CHECK(plan.signals.size() == 4);
  REQUIRE(plan.corridors.size() == 1);
  REQUIRE(plan.corridors[0].directions.size() == 2);
  for (const auto& direction : plan.corridors[0].directions) {
    CHECK(direction.stops.size() == 4);
    CHECK(direction.bandwidth_s > 5);
    CHECK(direction.bandwidth_s == Approx(tried_band(plan, direction)).margin(0.15));
  }
  CHECK(plan.links.size() >= 6);
  CHECK_FALSE(plan.cycle_reason.empty());
  CHECK(plan.measures->worst_degree_of_saturation > 0.3);
  CHECK(plan.quality->value >= plan.quality->bound);
}

TEST_CASE("two crossing corridors are coordinated through the signal they share") {
  const Draft result = drafted(made_town::grid(3, 4, 250));
  const plan::Plan& plan = result.plans[0].plan;
  REQUIRE(plan.corridors.size() == 2);
  for (const auto& corridor : plan.corridors)
    for (const auto& direction : corridor.directions) {
      CAPTURE(corridor.id, direction.name);
      CHECK(direction.bandwidth_s == Approx(tried_band(plan, direction)).margin(0.15));
    }
}

TEST_CASE("offsets are whole seconds below the cycle, splits of every ring add up to it") {
  for (const auto& plan : {drafted(made_town::main_street({6, 180, 700, 200, 80, 2})).plans[0].plan, drafted(made_town::grid(2, 3, 300)).plans[0].plan})
    for (const auto& signal : plan.signals) {
      CHECK(signal.offset_s == std::floor(signal.offset_s));
      CHECK(signal.offset_s >= 0);
      CHECK(signal.offset_s < signal.cycle_s);
      REQUIRE(signal.controller.ring_barrier.has_value());
      for (const auto& ring : signal.controller.ring_barrier->rings) {
        double total = 0;
        for (const auto& id : ring)
          for (const auto& group : signal.groups)
            if (group.id == id) total += *group.split_s;
        CHECK(total == Approx(signal.cycle_s));
      }
    }
}

TEST_CASE("the same input gives the same bytes, whatever the number of threads") {
  DraftOptions one, many;
  many.coordinate.threads = 4;
  const Inputs inputs = made_town::grid(3, 3, 220);
  CHECK(plan::write_plan(drafted(inputs, one).plans[0].plan) == plan::write_plan(drafted(inputs, many).plans[0].plan));
}

TEST_CASE("giving up band never costs delay") {
  const Inputs inputs = made_town::grid(3, 4, 260);
  double before = INFINITY;
  for (const double keep : {1.0, 0.7, 0.3, 0.0}) {
    DraftOptions options;
    options.cycle_s = 80;
    options.coordinate.keep_band = keep;
    const plan::Plan plan = drafted(inputs, options).plans[0].plan;
    CAPTURE(keep);
    // A local search may miss a little of what the wider set of offsets allows.
    CHECK(plan.quality->value <= before * 1.02);
    before = plan.quality->value;
  }
}

TEST_CASE("a cycle range in which no plan fits says which signal, what clashes and what would do") {
  Inputs inputs = made_town::main_street({});
  inputs.project.periods[0].cycle = {30, 40, 5};
  const auto result = draft(inputs, {}, silent);
  REQUIRE_FALSE(result.has_value());
  CHECK(result.error().no_plan_fits);
  REQUIRE_FALSE(result.error().problems.empty());
  const std::string text = to_text(result.error().problems[0]);
  CHECK(text.find("A") != std::string::npos);
  CHECK(text.find("cycle") != std::string::npos);
}

TEST_CASE("flow above capacity still gives a plan, marked oversaturated") {
  const plan::Plan plan = drafted(made_town::main_street({3, 300, 2600, 600, 120, 2})).plans[0].plan;
  bool marked = false;
  for (const auto& signal : plan.signals) marked = marked || !signal.oversaturated.empty();
  CHECK(marked);
  CHECK(plan.measures->worst_degree_of_saturation > 1);
}

TEST_CASE("a period that is not there is named") {
  DraftOptions options;
  options.periods = {"night"};
  const auto result = draft(made_town::main_street({}), options, silent);
  REQUIRE_FALSE(result.has_value());
  CHECK_FALSE(result.error().no_plan_fits);
  CHECK(to_text(result.error().problems[0]) == "error: --period: night; expected one of am. Name a period of the project");
}
