#include "coordination/offsets/reduce.hpp"

#include <catch2/catch.hpp>

#include "exhaustive.hpp"
#include "offset_generators.hpp"

namespace entrain::offsets {
namespace {

// The reduced problem as a problem of its own, with the constant left out.
Problem what_is_left(const Reduction& r) {
  Problem left;
  left.cycle = r.cycle;
  left.nodes = static_cast<int>(r.present.size());
  left.orders = r.orders;
  left.node_costs = r.node_costs;
  for (std::size_t v = 0; v < r.present.size(); ++v)
    if (!r.present[v]) left.orders[v] = 1, left.node_costs[v] = {0};
  for (const ReducedEdge& edge : r.edges)
    if (edge.alive) left.edges.push_back({edge.from, edge.to, edge.costs});
  return left;
}

TEST_CASE("reductions keep the optimum, and its labels expand to the same cost") {
  int feasible = 0;
  for (std::uint64_t seed = 1; seed <= 150; ++seed) {
    Random random(seed);
    const int nodes = 2 + random.below(3), cycle = 1 + random.below(5);
    Problem problem = any_problem(nodes, random.below(8), cycle, 1 + random.below(2), seed % 3 == 0 ? 0.3 : 0.0, 100, seed);
    if (seed % 5 == 0) problem.fixed = {{0, random.below(cycle)}, {1, random.below(cycle)}};
    const auto truth = exhaustive_optimum(problem);
    const Reduction r = reduce(problem);
    INFO("seed " << seed);
    if (r.contradiction >= 0 || r.empty_node >= 0) {
      CHECK_FALSE(truth);
      continue;
    }
    const auto left = exhaustive_optimum(what_is_left(r));
    REQUIRE(truth.has_value() == left.has_value());
    if (!truth) continue;
    ++feasible;
    CHECK(*left + r.constant == *truth);
  }
  CHECK(feasible > 100);
}

TEST_CASE("a corridor with side streets, a ring and doubled links fold away completely") {
  Problem problem;
  problem.cycle = 7;
  problem.nodes = 9;
  Random random(3);
  const auto link = [&](int from, int to) {
    Costs costs;
    for (int d = 0; d < 7; ++d) costs.push_back(random.below(50));
    problem.edges.push_back({from, to, costs});
  };
  for (int v = 0; v < 4; ++v) link(v, v + 1), link(v + 1, v), link(v, 5 + v);
  link(4, 0);
  const Reduction r = reduce(problem);
  CHECK(std::none_of(r.edges.begin(), r.edges.end(), [](const ReducedEdge& e) { return e.alive; }));
  CHECK(std::count(r.present.begin(), r.present.end(), 1) == 1);
}

}  // namespace
}  // namespace entrain::offsets
