#include <algorithm>
#include <catch2/catch.hpp>
#include <functional>
#include <map>
#include <set>

#include "lamp_table.hpp"
#include "sample_designs.hpp"
#include "sample_standard.hpp"
#include "sample_streets.hpp"

using namespace entrain;
using namespace entrain::timing;
using demand::TurnTreatment;

namespace {

SignalDesign designed(const network::Signal& signal, const demand::SignalDemand& demand, DesignRequest request = {}) {
  if (!request.phase_2_label) request.phase_2_label = "EB";
  const auto design = design_signal(signal, {demand}, sample::standard(), request);
  if (!design) FAIL(sample::text_of(design.error()));
  return design->value;
}

const Group& group(const SignalDesign& design, const std::string& id) {
  for (const Group& g : design.groups)
    if (g.id == id) return g;
  FAIL("no group " + id);
  return design.groups.front();
}

std::string served(const Group& g) {
  std::set<std::string> words;
  for (const Served& s : g.serves) words.insert(s.movement + (s.right_of_way == RightOfWay::permissive ? "*" : ""));
  std::string text;
  for (const std::string& word : words) text += (text.empty() ? "" : " ") + word;
  return text;
}

std::string ids(const SignalDesign& design) {
  std::string text;
  for (const Group& g : design.groups) text += (text.empty() ? "" : " ") + g.id;
  return text;
}

bool in_conflict(const SignalDesign& design, const std::string& a, const std::string& b) {
  return std::any_of(design.conflicts.begin(), design.conflicts.end(), [&](const Conflict& c) {
    const std::string &x = design.groups[c.a].id, &y = design.groups[c.b].id;
    return (x == a && y == b) || (x == b && y == a);
  });
}

std::vector<Allocation> greens(const SignalDesign& design, const demand::SignalDemand& demand, int cycle_s) {
  AllocationRequest request;
  request.cycle = Tenths::from_seconds(cycle_s);
  request.flows_vph = lane_group_flows(design, demand);
  const auto plans = allocate(design, request);
  if (!plans) FAIL(sample::text_of(plans.error()));
  return *plans;
}

void check_sound(const SignalDesign& design, const demand::SignalDemand& demand, int cycle_s) {
  for (const Allocation& plan : greens(design, demand, cycle_s)) {
    INFO(plan.order);
    CHECK(judge::ring_faults(design, cycle_s, plan) == std::vector<std::string>{});
  }
}

std::string errors_of(const network::Signal& signal, const demand::SignalDemand& demand, const DesignRequest& request = {}) {
  const auto design = design_signal(signal, {demand}, sample::standard(), request);
  return design ? "" : sample::text_of(design.error());
}

bool has(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

const network::Movement& movement(const network::Signal& signal, const std::string& id) {
  return *std::find_if(signal.movements.begin(), signal.movements.end(), [&](const auto& m) { return m.id == id; });
}

}  // namespace

TEST_CASE("paths: what crosses, merges or passes at four legs", "[timing]") {
  const network::Signal signal = sample::four_legs();
  const auto conflict = [&](const char* a, const char* b) { return paths_conflict(signal, movement(signal, a), movement(signal, b)); };
  CHECK(conflict("EB-T", "NB-T"));
  CHECK(conflict("EB-T", "WB-L"));
  CHECK(conflict("EB-L", "WB-T"));
  CHECK(conflict("EB-L", "WB-R"));  // merge
  CHECK(conflict("EB-R", "SB-T"));  // merge
  CHECK(conflict("EB-L", "SB-L"));
  CHECK_FALSE(conflict("EB-T", "WB-T"));
  CHECK_FALSE(conflict("EB-L", "WB-L"));
  CHECK_FALSE(conflict("EB-T", "EB-L"));
  CHECK_FALSE(conflict("EB-R", "NB-L"));
  CHECK_FALSE(conflict("EB-R", "WB-R"));
  for (const auto& a : signal.movements)
    for (const auto& b : signal.movements) CHECK(paths_conflict(signal, a, b) == paths_conflict(signal, b, a));
}

TEST_CASE("paths mirror with the side of traffic", "[timing]") {
  for (const auto& signal : {sample::four_legs(), sample::three_legs(), sample::streets({{"N", 10}, {"NE", 60}, {"SE", 140}, {"S", 190}, {"W", 260}})}) {
    const network::Signal other = sample::mirrored(signal);
    for (std::size_t a = 0; a < signal.movements.size(); ++a)
      for (std::size_t b = 0; b < signal.movements.size(); ++b)
        CHECK(paths_conflict(signal, signal.movements[a], signal.movements[b]) == paths_conflict(other, other.movements[a], other.movements[b]));
  }
}

TEST_CASE("four legs, protected turns: eight groups in two rings", "[timing]") {
  const auto signal = sample::four_legs();
  const auto demand = sample::demand_of(signal, true, TurnTreatment::with_protection);
  const SignalDesign design = designed(signal, demand);
  CHECK(ids(design) == "1 2 3 4 5 6 7 8 P2 P4 P6 P8");
  CHECK(served(group(design, "2")) == "EB-R* EB-T");
  CHECK(served(group(design, "6")) == "WB-R* WB-T");
  CHECK(served(group(design, "4")) == "SB-R* SB-T");
  CHECK(served(group(design, "8")) == "NB-R* NB-T");
  CHECK(served(group(design, "1")) == "WB-L");
  CHECK(served(group(design, "5")) == "EB-L");
  CHECK(served(group(design, "3")) == "NB-L");
  CHECK(served(group(design, "7")) == "SB-L");
  for (const auto& [a, b] : std::map<std::string, std::string>{{"1", "2"}, {"5", "6"}, {"3", "4"}, {"7", "8"}}) CHECK(in_conflict(design, a, b));
  for (const auto& [a, b] : std::map<std::string, std::string>{{"2", "6"}, {"4", "8"}, {"1", "5"}, {"3", "7"}, {"1", "6"}, {"2", "5"}}) CHECK_FALSE(in_conflict(design, a, b));
  CHECK(group(design, "P2").crossings == std::vector<std::string>{"X-S"});
  CHECK(group(design, "P4").crossings == std::vector<std::string>{"X-W"});
  CHECK(group(design, "P6").crossings == std::vector<std::string>{"X-N"});
  CHECK(group(design, "P8").crossings == std::vector<std::string>{"X-E"});
  CHECK(in_conflict(design, "P6", "5"));
  REQUIRE(design.ring_barrier.has_value());
  CHECK(greens(design, demand, 100).size() == 16);
  check_sound(design, demand, 100);
}

TEST_CASE("four legs, permissive turns: throughs and people only", "[timing]") {
  const auto signal = sample::four_legs();
  const auto demand = sample::demand_of(signal, true, TurnTreatment::permissive);
  const SignalDesign design = designed(signal, demand);
  CHECK(ids(design) == "2 4 6 8 P2 P4 P6 P8");
  CHECK(served(group(design, "2")) == "EB-L* EB-R* EB-T");
  CHECK_FALSE(in_conflict(design, "2", "6"));
  CHECK(group(design, "2").yellow == group(design, "6").yellow);
  CHECK(design.lane_groups[0].permissive_only);
  check_sound(design, demand, 80);
}

TEST_CASE("protected and permissive: the turn is in both groups, the throughs end together", "[timing]") {
  const auto signal = sample::four_legs();
  const auto demand = sample::demand_of(signal, true, TurnTreatment::protected_permissive);
  const SignalDesign design = designed(signal, demand);
  CHECK(ids(design) == "1 2 3 4 5 6 7 8 P2 P4 P6 P8");
  CHECK(served(group(design, "2")) == "EB-L* EB-R* EB-T");
  CHECK(served(group(design, "5")) == "EB-L");
  CHECK(group(design, "5").lane_groups.size() == 1);
  const auto plans = greens(design, demand, 100);
  for (const Allocation& plan : plans) CHECK(plan.order == "lead-lead|lead-lead");
  check_sound(design, demand, 100);
}

TEST_CASE("turns without a treatment: the standard's default, listed as assumed", "[timing]") {
  const auto has_line = [](const SignalDesign& design, const std::string& part) {
    return std::any_of(design.assumptions.begin(), design.assumptions.end(), [&](const std::string& line) { return has(line, part); });
  };
  auto signal = sample::four_legs();
  CHECK(ids(designed(signal, sample::demand_of(signal, true))) == "2 4 6 8 P2 P4 P6 P8");
  auto two_lanes = sample::demand_of(signal, true);
  for (auto& lanes : two_lanes.lane_groups)
    if (lanes.id == "W-turn") lanes.lanes = 2;
  const SignalDesign with_five = designed(signal, two_lanes);
  CHECK(ids(with_five) == "2 4 5 6 8 P2 P4 P6 P8");
  CHECK(has_line(with_five, "EB-L: protected turn assumed because of 2 turn lanes"));
  auto three_oncoming = sample::demand_of(signal, true);
  for (auto& lanes : three_oncoming.lane_groups)
    if (lanes.id == "E-rest") lanes.lanes = 3;
  CHECK(ids(designed(signal, three_oncoming)) == "2 4 5 6 8 P2 P4 P6 P8");
  const auto fast = sample::four_legs(TrafficSide::right, 45);
  const SignalDesign fast_design = designed(fast, sample::demand_of(fast, true));
  CHECK(ids(fast_design) == "1 2 3 4 5 6 7 8 P2 P4 P6 P8");
  CHECK(has_line(fast_design, "a speed of 45 mph"));
}

TEST_CASE("a protected turn in a shared lane is served with its approach alone", "[timing]") {
  const auto signal = sample::four_legs();
  const auto demand = sample::demand_of(signal, false, TurnTreatment::with_protection);
  const SignalDesign design = designed(signal, demand);
  CHECK_FALSE(design.ring_barrier.has_value());
  CHECK(ids(design) == "EB NB SB WB PEB PNB PSB PWB");
  CHECK(in_conflict(design, "EB", "WB"));
  CHECK(in_conflict(design, "NB", "SB"));
  check_sound(design, demand, 120);
}

TEST_CASE("three legs: 2 and 6 on the through street, 4 on the stem", "[timing]") {
  const auto signal = sample::three_legs();
  auto demand = sample::demand_of(signal, true, TurnTreatment::with_protection);
  for (auto& flow : demand.movements)
    if (flow.movement == "NB-L") flow.treatment = TurnTreatment::not_stated;
  const SignalDesign design = designed(signal, demand);
  CHECK(ids(design) == "1 2 4 6 P2 P4");
  CHECK(served(group(design, "4")) == "NB-L* NB-R*");
  CHECK(served(group(design, "1")) == "WB-L");
  CHECK(group(design, "P2").crossings == std::vector<std::string>{"X-S"});
  CHECK(group(design, "P4").crossings == std::vector<std::string>{"X-E", "X-W"});
  check_sound(design, demand, 80);
}

TEST_CASE("a stem's turn that is stated protected keeps people off its whole green", "[timing]") {
  const auto signal = sample::three_legs();
  const auto demand = sample::demand_of(signal, true, TurnTreatment::with_protection);
  const SignalDesign design = designed(signal, demand);
  CHECK(served(group(design, "4")) == "NB-L NB-R*");
  CHECK(in_conflict(design, "4", "PW"));
  CHECK(group(design, "PW").parent == -1);
  check_sound(design, demand, 120);
}

TEST_CASE("one-way crossing: 2 and 4, one ring", "[timing]") {
  const auto signal = sample::streets({{"N", 0, false, true}, {"E", 90, false, true}, {"S", 180, true, false}, {"W", 270, true, false}});
  const auto demand = sample::demand_of(signal, true);
  const SignalDesign design = designed(signal, demand);
  CHECK(ids(design) == "2 4 P2 P4");
  CHECK(served(group(design, "2")) == "EB-L* EB-T");
  CHECK(served(group(design, "4")) == "NB-R* NB-T");
  REQUIRE(design.ring_barrier.has_value());
  CHECK(design.ring_barrier->rings.size() == 1);
  check_sound(design, demand, 60);
}

TEST_CASE("five legs: groups by approach, no rings", "[timing]") {
  const auto signal = sample::streets({{"N", 0}, {"NE", 45}, {"E", 110}, {"S", 180}, {"W", 270}});
  const auto demand = sample::demand_of(signal, true);
  const SignalDesign design = designed(signal, demand);
  CHECK_FALSE(design.ring_barrier.has_value());
  check_sound(design, demand, 150);
}

TEST_CASE("mirroring an intersection with its side gives the same plan", "[timing]") {
  for (const auto treatment : {TurnTreatment::with_protection, TurnTreatment::permissive, TurnTreatment::protected_permissive})
    for (const auto& signal : {sample::four_legs(), sample::three_legs(), sample::streets({{"N", 10}, {"NE", 60}, {"SE", 140}, {"S", 190}, {"W", 260}})}) {
      const auto other = sample::mirrored(signal);
      const auto demand = sample::demand_of(signal, true, treatment), other_demand = sample::demand_of(other, true, treatment);
      const SignalDesign a = designed(signal, demand), b = designed(other, other_demand);
      REQUIRE(ids(a) == ids(b));
      for (std::size_t g = 0; g < a.groups.size(); ++g) {
        CHECK(served(a.groups[g]) == served(b.groups[g]));
        CHECK(a.groups[g].crossings == b.groups[g].crossings);
        CHECK(a.groups[g].parent == b.groups[g].parent);
        CHECK(a.groups[g].yellow == b.groups[g].yellow);
        CHECK(a.groups[g].red_clearance == b.groups[g].red_clearance);
      }
      CHECK(a.conflicts.size() == b.conflicts.size());
      const auto p = greens(a, demand, 150), q = greens(b, other_demand, 150);
      REQUIRE(p.size() == q.size());
      for (std::size_t i = 0; i < p.size(); ++i)
        for (std::size_t g = 0; g < a.groups.size(); ++g) CHECK(p[i].groups[g].greens == q[i].groups[g].greens);
    }
}

TEST_CASE("conflicts are complete: every pair that may share green is harmless", "[timing]") {
  // Independent statement: walk all pairs of movements of all pairs of groups that do not conflict.
  for (const auto treatment : {TurnTreatment::with_protection, TurnTreatment::permissive, TurnTreatment::protected_permissive})
    for (const auto& signal : {sample::four_legs(), sample::three_legs(), sample::streets({{"N", 0}, {"NE", 45}, {"E", 110}, {"S", 180}, {"W", 270}})}) {
      const SignalDesign design = designed(signal, sample::demand_of(signal, true, treatment));
      for (const Group& a : design.groups)
        for (const Group& b : design.groups) {
          if (&a == &b || in_conflict(design, a.id, b.id)) continue;
          for (const Served& x : a.serves) {
            const auto& from = movement(signal, x.movement);
            for (const Served& y : b.serves) {
              const auto& to = movement(signal, y.movement);
              if (!paths_conflict(signal, from, to)) continue;
              const bool x_yields = x.right_of_way == RightOfWay::permissive && from.turn == network::TurnKind::left;
              const bool y_yields = y.right_of_way == RightOfWay::permissive && to.turn == network::TurnKind::left;
              CHECK((x_yields || y_yields));
            }
            for (const std::string& id : b.crossings) {
              const auto& crossing = *std::find_if(signal.crossings.begin(), signal.crossings.end(), [&](const auto& c) { return c.id == id; });
              if (from.from_leg == crossing.leg) FAIL(x.movement + " starts over " + id);
              if (from.to_leg == crossing.leg) CHECK((x.right_of_way == RightOfWay::permissive && from.turn != network::TurnKind::through));
            }
          }
        }
    }
}

TEST_CASE("exceptions: shorter only with reason and author", "[timing]") {
  const auto signal = sample::four_legs();
  const auto demand = sample::demand_of(signal, true);
  DesignRequest request;
  request.phase_2_label = "EB";
  request.exceptions = {{"2", "", "", "red_clearance_s", "", "", 0.5}};
  CHECK(has(errors_of(signal, demand, request), "group 2, red_clearance_s: 0.5 s without reason and author"));
  request.exceptions[0].reason = "agency policy 7", request.exceptions[0].author = "A. Engineer";
  const SignalDesign design = designed(signal, demand, request);
  CHECK(group(design, "2").basis->override_author == "A. Engineer");
  request.exceptions = {{"2", "", "", "yellow_s", "", "", 5.0}};
  CHECK(group(designed(signal, demand, request), "2").yellow == Tenths{50});
  request.exceptions = {{"9", "", "", "yellow_s", "", "", 5.0}};
  CHECK(has(errors_of(signal, demand, request), "group \"9\""));
  request.exceptions = {{"2", "", "", "yellow_s", "because", "A. Engineer", 2.0}};
  CHECK(has(errors_of(signal, demand, request), "at least the standard's least yellow"));
  request.exceptions = {};
  request.crossing_changes["S"].walk_s = 3;
  CHECK(has(errors_of(signal, demand, request), "crossing X-S: a walk of 3 s"));
}

TEST_CASE("bad intersections are errors", "[timing]") {
  auto signal = sample::four_legs();
  const auto demand = sample::demand_of(signal, true);
  SECTION("no legs") {
    signal.legs.clear();
    CHECK(has(errors_of(signal, demand), "no legs"));
  }
  SECTION("a bearing that is no number") {
    signal.legs[1].bearing_deg = std::nan("");
    CHECK(has(errors_of(signal, demand), "leg E: a bearing"));
  }
  SECTION("a flow that is no number, a lane group without capacity, an unknown movement: all at once") {
    auto bad = demand;
    bad.movements[0].flow_vph = std::nan("");
    bad.lane_groups[0].saturation_flow_vph = 0;
    bad.movements[1].movement = "XB-T";
    const std::string errors = errors_of(signal, bad);
    CHECK(has(errors, "movement " + demand.movements[0].movement + ": flow"));
    CHECK(has(errors, "saturation flow 0 veh/h"));
    CHECK(has(errors, "movement XB-T"));
  }
  SECTION("nothing under control") {
    auto bad = demand;
    for (auto& flow : bad.movements) flow.control = demand::Control::free;
    CHECK(has(errors_of(signal, bad), "no movement under signal control"));
  }
  SECTION("shared lanes in two groups") {
    auto bad = demand;
    for (auto& flow : bad.movements)
      if (flow.movement == "EB-R") flow.group = "9";
    DesignRequest request;
    request.phase_2_label = "EB";
    CHECK(has(errors_of(signal, bad, request), "one group for movements that share lanes"));
  }
}

TEST_CASE("a lower speed limit never shortens red clearance, below the least approach speed either", "[timing]") {
  auto signal = sample::four_legs();
  const auto demand = sample::demand_of(signal, true);
  std::map<std::string, Tenths> before;
  for (const double limit_mps : {24.0, 17.9, 13.4, 11.2, 8.9, 6.7, 4.5}) {
    CAPTURE(limit_mps);
    for (auto& leg : signal.legs) leg.speed_limit_mps = limit_mps;
    for (const Group& g : designed(signal, demand).groups) {
      if (g.kind != GroupKind::vehicle) continue;
      CAPTURE(g.id);
      if (before.count(g.id) != 0) CHECK(g.red_clearance >= before.at(g.id));
      before[g.id] = g.red_clearance;
    }
  }
}
