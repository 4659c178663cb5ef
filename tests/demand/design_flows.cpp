// Counts to design flows: by hand, with every assumption said.
#include <catch2/catch.hpp>

#include "crossroads.hpp"

using namespace entrain;
using namespace entrain::demand;
using namespace entrain::demand::sample;

TEST_CASE("without counts every flow is assumed by the street's class, loudly") {
  const auto result = flows(town(), {});
  REQUIRE(problems_of(result) == "none");
  const SignalDemand& signal = result->value.signals.at(0);
  REQUIRE(signal.movements.size() == 12);
  CHECK(find(signal, "EB-T")->flow_vph == Approx(1000));  // two lanes of a major street at 500
  CHECK(find(signal, "EB-L")->flow_vph == Approx(100));
  CHECK(find(signal, "SB-T")->flow_vph == Approx(200));
  CHECK(find(signal, "SB-R")->flow_vph == Approx(20));
  CHECK(find(signal, "EB-T")->origin == Origin::assumed);
  REQUIRE(signal.lane_groups.size() == 4);
  CHECK(find_lanes(signal, "EB-LTR")->lanes == 2);
  CHECK(find_lanes(signal, "EB-LTR")->flow_vph == Approx(1200));
  CHECK(text_of(result->notes) ==
        "warning: period am: ASSUMED: 12 movements were not counted; 500 veh/h a lane through on major streets, 200 on minor ones, 10 % turning left, 10 % right\n"
        "warning: period am: ASSUMED: the lanes of 4 lane groups are the map's or its defaults\n");
}

TEST_CASE("a counted volume becomes a peak rate by its own or the assumed factor") {
  auto with_factor = row("EB", "T", 920);
  with_factor.peak_hour_factor = 0.8;
  const auto result = flows(town(), {with_factor, row("WB", "T", 460)});
  REQUIRE(problems_of(result) == "none");
  const SignalDemand& signal = result->value.signals.at(0);
  CHECK(find(signal, "EB-T")->flow_vph == Approx(1150));
  CHECK(find(signal, "WB-T")->flow_vph == Approx(500));
  CHECK(find(signal, "EB-T")->origin == Origin::counted);
  CHECK(find(signal, "EB-L")->flow_vph == Approx(115));  // a tenth of what goes through, counted
  CHECK(text_of(result->notes).find("ASSUMED: peak-hour factor 0.92 for 1 counted movements") != std::string::npos);
}

TEST_CASE("lane groups: the rows' own, the map's marked lanes, else shared lanes") {
  network::Signal signal = crossroads();
  signal.legs[1].turn_lanes_in = "left|through|through;right";
  signal.legs[1].lanes_in = 3;
  auto left = row("EB", "L", 90);
  left.lane_group = "EB-bay", left.lanes = 1, left.storage_m = 60, left.saturation_flow_vph = 1700;
  const auto result = flows(town({signal}), {left});
  REQUIRE(problems_of(result) == "none");
  const SignalDemand& demand = result->value.signals.at(0);
  REQUIRE(find_lanes(demand, "WB-L") != nullptr);
  CHECK(find_lanes(demand, "WB-L")->lanes == 1);
  CHECK(find_lanes(demand, "WB-TR")->lanes == 2);
  REQUIRE(find_lanes(demand, "EB-bay") != nullptr);
  CHECK(find_lanes(demand, "EB-bay")->storage_m == 60);
  CHECK(find_lanes(demand, "EB-bay")->saturation_flow_vph == 1700);
  CHECK(find_lanes(demand, "EB-bay")->lanes_origin == Origin::counted);
  CHECK(find_lanes(demand, "EB-TR")->lanes == 2);
  CHECK(find_lanes(demand, "NB-LTR")->lanes == 1);
}

