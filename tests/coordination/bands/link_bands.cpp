// Bands link by link: the chain against a grid, whole answers against the outside solver, laws.
#include <algorithm>
#include <catch2/catch.hpp>
#include <filesystem>

#include "coordination/bands/link_bands.hpp"
#include "coordination/bands/link_chain.hpp"
#include "coordination/bands/solve.hpp"
#include "judge.hpp"
#include "milp.hpp"

using namespace entrain::bands;

namespace {

LinkBandInput random_links(std::mt19937& random, int stations, bool orders) {
  judge::Kind kind;
  kind.stations = stations;
  kind.cells_per_s = 10;
  kind.orders = orders;
  LinkBandInput input;
  input.corridor = judge::random_corridor(random, kind);
  for (TwoWayStation& station : input.corridor.stations)
    for (StationOption& option : station.options)
      for (auto* windows : {&option.forward, &option.backward})
        windows->front().duration_s = std::max(windows->front().duration_s, 0.5 * input.corridor.cycle_s);
  std::uniform_int_distribution<int> weight(0, 5);
  for (int i = 0; i + 1 < stations; ++i)
    input.forward_weights.push_back(weight(random)), input.backward_weights.push_back(weight(random));
  return input;
}

}  // namespace

TEST_CASE("half widths along a chain equal a search over a grid", "[bands]") {
  std::mt19937 random(71);
  const auto pick = [&](int from, int to) { return std::uniform_int_distribution<int>(from, to)(random); };
  for (int round = 0; round < 300; ++round) {
    std::vector<LinkOffer> offers;
    std::vector<LinkWeights> weights;
    for (int i = 0; i < 4; ++i) {
      const int g = pick(2, 8), h = pick(2, 8), total = pick(1, (g + h));
      offers.push_back({static_cast<double>(std::max(0, total - h)), static_cast<double>(std::min(g, total)),
                        static_cast<double>(total)});
      if (i > 0) weights.push_back({static_cast<double>(pick(0, 4)), static_cast<double>(pick(0, 4))});
    }
    // Whole numbers everywhere: an optimum lies on whole numbers.
    double best = -1;
    const auto value = [&](const std::vector<double>& a) {
      double sum = 0;
      for (std::size_t i = 0; i + 1 < a.size(); ++i)
        sum += 2 * weights[i].forward * std::min(a[i], a[i + 1]) +
               2 * weights[i].backward * std::min(offers[i].total - a[i], offers[i + 1].total - a[i + 1]);
      return sum;
    };
    std::vector<double> a(4);
    for (a[0] = offers[0].low; a[0] <= offers[0].high; ++a[0])
      for (a[1] = offers[1].low; a[1] <= offers[1].high; ++a[1])
        for (a[2] = offers[2].low; a[2] <= offers[2].high; ++a[2])
          for (a[3] = offers[3].low; a[3] <= offers[3].high; ++a[3]) best = std::max(best, value(a));
    std::vector<double> chosen;
    CHECK(best_half_widths(offers, weights, &chosen) == Approx(best).margin(1e-9));
    CHECK(value(chosen) == Approx(best).margin(1e-9));
    for (std::size_t i = 0; i < 4; ++i)
      CHECK((chosen[i] >= offers[i].low - 1e-12 && chosen[i] <= offers[i].high + 1e-12));
  }
}

TEST_CASE("link bands against the outside solver", "[bands]") {
  if (!milp::is_available()) return;
  std::string folder = (std::filesystem::temp_directory_path() / "entrain-links-XXXXXX").string();
  REQUIRE(::mkdtemp(folder.data()));
  std::mt19937 random(72);
  int equal = 0, rounds = 0;
  for (int round = 0; round < 14; ++round) {
    const LinkBandInput input = random_links(random, 3 + round % 3, round % 2 == 1);
    const auto answer = solve_link_bands(input);
    REQUIRE(answer);
    const double outside = milp::solve(milp::program(input), folder).value_or(0);
    INFO(judge::text(input.corridor));
    CHECK(answer->value_s <= outside + 1e-5);
    equal += answer->value_s >= outside - 1e-5 ? 1 : 0;
    ++rounds;
  }
  std::filesystem::remove_all(folder);
  CHECK(equal == rounds);
}

TEST_CASE("link bands are at least the one band through all, and whole seconds cost little", "[bands]") {
  std::mt19937 random(73);
  for (int round = 0; round < 40; ++round) {
    LinkBandInput input = random_links(random, 2 + round % 6, true);
    std::fill(input.forward_weights.begin(), input.forward_weights.end(), 1.0);
    std::fill(input.backward_weights.begin(), input.backward_weights.end(), 1.0);
    const auto links = solve_link_bands(input), whole = solve_link_bands_whole_seconds(input);
    const auto through = solve_two_way(input.corridor);
    REQUIRE(links);
    REQUIRE(whole);
    REQUIRE(through);
    const auto count = static_cast<double>(input.forward_weights.size());
    if (through->corridors[0].all_directions)
      CHECK(links->value_s >=
            count * (through->corridors[0].directions[0].width_s + through->corridors[0].directions[1].width_s) - 1e-6);
    if (whole->has_lines) CHECK(whole->value_s <= links->value_s + 1e-5);
    if (links->has_lines) CHECK(whole->value_s >= links->value_s - 4 * count);
    double sum = 0;
    for (std::size_t i = 0; i < links->forward_s.size(); ++i) sum += links->forward_s[i] + links->backward_s[i];
    CHECK(sum == Approx(links->value_s).margin(1e-6));
    for (const double offset : whole->offsets_s) CHECK(offset == std::floor(offset));
    const auto again = evaluate_link_bands(input, links->options, links->offsets_s);
    REQUIRE(again);
    CHECK(again->value_s == links->value_s);
  }
}

TEST_CASE("link band inputs that make no sense are refused", "[bands]") {
  std::mt19937 random(74);
  LinkBandInput input = random_links(random, 3, false);
  input.forward_weights.pop_back();
  CHECK_FALSE(solve_link_bands(input));
  input = random_links(random, 3, false);
  input.backward_weights[0] = -1;
  CHECK_FALSE(solve_link_bands_whole_seconds(input));
  CHECK_FALSE(solve_link_bands({}));
  CHECK_FALSE(evaluate_link_bands(random_links(random, 3, false), {0}, {0, 0, 0}));
}
