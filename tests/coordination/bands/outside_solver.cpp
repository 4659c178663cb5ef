// The engine against a mixed-integer solver that knows nothing of it. Skipped where cbc is not installed.
#include <algorithm>
#include <catch2/catch.hpp>
#include <filesystem>

#include "coordination/bands/solve.hpp"
#include "judge.hpp"
#include "milp.hpp"

using namespace entrain::bands;

namespace {

struct Folder {
  std::filesystem::path path;
  Folder() {
    std::string name = (std::filesystem::temp_directory_path() / "entrain-bands-XXXXXX").string();
    path = ::mkdtemp(name.data());
  }
  ~Folder() { std::filesystem::remove_all(path); }
};

}  // namespace

TEST_CASE("one corridor: the share equals the outside solver's", "[bands]") {
  if (!milp::is_available()) return;
  const Folder folder;
  std::mt19937 random(31);
  const std::pair<double, double> weights[] = {{1, 1}, {2, 1}, {1, 3}};
  for (int round = 0; round < 15; ++round) {
    judge::Kind kind;
    kind.stations = 3 + round % 3;
    kind.cells_per_s = 10;
    kind.orders = true;
    kind.half_periods = round % 3 == 0;
    kind.clearances = round % 2 == 0;
    kind.fixed = round % 5 == 0;
    std::tie(kind.forward_weight, kind.backward_weight) = weights[round % 3];
    const TwoWayInput input = judge::random_corridor(random, kind);
    const auto answer = solve_two_way(input);
    REQUIRE(answer);
    INFO(judge::text(input));
    const double share = milp::solve(milp::program(to_problem(input), {1}), folder.path.string()).value_or(0);
    CHECK(answer->corridors[0].share_s == Approx(share).margin(2e-6));
  }
}

TEST_CASE("corridors in rings: the least ratio equals the outside solver's", "[bands]") {
  if (!milp::is_available()) return;
  const Folder folder;
  std::mt19937 random(32);
  for (int round = 0, checked = 0; round < 60 && checked < 20; ++round) {
    const judge::Shape shape = round % 2 ? judge::Shape::triangle : judge::Shape::two_shared;
    const Problem problem = judge::random_joint(random, shape, round % 3 == 0, round % 5 == 0 ? 2 : 0);
    const auto answer = solve_joint(problem);
    REQUIRE(answer);
    std::vector<double> own;
    for (const CorridorAnswer& corridor : answer->corridors) own.push_back(corridor.own_best_share_s);
    if (*std::min_element(own.begin(), own.end()) <= 0) continue;
    ++checked;
    INFO("round " << round);
    const auto ratio = milp::solve(milp::program(problem, own), folder.path.string());
    REQUIRE(ratio);
    CHECK(answer->least_ratio == Approx(std::min(1.0, *ratio)).margin(2e-6));
  }
}