TEST_CASE("an unmarked left lane is never invented") {
  for (const char* marks : {"", "through|through", "left;through|through;right", "none|none"}) {
    network::Signal signal = crossroads();
    signal.legs[3].turn_lanes_in = marks;
    const auto result = flows(town({signal}), {});
    REQUIRE(problems_of(result) == "none");
    CHECK(find_lanes(result->value.signals.at(0), "EB-LTR") != nullptr);
  }
}

TEST_CASE("lanes and control said in one period hold in the other, a ban only in its own") {
  auto am_left = row("EB", "L", 90);
  am_left.period = "am", am_left.lane_group = "EB-L", am_left.lanes = 1, am_left.turn_treatment = "protected";
  auto pm_left = row("EB", "L", 70, 3);
  pm_left.period = "pm";
  auto banned = row("WB", "L", std::nullopt, 4);
  banned.period = "am", banned.control = "prohibited";
  const std::vector<project::MovementRow> rows{am_left, pm_left, banned};
  const auto am = flows(town(), rows, "am"), pm = flows(town(), rows, "pm");
  REQUIRE(problems_of(am) == "none");
  REQUIRE(problems_of(pm) == "none");
  REQUIRE(find_lanes(pm->value.signals[0], "EB-L") != nullptr);
  CHECK(find_lanes(pm->value.signals[0], "EB-L")->lanes == 1);
  CHECK(find(pm->value.signals[0], "EB-L")->treatment == TurnTreatment::with_protection);
  CHECK(find(pm->value.signals[0], "EB-L")->flow_vph == Approx(70 / 0.92));
  CHECK(find(am->value.signals[0], "WB-L") == nullptr);
  CHECK(find(pm->value.signals[0], "WB-L") != nullptr);
}

TEST_CASE("a row of the period goes before one for every period, in either order") {
  auto every = row("EB", "T", 500, 2), own = row("EB", "T", 900, 3);
  own.period = "am";
  for (const auto& rows : {std::vector{every, own}, std::vector{own, every}}) {
    const auto result = flows(town(), rows);
    REQUIRE(problems_of(result) == "none");
    CHECK(find(result->value.signals[0], "EB-T")->flow_vph == Approx(900 / 0.92));
  }
  CHECK(problems_of(flows(town(), {own, own})) == "error: m.csv row 3: EB-T at T1 again; expected each movement once (row 3 speaks of it). Remove one of the rows, or fill the column from\n");
}

TEST_CASE("free and yielding turns are no lane group of the signal") {
  auto right = row("EB", "R", 200);
  right.control = "yield";
  const auto result = flows(town(), {right});
  REQUIRE(problems_of(result) == "none");
  CHECK(find(result->value.signals[0], "EB-R")->control == Control::yield);
  CHECK(find_lanes(result->value.signals[0], "EB-LT") != nullptr);
}

TEST_CASE("two approaches of one name are told apart by where they come from") {
  network::Signal signal = crossroads();
  signal.legs[2].id = "SW", signal.legs[2].neighbour = "T7";
  for (auto& movement : signal.movements)
    if (movement.from_leg == 2) movement.approach = "EB", movement.id = "EB-" + movement.id.substr(3) + ".SW";
  CHECK(problems_of(flows(town({signal}), {row("EB", "T", 500)})) ==
        "error: m.csv row 2: EB-T at T1 fits 2 approaches; expected column from: the neighbour signal or street it comes from. Fill the column from\n");
  auto from_t7 = row("EB", "T", 500), from_street = row("EB", "T", 300, 3);
  from_t7.from = "t7", from_street.from = "Tessaly avenue";
  const auto result = flows(town({signal}), {from_t7, from_street});
  REQUIRE(problems_of(result) == "none");
  CHECK(find(result->value.signals[0], "EB-T.SW")->flow_vph == Approx(500 / 0.92));
  CHECK(find(result->value.signals[0], "EB-T")->flow_vph == Approx(300 / 0.92));
  auto wrong = row("EB", "T", 500);
  wrong.from = "T8";
  CHECK(problems_of(flows(town({signal}), {wrong})) ==
        "error: m.csv row 2: EB-T at T1 from T8; expected one of the approach's neighbours or streets: Kiln Street, T7, Tessaly Avenue. Did you mean T7?\n");
}

