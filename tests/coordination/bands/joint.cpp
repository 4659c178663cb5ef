// Corridors that share stations, against the exhaustive judge.
#include <algorithm>
#include <catch2/catch.hpp>

#include "coordination/bands/evaluate.hpp"
#include "coordination/bands/solve.hpp"
#include "judge.hpp"

using namespace entrain;
using namespace entrain::bands;

namespace {

std::vector<double> own_best(const Answer& answer) {
  std::vector<double> own;
  for (const CorridorAnswer& corridor : answer.corridors) own.push_back(corridor.own_best_share_s);
  return own;
}

std::vector<double> ratios(const Answer& answer) {
  std::vector<double> list;
  for (const CorridorAnswer& corridor : answer.corridors)
    list.push_back(corridor.own_best_share_s > 0 ? std::min(1.0, corridor.share_s / corridor.own_best_share_s) : 1.0);
  std::sort(list.begin(), list.end());
  return list;
}

void check_fixed(const Problem& problem, const Answer& answer) {
  for (std::size_t s = 0; s < problem.stations.size(); ++s)
    if (problem.stations[s].fixed_offset_s)
      CHECK(answer.stations[s].offset_s == Approx(*problem.stations[s].fixed_offset_s));
}

// Negative: a is smaller; positive: larger; by the first entry that differs by more than rounding.
int compare(const std::vector<double>& a, const std::vector<double>& b) {
  for (std::size_t i = 0; i < a.size(); ++i)
    if (std::abs(a[i] - b[i]) > 1e-7) return a[i] < b[i] ? -1 : 1;
  return 0;
}

}  // namespace

TEST_CASE("corridors that share one station each reach the fairest whole-second bands", "[bands]") {
  std::mt19937 random(5);
  for (int round = 0; round < 120; ++round) {
    const judge::Shape shape = round % 2 ? judge::Shape::cross : judge::Shape::chain;
    const Problem problem = judge::random_joint(random, shape, round % 3 != 0, round % 4 == 0 ? 1 : 0);
    const auto answer = solve_joint_whole_seconds(problem);
    REQUIRE(answer);
    INFO("round " << round);
    CHECK(answer->proved);
    const std::vector<double> best = judge::exhaustive_joint(problem, own_best(*answer), 1, 1);
    CHECK(compare(ratios(*answer), best) == 0);
    check_fixed(problem, *answer);
  }
}

TEST_CASE("corridors that share one station and no order conflict all reach their own best", "[bands]") {
  std::mt19937 random(6);
  for (int round = 0; round < 100; ++round) {
    const Problem problem =
        judge::random_joint(random, round % 2 ? judge::Shape::cross : judge::Shape::chain, false, 0);
    const auto answer = solve_joint(problem);
    REQUIRE(answer);
    CHECK(answer->least_ratio == Approx(1).margin(1e-9));
    CHECK(answer->least_ratio_bound == 1);
    for (std::size_t c = 0; c < problem.corridors.size(); ++c) {
      const auto alone = solve_joint({problem.cycle_s, problem.stations, {problem.corridors[c]}});
      REQUIRE(alone);
      CHECK(answer->corridors[c].share_s == Approx(alone->corridors[0].share_s).margin(1e-9));
    }
  }
}

TEST_CASE("rings of corridors: never below a grid of half seconds, the bound never below either", "[bands]") {
  std::mt19937 random(8);
  int whole_second_best = 0, rounds = 0;
  for (int round = 0; round < 90; ++round) {
    const judge::Shape shape = round % 2 ? judge::Shape::triangle : judge::Shape::two_shared;
    const Problem problem = judge::random_joint(random, shape, round % 3 == 0, round % 5 == 0 ? 2 : 0);
    const auto answer = solve_joint(problem);
    REQUIRE(answer);
    INFO("round " << round);
    CHECK(answer->proved);
    const std::vector<double> best = judge::exhaustive_joint(problem, own_best(*answer), 2, 0.5);
    // A corridor without a band in every direction defends the one it has; the judge knows shares only.
    const std::vector<double> own = own_best(*answer);
    if (std::find(own.begin(), own.end(), 0.0) != own.end()) continue;
    CHECK(compare(ratios(*answer), best) >= 0);
    CHECK(answer->least_ratio_bound >= answer->least_ratio - 1e-6);
    CHECK(answer->least_ratio_bound <= answer->least_ratio + 1e-6);
    check_fixed(problem, *answer);
    const auto whole = solve_joint_whole_seconds(problem);
    REQUIRE(whole);
    const std::vector<double> whole_best = judge::exhaustive_joint(problem, own_best(*whole), 1, 1);
    CHECK(compare(ratios(*whole), whole_best) <= 0);
    whole_second_best += compare(ratios(*whole), whole_best) == 0 ? 1 : 0;
    ++rounds;
    check_fixed(problem, *whole);
  }
  CHECK(whole_second_best * 10 >= rounds * 7);  // rounding is a search, not a proof
}

