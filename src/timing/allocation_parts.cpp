#include "timing/allocation_parts.hpp"

#include <algorithm>
#include <cmath>
#include <functional>

#include "base/number_text.hpp"
#include "timing/group_times.hpp"

namespace entrain::timing {
namespace {

std::string seconds_text(Tenths t) { return number_text(t.seconds(), 1) + " s"; }

Tenths occupied(const Group& group, const Arc& green) {
  return group.kind == GroupKind::pedestrian ? green.duration + group.clearance : green.duration;
}

bool stands_clear(const Circle& circle, const Group& a, const Arc& first, const Arc& second, Tenths intergreen, Tenths& gap) {
  gap = circle.forward(first.start, second.start) - occupied(a, first);
  if (first.start == second.start) gap = -occupied(a, first);
  return gap >= intergreen && first.duration < circle.cycle() && second.duration < circle.cycle();
}

bool group_is_sound(const Group& group, int count) {
  const bool times = group.yellow.count >= 0 && group.red_clearance.count >= 0 && group.minimum_green.count >= 0 &&
                     group.clearance.count >= 0 && group.pedestrian_need.count >= 0;
  return times && std::isfinite(group.start_up_lost_s) && std::isfinite(group.end_gain_s) && group.parent < count;
}

void check_group(const SignalDesign& design, const Group& group, Diagnostics& found) {
  const std::string where = "signal " + design.signal + ", group " + group.id;
  if (!group_is_sound(group, static_cast<int>(design.groups.size())))
    found.push_back(error(where, "a negative or missing time", "times of zero or more and an existing parent", "Correct the group's times."));
  for (const int lane_group : group.lane_groups)
    if (lane_group < 0 || lane_group >= static_cast<int>(design.lane_groups.size()))
      found.push_back(error(where, "lane group number " + std::to_string(lane_group), "a lane group of the signal", "Correct the design."));
}

void check_conflict(const SignalDesign& design, const Conflict& conflict, Diagnostics& found) {
  const int n = static_cast<int>(design.groups.size());
  if (conflict.a < 0 || conflict.b < 0 || conflict.a >= n || conflict.b >= n || conflict.a == conflict.b) {
    found.push_back(error("signal " + design.signal + ", conflicts", "a pair that names no two groups", "two different groups", "Correct the conflict."));
    return;
  }
  if (conflict.intergreen_ab.count < 0 || conflict.intergreen_ba.count < 0)
    found.push_back(error("signal " + design.signal + ", conflict of " + design.groups[static_cast<std::size_t>(conflict.a)].id + " and " +
                              design.groups[static_cast<std::size_t>(conflict.b)].id,
                          "a negative intergreen", "zero or more seconds", "Correct the intergreen."));
}

void check_flows(const SignalDesign& design, const std::vector<double>& flows_vph, Diagnostics& found) {
  const std::string where = "signal " + design.signal;
  if (flows_vph.size() != design.lane_groups.size()) {
    found.push_back(error(where, std::to_string(flows_vph.size()) + " flows", std::to_string(design.lane_groups.size()) + ", one a lane group",
                          "Give a flow for every lane group."));
    return;
  }
  for (std::size_t i = 0; i < flows_vph.size(); ++i)
    if (!(flows_vph[i] >= 0) || !std::isfinite(flows_vph[i]))
      found.push_back(error(where + ", lane group " + design.lane_groups[i].id, "flow " + number_text(flows_vph[i]) + " veh/h",
                            "a finite number of zero or more", "Correct the count."));
}

// Rings of equal length whose groups exist, each once.
Diagnostics ring_errors(const SignalDesign& design) {
  Diagnostics found;
  if (!design.ring_barrier) return found;
  const auto& rings = design.ring_barrier->rings;
  std::vector<int> times(design.groups.size(), 0);
  bool sound = !rings.empty() && !rings.front().empty();
  for (const auto& ring : rings) {
    sound = sound && ring.size() == rings.front().size();
    for (const auto& side : ring)
      for (const int g : side)
        if (g < 0 || g >= static_cast<int>(times.size()))
          sound = false;
        else
          ++times[static_cast<std::size_t>(g)];
  }
  for (std::size_t g = 0; g < times.size(); ++g) {
    const bool vehicle = design.groups[g].kind != GroupKind::pedestrian;
    const bool runs = vehicle ? times[g] == 1 : times[g] == 0 && design.groups[g].parent >= 0;
    if (!runs)
      found.push_back(error("signal " + design.signal + ", group " + design.groups[g].id, "not exactly one place in the rings",
                            "every vehicle group in one ring, every pedestrian group with a parent", "Correct the rings or use signal-group control."));
  }
  if (!sound) found.push_back(error("signal " + design.signal, "rings that do not fit together", "as many sides in each ring, existing groups", "Correct the rings."));
  return found;
}

}  // namespace

Diagnostics design_errors(const SignalDesign& design) {
  Diagnostics found;
  const std::string where = "signal " + design.signal;
  if (design.groups.empty()) found.push_back(error(where, "no signal group", "at least one", "Give the signal movements or timing rows."));
  const bool has_reference = design.reference_group >= 0 && design.reference_group < static_cast<int>(design.groups.size());
  if (!design.groups.empty() && !has_reference) found.push_back(error(where, "no reference group", "one of its groups", "Name the coordinated group."));
  for (const Group& group : design.groups) check_group(design, group, found);
  for (const LaneGroup& lanes : design.lane_groups)
    if (!(lanes.saturation_flow_vph > 0) || !std::isfinite(lanes.saturation_flow_vph))
      found.push_back(error(where + ", lane group " + lanes.id, "saturation flow " + number_text(lanes.saturation_flow_vph) + " veh/h",
                            "more than zero", "Correct saturation_flow_vph or leave it out."));
  for (const Conflict& conflict : design.conflicts) check_conflict(design, conflict, found);
  append(found, ring_errors(design));
  return found;
}

Diagnostics request_errors(const SignalDesign& design, const AllocationRequest& request) {
  Diagnostics found = design_errors(design);
  const std::string where = "signal " + design.signal;
  if (request.cycle.count < 50 || request.cycle.count > 36000 || !request.cycle.is_whole_second())
    found.push_back(error(where, "a cycle of " + seconds_text(request.cycle), "whole seconds between 5 and 3600", "Choose another cycle."));
  check_flows(design, request.flows_vph, found);
  if (!(request.keep_share >= 0) || request.keep_share > 10)
    found.push_back(error(where, "keep_share " + number_text(request.keep_share), "a share between 0 and 10", "Correct the share."));
  if (!request.fixed_splits.empty() && request.fixed_splits.size() != design.groups.size())
    found.push_back(error(where, std::to_string(request.fixed_splits.size()) + " fixed splits", "one a group", "Give every group's split."));
  return found;
}

std::vector<std::vector<Arc>> arcs_of(const Allocation& allocation) {
  std::vector<std::vector<Arc>> arcs;
  for (const GroupGreen& green : allocation.groups) arcs.push_back(green.greens);
  return arcs;
}

std::optional<Clash> find_clash(const SignalDesign& design, Tenths cycle, const std::vector<GroupGreen>& groups) {
  const Circle circle(cycle);
  for (const Conflict& conflict : design.conflicts)
    for (const Arc& x : groups[static_cast<std::size_t>(conflict.a)].greens)
      for (const Arc& y : groups[static_cast<std::size_t>(conflict.b)].greens) {
        Tenths gap;
        if (!stands_clear(circle, design.groups[static_cast<std::size_t>(conflict.a)], x, y, conflict.intergreen_ab, gap))
          return Clash{conflict.a, conflict.b, gap, conflict.intergreen_ab};
        if (!stands_clear(circle, design.groups[static_cast<std::size_t>(conflict.b)], y, x, conflict.intergreen_ba, gap))
          return Clash{conflict.b, conflict.a, gap, conflict.intergreen_ba};
      }
  return std::nullopt;
}

void place_walks(const SignalDesign& design, Tenths cycle, Allocation& allocation) {
  for (std::size_t g = 0; g < design.groups.size(); ++g) {
    const Group& group = design.groups[g];
    if (group.kind != GroupKind::pedestrian || group.parent < 0) continue;
    auto& own = allocation.groups[g].greens;
    own.clear();
    for (const Arc& green : allocation.groups[static_cast<std::size_t>(group.parent)].greens)
      own.push_back({green.start, std::min(group.minimum_green, cycle)});
    if (!group.on_call) continue;
    const auto clash = find_clash(design, cycle, allocation.groups);
    if (clash && (clash->a == static_cast<int>(g) || clash->b == static_cast<int>(g))) own.clear();
  }
}

void rotate_to_reference(const SignalDesign& design, Tenths cycle, Allocation& allocation) {
  const auto& reference = allocation.groups[static_cast<std::size_t>(design.reference_group)].greens;
  if (reference.empty() || reference.front().duration == cycle) return;
  const Tenths zero = reference.front().start;
  for (GroupGreen& group : allocation.groups)
    for (Arc& green : group.greens)
      if (green.duration != cycle) green.start = wrap(green.start - zero, cycle);
}

void rate(const SignalDesign& design, const AllocationRequest& request, Allocation& allocation) {
  allocation.saturation_descending.clear();
  allocation.oversaturated = false;
  for (std::size_t g = 0; g < design.groups.size(); ++g) {
    const Group& group = design.groups[g];
    if (group.kind == GroupKind::pedestrian) continue;
    double effective_s = 0;
    for (const Arc& green : allocation.groups[g].greens)
      effective_s += green.duration == request.cycle ? request.cycle.seconds()
                                                     : std::max(0.0, green.duration.seconds() - group.start_up_lost_s + group.end_gain_s);
    const double ratio = flow_ratio(design, group, request.flows_vph);
    const double x = degree_of_saturation(ratio, request.cycle.seconds(), effective_s);
    allocation.groups[g].degree_of_saturation = x;
    if (ratio <= 0) continue;
    allocation.saturation_descending.push_back(x);
    if (x > 1) allocation.oversaturated = true;
  }
  std::sort(allocation.saturation_descending.begin(), allocation.saturation_descending.end(), std::greater<>());
}

}  // namespace entrain::timing
