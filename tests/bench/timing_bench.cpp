// How long local timing takes: allocation of four-leg and larger signals, critical cycles.
#include <benchmark/benchmark.h>

#include "../timing/sample_designs.hpp"

using namespace entrain::timing;

namespace {

SignalDesign with_people(SignalDesign design) {
  for (const int parent : {1, 3, 5, 7}) {
    Group walk;
    walk.id = "P" + design.groups[static_cast<std::size_t>(parent)].id;
    walk.kind = GroupKind::pedestrian;
    walk.parent = parent;
    walk.minimum_green = entrain::Tenths{70};
    walk.clearance = entrain::Tenths{140};
    design.groups[static_cast<std::size_t>(parent)].pedestrian_need = entrain::Tenths{260};
    const int index = static_cast<int>(design.groups.size());
    design.groups.push_back(walk);
    for (const Conflict& conflict : std::vector<Conflict>(design.conflicts)) {
      if (conflict.a == parent) design.conflicts.push_back({conflict.b, index, conflict.intergreen_ba, entrain::Tenths{30}});
      if (conflict.b == parent && conflict.a < 8) design.conflicts.push_back({conflict.a, index, conflict.intergreen_ab, entrain::Tenths{30}});
    }
  }
  return design;
}

const std::vector<double> ratios{.08, .22, .06, .18, .05, .28, .09, .14};

void four_legs_rings(benchmark::State& state) {
  const SignalDesign design = with_people(sample::dual_ring());
  const auto request = sample::request(static_cast<int>(state.range(0)), ratios);
  for (auto _ : state) benchmark::DoNotOptimize(allocate(design, request));
}
BENCHMARK(four_legs_rings)->Arg(90)->Arg(120)->Unit(benchmark::kMicrosecond);

void four_legs_general(benchmark::State& state) {
  SignalDesign design = with_people(sample::dual_ring());
  design.ring_barrier.reset();
  const auto request = sample::request(static_cast<int>(state.range(0)), ratios);
  for (auto _ : state) benchmark::DoNotOptimize(allocate(design, request));
}
BENCHMARK(four_legs_general)->Arg(90)->Arg(120)->Unit(benchmark::kMicrosecond);

void four_legs_least_cycle(benchmark::State& state) {
  SignalDesign design = with_people(sample::dual_ring());
  if (state.range(0) == 0) design.ring_barrier.reset();
  for (auto _ : state) benchmark::DoNotOptimize(critical_cycle(design, sample::flows(ratios), .9));
}
BENCHMARK(four_legs_least_cycle)->Arg(0)->Arg(1)->Unit(benchmark::kMicrosecond);

// Sixteen groups of eight approaches, each with a turn; neighbours and crossing paths conflict, opposite throughs do not.
SignalDesign eight_legs() {
  std::vector<Group> groups;
  for (int g = 0; g < 16; ++g) groups.push_back(sample::vehicle("g" + std::to_string(g), 5, 3.6, 1.4, g));
  SignalDesign design = sample::bare(groups);
  for (int a = 0; a < 16; ++a)
    for (int b = a + 1; b < 16; ++b) {
      const int apart = (b / 2 - a / 2 + 8) % 8;
      const bool opposite = apart == 4 && a % 2 == b % 2, same = apart == 0, beside = (apart == 1 || apart == 7) && a % 2 == 1 && b % 2 == 1;
      if (!opposite && !same && !beside) sample::conflict(design, a, b);
    }
  return design;
}

void eight_legs_general(benchmark::State& state) {
  const SignalDesign design = eight_legs();
  std::vector<double> y;
  for (int g = 0; g < 16; ++g) y.push_back(0.02 + 0.01 * (g * 7 % 5));
  const auto request = sample::request(static_cast<int>(state.range(0)), y);
  for (auto _ : state) {
    auto plans = allocate(design, request);
    state.counters["fits"] = plans.has_value();
    state.counters["proved"] = plans.has_value() && plans->front().proved;
  }
}
BENCHMARK(eight_legs_general)->Arg(120)->Arg(180)->Unit(benchmark::kMillisecond)->Iterations(1);

}  // namespace

BENCHMARK_MAIN();
