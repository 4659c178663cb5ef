// Free paces: against fixed ones, against samples, against the outside solver.
#include <catch2/catch.hpp>
#include <filesystem>

#include "coordination/bands/pace_ranges.hpp"
#include "coordination/bands/solve.hpp"
#include "judge.hpp"
#include "milp.hpp"

using namespace entrain::bands;

namespace {

PaceInput random_paces(std::mt19937& random, int stations, double range) {
  judge::Kind kind;
  kind.stations = stations;
  kind.cells_per_s = 10;
  kind.orders = true;
  kind.forward_weight = 2;
  PaceInput input;
  input.corridor = judge::random_corridor(random, kind);
  std::uniform_real_distribution<double> length(50, 200);
  for (int i = 0; i + 1 < stations; ++i) input.links.push_back({std::round(length(random)), 0.05, 0.05 + range});
  input.most_change_s_per_m = range / 3;
  return input;
}

double share(const PaceAnswer& answer) {
  return answer.bands.corridors[0].all_directions ? answer.bands.corridors[0].share_s : 0;
}

}  // namespace

TEST_CASE("one pace a link is a corridor with travel times", "[bands]") {
  std::mt19937 random(61);
  for (int round = 0; round < 60; ++round) {
    const PaceInput input = random_paces(random, 2 + round % 4, 0);
    TwoWayInput corridor = input.corridor;
    corridor.forward_travel_s.clear();
    for (const PaceLink& link : input.links) corridor.forward_travel_s.push_back(link.length_m * link.least_s_per_m);
    corridor.backward_travel_s = corridor.forward_travel_s;
    const auto free = solve_pace_ranges(input);
    const auto fixed = solve_two_way(corridor);
    REQUIRE(free);
    REQUIRE(fixed);
    CHECK(free->bands.corridors[0].share_s == Approx(fixed->corridors[0].share_s).margin(1e-7));
  }
}

TEST_CASE("no sampled paces within the limits do better", "[bands]") {
  std::mt19937 random(62);
  for (int round = 0; round < 30; ++round) {
    const PaceInput input = random_paces(random, 2 + round % 4, 0.02);
    const auto best = solve_pace_ranges(input);
    REQUIRE(best);
    for (std::size_t i = 0; i < input.links.size(); ++i) {
      CHECK(best->pace_s_per_m[i] >= 0.05 - 1e-9);
      CHECK(best->pace_s_per_m[i] <= 0.07 + 1e-9);
      if (i > 0) CHECK(std::abs(best->pace_s_per_m[i] - best->pace_s_per_m[i - 1]) <= input.most_change_s_per_m + 1e-9);
    }
    for (int sample = 0; sample < 100; ++sample) {
      TwoWayInput corridor = input.corridor;
      for (auto* travel : {&corridor.forward_travel_s, &corridor.backward_travel_s}) {
        double pace = std::uniform_real_distribution<double>(0.05, 0.07)(random);
        for (std::size_t k = 0; k < input.links.size(); ++k) {
          (*travel)[k] = pace * input.links[k].length_m;
          pace = std::clamp(pace + std::uniform_real_distribution<double>(-1, 1)(random) * input.most_change_s_per_m,
                            0.05, 0.07);
        }
      }
      const auto answer = solve_two_way(corridor);
      REQUIRE(answer);
      CHECK(answer->corridors[0].share_s <= share(*best) + 1e-6);
    }
  }
}

TEST_CASE("free paces: the share equals the outside solver's", "[bands]") {
  if (!milp::is_available()) return;
  std::string folder = (std::filesystem::temp_directory_path() / "entrain-paces-XXXXXX").string();
  REQUIRE(::mkdtemp(folder.data()));
  std::mt19937 random(63);
  for (int round = 0; round < 12; ++round) {
    const PaceInput input = random_paces(random, 3 + round % 2, 0.02);
    const auto best = solve_pace_ranges(input);
    REQUIRE(best);
    INFO(judge::text(input.corridor));
    CHECK(share(*best) == Approx(milp::solve(milp::program(input), folder).value_or(0)).margin(3e-6));
  }
  std::filesystem::remove_all(folder);
}

TEST_CASE("paces that make no sense are refused", "[bands]") {
  std::mt19937 random(64);
  PaceInput input = random_paces(random, 3, 0.02);
  input.links[0].most_s_per_m = 0.01;
  CHECK_FALSE(solve_pace_ranges(input));
  input = random_paces(random, 3, 0.02);
  input.links.pop_back();
  CHECK_FALSE(solve_pace_ranges(input));
  input = random_paces(random, 3, 0.02);
  input.most_change_s_per_m = -1;
  CHECK_FALSE(solve_pace_ranges(input));
  CHECK_FALSE(solve_pace_ranges({}));
  CHECK_FALSE(solve_pace_ranges(random_paces(random, 3, 0.02), {60, 50, 1}));
}
