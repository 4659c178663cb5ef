// Evaluation of a two-signal plan against sums done by hand, and the laws of relative time.
#include "evaluation/evaluate.hpp"

#include <catch2/catch.hpp>
#include <cmath>

using namespace entrain;
using namespace entrain::plan;

namespace {

Group vehicle_group(const std::string& id, const std::string& movement, double start, double duration, double flow) {
  Group group;
  group.id = id;
  group.serves = {{movement, RightOfWay::with_protection, false}};
  group.greens = {{start, duration}};
  group.yellow_s = 4;
  group.red_clearance_s = 1;
  group.flow_vph = flow;
  group.saturation_flow_vph = 1800;
  group.start_up_lost_s = 2;
  group.end_gain_s = 2;
  return group;
}

Signal two_phase(const std::string& id, double offset, double flow) {
  Signal signal;
  signal.id = id;
  signal.cycle_s = 60;
  signal.offset_s = offset;
  signal.reference_group = "2";
  signal.controller.coordinated = {"2"};
  signal.groups = {vehicle_group("2", "EB-T", 0, 30, flow), vehicle_group("4", "NB-T", 35, 20, 200)};
  signal.lane_groups = {{"EB-T", {"EB-T"}, 1, flow, 1800, {}}, {"NB-T", {"NB-T"}, 1, 200, 1800, {}}};
  return signal;
}

Plan two_signals(double offset) {
  Plan plan;
  plan.cycle_s = 60;
  plan.signals = {two_phase("A", 10, 600), two_phase("B", 10 + offset, 600)};
  Link link;
  link.id = "A>B";
  link.from_signal = "A";
  link.to_signal = "B";
  link.to_group = "2";
  link.travel_time_s = 20;
  link.feeds = {{"2", 600}};
  plan.links = {link};
  return plan;
}

}  // namespace

TEST_CASE("an isolated approach has the uniform and overflow delay of the manual") {
  // HCM 2000: v = 600, c = 900, g/C = .5, C = 60: 11.250 + 3.899 (Roess, Prassas, McShane, inputs; recomputed).
  const auto figures = evaluation::evaluate(two_signals(0)).lane_groups.at(0);
  CHECK(figures.lane_group == "EB-T");
  CHECK_FALSE(figures.platooned);
  CHECK(figures.capacity_vph == Approx(900));
  CHECK(figures.uniform_delay_s == Approx(11.25));
  CHECK(figures.overflow_delay_s == Approx(3.899).epsilon(1e-3));
  CHECK(figures.level_of_service == "B");
}

TEST_CASE("only relative offsets matter") {
  for (const double offset : {0.0, 13.0, 47.0}) {
    Plan plan = two_signals(offset);
    const auto before = evaluation::evaluate(plan);
    for (Signal& signal : plan.signals) signal.offset_s = std::fmod(signal.offset_s + 17, 60);
    const auto after = evaluation::evaluate(plan);
    CHECK(after.total.delay_veh_h_per_h == Approx(before.total.delay_veh_h_per_h));
    CHECK(after.total.stops_per_h == Approx(before.total.stops_per_h));
  }
}

TEST_CASE("the offset that meets the platoon is better than the one that stops it") {
  // The platoon's head arrives after the lag 0.8 * 20 = 16 s and is late in the mean: opening then beats closing then.
  const double good = evaluation::evaluate(two_signals(18)).lane_groups.at(2).uniform_delay_s;
  const double bad = evaluation::evaluate(two_signals(48)).lane_groups.at(2).uniform_delay_s;
  CHECK(good < 6);
  CHECK(bad > 15);
  CHECK(evaluation::evaluate(two_signals(18)).lane_groups.at(2).platooned);
}

TEST_CASE("waits, oversaturation and awkward cycles are said") {
  Plan plan = two_signals(0);
  plan.cycle_s = 70;
  for (Signal& signal : plan.signals) signal.cycle_s = 70;
  plan.signals[1].lane_groups[1].flow_vph = 2000;
  Group walk;
  walk.id = "P2";
  walk.kind = GroupKind::pedestrian;
  walk.greens = {{0, 7}};
  plan.signals[0].groups.push_back(walk);
  const auto result = evaluation::evaluate(plan);
  CHECK(result.signals.at(0).longest_pedestrian_wait_s == Approx(63));
  CHECK(result.signals.at(0).mean_pedestrian_delay_s == Approx(63.0 * 63 / 140));
  CHECK(result.signals.at(0).longest_side_street_wait_s == Approx(50));
  CHECK(result.signals.at(1).level_of_service == "F");
  REQUIRE(result.remarks.size() == 2);
  CHECK(result.remarks[0].find("OVERSATURATED") != std::string::npos);
  CHECK(result.remarks[1].find("does not divide the day") != std::string::npos);
}

TEST_CASE("a plan without flows, groups or a usable cycle is evaluated as far as it goes") {
  Plan plan = two_signals(0);
  plan.signals[0].cycle_s = 0;
  plan.signals[1].groups.clear();
  plan.links.push_back(Link{});
  const auto result = evaluation::evaluate(plan);
  CHECK(result.signals.size() == 1);
  CHECK_FALSE(result.remarks.empty());
  CHECK(evaluation::evaluate(Plan{}).lane_groups.empty());
}

TEST_CASE("through the network, a platoon keeps its shape past a signal it meets on green") {
  // Three signals in a row; the middle one is green whenever the platoon of the first comes through it.
  Plan plan = two_signals(18);
  plan.signals.push_back(two_phase("C", 10 + 36, 600));
  Link link = plan.links[0];
  link.id = "B>C";
  link.from_signal = "B";
  link.to_signal = "C";
  plan.links.push_back(link);
  const auto by_link = evaluation::evaluate(plan), coupled = evaluation::evaluate(plan, evaluation::Platoons::through_network);
  // The first link has an even inflow in both models.
  CHECK(coupled.lane_groups.at(2).uniform_delay_s == Approx(by_link.lane_groups.at(2).uniform_delay_s));
  // Behind B the coupled platoon is spread over two links and not formed anew: it can't be sharper.
  CHECK(coupled.lane_groups.at(4).uniform_delay_s != Approx(by_link.lane_groups.at(4).uniform_delay_s).epsilon(1e-4));
  CHECK(coupled.total.delay_veh_h_per_h < 1.5 * by_link.total.delay_veh_h_per_h);
}

TEST_CASE("on a loop of always green signals the rounds end with an even flow") {
  Plan plan = two_signals(0);
  for (Signal& signal : plan.signals) signal.groups[0].greens = {{0, 60}};
  Link back = plan.links[0];
  back.id = "B>A";
  std::swap(back.from_signal, back.to_signal);
  plan.links.push_back(back);
  const auto coupled = evaluation::evaluate(plan, evaluation::Platoons::through_network);
  CHECK(coupled.lane_groups.at(0).uniform_delay_s == Approx(0).margin(1e-9));
  CHECK(coupled.lane_groups.at(2).uniform_delay_s == Approx(0).margin(1e-9));
}
