// Scanning cycle lengths gives what solving each of them gives.
#include <catch2/catch.hpp>

#include "coordination/bands/cycle_scan.hpp"
#include "coordination/bands/solve.hpp"
#include "judge.hpp"

using namespace entrain::bands;

TEST_CASE("a cycle scan equals one solution a cycle", "[bands]") {
  std::mt19937 random(51);
  for (int round = 0; round < 40; ++round) {
    judge::Kind kind;
    kind.stations = 2 + round % 5;
    kind.cells_per_s = 10;
    kind.orders = kind.open = true;
    kind.second_windows = round % 3 == 0;
    kind.half_periods = round % 4 == 0;
    kind.clearances = round % 2 == 0;
    kind.forward_weight = 1 + round % 2;
    const TwoWayInput input = judge::random_corridor(random, kind);
    const auto scan = scan_cycles(input, {input.cycle_s, 3 * input.cycle_s, input.cycle_s / 4});
    REQUIRE(scan);
    CHECK(scan->size() == 9);
    for (const CycleShare& share : *scan) {
      TwoWayInput scaled = input;
      scaled.cycle_s = share.cycle_s;
      for (TwoWayStation& station : scaled.stations)
        for (StationOption& option : station.options)
          for (auto* windows : {&option.forward, &option.backward})
            for (Window& window : *windows)
              window.start_s *= share.cycle_s / input.cycle_s, window.duration_s *= share.cycle_s / input.cycle_s;
      const auto answer = solve_two_way(scaled);
      REQUIRE(answer);
      INFO("cycle " << share.cycle_s << ": " << judge::text(input));
      CHECK(share.share_s == Approx(answer->corridors[0].share_s).margin(1e-8));
    }
  }
}

TEST_CASE("a cycle range that makes no sense is refused", "[bands]") {
  std::mt19937 random(52);
  const TwoWayInput input = judge::random_corridor(random, {});
  CHECK_FALSE(scan_cycles(input, {0, 100, 1}));
  CHECK_FALSE(scan_cycles(input, {100, 60, 1}));
  CHECK_FALSE(scan_cycles(input, {60, 100, 0}));
  CHECK_FALSE(scan_cycles(input, {60, 100, 1e-9}));
  CHECK_FALSE(scan_cycles({}, {60, 100, 1}));
}
