#include "coordination/offsets/problem.hpp"

#include <catch2/catch.hpp>

#include "coordination/offsets/solve.hpp"

namespace entrain::offsets {
namespace {

Problem pair_of_nodes() {
  Problem problem;
  problem.cycle = 3;
  problem.nodes = 2;
  problem.edges.push_back({0, 1, {5, 1, 7}});
  return problem;
}

TEST_CASE("the cost of an assignment adds edges by the difference to less from, and node costs by order") {
  Problem problem = pair_of_nodes();
  problem.edges.push_back({1, 0, {0, 10, 20}});
  // d of the first edge is 1, of the reversed second -1 = 2.
  CHECK(cost(problem, {{1, 2}, {}}) == 1 + 20);
  problem.orders = {2, 1};
  problem.node_costs = {{0, 100}, {}};
  problem.edges[0].costs = {5, 1, 7, 50, 10, 70};
  problem.edges[1].costs = {0, 10, 20, 0, 0, 0};
  CHECK(cost(problem, {{1, 2}, {1, 0}}) == 100 + 10 + 0);
}

TEST_CASE("forbidden entries and fixed labels make an assignment inadmissible") {
  Problem problem = pair_of_nodes();
  problem.edges[0].costs[2] = forbidden;
  CHECK_FALSE(cost(problem, {{0, 2}, {}}));
  problem.fixed = {{1, 1}};
  CHECK(cost(problem, {{0, 1}, {}}) == 1);
  CHECK_FALSE(cost(problem, {{0, 0}, {}}));
}

TEST_CASE("a problem without faults has none to report") { CHECK(faults(pair_of_nodes()).empty()); }

TEST_CASE("all faults of a problem are told at once") {
  Problem problem = pair_of_nodes();
  problem.edges.push_back({1, 1, {0, 0, 0}});
  problem.edges.push_back({0, 7, {0, 0, 0}});
  problem.edges.push_back({0, 1, {0, 0}});
  problem.edges.push_back({0, 1, {0, 2'000'000'000'000, 0}});
  problem.fixed = {{0, 3}, {1, 0}, {1, 1}};
  const Diagnostics found = faults(problem);
  REQUIRE(found.size() == 6);
  CHECK(to_text(found[0]) == "error: fixed label of node 0: 3; expected 0 to 2. Take the label modulo the cycle");
  CHECK(to_text(found[1]) == "error: node 1: two fixed labels; expected one. Remove one");
  CHECK(to_text(found[2]) == "error: edge 1: both ends at node 1; expected two different nodes. Remove it: its cost does not depend on the labels");
  CHECK(to_text(found[3]) == "error: edge 2: nodes 0 and 7; expected 0 to 1. Name nodes that exist");
  CHECK(to_text(found[4]) == "error: edge 3: 2 costs; expected 3. Give one for each pair of orders and difference");
  CHECK(found[5].where == "edge 4");
  CHECK_FALSE(solve(problem));
}

TEST_CASE("sizes out of range are refused before anything is looked at") {
  Problem problem = pair_of_nodes();
  problem.cycle = 0;
  CHECK(faults(problem).size() == 1);
  problem.cycle = 1'000'000;
  CHECK(faults(problem).size() == 1);
  problem = pair_of_nodes();
  problem.orders = {1};
  CHECK(faults(problem).size() == 1);
  problem.orders = {0, 1};
  CHECK(faults(problem).size() == 1);
}

}  // namespace
}  // namespace entrain::offsets
