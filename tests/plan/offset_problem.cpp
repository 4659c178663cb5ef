#include "plan/offset_problem.hpp"

#include <catch2/catch.hpp>
#include <rapidcheck.h>

#include "plan/certificate.hpp"

namespace entrain::plan {
namespace {

std::string complaints_of(const std::string& text) {
  const auto problem = read_offset_problem(text, "p.offsets");
  REQUIRE_FALSE(problem);
  std::string all;
  for (const Diagnostic& d : problem.error()) all += to_text(d) + "\n";
  return all;
}

TEST_CASE("an offset problem is read as the format says") {
  const auto problem = read_offset_problem("entrain-offsets 1\n# a comment\ncycle 3\nnodes 2\norders 2 1\nnode 0  0 15\nfixed 1 2\n\nedge 0 1  1 2 - 4 5 -6\r\nedge 1 0 0 0 0 0 0 0\n", "p.offsets");
  REQUIRE(problem);
  CHECK(problem->cycle == 3);
  CHECK(problem->nodes == 2);
  CHECK(problem->orders == std::vector<int>{2, 1});
  CHECK(problem->node_costs == std::vector<std::vector<std::int64_t>>{{0, 15}, {}});
  CHECK(problem->fixed == std::vector<FixedOffset>{{1, 2}});
  REQUIRE(problem->edges.size() == 2);
  CHECK(problem->edges[0] == OffsetEdge{0, 1, {1, 2, forbidden_cost, 4, 5, -6}});
}

TEST_CASE("what is wrong with an offset problem is told line by line, all at once") {
  CHECK(complaints_of("entrain-offsets 1\ncycle 3\nnodes 2\nedge 0 1 1 2\nedge 0 5 1 2 3\nedge 1 1 1 2 3\nedge 0 1 1 x 3\nedge 0 1 1 2 9999999999999\nfixed 0 3\nwedge\n") ==
        "error: p.offsets line 4: 2 entries of the costs; expected 3. Make the row as long as the header lines say\n"
        "error: p.offsets line 5: second node \"5\"; expected a whole number from 0 to 1. Correct the line\n"
        "error: p.offsets line 6: an edge from node 1 to itself; expected two different nodes. Remove it: its cost does not depend on the labels\n"
        "error: p.offsets line 7: \"x\" as entry 2 of the costs; expected a whole number of at most 1000000000000 either way, or - to forbid. Correct the entry\n"
        "error: p.offsets line 8: \"9999999999999\" as entry 3 of the costs; expected a whole number of at most 1000000000000 either way, or - to forbid. Correct the entry\n"
        "error: p.offsets line 9: label \"3\"; expected a whole number from 0 to 2. Correct the line\n"
        "error: p.offsets line 10: \"wedge\"; expected cycle, nodes, orders, node, fixed or edge. Correct the first word of the line\n");
}

TEST_CASE("other texts, missing sizes and sizes out of range are refused") {
  CHECK(complaints_of("") == "error: p.offsets line 0: another first line; expected entrain-offsets 1. Name an offset problem\n");
  CHECK(complaints_of("PK\x03\x04\n").find("another first line") != std::string::npos);
  CHECK(complaints_of("entrain-offsets 2\n").find("another first line") != std::string::npos);
  CHECK(complaints_of("entrain-offsets 1\nedge 0 1 1\n").find("before the sizes are known") != std::string::npos);
  CHECK(complaints_of("entrain-offsets 1\nnodes 1\n").find("no cycle") != std::string::npos);
  CHECK(complaints_of("entrain-offsets 1\ncycle 99999999999999999999\nnodes 1\n").find("from 1 to 4096") != std::string::npos);
  CHECK(complaints_of("entrain-offsets 1\ncycle 5\nnodes 2000000000\n").find("from 1 to 4000000") != std::string::npos);
}

TEST_CASE("a hundred complaints are enough") {
  std::string text = "entrain-offsets 1\ncycle 1\nnodes 2\n";
  for (int i = 0; i < 1000; ++i) text += "edge 0 0 1\n";
  const auto problem = read_offset_problem(text, "p");
  REQUIRE_FALSE(problem);
  REQUIRE(problem.error().size() == 101);
  CHECK(problem.error().back().found == "900 more of this kind");
}

TEST_CASE("an offset problem written and read is the same problem") {
  rc::check([] {
    OffsetProblem problem;
    problem.cycle = *rc::gen::inRange(1, 9);
    problem.nodes = *rc::gen::inRange(2, 6);
    const bool with_orders = *rc::gen::arbitrary<bool>();
    for (int v = 0; with_orders && v < problem.nodes; ++v) {
      problem.orders.push_back(*rc::gen::inRange(1, 3));
      problem.node_costs.push_back(*rc::gen::container<std::vector<std::int64_t>>(static_cast<std::size_t>(problem.orders.back()), rc::gen::inRange<std::int64_t>(-9, 9)));
    }
    if (*rc::gen::arbitrary<bool>()) problem.fixed = {{1, problem.cycle - 1}, {0, 0}};
    const int edges = *rc::gen::inRange(0, 6);
    for (int e = 0; e < edges; ++e) {
      OffsetEdge edge{*rc::gen::inRange(0, problem.nodes), 0, {}};
      edge.to = (edge.from + 1) % problem.nodes;
      const int size = orders_of(problem, edge.from) * orders_of(problem, edge.to) * problem.cycle;
      edge.costs = *rc::gen::container<std::vector<std::int64_t>>(
          static_cast<std::size_t>(size), rc::gen::oneOf(rc::gen::just(forbidden_cost), rc::gen::inRange<std::int64_t>(-largest_offset_cost, largest_offset_cost + 1)));
      problem.edges.push_back(std::move(edge));
    }
    const auto again = read_offset_problem(write_offset_problem(problem), "again");
    RC_ASSERT(again.has_value());
    RC_ASSERT(*again == problem);
  });
}

TEST_CASE("fixed labels are edges from the first one") {
  OffsetProblem problem;
  problem.cycle = 4;
  problem.nodes = 3;
  problem.fixed = {{2, 3}, {0, 1}};
  CHECK(fixed_label_edges(problem) == std::vector<OffsetEdge>{{2, 0, {forbidden_cost, forbidden_cost, 0, forbidden_cost}}});
}

TEST_CASE("a certificate written and read is the same certificate") {
  Certificate proof;
  proof.scale = 16;
  proof.bound = -7;
  proof.value = 9;
  proof.offsets = {0, 3};
  proof.orders = {0, 1};
  proof.steps = {{StepKind::merge, 3, 9}, {StepKind::end, 7, 0}, {StepKind::chain, 8, 0}, {StepKind::same, 5, 0}};
  proof.alphas = {{12, true, {0, 4}}, {12, false, {-1}}};
  proof.cycles = {{{{3, true}, {10, false}}, {{1, -2, 3}, {4, 5, 6}}}, {{{0, true}, {1, true}, {2, true}}, {{0}, {1}, {2}}}};
  const auto again = read_certificate(write_certificate(proof), "again");
  REQUIRE(again);
  CHECK(*again == proof);
  Certificate empty;
  empty.infeasible = true;
  CHECK(*read_certificate(write_certificate(empty), "again") == empty);
}

TEST_CASE("a certificate that is no certificate is refused, with every reason") {
  const auto complaints = [](const std::string& text) {
    const auto proof = read_certificate(text, "c");
    REQUIRE_FALSE(proof);
    std::string all;
    for (const Diagnostic& d : proof.error()) all += to_text(d) + "\n";
    return all;
  };
  CHECK(complaints("rubbish").find("another first line") != std::string::npos);
  CHECK(complaints("entrain-certificate 1\n").find("0 claims") != std::string::npos);
  CHECK(complaints("entrain-certificate 1\nbound 1\ninfeasible\n").find("2 claims") != std::string::npos);
  CHECK(complaints("entrain-certificate 1\nbound 1\ncycle 1+ 2\n").find("an edge with + or - behind it") != std::string::npos);
  CHECK(complaints("entrain-certificate 1\nbound 1\ncycle 1+ 2-\ntheta 1 2\n").find("1 thetas for a cycle of 2 edges") != std::string::npos);
  CHECK(complaints("entrain-certificate 1\nbound 1\nalpha 1 up 2\n").find("from or to") != std::string::npos);
  CHECK(complaints("entrain-certificate 1\nbound 1\nscale 0\nhello\n").find("hello") != std::string::npos);
}

}  // namespace
}  // namespace entrain::plan
