// Figures of the offset engine: certified gap by time on grids and towns, beside multi-start coordinate descent in the same run.
//
//   offsets_bench grid ROWS COLUMNS CYCLE noise|platoons|steady SEEDS SECONDS
//   offsets_bench town NODES CYCLE noise|platoons|steady SEEDS SECONDS
//   offsets_bench kernel CYCLE
#include <fmt/format.h>

#include <chrono>
#include <cstdlib>
#include <cstring>
#include <string>

#include "coordination/offsets/core.hpp"
#include "coordination/offsets/cycle_bound.hpp"
#include "coordination/offsets/solve.hpp"
#include "offset_generators.hpp"

namespace entrain::offsets {
namespace {

double now() { return std::chrono::duration<double>(std::chrono::steady_clock::now().time_since_epoch()).count(); }

// Best label for one node after the other until nothing changes, from random starts until the time is up.
std::int64_t coordinate_descent(const Problem& problem, double seconds, std::uint64_t seed) {
  const double end = now() + seconds;
  Random random(seed);
  const auto nodes = static_cast<std::size_t>(problem.nodes), cycle = static_cast<std::size_t>(problem.cycle);
  std::vector<std::vector<std::pair<const Edge*, bool>>> at(nodes);
  for (const Edge& e : problem.edges) at[static_cast<std::size_t>(e.from)].push_back({&e, true}), at[static_cast<std::size_t>(e.to)].push_back({&e, false});
  std::int64_t best = INT64_MAX;
  std::vector<std::int64_t> sums(cycle);
  do {
    Assignment a{std::vector<int>(nodes, 0), {}};
    for (int& x : a.labels) x = random.below(problem.cycle);
    for (bool changed = true; changed && now() < end;) {
      changed = false;
      for (std::size_t v = 0; v < nodes; ++v) {
        std::fill(sums.begin(), sums.end(), 0);
        for (const auto& [e, leaves] : at[v]) {
          const auto y = static_cast<std::size_t>(a.labels[static_cast<std::size_t>(leaves ? e->to : e->from)]);
          for (std::size_t x = 0; x < cycle; ++x) sums[x] += e->costs[(leaves ? y + cycle - x : x + cycle - y) % cycle];
        }
        std::size_t least = static_cast<std::size_t>(a.labels[v]);
        for (std::size_t x = 0; x < cycle; ++x)
          if (sums[x] < sums[least]) least = x;
        changed = changed || static_cast<int>(least) != a.labels[v];
        a.labels[v] = static_cast<int>(least);
      }
    }
    best = std::min(best, *cost(problem, a));
  } while (now() < end);
  return best;
}

int network(const std::vector<std::string>& words) {
  const bool grid = words[0] == "grid";
  std::size_t next = 1;
  const int rows = std::stoi(words[next++]), columns = grid ? std::stoi(words[next++]) : 1, cycle = std::stoi(words[next++]);
  const std::string kind_word = words[next++];
  const CostKind kind = kind_word == "noise" ? CostKind::noise : kind_word == "steady" ? CostKind::steady : CostKind::platoons;
  const int seeds = std::stoi(words[next++]);
  const double seconds = std::stod(words[next++]);
  const bool descend = words.size() > next && words[next] == "descend";
  double mean_gap = 0, worst_gap = 0, mean_descent = 0, mean_seconds = 0, worst_seconds = 0;
  int proved = 0, quick = 0;
  for (int seed = 1; seed <= seeds; ++seed) {
    const Problem problem = grid ? grid_problem(rows, columns, cycle, kind, static_cast<std::uint64_t>(seed)) : town_problem(rows, cycle, kind, 3.3, static_cast<std::uint64_t>(seed));
    SolveOptions options;
    const double start = now();
    options.elapsed_s = [start] { return now() - start; };
    options.time_limit_s = seconds;
    options.threads = 2;
    const auto answer = solve(problem, options);
    const double spent = now() - start;
    const double gap = 100.0 * static_cast<double>(answer->value - answer->bound) / static_cast<double>(answer->value);
    mean_gap += gap / seeds;
    worst_gap = std::max(worst_gap, gap);
    mean_seconds += spent / seeds;
    worst_seconds = std::max(worst_seconds, spent);
    proved += answer->proved;
    quick += answer->proved && spent <= 0.05;
    if (descend) mean_descent += 100.0 * (static_cast<double>(coordinate_descent(problem, spent, 1)) / static_cast<double>(answer->bound) - 1) / seeds;
    if (seeds <= 10) fmt::print("  seed {}: value {} bound {} gap {:.4f} % in {:.3f} s, core {} nodes {} edges\n", seed, answer->value, answer->bound, gap, spent, answer->core_nodes, answer->core_edges);
  }
  fmt::print("{}: gap mean {:.4f} % worst {:.4f} %, proved {}/{} ({} within 50 ms), seconds mean {:.3f} worst {:.3f}", fmt::join(words, " "), mean_gap, worst_gap, proved, seeds, quick,
             mean_seconds, worst_seconds);
  if (descend) fmt::print("; coordinate descent in the same time {:.2f} % above the bound", mean_descent);
  fmt::print("\n");
  return 0;
}

int kernel(int cycle) {
  Random random(1);
  const auto lanes = static_cast<std::size_t>(row_lanes(cycle));
  std::vector<std::vector<Lane>> rows;
  for (int i = 0; i < 64; ++i) {
    const Costs costs = platoon_costs(cycle, random, false);
    std::vector<Lane>& row = rows.emplace_back(lanes, 0);
    for (int d = 0; d < cycle; ++d) row[static_cast<std::size_t>(d)] = static_cast<Lane>(costs[static_cast<std::size_t>(d)]);
  }
  ConvolutionSpace space(cycle);
  std::vector<Lane> out(lanes);
  for (const bool plain : {false, true}) {
    const int count = plain ? 20'000 : 1'000'000;
    const double start = now();
    for (int i = 0; i < count; ++i) {
      std::fill(out.begin(), out.end(), lane_ceiling);
      const auto &a = rows[static_cast<std::size_t>(i % 64)], &b = rows[static_cast<std::size_t>((i * 7 + 3) % 64)];
      if (plain) convolve_into_plainly(a.data(), b.data(), cycle, out.data());
      else convolve_into(a.data(), b.data(), cycle, out.data(), space);
    }
    fmt::print("convolution at {} labels, {}: {:.0f} ns\n", cycle, plain ? "plain" : "fast", 1e9 * (now() - start) / count);
  }
  return 0;
}

int sweeps(int side, int cycle, int count) {
  const Problem problem = grid_problem(side, side, cycle, CostKind::platoons, 1);
  const Reduction reduction = reduce(problem);
  const Core core = core_of(reduction);
  double start = now();
  auto walks = cycles_of(core);
  fmt::print("{} cycles found in {:.3f} s\n", walks.size(), now() - start);
  CycleBound bound(core, std::move(walks));
  for (int i = 0; i < count; ++i) {
    start = now();
    bound.sweep();
    const double spent = now() - start;
    fmt::print("sweep {}: {:.1f} ms, bound {}\n", i + 1, 1000 * spent, whole_bound(core, bound.bound()));
  }
  return 0;
}

}  // namespace
}  // namespace entrain::offsets

int main(int count, char** arguments) {
  const std::vector<std::string> words(arguments + 1, arguments + count);
  if (words.size() >= 6 && (words[0] == "grid" || words[0] == "town")) return entrain::offsets::network(words);
  if (words.size() == 2 && words[0] == "kernel") return entrain::offsets::kernel(std::stoi(words[1]));
  if (words.size() == 4 && words[0] == "sweep") return entrain::offsets::sweeps(std::stoi(words[1]), std::stoi(words[2]), std::stoi(words[3]));
  fmt::print(stderr, "offsets_bench grid ROWS COLUMNS CYCLE KIND SEEDS SECONDS | town NODES CYCLE KIND SEEDS SECONDS | kernel CYCLE | sweep SIDE CYCLE COUNT\n");
  return 2;
}
