// One corridor: the worked example, and every answer against the exhaustive judge.
#include <catch2/catch.hpp>

#include "coordination/bands/evaluate.hpp"
#include "coordination/bands/solve.hpp"
#include "judge.hpp"

using namespace entrain;
using namespace entrain::bands;

namespace {

// Three stations, C = 60: what one can lay out with paper strips.
TwoWayInput three_stations(bool with_order_b) {
  TwoWayInput input;
  input.cycle_s = 60;
  input.forward_travel_s = {14, 21};
  input.backward_travel_s = {17, 19};
  TwoWayStation first, second, third;
  first.options = {{{{0, 28}}, {{5, 24}}}};
  second.options = {{{{0, 31}}, {{0, 22}}}};
  if (with_order_b) second.options.push_back({{{0, 31}}, {{49, 22}}});
  second.forward_clearance_s = 4;
  third.options = {{{{0, 25}}, {{52, 30}}}};
  input.stations = {first, second, third};
  return input;
}

const CorridorAnswer& only(const Answer& answer) { return answer.corridors.at(0); }

void check_consistent(const TwoWayInput& input, const Answer& answer) {
  std::vector<int> options;
  std::vector<double> offsets;
  for (const StationAnswer& station : answer.stations)
    options.push_back(station.option), offsets.push_back(station.offset_s);
  const auto again = evaluate_bands(input, options, offsets);
  REQUIRE(again);
  for (std::size_t d = 0; d < only(answer).directions.size(); ++d)
    CHECK(only(*again).directions[d].width_s == only(answer).directions[d].width_s);
  for (std::size_t i = 0; i < input.stations.size(); ++i) {
    if (input.stations[i].fixed_offset_s) CHECK(offsets[i] == Approx(*input.stations[i].fixed_offset_s));
    if (input.stations[i].fixed_option) CHECK(options[i] == *input.stations[i].fixed_option);
  }
}

double total(const Answer& answer) {
  double sum = 0;
  for (const DirectionAnswer& direction : only(answer).directions) sum += direction.width_s;
  return sum;
}

}  // namespace

TEST_CASE("three stations by hand: one order", "[bands]") {
  const auto answer = solve_two_way(three_stations(false));
  REQUIRE(answer);
  CHECK(only(*answer).share_s == Approx(14.5).margin(1e-9));
  CHECK(only(*answer).directions[0].width_s == Approx(14.5).margin(1e-9));
  CHECK(only(*answer).directions[1].width_s == Approx(14.5).margin(1e-9));
  CHECK(only(*answer).witness.size() >= 2);
}

TEST_CASE("three stations by hand: the second order is worth 5.5 s each way", "[bands]") {
  const auto answer = solve_two_way(three_stations(true));
  REQUIRE(answer);
  CHECK(answer->stations[1].option == 1);
  CHECK(only(*answer).share_s == Approx(20).margin(1e-9));
  CHECK(answer->stations[0].offset_s == 0);
  CHECK(answer->stations[1].offset_s == Approx(3).margin(1e-9));
  CHECK(answer->stations[2].offset_s == Approx(33).margin(1e-9));  // the middle of 31..35
  CHECK(answer->stations[2].early_s == Approx(2).margin(1e-9));
  CHECK(answer->stations[2].late_s == Approx(2).margin(1e-9));
  CHECK(answer->stations[1].early_s == Approx(0).margin(1e-9));
  for (const double offset : {31.0, 33.0, 35.0}) {
    const auto bands = evaluate_bands(three_stations(true), {0, 1, 0}, {0, 3, offset});
    REQUIRE(bands);
    CHECK(only(*bands).directions[0].width_s == Approx(20).margin(1e-9));
    CHECK(only(*bands).directions[1].width_s == Approx(20).margin(1e-9));
  }
}

TEST_CASE("three stations by hand: shares two to one, the shorter window binds", "[bands]") {
  TwoWayInput input = three_stations(true);
  input.forward_weight = 2;
  for (const bool whole_seconds : {false, true}) {
    const auto answer = whole_seconds ? solve_two_way_whole_seconds(input) : solve_two_way(input);
    REQUIRE(answer);
    CHECK(only(*answer).share_s == Approx(12.5).margin(1e-9));
    CHECK(only(*answer).directions[0].width_s == Approx(25).margin(1e-9));
    CHECK(only(*answer).directions[1].width_s == Approx(15).margin(1e-9));
    CHECK(answer->stations[1].offset_s == Approx(8).margin(1e-9));
    CHECK(answer->stations[2].offset_s == Approx(35).margin(1e-9));
  }
}

