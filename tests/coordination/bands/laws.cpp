// Laws that hold for every corridor, whatever its numbers.
#include <algorithm>
#include <catch2/catch.hpp>

#include "coordination/bands/clock_error.hpp"
#include "coordination/bands/evaluate.hpp"
#include "coordination/bands/solve.hpp"
#include "judge.hpp"

using namespace entrain::bands;

namespace {

// Ten stations with everything in it, times in tenths.
TwoWayInput corridor(std::mt19937& random, int round) {
  judge::Kind kind;
  kind.stations = 2 + round % 9;
  kind.cells_per_s = 10;
  kind.orders = round % 2 == 0;
  kind.second_windows = round % 3 == 0;
  kind.half_periods = round % 4 == 0;
  kind.clearances = round % 5 < 3;
  kind.forward_weight = 1 + round % 3;
  TwoWayInput input = judge::random_corridor(random, kind);
  // Long windows, so that most have two-way bands.
  for (TwoWayStation& station : input.stations)
    for (StationOption& option : station.options)
      for (auto* list : {&option.forward, &option.backward})
        for (Window& window : *list)
          if (list->size() == 1) window.duration_s = std::max(window.duration_s, 0.7 * input.cycle_s);
  return input;
}

std::vector<int> options_of(const Answer& answer) {
  std::vector<int> list;
  for (const StationAnswer& station : answer.stations) list.push_back(station.option);
  return list;
}

std::vector<double> offsets_of(const Answer& answer) {
  std::vector<double> list;
  for (const StationAnswer& station : answer.stations) list.push_back(station.offset_s);
  return list;
}

double total(const Answer& answer) {
  double sum = 0;
  for (const CorridorAnswer& c : answer.corridors)
    for (const DirectionAnswer& d : c.directions) sum += d.width_s;
  return sum;
}

TwoWayInput reversed(const TwoWayInput& input) {
  TwoWayInput out = input;
  std::reverse(out.stations.begin(), out.stations.end());
  for (TwoWayStation& station : out.stations) {
    std::swap(station.forward_clearance_s, station.backward_clearance_s);
    for (StationOption& option : station.options) std::swap(option.forward, option.backward);
  }
  out.forward_travel_s.assign(input.backward_travel_s.rbegin(), input.backward_travel_s.rend());
  out.backward_travel_s.assign(input.forward_travel_s.rbegin(), input.forward_travel_s.rend());
  std::swap(out.forward_weight, out.backward_weight);
  return out;
}

}  // namespace

TEST_CASE("the same shift of every offset changes no width", "[bands]") {
  std::mt19937 random(41);
  for (int round = 0; round < 100; ++round) {
    const TwoWayInput input = corridor(random, round);
    const auto answer = solve_two_way(input);
    REQUIRE(answer);
    std::vector<double> shifted = offsets_of(*answer);
    for (double& offset : shifted) offset += 3.7;
    const auto again = evaluate_bands(input, options_of(*answer), shifted);
    REQUIRE(again);
    for (int d = 0; d < 2; ++d)
      CHECK(again->corridors[0].directions[static_cast<std::size_t>(d)].width_s ==
            Approx(answer->corridors[0].directions[static_cast<std::size_t>(d)].width_s).margin(1e-8));
  }
}

TEST_CASE("driving the corridor the other way swaps the directions", "[bands]") {
  std::mt19937 random(42);
  for (int round = 0; round < 100; ++round) {
    const TwoWayInput input = corridor(random, round);
    for (const bool whole : {false, true}) {
      const auto one = whole ? solve_two_way_whole_seconds(input) : solve_two_way(input);
      const auto other = whole ? solve_two_way_whole_seconds(reversed(input)) : solve_two_way(reversed(input));
      REQUIRE(one);
      REQUIRE(other);
      CHECK(one->corridors[0].share_s == Approx(other->corridors[0].share_s).margin(1e-8));
      CHECK(total(*one) == Approx(total(*other)).margin(1e-8));
    }
  }
}

TEST_CASE("a wider window never lowers the share", "[bands]") {
  std::mt19937 random(43);
  for (int round = 0; round < 100; ++round) {
    TwoWayInput input = corridor(random, round);
    const auto before = solve_two_way(input);
    TwoWayStation& station = input.stations[static_cast<std::size_t>(round) % input.stations.size()];
    if (station.half_period) continue;
    for (StationOption& option : station.options)
      for (Window& window : round % 2 ? option.forward : option.backward)
        window.duration_s = std::min(input.cycle_s, window.duration_s + 0.3);
    const auto after = solve_two_way(input);
    REQUIRE(before);
    REQUIRE(after);
    CHECK(after->corridors[0].share_s >= before->corridors[0].share_s - 1e-9);
  }
}

TEST_CASE("no band is wider than the shortest window, whole seconds cost at most one a direction", "[bands]") {
  std::mt19937 random(44);
  for (int round = 0; round < 100; ++round) {
    const TwoWayInput input = corridor(random, round);
    const auto answer = solve_two_way(input), whole = solve_two_way_whole_seconds(input);
    REQUIRE(answer);
    REQUIRE(whole);
    for (const DirectionAnswer& direction : answer->corridors[0].directions)
      CHECK(direction.width_s <= direction.least_window_s + 1e-9);
    const double most = std::max(1 / input.forward_weight, 1 / input.backward_weight);
    CHECK(whole->corridors[0].share_s <= answer->corridors[0].share_s + 1e-9);
    if (answer->corridors[0].all_directions)
      CHECK(whole->corridors[0].share_s >= std::max(0.0, answer->corridors[0].share_s - most) - 1e-9);
    CHECK(whole->corridors[0].share_bound_s == Approx(answer->corridors[0].share_s).margin(1e-8));
  }
}

