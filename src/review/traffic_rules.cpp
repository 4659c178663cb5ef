#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <set>

#include "base/number_text.hpp"
#include "review/rules.hpp"
#include "review/traffic_figures.hpp"

namespace entrain::review {
namespace {

bool is_declared(const plan::Signal& signal, const plan::Group& g) {
  for (const plan::LaneGroup& lanes : signal.lane_groups)
    for (const plan::Oversaturation& over : signal.oversaturated)
      if (over.lane_group == lanes.id)
        for (const plan::Served& s : g.serves)
          if (std::find(lanes.movements.begin(), lanes.movements.end(), s.movement) != lanes.movements.end()) return true;
  return false;
}

bool serves_any(const plan::Group& g, const plan::LaneGroup& lanes) {
  return std::any_of(g.serves.begin(), g.serves.end(), [&](const plan::Served& s) { return std::find(lanes.movements.begin(), lanes.movements.end(), s.movement) != lanes.movements.end(); });
}

// A lane group whose movements only this group serves speaks for this group.
bool belongs_to(const SignalView& view, const plan::LaneGroup& lanes, const plan::Group& g) {
  return serves_any(g, lanes) && std::none_of(view.signal.groups.begin(), view.signal.groups.end(), [&](const plan::Group& other) { return &other != &g && serves_any(other, lanes); });
}

bool is_flow(double vph) { return vph >= 0 && vph <= 100000; }

void check_lane_group(const plan::LaneGroup& lanes, Findings& findings) {
  if (!is_flow(lanes.flow_vph) || !is_flow(lanes.saturation_flow_vph) || lanes.lanes < 1 || lanes.lanes > 20 || (lanes.storage_m && !(*lanes.storage_m >= 0)))
    findings.violation("number-out-of-range", fmt::format("lane group {}: {} lanes, flow {} veh/h, saturation flow {} veh/h, storage {} m", printable(lanes.id), lanes.lanes, number_text(lanes.flow_vph), number_text(lanes.saturation_flow_vph),
                                                          lanes.storage_m ? number_text(*lanes.storage_m) : "-"), "Give 1 to 20 lanes and flows from 0 to 100,000 veh/h");
  else if (lanes.flow_vph > 0 && lanes.saturation_flow_vph <= 0)
    findings.violation("number-out-of-range", fmt::format("lane group {}: a flow of {} veh/h and no saturation flow", printable(lanes.id), number_text(lanes.flow_vph)), "Give its saturation flow");
}

}  // namespace

void check_saturation(const SignalView& view, Findings& findings) {
  if (!view.is_usable) return;
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    const double found = degree_of_saturation(view, i);
    if (found < 0) continue;
    if (g.degree_of_saturation && !(std::fabs(*g.degree_of_saturation - found) <= 0.006 + 0.002 * found))
      findings.violation("degree-of-saturation-claim", fmt::format("group {}: claims a degree of saturation of {}, its own flow and green give {}", g.id, number_text(*g.degree_of_saturation), number_text(found)), "Recompute the claim (review --recompute)", {g.id});
    if (found > 1.0 + 1e-6) {
      findings.add("oversaturated", Severity::warning, fmt::format("group {}: OVERSATURATED, degree of saturation {}: the queue grows all period", g.id, number_text(found, 2)), {}, {g.id});
      if (found > 1.005 && !is_declared(view.signal, g)) findings.violation("oversaturation-not-declared", fmt::format("group {}: degree of saturation {} without a word in the plan", g.id, number_text(found, 2)), "List it under oversaturated", {g.id});
    }
  }
}

void check_flows(const SignalView& view, Findings& findings) {
  for (const plan::LaneGroup& lanes : view.signal.lane_groups) check_lane_group(lanes, findings);
  for (const plan::Group& g : view.signal.groups) {
    for (const auto& value : {g.flow_vph, g.saturation_flow_vph})
      if (value && !is_flow(*value)) findings.violation("number-out-of-range", fmt::format("group {}: a flow of {} veh/h", g.id, number_text(*value)), "Give 0 to 100,000 veh/h", {g.id});
    for (const auto& value : {g.start_up_lost_s, g.end_gain_s})
      if (value && !(*value >= 0 && *value <= 20)) findings.violation("number-out-of-range", fmt::format("group {}: start-up lost time or end gain of {} s", g.id, number_text(*value)), "Give 0 to 20 s", {g.id});
    if (walks(g) || view.signal.lane_groups.size() > most_movements) continue;
    const double own = g.flow_vph && g.saturation_flow_vph && *g.saturation_flow_vph > 0 ? *g.flow_vph / *g.saturation_flow_vph : 0;
    for (const plan::LaneGroup& lanes : view.signal.lane_groups) {
      if (!(lanes.saturation_flow_vph > 0) || !belongs_to(view, lanes, g)) continue;
      const double ratio = lanes.flow_vph / lanes.saturation_flow_vph;
      if (ratio > own + 0.002 + 0.005 * own)
        findings.violation("flow-below-lane-group", fmt::format("group {}: its flow ratio is {}, that of lane group {} is {}", g.id, number_text(own), lanes.id, number_text(ratio)), "A group's flow and saturation flow are those of its worst lane group", {g.id});
    }
  }
}

