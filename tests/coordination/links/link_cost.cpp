// Cost of a link: every entry equals a long second-by-second simulation, and the laws of the circle hold.
#include "coordination/links/link_cost.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <random>

using namespace entrain;
using namespace entrain::links;

namespace {

LinkInput random_link(std::mt19937& random, int cycle) {
  const auto draw = [&](double low, double high) { return low + (high - low) * std::generate_canonical<double, 32>(random); };
  LinkInput link;
  const traffic::Stream main{{{0, draw(15, 0.6 * cycle)}}, 2, 2, draw(300, 900), 1800};
  const traffic::Stream side{{{0.7 * cycle, draw(8, 0.2 * cycle)}}, 2, 2, 150, 1700};
  link.feeds = {{main, main.flow_vph * 0.9, {}}, {side, 90, {}}};
  link.uniform_flow_vph = draw(0, 60);
  link.spread = {draw(5, 70), {}, 0.35, 0.8, 1};
  link.downstream = {{{draw(0, cycle), draw(25, 0.6 * cycle)}}, 2, 2, 0, 3600};
  link.storage_veh = draw(2, 30);
  return link;
}

// Plays 60 cycles of the queue a second at a time and takes the figures of the last.
double played_cost(const LinkInput& link, int cycle, int d, const CostModel& model) {
  const traffic::Profile a = traffic::link_arrivals(link.feeds, link.uniform_flow_vph, link.spread, cycle);
  const traffic::Profile c = traffic::capacity_of(link.downstream, cycle, 1);
  double queue = 0, delay = 0, stops = 0, longest = 0;
  for (int t = 0; t < 60 * cycle; ++t) {
    if (t % cycle == 0) delay = stops = longest = 0;
    const double in = a.vehicles[static_cast<std::size_t>((t + d) % cycle)], out = c.vehicles[static_cast<std::size_t>(t % cycle)];
    // Hundredths of a second inside the step stand for the even flow.
    for (int part = 0; part < 200; ++part) {
      const double before = queue;
      queue = std::max(0.0, queue + (in - out) / 200);
      delay += (before + queue) / 400;
      if (before > 0) stops += in / 200;
      else if (in > out) stops += (in - out) / 200;
    }
    longest = std::max(longest, queue);
  }
  const double excess = std::max(0.0, longest - *link.storage_veh);
  return model.scale * (delay + model.stop_weight_s * stops + model.spillback_weight_s * excess) / cycle;
}

}  // namespace

TEST_CASE("every entry agrees with a played queue") {
  std::mt19937 random(7);
  const CostModel model{10, 5, 1000};
  for (int round = 0; round < 6; ++round) {
    const int cycle = 40 + 10 * round;
    const LinkInput link = random_link(random, cycle);
    const auto table = cost_table(link, cycle, model);
    REQUIRE(table.size() == static_cast<std::size_t>(cycle));
    for (int d = 0; d < cycle; d += 7) {
      CAPTURE(round, cycle, d);
      CHECK(static_cast<double>(table[static_cast<std::size_t>(d)]) == Approx(played_cost(link, cycle, d, model)).epsilon(0.01).margin(30));
    }
  }
}

TEST_CASE("moving the downstream green by a second moves the table by a place") {
  std::mt19937 random(11);
  LinkInput link = random_link(random, 80);
  const auto before = cost_table(link, 80, {});
  link.downstream.greens[0].start_s += 1;
  const auto after = cost_table(link, 80, {});
  for (std::size_t d = 0; d < 80; ++d) CHECK(std::llabs(after[d] - before[(d + 1) % 80]) <= 1);
}

TEST_CASE("always green costs nothing, never green costs the whole cycle") {
  std::mt19937 random(5);
  LinkInput link = random_link(random, 60);
  link.downstream.greens = {{0, 60}};
  for (const auto cost : cost_table(link, 60, {})) CHECK(cost == 0);
  link.downstream.greens.clear();
  CHECK(is_oversaturated(link, 60));
  for (const auto cost : cost_table(link, 60, {0, 0, 1000})) CHECK(cost > 1000);
}
