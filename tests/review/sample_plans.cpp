#include "sample_plans.hpp"

#include <algorithm>
#include <stdexcept>

namespace entrain::review::samples {
namespace {

using plan::RightOfWay;

constexpr auto with = RightOfWay::with_protection, yields = RightOfWay::permissive;

// Yellow and red clearance by hand, level road, 3.048 m/s2, 1 s, 6.096 m:
//   main street 35 mph = 15.6464 m/s: 1 + 15.6464 / 6.096 = 3.567 -> 3.6; (20 + 6.096) / 15.6464 = 1.668 -> 1.7
//   side street 30 mph = 13.4112 m/s: 1 + 2.2 = 3.2;                      (22 + 6.096) / 13.4112 = 2.095 -> 2.1
//   left turns  25 mph = 11.176 m/s:  1 + 1.833 = 2.833 -> 3.0 (least);   (18 + 6.096) / 8.941 = 2.695 -> 2.7
struct Change {
  double yellow_s, red_s, speed_mps, width_m;
  std::optional<double> clearing_mps;
};
const Change main_street{3.6, 1.7, 15.6464, 20, {}}, side_street{3.2, 2.1, 13.4112, 22, {}}, turn_lane{3.0, 2.7, 11.176, 18, 8.941};

plan::Group vehicle(const std::string& id, std::vector<plan::Served> serves, double start_s, double split_s, const Change& change, double minimum_s) {
  plan::Group g;
  g.id = id;
  g.serves = std::move(serves);
  g.yellow_s = change.yellow_s, g.red_clearance_s = change.red_s;
  g.greens = {{start_s, split_s - change.yellow_s - change.red_s}};
  g.split_s = split_s;
  g.minimum_green_s = minimum_s;
  plan::ClearanceBasis basis;
  basis.speed_mps = change.speed_mps, basis.width_m = change.width_m, basis.clearing_speed_mps = change.clearing_mps;
  g.clearance_basis = basis;
  g.start_up_lost_s = 2, g.end_gain_s = 2;
  return g;
}

// 1.0668 m/s: 14 m take 13.1 -> 14 s, 12 m take 11.2 -> 12 s.
plan::Group people(const std::string& id, const std::string& crossing, const std::string& parent, double start_s, double clearance_s) {
  plan::Group g;
  g.id = id, g.kind = plan::GroupKind::pedestrian;
  g.crossings = {crossing}, g.parent = parent;
  g.greens = {{start_s, 7}};
  g.clearance_s = clearance_s, g.minimum_green_s = 7;
  return g;
}

std::vector<plan::Movement> four_leg_movements() {
  using plan::Turn;
  return {{"EB-L", "W", "N", Turn::left}, {"EB-T", "W", "E", Turn::through}, {"EB-R", "W", "S", Turn::right}, {"WB-L", "E", "S", Turn::left}, {"WB-T", "E", "W", Turn::through}, {"WB-R", "E", "N", Turn::right},
          {"NB-L", "S", "W", Turn::left}, {"NB-T", "S", "N", Turn::through}, {"NB-R", "S", "E", Turn::right}, {"SB-L", "N", "E", Turn::left}, {"SB-T", "N", "S", Turn::through}, {"SB-R", "N", "W", Turn::right}};
}

void put_flow(plan::Signal& s, const std::string& group, const std::string& lane_group, std::vector<std::string> movements, int lanes, double flow_vph, double saturation_vph, double effective_s) {
  s.lane_groups.push_back({lane_group, std::move(movements), lanes, flow_vph, saturation_vph, {}});
  for (plan::Group& g : s.groups)
    if (g.id == group) {
      g.flow_vph = flow_vph, g.saturation_flow_vph = saturation_vph;
      g.degree_of_saturation = flow_vph / (saturation_vph * effective_s / s.cycle_s);
    }
}

double after(const plan::Signal& s, const std::string& id) {
  for (const plan::Group& g : s.groups)
    if (g.id == id) return g.kind == plan::GroupKind::pedestrian ? 3.0 : g.yellow_s + g.red_clearance_s;
  throw std::logic_error("no group " + id);
}

// "1 2" for each conflicting pair, worked out on paper.
void put_conflicts(plan::Signal& s, const std::vector<std::pair<std::string, std::vector<std::string>>>& pairs) {
  for (const auto& [a, others] : pairs)
    for (const std::string& b : others) s.conflicts.push_back({a, b, after(s, a), after(s, b)});
}

plan::Signal frame(const std::string& id, double cycle_s, double offset_s) {
  plan::Signal s;
  s.id = id, s.name = "Signal " + id;
  s.cycle_s = cycle_s, s.offset_s = offset_s, s.reference_group = "2";
  s.legs = {{"N", 0, "Side"}, {"E", 90, "Main"}, {"S", 180, "Side"}, {"W", 270, "Main"}};
  s.movements = four_leg_movements();
  return s;
}

// Ring 1: 2 from 0 (split 35), 3 from 35 (15), 4 from 50 (25), 1 from 75 (15). Ring 2: 6 from 2 (33), 7 from 35 (15), 8 from 50 (25),
// 5 from 75 (17). Barriers at 35 and 75. Of the eight vehicle groups, all of {1, 2, 5, 6} conflict with all of {3, 4, 7, 8}, and 1-2, 3-4, 5-6, 7-8.
// A crossing conflicts with everything into and out of its leg but the right turn that yields to it.
plan::Signal four_leg(const std::string& id, double offset_s) {
  plan::Signal s = frame(id, 90, offset_s);
  s.crossings = {{"X-N", "N", 14}, {"X-E", "E", 12}, {"X-S", "S", 14}, {"X-W", "W", 12}};
  s.groups = {vehicle("1", {{"WB-L", with}}, 75, 15, turn_lane, 5),
              vehicle("2", {{"EB-T", with}, {"EB-R", yields}}, 0, 35, main_street, 10),
              vehicle("3", {{"NB-L", with}}, 35, 15, turn_lane, 5),
              vehicle("4", {{"SB-T", with}, {"SB-R", yields}}, 50, 25, side_street, 7),
              vehicle("5", {{"EB-L", with}}, 75, 17, turn_lane, 5),
              vehicle("6", {{"WB-T", with}, {"WB-R", yields}}, 2, 33, main_street, 10),
              vehicle("7", {{"SB-L", with}}, 35, 15, turn_lane, 5),
              vehicle("8", {{"NB-T", with}, {"NB-R", yields}}, 50, 25, side_street, 7),
              people("P2", "X-S", "2", 0, 14),
              people("P4", "X-W", "4", 50, 12),
              people("P6", "X-N", "6", 2, 14),
              people("P8", "X-E", "8", 50, 12)};
  for (int n = 1; n <= 8; ++n) s.groups[static_cast<std::size_t>(n - 1)].phase_number = n;
  s.controller = {"ring_barrier", plan::RingBarrier{{{"1", "2", "3", "4"}, {"5", "6", "7", "8"}}, {{"2", "6"}, {"4", "8"}}}, {"2", "6"}};
  put_flow(s, "1", "WB-L", {"WB-L"}, 1, 120, 1700, 9.3);
  put_flow(s, "2", "EB-TR", {"EB-T", "EB-R"}, 2, 900, 3600, 29.7);
  put_flow(s, "3", "NB-L", {"NB-L"}, 1, 100, 1700, 9.3);
  put_flow(s, "4", "SB-TR", {"SB-T", "SB-R"}, 1, 300, 1800, 19.7);
  put_flow(s, "5", "EB-L", {"EB-L"}, 1, 130, 1700, 11.3);
  put_flow(s, "6", "WB-TR", {"WB-T", "WB-R"}, 2, 850, 3600, 27.7);
  put_flow(s, "7", "SB-L", {"SB-L"}, 1, 90, 1700, 9.3);
  put_flow(s, "8", "NB-TR", {"NB-T", "NB-R"}, 1, 280, 1800, 19.7);
  put_conflicts(s, {{"1", {"2", "3", "4", "7", "8", "P2", "P8"}},
                    {"2", {"3", "4", "7", "8", "P4", "P8"}},
                    {"3", {"4", "5", "6", "P2", "P4"}},
                    {"4", {"5", "6", "P2", "P6"}},
                    {"5", {"6", "7", "8", "P4", "P6"}},
                    {"6", {"7", "8", "P4", "P8"}},
                    {"7", {"8", "P6", "P8"}},
                    {"8", {"P2", "P6"}}});
  return s;
}

// Two phases of 25 and 20 s in 45 s; all turns yield, opposite greens begin and end together. 12 m of crossing: 7 + 12 <= 19.7 s of green.
plan::Signal two_phase(const std::string& id, double offset_s) {
  plan::Signal s = frame(id, 45, offset_s);
  s.crossings = {{"X-N", "N", 12}, {"X-S", "S", 12}};
  s.groups = {vehicle("2", {{"EB-L", yields}, {"EB-T", with}, {"EB-R", yields}}, 0, 25, main_street, 10), vehicle("4", {{"SB-L", yields}, {"SB-T", with}, {"SB-R", yields}}, 25, 20, side_street, 7),
              vehicle("6", {{"WB-L", yields}, {"WB-T", with}, {"WB-R", yields}}, 0, 25, main_street, 10), vehicle("8", {{"NB-L", yields}, {"NB-T", with}, {"NB-R", yields}}, 25, 20, side_street, 7),
              people("P2", "X-S", "2", 0, 12), people("P6", "X-N", "6", 0, 12)};
  s.controller = {"ring_barrier", plan::RingBarrier{{{"2", "4"}, {"6", "8"}}, {{"2", "6"}, {"4", "8"}}}, {"2", "6"}};
  put_flow(s, "2", "EB", {"EB-L", "EB-T", "EB-R"}, 2, 800, 3300, 19.7);
  put_flow(s, "4", "SB", {"SB-L", "SB-T", "SB-R"}, 1, 200, 1600, 14.7);
  put_flow(s, "6", "WB", {"WB-L", "WB-T", "WB-R"}, 2, 780, 3300, 19.7);
  put_flow(s, "8", "NB", {"NB-L", "NB-T", "NB-R"}, 1, 210, 1600, 14.7);
  put_conflicts(s, {{"2", {"4", "8"}}, {"4", {"6", "P2", "P6"}}, {"6", {"8"}}, {"8", {"P2", "P6"}}});
  return s;
}

plan::Plan frame_of_plan() {
  plan::Plan p;
  p.program = "by hand", p.project = "Ostrelby by hand", p.period = "am";
  p.cycle_s = 90;
  p.schedule = plan::Schedule{"Mon-Fri", "06:30", "09:30"};
  p.standard.id = "kinematic-us";
  p.standard.values = {{"perception_s", 1}, {"deceleration_mps2", 3.048}, {"yellow_min_s", 3}, {"yellow_max_s", 6}, {"vehicle_length_m", 6.096}, {"red_clearance_reduction_s", 0}, {"red_clearance_min_s", 1}, {"red_clearance_max_s", 6},
                       {"walking_speed_mps", 1.0668}, {"walking_speed_total_mps", 0.9144}, {"curb_setback_m", 1.8288}, {"walk_min_s", 7}, {"walk_limit_s", 4}, {"pedestrian_buffer_s", 3}, {"minimum_green_left_s", 5},
                       {"minimum_green_minor_s", 7}, {"minimum_green_major_s", 10}, {"vehicle_spacing_m", 7.62}, {"yellow_s_rounding_step", 0.1}, {"yellow_s_rounding_up", 0}, {"red_clearance_s_rounding_step", 0.1},
                       {"red_clearance_s_rounding_up", 1}, {"pedestrian_clearance_s_rounding_step", 1}, {"pedestrian_clearance_s_rounding_up", 1}, {"allow_opposed_turn", 1}, {"allow_turn_over_crossing", 1}};
  p.cautions = {"A draft for engineering review; local standards and law come first; a licensed engineer signs; verify in the field."};
  return p;
}

plan::Direction direction(const std::string& name, const std::string& label, std::vector<plan::Stop> stops, double width_s, double start_s, double cycle_s, double least_green_s) {
  return {name, label, 1, std::move(stops), width_s, start_s, width_s / cycle_s, width_s / least_green_s, width_s};
}

void may_move(plan::Plan& p, const std::string& id, double early_s, double late_s) {
  signal(p, id).freedom_early_s = early_s;
  signal(p, id).freedom_late_s = late_s;
}

}  // namespace

plan::Signal& signal(plan::Plan& plan, const std::string& id) {
  const auto found = std::find_if(plan.signals.begin(), plan.signals.end(), [&](const plan::Signal& s) { return s.id == id; });
  if (found == plan.signals.end()) throw std::logic_error("no signal " + id);
  return *found;
}

plan::Group& group(plan::Plan& plan, const std::string& signal_id, const std::string& id) {
  auto& groups = signal(plan, signal_id).groups;
  const auto found = std::find_if(groups.begin(), groups.end(), [&](const plan::Group& g) { return g.id == id; });
  if (found == groups.end()) throw std::logic_error("no group " + id);
  return *found;
}

plan::Conflict& conflict(plan::Signal& signal, const std::string& a, const std::string& b) {
  const auto found = std::find_if(signal.conflicts.begin(), signal.conflicts.end(), [&](const plan::Conflict& c) { return c.a == a && c.b == b; });
  if (found == signal.conflicts.end()) throw std::logic_error("no conflict " + a + " " + b);
  return *found;
}

// Tessaly Avenue, 45 s from stop line to stop line, offsets 0, 45, 3.
//   eastbound (group 2, 29.7 s): seen from T1 the greens are [0, 29.7), [45 - 45 = 0, 29.7), [3 - 90 = 3, 32.7): band [3, 29.7) = 26.7 s
//   westbound (group 6, 27.7 s from local 2): seen from T3 [3 + 2 = 5, 32.7), [45 + 2 - 45 = 2, 29.7), [0 + 2 - 90 = 2, 29.7): band [5, 29.7) = 24.7 s
//   T1 could move 3 s later, T3 6 s earlier, before a band narrows.
// Kiln Street, 45 s: southbound (group 4, 19.7 s from local 50): K1 [50, 69.7), T2 [45 + 50 - 45 = 50, 69.7): all of it; northbound alike from
// T2's [45 + 50 = 5, 24.7). Neither K1 nor T2 can move.
plan::Plan two_corridors() {
  plan::Plan p = frame_of_plan();
  p.signals = {four_leg("T1", 0), four_leg("T2", 45), four_leg("T3", 3), four_leg("K1", 0)};
  signal(p, "K1").controller.coordinated = {"2", "4", "6", "8"};
  signal(p, "T2").controller.coordinated = {"2", "4", "6", "8"};
  p.links = {{"T1>T2:2", "T1", "T2", "2", 600, 45, "measured", {}, 70.0, {}, 50, {{"2", 800}, {"4", 50}}}, {"T2>T1:6", "T2", "T1", "6", 600, 45, "speed_limit", {}, 70.0, {}, 0, {{"6", 800}}}};
  p.corridors = {{"tessaly", "Tessaly Avenue",
                  {direction("forward", "EB", {{"T1", "2", "EB-T", 0, 0, 0}, {"T2", "2", "EB-T", 600, 45, 0}, {"T3", "2", "EB-T", 600, 45, 0}}, 26.7, 3, 90, 29.7),
                   direction("backward", "WB", {{"T3", "6", "WB-T", 0, 0, 0}, {"T2", "6", "WB-T", 600, 45, 0}, {"T1", "6", "WB-T", 600, 45, 0}}, 24.7, 5, 90, 27.7)}},
                 {"kiln", "Kiln Street",
                  {direction("forward", "SB", {{"K1", "4", "SB-T", 0, 0, 0}, {"T2", "4", "SB-T", 500, 45, 0}}, 19.7, 50, 90, 19.7), direction("backward", "NB", {{"T2", "8", "NB-T", 0, 0, 0}, {"K1", "8", "NB-T", 500, 45, 0}}, 19.7, 5, 90, 19.7)}}};
  may_move(p, "T1", 0, 3), may_move(p, "T2", 0, 0), may_move(p, "T3", 6, 0), may_move(p, "K1", 0, 0);
  return p;
}

// 20 s between T1 (offset 0) and H1 (offset 20), H1's greens come twice: eastbound [0, 29.7) against [0, 19.7) and [45, 64.7): 19.7 s from 0;
// westbound from H1's [20, 39.7) and [65, 84.7) against T1's [2 - 20 = 72, 99.7): [72, 84.7) = 12.7 s.
plan::Plan half_cycle() {
  plan::Plan p = frame_of_plan();
  p.signals = {four_leg("T1", 0), two_phase("H1", 20)};
  p.corridors = {{"tessaly", "Tessaly Avenue",
                  {direction("forward", "EB", {{"T1", "2", "EB-T", 0, 0, 0}, {"H1", "2", "EB-T", 300, 20, 0}}, 19.7, 0, 90, 19.7),
                   direction("backward", "WB", {{"H1", "6", "WB-T", 0, 0, 0}, {"T1", "6", "WB-T", 300, 20, 0}}, 12.7, 72, 90, 19.7)}}};
  may_move(p, "T1", 10, 0), may_move(p, "H1", 0, 10);
  return p;
}

// 2 (both throughs) from 0 for 30 s, 5 (the left turn) from 30 for 15, 2 again from 45 for 25, 4 (the side street) from 70 for 20. Walk with each
// green of 2: 7 + 12 <= 19.7 s. Its split differs from green to green, so the plan states none for 2.
plan::Plan double_service() {
  plan::Plan p = frame_of_plan();
  plan::Signal s = frame("D1", 90, 7);
  using plan::Turn;
  s.legs = {{"E", 90, "Main"}, {"S", 180, "Side"}, {"W", 270, "Main"}};
  s.movements = {{"EB-T", "W", "E", Turn::through}, {"EB-R", "W", "S", Turn::right}, {"WB-L", "E", "S", Turn::left}, {"WB-T", "E", "W", Turn::through}, {"NB-L", "S", "W", Turn::left}, {"NB-R", "S", "E", Turn::right}};
  s.crossings = {{"X-S", "S", 12}};
  s.groups = {vehicle("2", {{"EB-T", with}, {"EB-R", yields}, {"WB-T", with}}, 0, 30, main_street, 10), vehicle("5", {{"WB-L", with}}, 30, 15, turn_lane, 5),
              vehicle("4", {{"NB-L", with}, {"NB-R", with}}, 70, 20, side_street, 7), people("P2", "X-S", "2", 0, 12)};
  s.groups[0].greens.push_back({45, 25 - 5.3});
  s.groups[0].split_s.reset();
  s.groups[3].greens.push_back({45, 7});
  s.controller = {"ring_barrier", plan::RingBarrier{{{"2", "5", "2", "4"}}, {}}, {"2"}};
  put_flow(s, "2", "M", {"EB-T", "EB-R", "WB-T"}, 2, 800, 3600, 24.7 + 19.7);
  put_flow(s, "5", "L", {"WB-L"}, 1, 140, 1700, 9.3);
  put_flow(s, "4", "S", {"NB-L", "NB-R"}, 1, 150, 1700, 14.7);
  put_conflicts(s, {{"2", {"5", "4"}}, {"5", {"4", "P2"}}, {"4", {"P2"}}});
  p.signals = {std::move(s)};
  return p;
}

plan::Plan without_geometry() {
  plan::Plan p = two_corridors();
  for (plan::Signal& s : p.signals) {
    s.legs.clear(), s.movements.clear(), s.crossings.clear(), s.lane_groups.clear();
    s.conflicts_given = true;
    for (plan::Group& g : s.groups) g.serves.clear(), g.crossings.clear();
  }
  for (plan::Corridor& c : p.corridors)
    for (plan::Direction& d : c.directions)
      for (plan::Stop& stop : d.stops) stop.movement.clear();
  return p;
}

// Like four_leg, but WB-L also yields on group 6's circular green and EB-L on group 2's. Both throughs end at 35 s, so nobody is trapped.
plan::Plan protected_permissive() {
  plan::Plan p = frame_of_plan();
  p.signals = {four_leg("T1", 0)};
  group(p, "T1", "6").serves.push_back({"WB-L", yields});
  group(p, "T1", "2").serves.push_back({"EB-L", yields});
  return p;
}

plan::Plan mirrored(plan::Plan plan) {
  for (plan::Signal& s : plan.signals) {
    s.traffic_side = s.traffic_side == TrafficSide::right ? TrafficSide::left : TrafficSide::right;
    for (plan::Leg& leg : s.legs) leg.bearing_deg = leg.bearing_deg == 0 ? 0 : 360 - leg.bearing_deg;
    for (plan::Movement& m : s.movements) m.turn = m.turn == plan::Turn::left ? plan::Turn::right : m.turn == plan::Turn::right ? plan::Turn::left : m.turn;
  }
  return plan;
}

}  // namespace entrain::review::samples
