// The plan format: the worked cut-out of the format's description reads, writes back the same, and every broken key is named.
#include "plan/plan_text.hpp"

#include <algorithm>
#include <catch2/catch.hpp>

using namespace entrain;
using namespace entrain::plan;

namespace {

const std::string sample = R"({ "format": "entrain-plan", "format_version": 1, "program": "entrain 0.1.0",
  "project": "Tessaly Avenue", "period": "am", "cycle_s": 90,
  "schedule": { "days": "Mon-Fri", "from": "06:30", "to": "09:30" },
  "clock": { "reference": "midnight", "time_zone": "UTC" },
  "standard": { "id": "kinematic-us", "values": { "perception_s": 1.0, "walking_speed_mps": 1.067 } },
  "signals": [
    { "id": "T3", "name": "Tessaly Avenue at Kiln Street", "lon": -30.0, "lat": 45.0, "traffic_side": "right",
      "operation": "pretimed", "cycle_s": 90, "offset_s": 34, "reference_group": "2",
      "controller": { "kind": "ring_barrier", "rings": [["2", "4"], ["6", "8"]], "barriers_after": [["2", "6"], ["4", "8"]], "coordinated": ["2", "6"] },
      "legs": [ { "id": "N", "bearing_deg": 1.0 }, { "id": "W", "bearing_deg": 268.0 } ],
      "movements": [ { "id": "EB-L", "from_leg": "W", "to_leg": "N", "turn": "L" } ],
      "lane_groups": [ { "id": "EB-L", "movements": ["EB-L"], "lanes": 2, "flow_vph": 980, "saturation_flow_vph": 3550, "storage_m": null } ],
      "crossings": [ { "id": "X-S", "leg": "S", "length_m": 17.1 } ],
      "groups": [
        { "id": "2", "kind": "vehicle", "phase_number": 2, "serves": [ { "movement": "EB-L", "right_of_way": "permissive" } ],
          "greens": [ { "start_s": 0, "duration_s": 40.5 } ], "yellow_s": 4.0, "red_clearance_s": 1.5, "split_s": 46, "minimum_green_s": 10,
          "flow_vph": 980, "saturation_flow_vph": 3550, "start_up_lost_s": 2.0, "end_gain_s": 2.0, "degree_of_saturation": 0.61,
          "clearance_basis": { "speed_mps": 17.9, "grade": -0.01, "width_m": 24.0, "override": null } },
        { "id": "P2", "kind": "pedestrian", "crossings": ["X-S"], "parent": "2", "service": "every_cycle",
          "greens": [ { "start_s": 0, "duration_s": 7 } ], "clearance_s": 17, "minimum_green_s": 7 } ],
      "conflicts": [ { "groups": ["P2", "4"], "intergreen_s": [3.0, 5.0] } ],
      "running": { "cycle_s": 100, "offset_s": 12, "splits_s": { "2": 50, "4": 50 } } } ],
  "links": [ { "id": "T1>T2", "from_signal": "T1", "to_signal": "T2", "to_group": "2", "length_m": 402.3, "travel_time_s": 31.4, "travel_time_origin": "measured",
               "storage_veh": 50, "feeds": [ { "from_group": "2", "flow_vph": 700 } ] } ],
  "corridors": [ { "id": "tessaly", "name": "Tessaly Avenue", "directions": [
        { "name": "forward", "label": "EB", "weight": 1.0,
          "stops": [ { "signal": "T1", "group": "2", "movement": "EB-T", "distance_m": 0.0, "travel_time_s": 0.0, "queue_clearance_s": 0.0 } ],
          "bandwidth_s": 28.0, "band_start_s": 3.0, "efficiency": 0.311, "attainability": 0.82, "bandwidth_bound_s": 28.0 } ] } ],
  "cost_model": { "name": "platoon-queue", "stop_weight_s": 10, "alpha": 0.35, "beta": 0.8, "step_s": 1, "scale": 1000 },
  "quality": { "objective": "band, then delay", "value": 0, "bound": 0, "gap": 0.0, "certificate": "plan.cert" },
  "assumptions": [ "counts of 2025" ], "cautions": [ "draft" ] })";