// Longest queue of even arrivals behind the longest red, against the lanes' storage.
void check_queues(const SignalView& view, Findings& findings) {
  if (!view.is_usable || view.signal.lane_groups.size() > most_movements) return;
  const double spacing = view.standard("vehicle_spacing_m", 7.62);
  for (const plan::LaneGroup& lanes : view.signal.lane_groups) {
    if (!lanes.storage_m || !is_flow(lanes.flow_vph) || !is_flow(lanes.saturation_flow_vph) || lanes.lanes < 1) continue;
    Row green(view.cycle);
    for (std::size_t i = 0; i < view.greens.size(); ++i)
      if (serves_any(view.signal.groups[i], lanes)) green.add(view.green_rows[i]);
    const double metres = even_queue_veh(lanes.flow_vph, lanes.saturation_flow_vph, longest_red(green) / 10.0) / lanes.lanes * spacing;
    if (metres > *lanes.storage_m + 0.5)
      findings.add("queue-beyond-storage", Severity::warning, fmt::format("lane group {}: with even arrivals its queue reaches {} m a lane, it has {} m: it blocks the lane beside it", lanes.id, number_text(metres, 0), number_text(*lanes.storage_m, 0)),
                   "Lengthen the green or the storage, or serve it twice a cycle");
  }
}

void check_service(const SignalView& view, Findings& findings) {
  std::set<std::string> served, crossed;
  for (const plan::Group& g : view.signal.groups) {
    for (const plan::Served& s : g.serves) served.insert(s.movement);
    crossed.insert(g.crossings.begin(), g.crossings.end());
  }
  for (const plan::Movement& m : view.signal.movements)
    if (served.count(m.id) == 0) findings.add("movement-not-served", Severity::warning, fmt::format("movement {} is served by no group", printable(m.id)), "Serve it, or say that it is not under signal control");
  for (const plan::Crossing& c : view.signal.crossings)
    if (crossed.count(c.id) == 0) findings.add("crossing-not-served", Severity::warning, fmt::format("crossing {} is served by no pedestrian group", printable(c.id)), "Serve it, or close the crossing");
  if (view.signal.operation == plan::Operation::coordinated_actuated)
    findings.add("early-return", Severity::note, "coordinated-actuated: the coordinated green may start early when side phases end early, and release its platoon ahead of the band; check the begin-of-yellow offset and force-off points");
}

// The plan's reason why its cycle can't be shorter: its sums are those of the groups it names.
void check_evidence(const SignalView& view, Findings& findings) {
  if (!view.signal.evidence || view.signal.evidence->critical_groups.empty()) return;
  const plan::Evidence& evidence = *view.signal.evidence;
  double ratio = 0, lost = 0;
  for (const std::string& id : evidence.critical_groups) {
    const auto found = view.group.find(id);
    if (found == view.group.end()) return findings.violation("unknown-reference", fmt::format("the evidence names group {}, which is not there", printable(id)));
    const plan::Group& g = view.signal.groups[found->second];
    if (walks(g)) return;
    if (g.flow_vph && g.saturation_flow_vph && *g.saturation_flow_vph > 0) ratio += *g.flow_vph / *g.saturation_flow_vph;
    lost += g.yellow_s + g.red_clearance_s + g.start_up_lost_s.value_or(0) - g.end_gain_s.value_or(0);
  }
  if (!(std::fabs(evidence.critical_flow_ratio - ratio) <= 0.003))
    findings.violation("evidence-claim", fmt::format("the evidence claims a critical flow ratio of {}, the groups it names have {}", number_text(evidence.critical_flow_ratio), number_text(ratio)), "Correct the evidence", evidence.critical_groups);
  if (evidence.critical_groups.size() > 1 && !(evidence.critical_lost_time_s >= lost - 0.1 * static_cast<double>(evidence.critical_groups.size())))
    findings.violation("evidence-claim", fmt::format("the evidence claims a lost time of {} s, the groups it names lose {} s in yellow, red clearance and start", number_text(evidence.critical_lost_time_s), number_text(lost)), "Correct the evidence", evidence.critical_groups);
  if (evidence.minimum_cycle_s > view.signal.cycle_s + 1e-6)
    findings.add("below-minimum-cycle", Severity::warning, fmt::format("the evidence says that every minimum needs a cycle of {} s, the signal runs at {} s", number_text(evidence.minimum_cycle_s), number_text(view.signal.cycle_s)), "Lengthen the cycle");
}

}  // namespace entrain::review