TEST_CASE("the order in which options are listed changes no width", "[bands]") {
  std::mt19937 random(45);
  for (int round = 0; round < 100; round += 2) {
    TwoWayInput input = corridor(random, round);
    const auto before = solve_two_way(input);
    for (TwoWayStation& station : input.stations) std::reverse(station.options.begin(), station.options.end());
    const auto after = solve_two_way(input);
    REQUIRE(before);
    REQUIRE(after);
    CHECK(after->corridors[0].share_s == Approx(before->corridors[0].share_s).margin(1e-9));
    CHECK(total(*after) == Approx(total(*before)).margin(1e-9));
  }
}

TEST_CASE("inside its freedom an offset costs nothing, beyond it the stated loss", "[bands]") {
  std::mt19937 random(46);
  for (int round = 0; round < 60; ++round) {
    TwoWayInput input = corridor(random, round);
    for (TwoWayStation& station : input.stations)
      for (StationOption& option : station.options)
        option.forward.resize(station.half_period ? 2 : 1), option.backward.resize(station.half_period ? 2 : 1);
    const auto answer = solve_two_way(input);
    REQUIRE(answer);
    const double before = total(*answer);
    for (std::size_t s = 0; s < answer->stations.size(); ++s) {
      const StationAnswer& station = answer->stations[s];
      for (const bool late : {false, true}) {
        const double range = late ? station.late_s : station.early_s,
                     loss = late ? station.late_loss : station.early_loss;
        const auto shifted = [&](double by) {
          std::vector<double> offsets = offsets_of(*answer);
          offsets[s] += late ? by : -by;
          const auto bands = evaluate_bands(input, options_of(*answer), offsets);
          REQUIRE(bands);
          return total(*bands);
        };
        if (range < input.cycle_s / (input.stations[s].half_period ? 2 : 1)) {
          CHECK(shifted(range) >= before - 1e-8);
          const double small = 0.01;
          if (answer->corridors[0].directions[0].width_s > small && answer->corridors[0].directions[1].width_s > small)
            CHECK(shifted(range + small) >= before - loss * small - 1e-8);
        }
      }
    }
  }
}

TEST_CASE("witness stations alone rule out more", "[bands]") {
  std::mt19937 random(47);
  for (int round = 0; round < 100; ++round) {
    TwoWayInput input = corridor(random, 8 + 9 * round);  // ten stations
    const auto answer = solve_two_way(input);
    REQUIRE(answer);
    const CorridorAnswer& corridor_answer = answer->corridors[0];
    if (!corridor_answer.all_directions) continue;
    Problem problem = to_problem(input);
    // Only the witnesses keep their windows.
    for (Direction& direction : problem.corridors[0].directions)
      for (Stop& stop : direction.stops)
        if (std::find(corridor_answer.witness.begin(), corridor_answer.witness.end(), stop.station) ==
            corridor_answer.witness.end())
          for (auto& windows : stop.windows) windows = {{0, input.cycle_s}};
    const auto relaxed = solve_joint(problem);
    REQUIRE(relaxed);
    CHECK(relaxed->corridors[0].share_s == Approx(corridor_answer.share_s).margin(1e-8));
  }
}

TEST_CASE("clock errors: what is guaranteed and what each station bears", "[bands]") {
  // Band [5, 20]; by hand.
  const std::vector<FrameWindow> windows = {{5, 30}, {0, 20}, {-10, 40}};
  CHECK(guaranteed_band(windows, {0, 0, 0}) == 15);
  CHECK(guaranteed_band(windows, {2, 2, 2}) == 11);   // station 0 late, station 1 early
  CHECK(guaranteed_band(windows, {0, 0, 12}) == 15);  // [2, 52] or [-22, 28] still hold [5, 20]
  CHECK(guaranteed_band(windows, {0, 0, 30}) == 0);   // [20, 70] begins where the band ends
  CHECK(guaranteed_band({{5, 20}}, {100}) == 15);     // a common error costs nothing
  const std::vector<Bearable> bearable = bearable_errors(windows, 0);
  CHECK(bearable[0].late_s == 0);
  CHECK(bearable[0].early_s == 15);
  CHECK(bearable[1].early_s == 0);
  CHECK(bearable[1].late_s == 15);  // the band moves with it until station 0 ends
  CHECK(bearable[2].early_s == 20);
  CHECK(bearable[2].late_s == 15);
  CHECK(bearable_errors(windows, 2)[0].late_s == 2);
  std::mt19937 random(48);
  std::uniform_real_distribution<double> number(0, 10);
  for (int round = 0; round < 200; ++round) {
    std::vector<FrameWindow> list;
    std::vector<double> error;
    for (int i = 0; i < 4; ++i)
      list.push_back({-number(random), 10 + number(random)}), error.push_back(number(random) / 2);
    double worst = 1e9;
    for (int signs = 0; signs < 16; ++signs) {
      double left = -1e9, right = 1e9;
      for (std::size_t i = 0; i < 4; ++i) {
        const double e = (signs >> i & 1 ? 1 : -1) * error[i];
        left = std::max(left, list[i].left_s + e);
        right = std::min(right, list[i].right_s + e);
      }
      worst = std::min(worst, std::max(0.0, right - left));
    }
    CHECK(guaranteed_band(list, error) == Approx(worst).margin(1e-9));
  }
}