TEST_CASE("an order with more room in sum can have the smaller share", "[bands]") {
  TwoWayInput input;
  input.cycle_s = 60;
  input.forward_travel_s = {10};
  input.backward_travel_s = {10};
  TwoWayStation first, second;
  first.options = {{{{0, 40}}, {{0, 40}}}};
  second.options = {{{{0, 30}}, {{20, 30}}}, {{{0, 12}}, {{40, 48}}}};
  input.stations = {first, second};
  const auto both = solve_two_way(input);
  REQUIRE(both);
  CHECK(only(*both).share_s == Approx(25).margin(1e-9));
  CHECK(both->stations[1].option == 0);
  input.stations[1].fixed_option = 1;
  const auto second_only = solve_two_way(input);
  REQUIRE(second_only);
  CHECK(only(*second_only).share_s == Approx(12).margin(1e-9));
  CHECK(total(*second_only) == Approx(52).margin(1e-9));
}

TEST_CASE("continuous bands equal the exhaustive judge", "[bands]") {
  std::mt19937 random(20261201);
  const std::pair<double, double> weights[] = {{1, 1}, {2, 1}, {1, 2}, {3, 1}, {1, 0}, {0, 1}};
  for (int round = 0; round < 420; ++round) {
    judge::Kind kind;
    kind.stations = 2 + round % 2;
    kind.orders = round % 3 != 0;
    kind.second_windows = round % 4 < 2;
    kind.half_periods = round % 5 < 2;
    kind.clearances = round % 7 < 4;
    kind.open = round % 11 < 3;
    kind.fixed = round % 6 == 5;
    std::tie(kind.forward_weight, kind.backward_weight) = weights[round / 3 % 6];
    const TwoWayInput input = judge::random_corridor(random, kind);
    const int cells = std::max(1, static_cast<int>(kind.forward_weight + kind.backward_weight));
    const judge::Best best = judge::exhaustive(input, cells, 1.0 / cells);
    const auto answer = solve_two_way(input);
    INFO("round " << round << ": " << judge::text(input));
    REQUIRE(answer);
    CHECK(only(*answer).share_s == Approx(best.share_s).margin(1e-8));
    CHECK(total(*answer) == Approx(best.total_s).margin(1e-8));
    CHECK(only(*answer).share_bound_s == Approx(only(*answer).share_s).margin(1e-8));
    check_consistent(input, *answer);
  }
}

TEST_CASE("whole-second bands equal the exhaustive judge", "[bands]") {
  std::mt19937 random(77);
  const std::pair<double, double> weights[] = {{1, 1}, {2, 1}, {1, 2}, {3, 1}, {1, 0}, {0, 1}};
  for (int round = 0; round < 420; ++round) {
    judge::Kind kind;
    kind.stations = 2 + round % 3;
    kind.cells_per_s = std::vector<int>{1, 2, 4, 5}[round / 2 % 4];
    kind.orders = round % 3 != 0;
    kind.second_windows = round % 4 < 2;
    kind.half_periods = round % 5 < 2;
    kind.clearances = round % 7 < 4;
    kind.open = round % 11 < 3;
    kind.fixed = round % 6 == 5;
    std::tie(kind.forward_weight, kind.backward_weight) = weights[round / 3 % 6];
    const TwoWayInput input = judge::random_corridor(random, kind);
    const judge::Best best = judge::exhaustive(input, kind.cells_per_s, 1);
    const auto answer = solve_two_way_whole_seconds(input);
    INFO("round " << round << ": " << judge::text(input));
    REQUIRE(answer);
    CHECK(only(*answer).share_s == Approx(best.share_s).margin(1e-8));
    CHECK(total(*answer) == Approx(best.total_s).margin(1e-8));
    for (const StationAnswer& station : answer->stations) CHECK(station.offset_s == std::floor(station.offset_s));
    check_consistent(input, *answer);
  }
}
