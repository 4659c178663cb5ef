#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "timing/allocation_parts.hpp"
#include "timing/cliques.hpp"
#include "timing/cycle_length.hpp"
#include "timing/general_allocation.hpp"
#include "timing/group_times.hpp"
#include "timing/ring_allocation.hpp"
#include "traffic/delay.hpp"

namespace entrain::timing {
namespace {

constexpr int longest_cycle_s = 600;  // longer cycles are not looked at

struct Critical {
  std::vector<int> groups;
  double ratio = 0, lost_s = 0;
};

// Of each side of the barrier the ring with the larger sum of flow ratios.
Critical critical_rings(const SignalDesign& design, const std::vector<double>& flows_vph) {
  const RingNeeds needs = ring_needs(design, flows_vph);
  Critical out;
  for (std::size_t side = 0; side < needs.front().size(); ++side) {
    std::size_t best = 0;
    double best_ratio = -1, best_lost = 0;
    for (std::size_t r = 0; r < needs.size(); ++r) {
      double ratio = 0, lost = 0;
      for (const SplitNeed& need : needs[r][side]) ratio += need.ratio, lost += need.lost_s;
      if (ratio > best_ratio || (ratio == best_ratio && lost > best_lost)) best = r, best_ratio = ratio, best_lost = lost;
    }
    for (const int g : design.ring_barrier->rings[best][side]) out.groups.push_back(g);
    out.ratio += best_ratio, out.lost_s += best_lost;
  }
  return out;
}

std::vector<int> vehicle_groups(const SignalDesign& design) {
  std::vector<int> groups;
  for (std::size_t g = 0; g < design.groups.size(); ++g)
    if (design.groups[g].kind != GroupKind::pedestrian) groups.push_back(static_cast<int>(g));
  return groups;
}

// The clique that asks for the longest cycle: by flow ratios, then by lost time.
Critical critical_clique(const SignalDesign& design, const std::vector<double>& flows_vph) {
  Critical best;
  for (const auto& clique : maximal_cliques(design, vehicle_groups(design))) {
    Critical here;
    const CyclicOrder order = clique_lost_time(design, clique);
    here.groups = order.order, here.lost_s = order.sum;
    for (const int g : clique) here.ratio += flow_ratio(design, design.groups[static_cast<std::size_t>(g)], flows_vph);
    if (best.groups.empty() || here.ratio > best.ratio || (here.ratio == best.ratio && here.lost_s > best.lost_s)) best = here;
  }
  return best;
}

std::vector<int> splits_at(const SignalDesign& design, const std::vector<double>& flows_vph, double target, int cycle_s) {
  std::vector<int> splits(design.groups.size(), 0);
  for (std::size_t g = 0; g < splits.size(); ++g) {
    const Group& group = design.groups[g];
    if (group.kind == GroupKind::pedestrian) continue;
    splits[g] = least_split_s(group);
    const double ratio = flow_ratio(design, group, flows_vph), lost = lost_in_split_s(group);
    while (degree_of_saturation(ratio, cycle_s, splits[g] - lost) > target) ++splits[g];
  }
  return splits;
}

bool ring_holds(const SignalDesign& design, const std::vector<int>& splits, int cycle_s) {
  const auto& rings = design.ring_barrier->rings;
  int total = 0;
  for (std::size_t side = 0; side < rings.front().size(); ++side) {
    int longest = 0;
    for (const auto& ring : rings) {
      int own = 0;
      for (const int g : ring[side]) own += splits[static_cast<std::size_t>(g)];
      longest = std::max(longest, own);
    }
    total += longest;
  }
  return total <= cycle_s;
}

bool holds(const SignalDesign& design, const std::vector<int>& splits, int cycle_s, std::int64_t& nodes_left) {
  if (design.ring_barrier) return ring_holds(design, splits, cycle_s);
  const PeriodicModel model = periodic_model(design, cycle_s);
  if (model.anchor < 0) return true;
  return fits_some_order(model, splits, nodes_left);
}

int saturation_minimum_s(const SignalDesign& design, const std::vector<double>& flows_vph, double target, const Critical& critical, int least_s) {
  if (!(critical.ratio < target)) return 0;
  const double bound = cycle_for_saturation_s(std::max(0.0, critical.lost_s), critical.ratio, target);
  std::int64_t nodes_left = 5'000;  // of all cycles looked at together
  for (int cycle_s = std::max(least_s, static_cast<int>(std::min(bound, 1e6))); cycle_s <= longest_cycle_s && nodes_left > 0; ++cycle_s)
    if (holds(design, splits_at(design, flows_vph, target, cycle_s), cycle_s, nodes_left)) return cycle_s;
  return 0;
}

std::string arithmetic(const SignalDesign& design, const std::vector<double>& flows_vph, const Critical& critical) {
  std::vector<std::string> names;
  std::string sum;
  for (const int g : critical.groups) {
    const Group& group = design.groups[static_cast<std::size_t>(g)];
    names.push_back(group.id);
    sum += (sum.empty() ? "" : " + ") + fixed_text(flow_ratio(design, group, flows_vph), 3);
  }
  const bool several = names.size() > 1;
  return "critical group" + std::string(several ? "s " : " ") + list_of(names) + ": flow ratio" + (several ? "s " : " ") + sum +
         (several ? " = " + fixed_text(critical.ratio, 3) : "") + ", lost time " + number_text(critical.lost_s, 1) + " s";
}

std::string bounds_text(const CriticalCycle& cycle, double target) {
  std::string text;
  if (std::isfinite(cycle.webster_s))
    text += "; Webster (1958): (1.5 x " + number_text(cycle.lost_time_s, 1) + " + 5) / (1 - " + fixed_text(cycle.flow_ratio, 3) + ") = " + fixed_text(cycle.webster_s, 1) + " s";
  else
    text += "; the flow ratios reach 1, no cycle carries the flow";
  if (cycle.saturation_minimum_s > 0)
    text += "; degree of saturation " + number_text(target, 2) + " or less from " + std::to_string(cycle.saturation_minimum_s) + " s on";
  else
    text += "; no cycle up to " + std::to_string(longest_cycle_s) + " s keeps every degree of saturation at " + number_text(target, 2) + " or less";
  return text;
}

// Which minimums need the least cycle: the longest rings, or a smallest set of groups that fits no shorter one.
std::string minimum_text(const SignalDesign& design, const std::vector<double>& flows_vph, int minimum_s) {
  if (design.ring_barrier) return "groups " + longest_sides(design, flows_vph).text;
  std::vector<std::string> names;
  for (const int g : clashing_groups(design, minimum_s - 1)) {
    const Group& group = design.groups[static_cast<std::size_t>(g)];
    const bool walks = group.kind == GroupKind::pedestrian;
    names.push_back(group.id + " (" + (walks ? number_text(pedestrian_occupancy(group).seconds(), 1) : std::to_string(least_split_s(group))) + " s)");
  }
  return "groups " + list_of(names) + " with their intergreens need " + std::to_string(minimum_s) + " s";
}

Diagnostics target_errors(const SignalDesign& design, const std::vector<double>& flows_vph, double target) {
  AllocationRequest request;
  request.cycle = Tenths::from_seconds(60);
  request.flows_vph = flows_vph;
  Diagnostics found = request_errors(design, request);
  if (!(target > 0) || !(target <= 2))
    found.push_back(error("signal " + design.signal, "a target degree of saturation of " + number_text(target), "a value above 0, at most 2", "Correct target_saturation."));
  return found;
}

}  // namespace

Result<CriticalCycle> critical_cycle(const SignalDesign& design, const std::vector<double>& flows_vph, double target_saturation) {
  Diagnostics wrong = target_errors(design, flows_vph, target_saturation);
  if (!wrong.empty()) return failure(std::move(wrong));
  CriticalCycle out;
  const Critical critical = design.ring_barrier ? critical_rings(design, flows_vph) : critical_clique(design, flows_vph);
  const auto least = design.ring_barrier ? std::optional<int>(longest_sides(design, flows_vph).total_s) : least_general_cycle_s(design, longest_cycle_s);
  if (!least)
    return failure(error("signal " + design.signal, "minimums that fit no cycle up to " + std::to_string(longest_cycle_s) + " s", "groups that can follow one another",
                         "Look for a pedestrian group that conflicts with its parent, or conflicts and minimums that are too long."));
  out.minimum_s = *least;
  out.critical_groups = critical.groups;
  out.flow_ratio = critical.ratio;
  out.lost_time_s = critical.lost_s;
  out.webster_s = traffic::webster_cycle_s(critical.lost_s, critical.ratio);
  out.saturation_minimum_s = saturation_minimum_s(design, flows_vph, target_saturation, critical, out.minimum_s);
  out.text = minimum_text(design, flows_vph, out.minimum_s) + "; " + arithmetic(design, flows_vph, critical) + bounds_text(out, target_saturation);
  return out;
}

}  // namespace entrain::timing
