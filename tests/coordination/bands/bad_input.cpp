// Whatever comes in, a list of what is wrong comes out.
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "coordination/bands/evaluate.hpp"
#include "coordination/bands/solve.hpp"

using namespace entrain;
using namespace entrain::bands;

namespace {

TwoWayInput sound() {
  TwoWayInput input;
  input.cycle_s = 60;
  input.stations = {TwoWayStation{{{{{0, 30}}, {{0, 30}}}}, {}, {}, false, 0, 0},
                    TwoWayStation{{{{{0, 30}}, {{0, 30}}}}, {}, {}, false, 0, 0}};
  input.forward_travel_s = {10};
  input.backward_travel_s = {10};
  return input;
}

bool mentions(const Diagnostics& found, const std::string& where) {
  for (const Diagnostic& diagnostic : found)
    if (diagnostic.where.find(where) != std::string::npos && !diagnostic.expected.empty() && !diagnostic.mend.empty())
      return true;
  return false;
}

}  // namespace

TEST_CASE("every problem of a band input is named at once", "[bands]") {
  const double nan = std::numeric_limits<double>::quiet_NaN();
  TwoWayInput input = sound();
  input.cycle_s = nan;
  input.forward_weight = -1;
  input.forward_travel_s[0] = nan;
  input.backward_travel_s = {};
  input.stations[0].options[0].forward[0].duration_s = -4;
  input.stations[1].fixed_option = 3;
  input.stations[1].fixed_offset_s = std::numeric_limits<double>::infinity();
  input.stations[1].backward_clearance_s = nan;
  const auto answer = solve_two_way(input);
  REQUIRE_FALSE(answer);
  for (const char* where : {"cycle", "weight", "travel time", "backward travel", "duration", "fixed option",
                            "fixed offset", "queue clearance"}) {
    INFO(where);
    CHECK(mentions(answer.error(), where));
  }
}

TEST_CASE("empty and contradictory band inputs are refused", "[bands]") {
  CHECK_FALSE(solve_two_way({}));
  CHECK_FALSE(solve_joint({}));
  TwoWayInput input = sound();
  input.cycle_s = 0;
  CHECK_FALSE(solve_two_way(input));
  input = sound();
  input.forward_weight = input.backward_weight = 0;
  CHECK_FALSE(solve_two_way(input));
  input = sound();
  input.stations[0].options.clear();
  CHECK_FALSE(solve_two_way(input));
  input = sound();
  input.stations[0].options[0].forward[0].duration_s = 60.5;
  REQUIRE_FALSE(solve_two_way(input));
  CHECK(mentions(solve_two_way(input).error(), "duration"));
  input = sound();
  input.stations[0].half_period = true;
  CHECK(mentions(solve_two_way(input).error(), "station 0"));
  input = sound();
  input.cycle_s = 60.5;
  CHECK(solve_two_way(input));
  CHECK(mentions(solve_two_way_whole_seconds(input).error(), "cycle"));
  CHECK_FALSE(evaluate_bands(sound(), {0}, {0, 0}));
  CHECK_FALSE(evaluate_bands(sound(), {0, 1}, {0, 0}));
  CHECK_FALSE(evaluate_bands(sound(), {0, 0}, {0, std::nan("")}));
  CHECK_FALSE(admissible_offsets(to_problem(sound()), 0, 2, {0, 0}, 10));
}

TEST_CASE("no window in a direction leaves the other its band", "[bands]") {
  TwoWayInput input = sound();
  input.stations[1].options[0].backward.clear();
  for (const bool whole_seconds : {false, true}) {
    const auto answer = whole_seconds ? solve_two_way_whole_seconds(input) : solve_two_way(input);
    REQUIRE(answer);
    CHECK_FALSE(answer->corridors[0].all_directions);
    CHECK(answer->corridors[0].directions[0].width_s == Approx(30));
    CHECK(answer->corridors[0].directions[1].width_s == 0);
    CHECK_FALSE(answer->notes.empty());
  }
}