std::string replaced(std::string text, const std::string& from, const std::string& to) {
  const auto at = text.find(from);
  REQUIRE(at != std::string::npos);
  return text.replace(at, from.size(), to);
}

std::vector<std::string> problems(const std::string& text) {
  std::vector<std::string> lines;
  const auto plan = read_plan(text, "plan.json");
  if (plan) return lines;
  for (const Diagnostic& d : plan.error()) lines.push_back(to_text(d));
  return lines;
}

}  // namespace

TEST_CASE("the described cut-out reads into its values") {
  const auto plan = read_plan(sample, "plan.json");
  REQUIRE(plan.has_value());
  CHECK(plan->unknown_keys.empty());
  const Signal& signal = plan->signals.at(0);
  CHECK(signal.groups.at(0).greens.at(0).duration_s == 40.5);
  CHECK(signal.groups.at(0).serves.at(0).right_of_way == RightOfWay::permissive);
  CHECK(signal.groups.at(1).kind == GroupKind::pedestrian);
  CHECK(signal.controller.ring_barrier->rings.at(1).at(1) == "8");
  CHECK(signal.conflicts.at(0).intergreen_ba_s == 5.0);
  CHECK(signal.running->splits_s.at("4") == 50);
  CHECK(signal.movements.at(0).turn == Turn::left);
  CHECK_FALSE(signal.lane_groups.at(0).storage_m.has_value());
  CHECK(plan->links.at(0).feeds.at(0).flow_vph == 700);
  CHECK(plan->corridors.at(0).directions.at(0).bandwidth_bound_s == 28.0);
}

TEST_CASE("write then read is the identity, and the bytes repeat") {
  const auto plan = read_plan(sample, "plan.json");
  REQUIRE(plan.has_value());
  const std::string once = write_plan(*plan);
  const auto again = read_plan(once, "plan.json");
  REQUIRE(again.has_value());
  CHECK(write_plan(*again) == once);
  CHECK(again->unknown_keys.empty());
}

TEST_CASE("keys of a later version are named, not lost in silence") {
  const auto plan = read_plan(replaced(sample, "\"lanes\": 2", "\"lanes\": 2, \"camber\": 1"), "plan.json");
  REQUIRE(plan.has_value());
  CHECK(plan->unknown_keys == std::vector<std::string>{"signals[0].lane_groups[0].camber"});
}

TEST_CASE("every broken key is reported at once, with its path") {
  const std::string broken = replaced(replaced(replaced(sample, "\"yellow_s\": 4.0", "\"yellow_s\": \"four\""), "\"turn\": \"L\"", "\"turn\": \"X\""),
                                      "\"offset_s\": 34, ", "");
  const auto lines = problems(broken);
  REQUIRE(lines.size() == 3);
  CHECK(std::count(lines.begin(), lines.end(),
                   "error: plan.json signals[0].groups[0].yellow_s: \"four\"; expected a finite number. Mend this key in the plan file") == 1);
  CHECK(std::count(lines.begin(), lines.end(), "error: plan.json signals[0].movements[0].turn: X; expected one of L, T, R, U. Mend this key in the plan file") == 1);
  CHECK(std::count(lines.begin(), lines.end(), "error: plan.json signals[0].offset_s: nothing; expected this key. Mend this key in the plan file") == 1);
}

TEST_CASE("text that is no plan is refused with the place") {
  CHECK(problems("").size() == 1);
  CHECK(problems("[1, 2").size() == 1);
  CHECK(problems("[]").size() >= 1);
  CHECK(problems("{\"format\": \"entrain-plan\", \"format_version\": 2}").at(0).find("format_version: 2; expected 1") != std::string::npos);
  CHECK(problems(std::string(200000, '[')).size() == 1);
  CHECK(problems(replaced(sample, "\"cycle_s\": 90", "\"cycle_s\": 1e999")).size() == 1);
}