TEST_CASE("a couplet: lists that differ, shared stations couple, others are free", "[bands]") {
  // Forward over 0 1 2, backward over 2 3 0: only 0 and 2 tie the directions together.
  Problem problem;
  problem.cycle_s = 60;
  problem.stations.assign(4, Station{});
  const auto stop = [](int station, double travel, double start, double duration) {
    return Stop{station, travel, 0, {{{start, duration}}}};
  };
  problem.corridors = {{{Direction{{stop(0, 0, 0, 30), stop(1, 12, 7, 20), stop(2, 18, 0, 30)}, 1},
                         Direction{{stop(2, 0, 30, 30), stop(3, 9, 3, 25), stop(0, 11, 30, 30)}, 1}}}};
  const auto answer = solve_joint(problem);
  REQUIRE(answer);
  // x2 - x0 = 30 serves the forward bands fully; backward needs x0 - x2 = 20 mod 60, that is x2 - x0 = 40: 10 s apart,
  // 50 s in all, but 1 and 3 cap them at 20 and 25.
  CHECK(answer->corridors[0].share_s == Approx(20).margin(1e-9));
  CHECK(answer->corridors[0].directions[1].width_s == Approx(25).margin(1e-9));
}

TEST_CASE("a station met twice has one offset", "[bands]") {
  // The band passes station 0, goes round a loop of 25 s and passes it again with the second window 5 s off.
  Problem problem;
  problem.cycle_s = 60;
  problem.stations.assign(2, Station{});
  problem.corridors = {
      {{Direction{{Stop{0, 0, 0, {{{0, 20}}}}, Stop{1, 10, 0, {{{0, 30}}}}, Stop{0, 15, 0, {{{30, 20}}}}}, 1}}}};
  for (const bool whole : {false, true}) {
    const auto answer = whole ? solve_joint_whole_seconds(problem) : solve_joint(problem);
    REQUIRE(answer);
    CHECK(answer->corridors[0].share_s == Approx(15).margin(1e-9));
  }
}

TEST_CASE("fixed offsets that leave no band are said so, not refused", "[bands]") {
  TwoWayInput input;
  input.cycle_s = 60;
  for (int i = 0; i < 2; ++i) {
    TwoWayStation station;
    station.options = {{{{0, 10}}, {{0, 10}}}};
    station.fixed_offset_s = 30 * i;
    input.stations.push_back(station);
  }
  input.forward_travel_s = {0};
  input.backward_travel_s = {0};
  for (const bool whole : {false, true}) {
    const auto answer = whole ? solve_two_way_whole_seconds(input) : solve_two_way(input);
    REQUIRE(answer);
    CHECK(answer->corridors[0].share_s == 0);
    CHECK(answer->stations[0].offset_s == 0);
    CHECK(answer->stations[1].offset_s == 30);
    CHECK_FALSE(answer->notes.empty());
  }
}

TEST_CASE("admissible arcs: inside them the band fits, outside it does not", "[bands]") {
  std::mt19937 random(12);
  for (int round = 0; round < 60; ++round) {
    judge::Kind kind;
    kind.second_windows = true;
    kind.half_periods = true;
    kind.clearances = true;
    const TwoWayInput input = judge::random_corridor(random, kind);
    const auto answer = solve_two_way_whole_seconds(input);
    REQUIRE(answer);
    const Problem problem = to_problem(input);
    std::vector<int> options;
    std::vector<double> offsets;
    for (const StationAnswer& station : answer->stations)
      options.push_back(station.option), offsets.push_back(station.offset_s);
    for (int d = 0; d < 2; ++d) {
      const DirectionAnswer& direction = answer->corridors[0].directions[static_cast<std::size_t>(d)];
      if (direction.width_s <= 0) continue;
      const auto arcs = admissible_offsets(problem, 0, d, options, direction.width_s);
      REQUIRE(arcs);
      for (std::size_t s = 0; s < direction.stops.size(); ++s) {
        const auto station =
            static_cast<std::size_t>(problem.corridors[0].directions[static_cast<std::size_t>(d)].stops[s].station);
        const double period = input.cycle_s / (input.stations[station].half_period ? 2 : 1);
        bool inside = false;
        for (const OffsetArc& arc : (*arcs)[s]) {
          double gap = offsets[station] - direction.start_s - arc.start_s;
          gap -= std::floor(gap / period + 1e-9) * period;
          inside = inside || arc.everywhere || gap <= arc.length_s + 1e-9;
        }
        CHECK(inside);
      }
    }
  }
}
