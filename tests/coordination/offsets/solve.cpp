#include "coordination/offsets/solve.hpp"

#include <catch2/catch.hpp>

#include "drafting/offset_proof.hpp"
#include "exhaustive.hpp"
#include "offset_generators.hpp"
#include "review/certificate_check.hpp"

namespace entrain::offsets {
namespace {

review::CertificateReview reviewed(const Problem& problem, const Answer& answer) {
  return review::check_certificate(drafting::written_problem(problem), drafting::written_certificate(answer), "proof");
}

TEST_CASE("small problems of every kind are solved to the exhaustive optimum, with a bound that the review confirms") {
  int feasible = 0, infeasible = 0, proved = 0;
  for (std::uint64_t seed = 1; seed <= 400; ++seed) {
    Random random(seed * 31);
    const int nodes = 1 + random.below(5), cycle = seed % 20 == 0 ? 1 : 1 + random.below(nodes == 5 ? 4 : 6);
    const std::int64_t largest = seed % 7 == 0 ? 1'000'000'000'000 / 2 : 100;
    Problem problem = any_problem(nodes, random.below(12), cycle, 1 + static_cast<int>(seed % 4 == 0), seed % 3 == 0 ? 0.35 : 0.0, largest, seed);
    if (seed % 5 == 0 && nodes > 1) problem.fixed = {{0, random.below(cycle)}, {nodes - 1, random.below(cycle)}};
    const auto truth = exhaustive_optimum(problem);
    const auto answer = solve(problem);
    INFO("seed " << seed);
    REQUIRE(answer);
    const auto review = reviewed(problem, *answer);
    for (const Diagnostic& d : review.findings) UNSCOPED_INFO(to_text(d));
    CHECK(review.accepted);
    if (!truth) {
      ++infeasible;
      CHECK(answer->status != Status::solved);
      continue;
    }
    ++feasible;
    REQUIRE(answer->status == Status::solved);
    CHECK(cost(problem, answer->assignment) == answer->value);
    CHECK(answer->value == *truth);
    CHECK(answer->bound <= *truth);
    CHECK(review.bound >= answer->bound);
    CHECK(review.bound <= *truth);
    proved += answer->proved;
  }
  CHECK(feasible > 250);
  CHECK(infeasible > 30);
  CHECK(proved > feasible * 9 / 10);
}

TEST_CASE("grids of 25 signals are proved optimal") {
  int proved = 0;
  for (std::uint64_t seed = 1; seed <= 10; ++seed) {
    const Problem problem = grid_problem(5, 5, 60, CostKind::platoons, seed);
    const auto answer = solve(problem);
    REQUIRE(answer);
    CHECK(reviewed(problem, *answer).accepted);
    proved += answer->proved;
  }
  CHECK(proved >= 6);
}

TEST_CASE("contradictory fixed labels name the cycle") {
  Problem problem;
  problem.cycle = 10;
  problem.nodes = 5;
  const auto only = [](int d) {
    Costs costs(10, forbidden);
    costs[static_cast<std::size_t>(d)] = 0;
    return costs;
  };
  const Costs any(10, 1);
  problem.edges = {{3, 4, any}, {0, 1, only(3)}, {1, 2, only(4)}, {2, 3, any}, {0, 2, only(8)}, {0, 4, any}};
  const auto answer = solve(problem);
  REQUIRE(answer);
  CHECK(answer->status == Status::infeasible);
  CHECK(answer->conflict == std::vector<int>{1, 2, 4});
  CHECK(reviewed(problem, *answer).accepted);
  CHECK(reviewed(problem, *answer).proves_infeasible);
}

TEST_CASE("the same seed gives the same answer") {
  const Problem problem = grid_problem(8, 8, 60, CostKind::noise, 5);
  SolveOptions options;
  options.effort = 0.1;
  const auto one = solve(problem, options), two = solve(problem, options);
  REQUIRE(one);
  CHECK(one->assignment.labels == two->assignment.labels);
  CHECK(one->bound == two->bound);
  options.threads = 8;
  const auto many = solve(problem, options);
  CHECK(one->assignment.labels == many->assignment.labels);
  CHECK(one->bound == many->bound);
}

}  // namespace
}  // namespace entrain::offsets
