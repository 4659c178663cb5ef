// Bands against published values.
#include <catch2/catch.hpp>

#include <cmath>

#include "coordination/bands/evaluate.hpp"
#include "coordination/bands/pace_ranges.hpp"
#include "coordination/bands/solve.hpp"

using namespace entrain::bands;

namespace {

// One speed both ways, the same green both ways, local zero in the middle of green.
TwoWayInput artery(double cycle_s, double speed_ft_per_s, const std::vector<double>& spacing_ft,
                   const std::vector<double>& green_share) {
  TwoWayInput input;
  input.cycle_s = cycle_s;
  for (const double share : green_share) {
    const Window green{-share * cycle_s / 2, share * cycle_s};
    TwoWayStation station;
    station.options = {{{green}, {green}}};
    input.stations.push_back(station);
  }
  for (const double feet : spacing_ft) input.forward_travel_s.push_back(feet / speed_ft_per_s);
  input.backward_travel_s = input.forward_travel_s;
  return input;
}

double widest_share(const TwoWayInput& input) {
  const auto answer = solve_two_way(input);
  REQUIRE(answer);
  CHECK(answer->corridors[0].directions[0].width_s == Approx(answer->corridors[0].share_s).margin(1e-6));
  return answer->corridors[0].share_s / input.cycle_s;
}

}  // namespace

// Data: J. D. C. Little, The synchronization of traffic signals by mixed-integer linear programming, Operations
// Research 14(4), 568-594, 1966. Values: half-integer synchronisation (Morgan and Little, Operations Research 12(6),
// 1964), recomputed by exhaustion and by MILP.
TEST_CASE("ten-signal artery: widest equal bands", "[published]") {
  const std::vector<double> spacing_ft = {550, 700, 1100, 700, 800, 650, 400, 700, 450};
  const std::vector<double> green = {.53, .60, .60, .53, .52, .58, .60, .60, .60, .58};
  struct Row {
    double cycle_s, slow, fast;
  };
  for (const Row& row : {Row{55, 0.21942, 0.23545}, Row{60, 0.18030, 0.15852}, Row{65, 0.18038, 0.22517},
                         Row{70, 0.18766, 0.16386}, Row{75, 0.22167, 0.18091}}) {
    CHECK(widest_share(artery(row.cycle_s, 44, spacing_ft, green)) == Approx(row.slow).margin(5.1e-6));
    CHECK(widest_share(artery(row.cycle_s, 176.0 / 3, spacing_ft, green)) == Approx(row.fast).margin(5.1e-6));
  }
}

// A worked table of an eight-signal street, C = 60 s, 30 mph (recomputed).
TEST_CASE("eight-signal street: 30 s both ways", "[published]") {
  const TwoWayInput input =
      artery(60, 44, {1320, 1320, 990, 660, 990, 1320, 1320}, {.50, .66, .52, .75, .75, .50, .66, .50});
  CHECK(widest_share(input) == Approx(0.50).margin(1e-9));
  const auto bands = evaluate_bands(input, std::vector<int>(8, 0), {0, 30, 0, 30, 30, 0, 30, 0});
  REQUIRE(bands);
  for (const DirectionAnswer& direction : bands->corridors[0].directions)
    CHECK(direction.width_s == Approx(30).margin(1e-9));
}

// Teaching handout "Coordinated signal timing", example 1: 1400 ft, 40 ft/s, C = 60 s, green 30 s, offset 35 s.
TEST_CASE("two signals: 30 s forward, 20 s backward", "[published]") {
  TwoWayInput input = artery(60, 40, {1400}, {.5, .5});
  const auto bands = evaluate_bands(input, {0, 0}, {0, 35});
  REQUIRE(bands);
  CHECK(bands->corridors[0].directions[0].width_s == Approx(30).margin(1e-9));
  CHECK(bands->corridors[0].directions[1].width_s == Approx(20).margin(1e-9));
  // Bandwidth efficiency and attainability: FHWA-HOP-08-024, equations 3-7 and 3-8.
  const auto& directions = bands->corridors[0].directions;
  const double sum = directions[0].width_s + directions[1].width_s;
  CHECK(sum / (2 * input.cycle_s) == Approx(0.41667).margin(1e-5));
  CHECK(sum / (directions[0].least_window_s + directions[1].least_window_s) == Approx(0.83333).margin(1e-5));
}

// "Signal coordination example II": 1500 ft at 40 ft/s, ideal offset 37.5 s; with 8 queued a lane, 2 s headway and 3 s
// start-up loss 18.5 s.
TEST_CASE("one-way pair: the queue moves the ideal offset", "[published]") {
  TwoWayInput input = artery(60, 40, {1500}, {.5, .5});
  input.one_way = true;
  input.backward_travel_s.clear();
  auto answer = solve_two_way(input);
  REQUIRE(answer);
  CHECK(answer->stations[1].offset_s == Approx(37.5).margin(1e-9));
  CHECK(answer->corridors[0].directions[0].width_s == Approx(30).margin(1e-9));
  // The head of the platoon finds the queue just gone where the second green begins 19 s before it arrives: the
  // earliest offset that keeps the band.
  input.stations[1].forward_clearance_s = 3 + 8 * 2;
  answer = solve_two_way(input);
  REQUIRE(answer);
  CHECK(answer->stations[1].offset_s - answer->stations[1].early_s == Approx(18.5).margin(1e-9));
}

// Equal spacing, 50/50 greens, C = 60 s, 44 ft/s: single and double alternate (from memory, recomputed).
TEST_CASE("alternate systems", "[published]") {
  CHECK(widest_share(artery(60, 44, std::vector<double>(7, 1320), std::vector<double>(8, .5))) ==
        Approx(0.50).margin(1e-9));
  CHECK(widest_share(artery(60, 44, std::vector<double>(7, 660), std::vector<double>(8, .5))) ==
        Approx(0.25).margin(1e-9));
}

// Little 1966: the ten-signal artery with cycle 55 to 75 s, every speed 44 to 58.6667 ft/s, change of slowness between
// neighbouring links at most 0.0121 s/m, band ratio 0.9 to 1.1: the two bands together are 0.561818 of the cycle
// (recomputed by two MILP solvers).
TEST_CASE("ten-signal artery with free speeds and cycle", "[published]") {
  PaceInput input;
  const std::vector<double> spacing_ft = {550, 700, 1100, 700, 800, 650, 400, 700, 450};
  input.corridor = artery(60, 44, spacing_ft, {.53, .60, .60, .53, .52, .58, .60, .60, .60, .58});
  for (const double feet : spacing_ft)
    input.links.push_back({feet * 0.3048, 1 / (176.0 / 3 * 0.3048), 1 / (44 * 0.3048)});
  input.most_change_s_per_m = 0.0121;
  const auto answer = solve_pace_ranges(input, {55, 75, 0.25});
  REQUIRE(answer);
  const auto& directions = answer->bands.corridors[0].directions;
  const double sum = (directions[0].width_s + directions[1].width_s) / answer->cycle_s;
  CHECK(sum == Approx(0.561818).margin(2e-6));
  CHECK(directions[0].width_s / directions[1].width_s == Approx(1).margin(0.1));
  for (std::size_t i = 0; i < input.links.size(); ++i) {
    CHECK(answer->pace_s_per_m[i] >= input.links[i].least_s_per_m - 1e-9);
    CHECK(answer->pace_s_per_m[i] <= input.links[i].most_s_per_m + 1e-9);
    if (i > 0) CHECK(std::abs(answer->pace_s_per_m[i] - answer->pace_s_per_m[i - 1]) <= 0.0121 + 1e-9);
  }
}
