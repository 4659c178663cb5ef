// Each fault alone in a plan that is otherwise sound: the review must name its rule.
#include <catch2/catch.hpp>
#include <algorithm>
#include <cmath>
#include <functional>
#include <limits>
#include <set>

#include "review/review.hpp"
#include "sample_plans.hpp"

namespace entrain::review {
namespace {

using plan::Plan;
using samples::conflict;
using samples::group;
using samples::signal;

struct Fault {
  const char* name;
  Plan (*sound)();
  std::function<void(Plan&)> seed;
  const char* rule;
  Severity severity = Severity::violation;
};

constexpr double nothing = std::numeric_limits<double>::quiet_NaN();

plan::Movement& movement(Plan& p, const std::string& s, const std::string& id) {
  for (plan::Movement& m : signal(p, s).movements)
    if (m.id == id) return m;
  throw std::logic_error("no movement " + id);
}

plan::Direction& east(Plan& p) { return p.corridors[0].directions[0]; }

// Phase 2 leads and phase 6 lags: 6 runs on to 40 s while 2 ends at 35, with 1 moved so that 6 keeps its clearance.
void end_unequally(Plan& p) {
  group(p, "T1", "2").greens[0].duration_s -= 2;
  group(p, "T1", "2").split_s = 33;
}

const std::vector<Fault>& safety_faults() {
  static const std::vector<Fault> list = {
      // conflicts, intergreens, lamps
      {"a green runs a tenth into the intergreen", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").greens[0].duration_s += 0.1; }, "intergreen-violated"},
      {"a green runs a tenth into the clearance of the next", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").greens[0].duration_s += 0.1; }, "conflicting-lamps"},
      {"a green over the end of the cycle is too long", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").greens[0].duration_s += 0.1; }, "intergreen-violated"},
      {"two conflicting greens start together", samples::two_corridors, [](Plan& p) { group(p, "T1", "3").greens[0].start_s = 0; }, "intergreen-violated"},
      {"a listed intergreen is a tenth longer than what the greens leave", samples::two_corridors, [](Plan& p) { conflict(signal(p, "T1"), "2", "3").intergreen_ab_s += 0.1; }, "intergreen-violated"},
      {"a listed intergreen is a tenth short", samples::two_corridors, [](Plan& p) { conflict(signal(p, "T1"), "2", "3").intergreen_ab_s -= 0.1; }, "intergreen-too-short"},
      {"the other listed intergreen is a tenth short", samples::two_corridors, [](Plan& p) { conflict(signal(p, "T1"), "2", "3").intergreen_ba_s -= 0.1; }, "intergreen-too-short"},
      {"the pedestrian buffer is short in the list", samples::two_corridors, [](Plan& p) { conflict(signal(p, "T1"), "3", "P2").intergreen_ba_s = 2.9; }, "intergreen-too-short"},
      {"a conflict is missing in the list", samples::two_corridors, [](Plan& p) { std::erase_if(signal(p, "T2").conflicts, [](const auto& c) { return c.a == "2" && c.b == "4"; }); }, "conflict-not-listed"},
      {"a conflict with people is missing in the list", samples::two_corridors, [](Plan& p) { std::erase_if(signal(p, "T2").conflicts, [](const auto& c) { return c.a == "8" && c.b == "P6"; }); }, "conflict-not-listed"},
      {"a conflict stands twice in the list", samples::two_corridors, [](Plan& p) { signal(p, "T1").conflicts.push_back({"4", "2", 9, 9}); }, "conflict-listed-twice"},
      {"a conflict names one group twice", samples::two_corridors, [](Plan& p) { signal(p, "T1").conflicts[0].b = signal(p, "T1").conflicts[0].a; }, "conflict-with-itself"},
      {"an intergreen is no number", samples::two_corridors, [](Plan& p) { signal(p, "T1").conflicts[0].intergreen_ab_s = nothing; }, "number-out-of-range"},
      {"a green overlaps without geometry", samples::without_geometry, [](Plan& p) { group(p, "T1", "4").greens[0].duration_s += 0.1; }, "conflicting-lamps"},
      {"a protected turn is called permissive against a side street", samples::two_corridors,
       [](Plan& p) { group(p, "T1", "3").serves.push_back({"SB-R", plan::RightOfWay::permissive, false}); }, "conflict-not-listed"},
      {"a permissive through movement", samples::two_corridors,
       [](Plan& p) {
         for (const char* id : {"4", "8"}) group(p, "T1", id).serves[0].right_of_way = plan::RightOfWay::permissive;
         std::erase_if(signal(p, "T1").conflicts, [](const auto& c) { return c.a == "2" && c.b == "4"; });
       },
       "conflict-not-listed"},
      {"the standard does not allow the yield", samples::protected_permissive, [](Plan& p) { p.standard.values["allow_opposed_turn"] = 0; }, "conflict-not-listed"},
      {"the standard does not allow turning over a crossing", samples::two_corridors, [](Plan& p) { p.standard.values["allow_turn_over_crossing"] = 0; }, "conflict-not-listed"},
      {"a turn over people is protected", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").serves[1].right_of_way = plan::RightOfWay::with_protection; }, "conflict-not-listed"},
      {"a group serves a movement of the cross street", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").serves.push_back({"NB-T", plan::RightOfWay::with_protection, false}); }, "conflict-not-listed"},
      {"a crossing is moved to the other leg", samples::two_corridors, [](Plan& p) { group(p, "T1", "P2").crossings = {"X-W"}; }, "conflict-not-listed"},
      {"a left turn is called a right turn", samples::two_corridors, [](Plan& p) { movement(p, "T1", "WB-L").turn = plan::Turn::right; }, "turn-contradicts-legs"},
      {"a through movement bends back", samples::two_corridors, [](Plan& p) { movement(p, "T1", "EB-T").to_leg = "W"; }, "turn-contradicts-legs"},
      {"two legs lie on each other", samples::two_corridors, [](Plan& p) { signal(p, "T1").legs[1].bearing_deg = 0; }, "legs-coincide"},
      {"a half-cycle green overlaps", samples::half_cycle, [](Plan& p) { group(p, "H1", "4").greens[0].duration_s += 0.1; }, "intergreen-violated"},
      {"the second green of a group overlaps", samples::double_service, [](Plan& p) { group(p, "D1", "2").greens[1].duration_s += 0.1; }, "conflicting-lamps"},
      {"the second green of a group starts too early", samples::double_service, [](Plan& p) { group(p, "D1", "2").greens[1].start_s -= 1; }, "intergreen-violated"},
      {"a second walk begins too late for its clearance", samples::double_service, [](Plan& p) { group(p, "D1", "P2").greens[1].start_s = 54; }, "conflicting-lamps"},
      {"two greens of one group run into each other", samples::double_service, [](Plan& p) { group(p, "D1", "2").greens[1].start_s = 28; }, "greens-overlap"},
      // the opposed-turn trap
      {"the yielding turn's green ends before its opposing through", samples::protected_permissive, end_unequally, "opposed-turn-trap"},
      {"the yielding turn's green ends a tenth before its opposing through", samples::protected_permissive, [](Plan& p) { group(p, "T1", "2").greens[0].duration_s -= 0.1; }, "opposed-turn-trap"},
      {"a half-cycle phase ends unequally", samples::half_cycle, [](Plan& p) { group(p, "H1", "8").greens[0].duration_s -= 0.1; }, "opposed-turn-trap"},
      {"a lagging turn opposite a yielding turn", samples::protected_permissive,
       [](Plan& p) {  // 5 after 6 instead of before: 2 runs beside it until 35 while 6 ended
         group(p, "T1", "6").greens = {{75, 27.7}};
         group(p, "T1", "5").greens = {{18, 11.3}};
       },
       "opposed-turn-trap"},
      // clearances
      {"yellow a tenth short", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").yellow_s = 3.5; }, "yellow-too-short"},
      {"yellow short for the grade", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").clearance_basis->grade = -0.03; }, "yellow-too-short"},
      {"yellow below the least", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").yellow_s = 2.9; }, "yellow-outside-limits"},
      {"yellow above the longest", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").yellow_s = 6.1; }, "yellow-outside-limits"},
      {"red clearance a tenth short", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").red_clearance_s = 2.6; }, "red-clearance-too-short"},
      {"red clearance short for a wider street", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").clearance_basis->width_m = 19; }, "red-clearance-too-short"},
      {"no red clearance and no basis", samples::without_geometry, [](Plan& p) { group(p, "T1", "1").red_clearance_s = 0, group(p, "T1", "1").clearance_basis.reset(); }, "red-clearance-too-short"},
      {"the longest yellow cuts off what red clearance must give", samples::two_corridors,
       [](Plan& p) { group(p, "T1", "2").clearance_basis->speed_mps = 33, group(p, "T1", "2").yellow_s = 6, group(p, "T1", "2").red_clearance_s = 1.0; }, "red-clearance-too-short"},
      {"an override without an author", samples::two_corridors,
       [](Plan& p) { group(p, "T1", "2").clearance_basis->override_by = plan::Override{"yellow_s", "observed speeds", " "}; }, "override-without-author"},
      {"a short yellow with an override that names something else", samples::two_corridors,
       [](Plan& p) { group(p, "T1", "2").clearance_basis->override_by = plan::Override{"red_clearance_s", "observed", "J. Merrow"}, group(p, "T1", "2").yellow_s = 3.5; }, "yellow-too-short"},
      {"a speed of nothing", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").clearance_basis->speed_mps = 0; }, "clearance-basis-absurd"},
      {"a grade like a wall", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").clearance_basis->grade = -0.4; }, "clearance-basis-absurd"},
      {"yellow is no number", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").yellow_s = nothing; }, "number-out-of-range"},
      {"yellow between tenths", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").yellow_s = 3.65; }, "duration-not-in-tenths"},
      {"the standard brakes harder than anything", samples::two_corridors, [](Plan& p) { p.standard.values["deceleration_mps2"] = 9; }, "standard-value-absurd"},
      {"the standard lets people run", samples::two_corridors, [](Plan& p) { p.standard.values["walking_speed_mps"] = 4; }, "standard-value-absurd"},
      {"the standard's least yellow is 1 s", samples::two_corridors, [](Plan& p) { p.standard.values["yellow_min_s"] = 1; }, "standard-value-absurd"},
      // people
      {"walk a second short", samples::two_corridors, [](Plan& p) { group(p, "T1", "P2").greens[0].duration_s = 6; }, "walk-below-standard"},
      {"walk below the group's own least", samples::two_corridors, [](Plan& p) { group(p, "T1", "P2").minimum_green_s = 8; }, "walk-below-minimum"},
      {"walk between seconds", samples::two_corridors, [](Plan& p) { group(p, "T1", "P2").greens[0].duration_s = 7.5; }, "walk-not-whole"},
      {"pedestrian clearance a second short", samples::two_corridors, [](Plan& p) { group(p, "T1", "P2").clearance_s = 13; }, "pedestrian-clearance-too-short"},
      {"pedestrian clearance between seconds", samples::two_corridors, [](Plan& p) { group(p, "T1", "P2").clearance_s = 14.5; }, "pedestrian-clearance-not-whole"},
      {"a crossing is longer than its clearance", samples::two_corridors, [](Plan& p) { signal(p, "T1").crossings[2].length_m = 15.2; }, "pedestrian-clearance-too-short"},
      {"walk outside its parent's green", samples::two_corridors, [](Plan& p) { group(p, "T1", "P2").greens[0].start_s = 88; }, "pedestrian-outside-parent"},
      {"clearance outlasts its parent's green", samples::two_corridors, [](Plan& p) { group(p, "T1", "P4").greens[0].start_s = 51; }, "pedestrian-outside-parent"},
      {"people run with people", samples::two_corridors, [](Plan& p) { group(p, "T1", "P2").parent = "P4"; }, "parent-not-a-vehicle-group"},
      {"a crossing without length", samples::two_corridors, [](Plan& p) { signal(p, "T1").crossings[0].length_m = 0; }, "number-out-of-range"},
  };
  return list;
}

const std::vector<Fault>& timing_faults() {
  static const std::vector<Fault> list = {
      {"green below its minimum", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").minimum_green_s = 10; }, "minimum-green"},
      {"split below its minimum", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").minimum_green_s = 10; }, "split-below-minimum"},
      {"minimum green between seconds", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").minimum_green_s = 5.5; }, "minimum-green-not-whole"},
      {"a group without green", samples::two_corridors, [](Plan& p) { group(p, "T1", "7").greens.clear(); }, "group-never-green"},
      {"a green starts at the end of the cycle", samples::two_corridors, [](Plan& p) { group(p, "T1", "4").greens[0].start_s = 90; }, "green-outside-cycle"},
      {"a green starts before the cycle", samples::two_corridors, [](Plan& p) { group(p, "T1", "4").greens[0].start_s = -1; }, "green-outside-cycle"},
      {"a green is longer than the cycle", samples::two_corridors, [](Plan& p) { group(p, "T1", "4").greens[0].duration_s = 91; }, "green-outside-cycle"},
      {"a green between tenths", samples::two_corridors, [](Plan& p) { group(p, "T1", "4").greens[0].duration_s = 19.68; }, "green-not-in-tenths"},
      {"a green's start is no number", samples::two_corridors, [](Plan& p) { group(p, "T1", "4").greens[0].start_s = nothing; }, "number-out-of-range"},
      {"a green and its clearance fill more than the cycle", samples::two_corridors, [](Plan& p) { group(p, "T1", "4").greens[0].duration_s = 88; }, "clearance-beyond-cycle"},
      {"a split is not green and clearance", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").split_s = 36; }, "split-not-sum"},
      {"a split between seconds", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").split_s = 35.5; }, "split-not-whole"},
      {"splits add up to a second less than the cycle", samples::two_corridors, [](Plan& p) { group(p, "T1", "4").split_s = 24, group(p, "T1", "4").greens[0].duration_s -= 1; }, "ring-not-closed"},
      {"a phase starts a second late", samples::two_corridors, [](Plan& p) { group(p, "T1", "3").greens[0].start_s = 36; }, "ring-sequence"},
      {"two phases of a ring in the wrong order", samples::two_corridors, [](Plan& p) { std::swap(signal(p, "T1").controller.ring_barrier->rings[0][2], signal(p, "T1").controller.ring_barrier->rings[0][3]); }, "ring-sequence"},
      {"a ring lists a group more often than it is green", samples::double_service, [](Plan& p) { signal(p, "D1").controller.ring_barrier->rings[0].push_back("4"); }, "ring-sequence"},
      {"rings miss each other at a barrier", samples::two_corridors, [](Plan& p) { signal(p, "T1").controller.ring_barrier->barriers_after[0] = {"1", "6"}; }, "barrier-not-met"},
      {"a barrier names two phases of a ring", samples::two_corridors, [](Plan& p) { signal(p, "T1").controller.ring_barrier->barriers_after[0] = {"1", "2", "6"}; }, "controller-malformed"},
      {"a ring controller without rings", samples::two_corridors, [](Plan& p) { signal(p, "T1").controller.ring_barrier.reset(); }, "controller-malformed"},
      {"a phase of a ring starts between seconds", samples::two_corridors, [](Plan& p) { for (const char* id : {"4", "8"}) group(p, "T1", id).greens[0].start_s += 0.5; }, "phase-start-not-whole"},
      {"two groups with one phase number", samples::two_corridors, [](Plan& p) { group(p, "T1", "8").phase_number = 4; }, "duplicate-id"},
      {"an offset beyond the cycle", samples::two_corridors, [](Plan& p) { signal(p, "T1").offset_s = 90; }, "offset-out-of-range"},
      {"an offset below zero", samples::two_corridors, [](Plan& p) { signal(p, "T1").offset_s = -1; }, "offset-out-of-range"},
      {"a half-cycle signal's offset beyond its own cycle", samples::half_cycle, [](Plan& p) { signal(p, "H1").offset_s = 65; }, "offset-out-of-range"},
      {"an offset between seconds", samples::two_corridors, [](Plan& p) { signal(p, "T1").offset_s = 0.02; }, "offset-not-whole"},
      {"local zero is not the reference green", samples::two_corridors, [](Plan& p) { signal(p, "T1").reference_group = "4"; }, "reference-not-at-zero"},
      {"a cycle of its own", samples::two_corridors, [](Plan& p) { signal(p, "T1").cycle_s = 91; }, "cycle-not-common"},
      {"a third of the cycle", samples::half_cycle, [](Plan& p) { signal(p, "H1").cycle_s = 30; }, "cycle-not-common"},
      {"a cycle between seconds", samples::two_corridors, [](Plan& p) { p.cycle_s = 90.5; }, "cycle-not-whole"},
      {"half of an odd cycle", samples::half_cycle, [](Plan& p) { p.cycle_s = 89, signal(p, "H1").cycle_s = 44.5; }, "cycle-not-whole"},
      {"no clock reference", samples::two_corridors, [](Plan& p) { p.clock.reference.clear(); }, "clock-reference-missing"},
      {"an unknown clock", samples::two_corridors, [](Plan& p) { signal(p, "T1").clock = "sundial"; }, "clock-unknown"},
      {"a schedule at no time", samples::two_corridors, [](Plan& p) { p.schedule->from = "half past six"; }, "schedule-unreadable"},
      {"no cautions", samples::two_corridors, [](Plan& p) { p.cautions.clear(); }, "cautions-missing"},
      // references
      {"a signal stands twice", samples::two_corridors, [](Plan& p) { p.signals[1].id = "T1"; }, "duplicate-id"},
      {"a group stands twice", samples::two_corridors, [](Plan& p) { group(p, "T1", "7").id = "8"; }, "duplicate-id"},
      {"a group serves a movement twice", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").serves.push_back(group(p, "T1", "2").serves[0]); }, "duplicate-id"},
      {"a group serves an unknown movement", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").serves[0].movement = "EB-X"; }, "unknown-reference"},
      {"a movement starts at an unknown leg", samples::two_corridors, [](Plan& p) { movement(p, "T1", "EB-T").from_leg = "NNW"; }, "unknown-reference"},
      {"a crossing lies on an unknown leg", samples::two_corridors, [](Plan& p) { signal(p, "T1").crossings[0].leg = "Z"; }, "unknown-reference"},
      {"a conflict names an unknown group", samples::two_corridors, [](Plan& p) { signal(p, "T1").conflicts[0].a = "9"; }, "unknown-reference"},
      {"an unknown reference group", samples::two_corridors, [](Plan& p) { signal(p, "T1").reference_group = "9"; }, "unknown-reference"},
      {"a ring names an unknown group", samples::two_corridors, [](Plan& p) { signal(p, "T1").controller.ring_barrier->rings[0][0] = "9"; }, "unknown-reference"},
      {"a link ends at an unknown group", samples::two_corridors, [](Plan& p) { p.links[0].to_group = "22"; }, "unknown-reference"},
      {"a link is fed by an unknown group", samples::two_corridors, [](Plan& p) { p.links[0].feeds[0].from_group = "22"; }, "unknown-reference"},
      {"a link takes no time", samples::two_corridors, [](Plan& p) { p.links[0].travel_time_s = 0; }, "number-out-of-range"},
      {"a stop at an unknown signal", samples::two_corridors, [](Plan& p) { east(p).stops[1].signal = "T22"; }, "unknown-reference"},
      {"a stop at a group that does not serve its movement", samples::two_corridors, [](Plan& p) { east(p).stops[1].group = "6"; }, "corridor-group"},
      {"a corridor through a signal that runs free", samples::two_corridors, [](Plan& p) { signal(p, "T2").operation = plan::Operation::free; }, "corridor-through-free-signal"},
      // claims
      {"a wider band than there is", samples::two_corridors, [](Plan& p) { east(p).bandwidth_s += 0.1; }, "bandwidth-claim"},
      {"a band where there is none", samples::two_corridors, [](Plan& p) { signal(p, "T2").offset_s = 0; }, "bandwidth-claim"},
      {"a narrower band than there is", samples::two_corridors, [](Plan& p) { east(p).bandwidth_s -= 1; }, "bandwidth-claim"},
      {"an offset moved by a second", samples::two_corridors, [](Plan& p) { signal(p, "T3").offset_s += 1; }, "bandwidth-claim"},
      {"the band starts elsewhere", samples::two_corridors, [](Plan& p) { east(p).band_start_s = 2; }, "band-start-claim"},
      {"an efficiency too good", samples::two_corridors, [](Plan& p) { east(p).efficiency += 0.01; }, "efficiency-claim"},
      {"an attainability too good", samples::two_corridors, [](Plan& p) { east(p).attainability = 1; }, "attainability-claim"},
      {"a bound below the band", samples::two_corridors, [](Plan& p) { east(p).bandwidth_bound_s = 26; }, "bound-below-band"},
      {"more freedom than there is", samples::two_corridors, [](Plan& p) { signal(p, "T1").freedom_late_s = 4; }, "freedom-claim"},
      {"a degree of saturation too good", samples::two_corridors, [](Plan& p) { *group(p, "T1", "2").degree_of_saturation -= 0.05; }, "degree-of-saturation-claim"},
      {"a flow below that of its lane group", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").flow_vph = 700, group(p, "T1", "2").degree_of_saturation = 700 / 1188.0; }, "flow-below-lane-group"},
      {"oversaturated without a word", samples::two_corridors,
       [](Plan& p) {
         group(p, "T1", "2").flow_vph = 1400, group(p, "T1", "2").degree_of_saturation = 1400 / 1188.0;
         signal(p, "T1").lane_groups[1].flow_vph = 1400;
       },
       "oversaturation-not-declared"},
      {"a flow without saturation flow", samples::two_corridors, [](Plan& p) { signal(p, "T1").lane_groups[1].saturation_flow_vph = 0; }, "number-out-of-range"},
      {"a bound above the value", samples::two_corridors, [](Plan& p) { p.quality = plan::Quality{"delay", 90, 100, -0.1, {}}; }, "bound-above-value"},
      {"a gap too small", samples::two_corridors, [](Plan& p) { p.quality = plan::Quality{"delay", 110, 100, 0.01, {}}; }, "gap-claim"},
      {"waits too short", samples::two_corridors, [](Plan& p) { p.measures = plan::Measures{20, 1, 1, 0.76, "T1 EB-TR", 60, 80.7}; }, "wait-claim"},
      {"the evidence's flow ratio too small", samples::two_corridors, [](Plan& p) { signal(p, "T1").evidence = plan::Evidence{{"1", "2", "3", "4"}, 0.4, 22, 60, ""}; }, "evidence-claim"},
      {"the evidence's lost time too small", samples::two_corridors, [](Plan& p) { signal(p, "T1").evidence = plan::Evidence{{"3", "4"}, 100 / 1700.0 + 300 / 1800.0, 3, 60, ""}; }, "evidence-claim"},
  };
  return list;
}

const std::vector<Fault>& warnings() {
  static const std::vector<Fault> list = {
      {"a cycle longer than controllers take", samples::double_service, [](Plan& p) { p.cycle_s = 270, signal(p, "D1").cycle_s = 270; }, "cycle-beyond-controller", Severity::warning},
      {"a cycle of 20 s", samples::double_service, [](Plan& p) { p.cycle_s = 20, signal(p, "D1").cycle_s = 20; }, "cycle-very-short", Severity::warning},
      {"a cycle that does not divide the day", samples::double_service, [](Plan& p) { p.cycle_s = 95, signal(p, "D1").cycle_s = 95; }, "cycle-not-in-day", Severity::note},
      {"a cycle that does not divide the hour", samples::double_service, [](Plan& p) { p.cycle_s = 96, signal(p, "D1").cycle_s = 96; }, "cycle-not-in-hour", Severity::note},
      {"a clock set by hand", samples::two_corridors, [](Plan& p) { signal(p, "T1").clock = "manual"; }, "clock-drifts", Severity::warning},
      {"oversaturated and said so", samples::two_corridors,
       [](Plan& p) {
         group(p, "T1", "2").flow_vph = 1400, group(p, "T1", "2").degree_of_saturation = 1400 / 1188.0;
         signal(p, "T1").lane_groups[1].flow_vph = 1400;
         signal(p, "T1").oversaturated = {{"EB-TR", 1400 / 1188.0, 212}};
       },
       "oversaturated", Severity::warning},
      {"a queue beyond its storage", samples::two_corridors, [](Plan& p) { signal(p, "T1").lane_groups[0].storage_m = 20; }, "queue-beyond-storage", Severity::warning},
      {"walk and clearance short at the slower speed", samples::two_corridors, [](Plan& p) { p.standard.values["curb_setback_m"] = 6; }, "pedestrian-total-short", Severity::warning},
      {"a movement that nobody serves", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").serves.pop_back(); }, "movement-not-served", Severity::warning},
      {"a crossing that nobody serves", samples::two_corridors, [](Plan& p) { signal(p, "T1").groups.pop_back(); }, "crossing-not-served", Severity::warning},
      {"a minimum green below the standard", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").minimum_green_s = 4; }, "minimum-green-below-standard", Severity::warning},
      {"no minimum green", samples::two_corridors, [](Plan& p) { group(p, "T1", "1").minimum_green_s = 0; }, "minimum-green-missing", Severity::warning},
      {"a red clearance longer than the standard's longest", samples::double_service, [](Plan& p) { group(p, "D1", "5").red_clearance_s = 6.2; }, "red-clearance-too-long", Severity::warning},
      {"coordinated-actuated", samples::two_corridors, [](Plan& p) { signal(p, "T1").operation = plan::Operation::coordinated_actuated; }, "early-return", Severity::note},
      {"a call that overruns the split", samples::two_corridors, [](Plan& p) { group(p, "T1", "P4").service = plan::Service::on_call, group(p, "T1", "P4").greens[0].duration_s = 9; }, "pedestrian-on-call", Severity::note},
      {"an override that is signed", samples::two_corridors,
       [](Plan& p) { group(p, "T1", "2").clearance_basis->override_by = plan::Override{"yellow_s", "measured 85th percentile speed", "J. Merrow"}; }, "override", Severity::note},
      {"no clearance basis", samples::two_corridors, [](Plan& p) { group(p, "T1", "2").clearance_basis.reset(); }, "clearance-basis-missing", Severity::note},
      {"signals a few seconds apart", samples::two_corridors, [](Plan& p) { p.links[0].travel_time_s = 3, p.links[0].length_m = 40; }, "signals-close-together", Severity::note},
      {"a link at 400 km/h", samples::two_corridors, [](Plan& p) { p.links[0].length_m = 5000; }, "speed-unusual", Severity::warning},
      {"a value the standard does not state", samples::two_corridors, [](Plan& p) { p.standard.values.erase("perception_s"); }, "standard-value-assumed", Severity::note},
      {"a key that is not known", samples::two_corridors, [](Plan& p) { p.unknown_keys = {"signals[0].colour"}; }, "unknown-key", Severity::note},
      {"legs that nearly coincide", samples::double_service, [](Plan& p) { signal(p, "D1").legs.push_back({"W2", 272, ""}); }, "legs-coincide", Severity::note},
      {"a bicycle that does not get across", samples::two_corridors,
       [](Plan& p) { p.standard.values["bicycle_speed_mps"] = 4.47, p.standard.values["bicycle_acceleration_mps2"] = 0.35; }, "bicycle-minimum-green", Severity::note},
      {"a shorter cycle than the evidence allows", samples::two_corridors,
       [](Plan& p) { signal(p, "T1").evidence = plan::Evidence{{"3", "4"}, 100 / 1700.0 + 300 / 1800.0, 11, 95, ""}; }, "below-minimum-cycle", Severity::warning},
      {"the same link twice", samples::two_corridors, [](Plan& p) { p.links.push_back(p.links[0]); }, "parallel-links", Severity::note},
      {"the offset refers to a side street", samples::two_corridors, [](Plan& p) { signal(p, "T1").controller.coordinated = {"6"}; }, "reference-not-coordinated", Severity::note},
  };
  return list;
}

bool is_found(const Review& review, const Fault& fault) {
  return std::any_of(review.findings.begin(), review.findings.end(), [&](const Finding& f) { return f.rule == fault.rule && f.severity == fault.severity; });
}

std::string rules_of(const Review& review) {
  std::set<std::string> names;
  for (const Finding& f : review.findings)
    if (f.severity != Severity::note) names.insert(f.rule);
  std::string text;
  for (const std::string& n : names) text += n + " ";
  return text;
}

void check_all(const std::vector<Fault>& faults) {
  std::set<std::string> names;
  for (const RuleName& rule : rules()) names.insert(rule.name);
  for (const Fault& fault : faults) {
    Plan plan = fault.sound();
    fault.seed(plan);
    const Review review = review_plan(plan);
    INFO(fault.name << ": expected " << fault.rule << ", found " << rules_of(review));
    CHECK(is_found(review, fault));
    CHECK(names.count(fault.rule) == 1);
    CHECK_FALSE(is_found(review_plan(fault.sound()), fault));
    if (fault.severity == Severity::violation) CHECK(review.has_violation());
  }
}

}  // namespace

TEST_CASE("every seeded unsafe change is caught by its rule") {
  REQUIRE(safety_faults().size() >= 55);
  check_all(safety_faults());
}

TEST_CASE("every seeded fault of timing, names and claims is caught by its rule") {
  REQUIRE(timing_faults().size() >= 55);
  check_all(timing_faults());
}

TEST_CASE("what an engineer should know is said") { check_all(warnings()); }

TEST_CASE("what an engineer has taken on is no violation") {
  Plan plan = samples::two_corridors();
  plan::Group& g = group(plan, "T1", "2");
  g.clearance_basis->override_by = plan::Override{"yellow_s, red_clearance_s", "measured 85th percentile speed of 30 mph", "J. Merrow"};
  g.yellow_s = 3.2, g.red_clearance_s = 2.1;
  CHECK_FALSE(is_found(review_plan(plan), {"", nullptr, {}, "yellow-too-short"}));
  g.yellow_s = 2.8;  // not even a signature allows less than the standard's least
  CHECK(is_found(review_plan(plan), {"", nullptr, {}, "yellow-outside-limits"}));
}

TEST_CASE("no trap: an arrow that follows, a flashing yellow arrow, equal ends") {
  const Fault trap{"", nullptr, {}, "opposed-turn-trap"};
  Plan unequal = samples::protected_permissive();
  end_unequally(unequal);
  REQUIRE(is_found(review_plan(unequal), trap));
  Plan flashing = unequal;
  for (const char* id : {"2", "6"})
    for (plan::Served& s : group(flashing, "T1", id).serves) s.flashing_yellow_arrow = s.movement == "EB-L" || s.movement == "WB-L";
  CHECK_FALSE(is_found(review_plan(flashing), trap));
  Plan arrow = unequal;  // EB-L's own arrow begins with the end of group 2's green
  group(arrow, "T1", "5").greens[0].start_s = group(arrow, "T1", "2").greens[0].duration_s;
  CHECK_FALSE(is_found(review_plan(arrow), trap));
  group(arrow, "T1", "5").greens[0].start_s += 0.1;  // a gap
  CHECK(is_found(review_plan(arrow), trap));
  CHECK_FALSE(is_found(review_plan(samples::protected_permissive()), trap));
}

TEST_CASE("the trap is found in a mirror too") {
  Plan unequal = samples::protected_permissive();
  end_unequally(unequal);
  CHECK(is_found(review_plan(samples::mirrored(unequal)), {"", nullptr, {}, "opposed-turn-trap"}));
}

TEST_CASE("periods must share one phase table") {
  const auto differs = [](const std::function<void(Plan&)>& change) {
    Plan other = samples::two_corridors();
    other.period = "pm";
    change(other);
    const auto reviews = review_plans({samples::two_corridors(), other});
    return is_found(reviews[0], {"", nullptr, {}, "differs-between-periods"});
  };
  CHECK_FALSE(differs([](Plan&) {}));
  CHECK_FALSE(differs([](Plan& p) { signal(p, "T1").offset_s = 5; }));
  CHECK(differs([](Plan& p) { group(p, "T1", "2").yellow_s += 0.1; }));
  CHECK(differs([](Plan& p) { group(p, "T1", "2").red_clearance_s += 0.1; }));
  CHECK(differs([](Plan& p) { group(p, "T1", "2").minimum_green_s += 1; }));
  CHECK(differs([](Plan& p) { group(p, "T1", "P2").clearance_s += 1; }));
  CHECK(differs([](Plan& p) { group(p, "T1", "P2").greens[0].duration_s += 1; }));
  CHECK(differs([](Plan& p) { group(p, "T1", "P2").minimum_green_s -= 1; }));
  Plan elsewhere = samples::two_corridors();
  elsewhere.project = "Another town";
  CHECK(is_found(review_plans({samples::two_corridors(), elsewhere})[0], {"", nullptr, {}, "other-project", Severity::warning}));
}

}  // namespace entrain::review
