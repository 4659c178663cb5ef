#include <catch2/catch.hpp>

#include "coordination/offsets/solve.hpp"
#include "drafting/offset_proof.hpp"
#include "offset_generators.hpp"
#include "review/certificate_check.hpp"

namespace entrain::review {
namespace {

using offsets::Random;

// Everything below speaks of this: the least cost over all labels (one order each), by counting up. Node 0 has label 0.
std::int64_t optimum_of(const plan::OffsetProblem& problem) {
  std::vector<int> labels(static_cast<std::size_t>(problem.nodes), 0);
  std::int64_t best = INT64_MAX;
  for (;;) {
    std::int64_t sum = 0;
    bool admissible = true;
    for (const auto& e : problem.edges) {
      const int d = (labels[static_cast<std::size_t>(e.to)] - labels[static_cast<std::size_t>(e.from)] + problem.cycle) % problem.cycle;
      const std::int64_t c = e.costs[static_cast<std::size_t>(d)];
      admissible = admissible && c != plan::forbidden_cost;
      sum += admissible ? c : 0;
    }
    if (admissible) best = std::min(best, sum);
    std::size_t v = 1;
    while (v < labels.size() && ++labels[v] == problem.cycle) labels[v++] = 0;
    if (v >= labels.size()) return best;
  }
}

// A wheel: a hub, a rim of four, and one doubled, reversed rim edge.
plan::OffsetProblem wheel(std::uint64_t seed, bool forbids = false) {
  Random random(seed);
  plan::OffsetProblem problem;
  problem.cycle = 4;
  problem.nodes = 5;
  const auto edge = [&](int from, int to) {
    std::vector<std::int64_t> costs;
    for (int d = 0; d < 4; ++d) costs.push_back(forbids && random.chance(0.15) && d > 0 ? plan::forbidden_cost : random.below(40) - 10);
    problem.edges.push_back({from, to, costs});
  };
  for (int v = 1; v <= 4; ++v) edge(0, v), edge(v, v % 4 + 1);
  edge(2, 1);
  return problem;
}

const std::vector<std::vector<plan::WalkedEdge>> wheel_cycles = {
    {{0, true}, {1, true}, {2, false}}, {{2, true}, {3, true}, {4, false}}, {{4, true}, {5, true}, {6, false}}, {{6, true}, {7, true}, {0, false}},
    {{1, true}, {8, true}},             {{1, true}, {3, true}, {5, true}, {7, true}},
};

plan::Certificate nonsense(const plan::OffsetProblem& problem, Random& random) {
  plan::Certificate proof;
  proof.scale = 1 + random.below(9);
  for (const auto& walk : wheel_cycles) {
    if (random.chance(0.3)) continue;
    plan::CertificateCycle& cycle = proof.cycles.emplace_back();
    cycle.walk = walk;
    for (std::size_t k = 0; k < walk.size(); ++k) {
      cycle.thetas.emplace_back();
      for (int d = 0; d < problem.cycle; ++d) cycle.thetas.back().push_back(random.below(200) - 100);
    }
  }
  if (random.chance(0.5)) proof.alphas.push_back({random.below(9), random.chance(0.5), {random.below(100) - 50}});
  return proof;
}

TEST_CASE("500 certificates full of nonsense never prove more than the optimum") {
  Random random(11);
  std::int64_t closest = INT64_MAX;
  for (int trial = 0; trial < 500; ++trial) {
    const auto problem = wheel(static_cast<std::uint64_t>(1 + trial % 50), trial % 2 == 1);
    auto proof = nonsense(problem, random);
    proof.bound = -1'000'000;
    const auto review = check_certificate(problem, proof, "nonsense");
    REQUIRE(review.accepted);
    if (review.proves_infeasible) {
      CHECK(optimum_of(problem) == INT64_MAX);
      continue;
    }
    REQUIRE(review.bound);
    CHECK(*review.bound <= optimum_of(problem));
    if (optimum_of(problem) != INT64_MAX) closest = std::min(closest, optimum_of(problem) - *review.bound);
    proof.bound = *review.bound + 1;
    CHECK_FALSE(check_certificate(problem, proof, "nonsense").accepted);
  }
  CHECK(closest >= 0);
}

TEST_CASE("an empty certificate proves the sum of the edges' least costs") {
  const auto problem = wheel(1);
  std::int64_t sum = 0;
  for (const auto& e : problem.edges) sum += *std::min_element(e.costs.begin(), e.costs.end());
  plan::Certificate proof;
  proof.bound = sum;
  CHECK(check_certificate(problem, proof, "empty").accepted);
  CHECK(check_certificate(problem, proof, "empty").bound == sum);
}

TEST_CASE("a certificate by hand") {
  // Two links one after the other and one back, cycle 3: d1 + d2 + d3 = 0. Least costs: d = 1 on each is 0 and sums to 3 = 0: optimum 0.
  plan::OffsetProblem problem{3, 3, {}, {}, {}, {{0, 1, {5, 0, 9}}, {1, 2, {5, 0, 9}}, {2, 0, {5, 0, 9}}}};
  plan::Certificate proof;
  proof.cycles = {{{{0, true}, {1, true}, {2, true}}, {{5, 0, 9}, {5, 0, 9}, {5, 0, 9}}}};
  CHECK(check_certificate(problem, proof, "hand").bound == 0);
  // With d = 1 dearer on the last: best is (1, 1, 1) at 4, or (0, 0, 0) at 15.
  problem.edges[2].costs[1] = 4;
  CHECK(check_certificate(problem, proof, "hand").bound == 0);
  proof.cycles[0].thetas[2][1] = 4;
  CHECK(check_certificate(problem, proof, "hand").bound == 4);
  // In thirds of a unit the same numbers prove a third of the cycle, and the rest stays with the edges: 4/3 + 2 * 0 + min(10, 8, 18)/3.
  proof.scale = 3;
  CHECK(check_certificate(problem, proof, "hand").bound == 4);
}

TEST_CASE("1,000 tampered certificates are rejected or still prove a valid bound") {
  Random random(5);
  const auto problem = offsets::grid_problem(3, 3, 6, offsets::CostKind::noise, 4);
  const auto written = drafting::written_problem(problem);
  const auto answer = offsets::solve(problem);
  REQUIRE(answer);
  const auto proof = drafting::written_certificate(*answer);
  const auto honest = check_certificate(written, proof, "honest");
  REQUIRE(honest.accepted);
  const std::int64_t optimum = optimum_of(written);
  REQUIRE(answer->value == optimum);
  REQUIRE_FALSE(proof.cycles.empty());
  int rejected = 0;
  for (int trial = 0; trial < 1000; ++trial) {
    auto tampered = proof;
    auto& cycle = tampered.cycles[static_cast<std::size_t>(random.below(static_cast<int>(tampered.cycles.size())))];
    const auto k = static_cast<std::size_t>(random.below(static_cast<int>(cycle.walk.size())));
    const auto d = static_cast<std::size_t>(random.below(6));
    switch (random.below(11)) {
      case 0: cycle.thetas[k][d] += 1 + random.below(100'000'000); break;
      case 1: cycle.thetas[k][d] -= 1 + random.below(100'000'000); break;
      case 2: cycle.walk[k].forward = !cycle.walk[k].forward; break;
      case 3: cycle.walk[k].edge = random.below(40); break;
      case 4: cycle.thetas[k].pop_back(); break;
      case 5: cycle.walk.erase(cycle.walk.begin()); cycle.thetas.erase(cycle.thetas.begin()); break;
      case 6: tampered.bound += 1 + random.below(1000); break;
      case 7: tampered.offsets[static_cast<std::size_t>(random.below(9))] = random.below(9) - 1; break;
      case 8: tampered.scale = 1 + random.below(1000); break;
      case 9: tampered.steps.insert(tampered.steps.begin() + random.below(static_cast<int>(tampered.steps.size()) + 1), {static_cast<plan::StepKind>(random.below(4)), random.below(20), random.below(20)}); break;
      default: cycle.thetas[k][d] = INT64_MAX - random.below(3); break;
    }
    const auto review = check_certificate(written, tampered, "tampered");
    if (!review.accepted) ++rejected;
    else CHECK(tampered.bound <= optimum);
    if (review.bound) CHECK(*review.bound <= optimum);
    CHECK_FALSE(review.proves_infeasible);
  }
  CHECK(rejected > 600);
}

TEST_CASE("a claim of infeasibility needs a proof") {
  plan::Certificate proof;
  proof.infeasible = true;
  CHECK_FALSE(check_certificate(wheel(1), proof, "claim").accepted);
  plan::OffsetProblem problem{3, 3, {}, {}, {}, {{0, 1, {0, plan::forbidden_cost, plan::forbidden_cost}}, {1, 2, {0, plan::forbidden_cost, plan::forbidden_cost}},
                                                {2, 0, {plan::forbidden_cost, 0, plan::forbidden_cost}}}};
  CHECK_FALSE(check_certificate(problem, proof, "claim").accepted);
  proof.cycles = {{{{0, true}, {1, true}, {2, true}}, {{0, 0, 0}, {0, 0, 0}, {0, 0, 0}}}};
  CHECK(check_certificate(problem, proof, "claim").accepted);
}

TEST_CASE("an answer must be one: labels in range, fixed labels kept, nothing forbidden, the value right") {
  auto problem = wheel(1);
  problem.fixed = {{0, 1}};
  problem.edges[0].costs[2] = plan::forbidden_cost;
  plan::Certificate proof;
  proof.bound = -1000;
  proof.offsets = {1, 1, 1, 1, 1};
  std::int64_t sum = 0;
  for (const auto& e : problem.edges) sum += e.costs[0];
  proof.value = sum;
  CHECK(check_certificate(problem, proof, "answer").accepted);
  proof.value = sum - 1;
  CHECK_FALSE(check_certificate(problem, proof, "answer").accepted);
  proof.value = sum;
  for (const std::vector<int>& labels : {std::vector<int>{1, 3, 1, 1, 1}, {0, 0, 0, 0, 0}, {1, 1, 1, 1, 4}, {1, 1, 1, 1, -1}, {1, 1, 1, 1}}) {
    proof.offsets = labels;
    CHECK_FALSE(check_certificate(problem, proof, "answer").accepted);
  }
}

}  // namespace
}  // namespace entrain::review