TEST_CASE("a slanted street may be counted by its nearest main direction, and it is said") {
  network::Signal signal = crossroads();
  for (auto& movement : signal.movements)
    if (movement.approach == "NB") movement.approach = "NEB", movement.id = "NEB-" + movement.id.substr(3);
  const auto result = flows(town({signal}), {row("NB", "T", 92), row("EB", "T", 500)});
  REQUIRE(problems_of(result) == "none");
  CHECK(find(result->value.signals[0], "NEB-T")->flow_vph == Approx(100));
  CHECK(text_of(result->notes).find("warning: m.csv row 2: ASSUMED: NB at T1 is the roads' NEB, the only approach near that direction that no row names\n") != std::string::npos);
  CHECK_FALSE(flows(town({signal}), {row("NB", "T", 92), row("NEB", "T", 500)}).has_value());  // NEB is named: NB is unknown then
}

TEST_CASE("rows that fit nothing are errors, all of them, but a zero count is only said") {
  network::Signal tee = crossroads();
  tee.movements.erase(tee.movements.begin(), tee.movements.begin() + 3);
  auto elsewhere = row("EB", "T", 1, 5);
  elsewhere.signal = "T11";
  auto banned = row("SB", "L", std::nullopt, 6);
  banned.control = "prohibited";
  CHECK(problems_of(flows(town({tee}), {row("SB", "T", 100, 3), row("SB", "R", 0, 4), elsewhere, banned})) ==
        "error: m.csv row 3: SB-T at T1; expected a movement that the roads allow there: EB-L, EB-R, EB-T, NB-L, NB-R, NB-T, WB-L, WB-R, WB-T. "
        "Correct the row, the map or the turn restriction (approaches are named by direction of travel)\n"
        "error: m.csv row 5: unknown signal T11 (1 row); expected a signal of the network. Did you mean T1?\n");
  const auto zero = flows(town({tee}), {row("SB", "R", 0, 4)});
  REQUIRE(problems_of(zero) == "none");
  CHECK(text_of(zero->notes).rfind("note: m.csv row 4: SB-R at T1: no such movement on the roads and no volume: left out\n", 0) == 0);
}

TEST_CASE("one lane group over two approaches is an error") {
  auto a = row("EB", "T", 100, 2), b = row("WB", "T", 100, 3);
  a.lane_group = b.lane_group = "main";
  CHECK(problems_of(flows(town(), {a, b})) == "error: m.csv row 2: lane group main at T1 holds WB-T and EB-T; expected movements of one approach. Give each approach lane groups of its own\n");
}

TEST_CASE("a signal without roads takes its movements from the rows") {
  network::Signal bare;
  bare.id = "T1";
  auto through = row("EB", "T", 920), right = row("EB", "R", 92, 3), left = row("EB", "L", std::nullopt, 4);
  through.group = "2", through.lane_group = right.lane_group = "EB-TR", through.lanes = 2, through.heavy_vehicle_pct = 10;
  const auto result = flows(town({bare}), {through, right, left});
  REQUIRE(problems_of(result) == "none");
  const SignalDemand& signal = result->value.signals.at(0);
  REQUIRE(signal.movements.size() == 2);
  CHECK(signal.movements[0].group == "2");
  REQUIRE(signal.lane_groups.size() == 1);
  CHECK(signal.lane_groups[0].flow_vph == Approx(1100));
  CHECK(signal.lane_groups[0].lanes == 2);
  CHECK(signal.lane_groups[0].heavy_vehicle_pct == Approx((10 * 1000 + 2 * 100) / 1100.0));
  CHECK(text_of(result->notes).rfind("warning: m.csv row 4: EB-L at T1 has no volume and no road to assume one from: left out\n", 0) == 0);
}
