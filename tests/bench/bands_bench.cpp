// Exact bands: a corridor of N stations with P orders each, greens 53 to 70 % of the cycle, uneven spacing, times in
// tenths.
#include <benchmark/benchmark.h>

#include <filesystem>
#include <random>

#include "../coordination/bands/milp.hpp"
#include "coordination/bands/compiled.hpp"
#include "coordination/bands/corridor_bands.hpp"
#include "coordination/bands/cycle_scan.hpp"
#include "coordination/bands/link_bands.hpp"
#include "coordination/bands/solve.hpp"

using namespace entrain::bands;

namespace {

TwoWayInput corridor(int stations, int orders, unsigned seed) {
  std::mt19937 random(seed);
  const auto tenths = [&](int from, int to) {
    return std::uniform_int_distribution<int>(from * 10, to * 10)(random) / 10.0;
  };
  TwoWayInput input;
  input.cycle_s = 90;
  for (int i = 0; i < stations; ++i) {
    TwoWayStation station;
    const double forward = tenths(48, 63), backward = tenths(48, 63), lead = tenths(8, 20);
    for (int o = 0; o < orders; ++o)
      station.options.push_back({{{o & 1 ? lead : 0, forward}}, {{o & 2 ? lead : 0, backward}}});
    input.stations.push_back(station);
    if (i > 0) input.forward_travel_s.push_back(tenths(8, 40)), input.backward_travel_s.push_back(tenths(8, 40));
  }
  return input;
}

// The optimum alone, from the checked problem in ticks: share, widths, phi.
void widest(benchmark::State& state) {
  const auto problem =
      compile(to_problem(corridor(static_cast<int>(state.range(0)), static_cast<int>(state.range(1)), 7)));
  std::vector<std::vector<int>> options;
  for (const CompiledStation& station : problem->stations) options.push_back(station.options);
  CorridorBands bands(*problem, 0, options);
  double share = 0;
  for (auto _ : state) {
    share = bands.best().share;
    benchmark::ClobberMemory();
  }
  state.counters["share_s"] = share / 1e10;
}

// From plain data to offsets, freedom, witness, checks and all.
void solve(benchmark::State& state) {
  const TwoWayInput input = corridor(static_cast<int>(state.range(0)), static_cast<int>(state.range(1)), 7);
  for (auto _ : state) benchmark::DoNotOptimize(solve_two_way(input));
}

void solve_whole_seconds(benchmark::State& state) {
  const TwoWayInput input = corridor(static_cast<int>(state.range(0)), static_cast<int>(state.range(1)), 7);
  for (auto _ : state) benchmark::DoNotOptimize(solve_two_way_whole_seconds(input));
}

// 201 cycle lengths, windows in proportion.
void scan(benchmark::State& state) {
  const TwoWayInput input = corridor(static_cast<int>(state.range(0)), static_cast<int>(state.range(1)), 7);
  for (auto _ : state) benchmark::DoNotOptimize(scan_cycles(input, {40, 240, 1}));
}

// A band for every link, flows 100 to 1000.
void links(benchmark::State& state) {
  LinkBandInput input;
  input.corridor = corridor(static_cast<int>(state.range(0)), static_cast<int>(state.range(1)), 7);
  std::mt19937 random(9);
  for (int i = 0; i + 1 < static_cast<int>(state.range(0)); ++i) {
    input.forward_weights.push_back(std::uniform_int_distribution<int>(100, 1000)(random));
    input.backward_weights.push_back(std::uniform_int_distribution<int>(100, 1000)(random));
  }
  double value = 0;
  for (auto _ : state) {
    value = solve_link_bands(input)->value_s;
    benchmark::ClobberMemory();
  }
  state.counters["value"] = value;
}

// The same instance by a general solver, once; the counters let one compare the answers.
void outside_solver(benchmark::State& state) {
  const TwoWayInput input = corridor(static_cast<int>(state.range(0)), static_cast<int>(state.range(1)), 7);
  std::string folder = (std::filesystem::temp_directory_path() / "entrain-bench-XXXXXX").string();
  if (!milp::is_available() || !::mkdtemp(folder.data())) return state.SkipWithError("cbc is not installed");
  const std::string program = milp::program(to_problem(input), {1});
  double share = -1;
  for (auto _ : state) share = milp::solve(program, folder).value_or(-1);
  state.counters["share_s"] = share;
  std::filesystem::remove_all(folder);
}

}  // namespace

BENCHMARK(widest)->Args({10, 4})->Args({40, 2})->Args({40, 4})->Args({1000, 1})->Args({1000, 4})->Args({100000, 4});
BENCHMARK(solve)->Args({10, 4})->Args({40, 2})->Args({40, 4})->Args({1000, 1});
BENCHMARK(solve_whole_seconds)->Args({10, 4})->Args({40, 2})->Args({40, 4})->Args({1000, 1});
BENCHMARK(scan)->Args({40, 1})->Args({40, 2})->Args({40, 4});
BENCHMARK(links)->Args({40, 1})->Args({40, 4})->Unit(benchmark::kMillisecond);
BENCHMARK(outside_solver)
    ->Args({10, 2})
    ->Args({20, 2})
    ->Args({40, 2})
    ->Iterations(1)
    ->Unit(benchmark::kMillisecond)
    ->UseRealTime();
BENCHMARK_MAIN();
