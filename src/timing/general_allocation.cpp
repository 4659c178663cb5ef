#include "timing/general_allocation.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <limits>
#include <set>

#include "base/natural_order.hpp"
#include "base/number_text.hpp"
#include "timing/allocation_parts.hpp"
#include "timing/fair_search.hpp"
#include "timing/group_times.hpp"
#include "timing/turn_trap.hpp"

namespace entrain::timing {
namespace {

constexpr std::int64_t most_nodes = 2'000;    // of one order search
constexpr std::size_t most_orders = 24;       // orders looked at as alternatives

std::vector<FlowDemand> flows_of(const SignalDesign& design, const PeriodicModel& model, const std::vector<double>& flows_vph) {
  std::vector<FlowDemand> flows;
  for (std::size_t g = 0; g < design.groups.size(); ++g) {
    const double ratio = flow_ratio(design, design.groups[g], flows_vph);
    if (model.end[g] >= 0 && ratio > 0) flows.push_back({g, ratio, lost_in_split_s(design.groups[g])});
  }
  return flows;
}

// Lets every group grow as far as the order allows, the coordinated one first, then reads the earliest starts.
Closure grown(const PeriodicModel& model, const Closure& base, const FairSplits& fair, int coordinated) {
  Closure closure = *closure_of(model.problem.choices, base, fair.picks);
  add_splits(model, fair.split_s, closure);
  const auto grow = [&](std::size_t g) {
    if (model.end[g] >= 0) closure.add(Difference{model.start[g], model.end[g], -closure.gap(model.end[g], model.start[g])});
  };
  grow(static_cast<std::size_t>(coordinated));
  for (std::size_t g = 0; g < model.end.size(); ++g) grow(g);
  return closure;
}

Allocation laid_out(const SignalDesign& design, const PeriodicModel& model, const Closure* closure) {
  const Tenths cycle = Tenths::from_seconds(model.cycle_s);
  Allocation allocation;
  allocation.groups.resize(design.groups.size());
  for (std::size_t g = 0; g < design.groups.size(); ++g) {
    const Group& group = design.groups[g];
    GroupGreen& green = allocation.groups[g];
    const auto time = [&](int t) { return Tenths::from_seconds(closure->gap(model.start[static_cast<std::size_t>(model.anchor)], t)); };
    if (group.kind == GroupKind::pedestrian) {
      if (group.parent < 0) green.greens = {model.start[g] < 0 ? Arc{{0}, cycle} : Arc{wrap(time(model.start[g]), cycle), group.minimum_green}};
      continue;
    }
    if (model.end[g] < 0) {
      green = {{{{0}, cycle}}, cycle, 0};
      continue;
    }
    green.split = time(model.end[g]) - time(model.start[g]);
    green.greens = {{wrap(time(model.start[g]), cycle), green.split - change_time(group)}};
  }
  return allocation;
}

// "2+6>4>8": vehicle groups by start of green.
std::string order_text(const SignalDesign& design, Tenths cycle, const Allocation& allocation) {
  std::vector<std::pair<Tenths, std::string>> starts;
  for (std::size_t g = 0; g < design.groups.size(); ++g)
    if (!allocation.groups[g].greens.empty() && (design.groups[g].kind != GroupKind::pedestrian || design.groups[g].parent < 0))
      starts.push_back({allocation.groups[g].greens.front().duration == cycle ? Tenths{-1} : allocation.groups[g].greens.front().start, design.groups[g].id});
  std::sort(starts.begin(), starts.end(), [](const auto& a, const auto& b) {
    return a.first != b.first ? a.first < b.first : natural_less(a.second, b.second);
  });
  std::string text;
  for (std::size_t i = 0; i < starts.size(); ++i) {
    if (i > 0) text += starts[i].first == starts[i - 1].first ? "+" : ">";
    text += starts[i].second;
  }
  return text;
}

Allocation finished(const SignalDesign& design, const AllocationRequest& request, const PeriodicModel& model, const Closure* closure) {
  Allocation allocation = laid_out(design, model, closure);
  rotate_to_reference(design, request.cycle, allocation);
  place_walks(design, request.cycle, allocation);
  rate(design, request, allocation);
  allocation.order = order_text(design, request.cycle, allocation);
  return allocation;
}

Diagnostic does_not_fit(const SignalDesign& design, const AllocationRequest& request) {
  const auto critical = critical_cycle(design, request.flows_vph, 1.0);
  const std::string needs = critical ? critical->text : "its conflicts contradict each other";
  const std::string mend = critical ? "Choose a cycle of at least " + std::to_string(critical->minimum_s) + " s, shorten a minimum or crossing."
                                    : "Correct the conflicts.";
  return error("signal " + design.signal, "a cycle of " + number_text(request.cycle.seconds(), 1) + " s", "enough for every minimum: " + needs, mend);
}

// Every other order whose worst degree of saturation is within the share of the best, each with its own fair splits.
std::vector<Allocation> alternatives(const SignalDesign& design, const AllocationRequest& request, const PeriodicModel& model, const Closure& base,
                                     const FairSplits& best, const std::vector<FlowDemand>& flows) {
  std::vector<int> splits = model.least_split_s;
  if (!flows.empty())
    for (const FlowDemand& flow : flows)
      splits[flow.group] = split_for(flow, best.saturation_descending.front() * (1 + request.keep_share), splits[flow.group], model.cycle_s);
  Closure within = base;
  std::vector<Allocation> found;
  if (!add_splits(model, splits, within)) return found;
  std::int64_t nodes_left = most_nodes;
  for (const auto& picks : all_orders(model.problem.choices, within, most_orders, nodes_left).picks) {
    const auto fair = fair_splits_in_order(model, base, flows, picks);
    if (!fair) continue;
    const Closure closure = grown(model, base, *fair, design.reference_group);
    found.push_back(finished(design, request, model, &closure));
  }
  return found;
}

void sort_and_thin(std::vector<Allocation>& found) {
  std::stable_sort(found.begin(), found.end(), [](const Allocation& a, const Allocation& b) {
    return a.saturation_descending != b.saturation_descending ? a.saturation_descending < b.saturation_descending : natural_less(a.order, b.order);
  });
  std::set<std::string> seen;
  std::erase_if(found, [&](const Allocation& a) { return !seen.insert(a.order).second; });
}

// Holds every vehicle group at its fixed split.
Diagnostics fix_splits(const SignalDesign& design, const AllocationRequest& request, PeriodicModel& model) {
  Diagnostics found;
  for (std::size_t g = 0; g < request.fixed_splits.size(); ++g) {
    if (model.end[g] < 0) continue;
    const Tenths split = request.fixed_splits[g];
    if (!split.is_whole_second() || split < Tenths::from_seconds(model.least_split_s[g]) || split > request.cycle) {
      found.push_back(error("signal " + design.signal + ", group " + design.groups[g].id, "a fixed split of " + number_text(split.seconds(), 1) + " s",
                            "whole seconds, at least " + std::to_string(model.least_split_s[g]) + ", at most the cycle", "Correct the split or free it."));
      continue;
    }
    model.least_split_s[g] = split.count / 10;
    model.problem.always.push_back({model.end[g], model.start[g], -split.count / 10});
  }
  return found;
}

Diagnostic splits_do_not_fit(const SignalDesign& design, const AllocationRequest& request) {
  return error("signal " + design.signal, "fixed splits that no order fits into a cycle of " + number_text(request.cycle.seconds(), 1) + " s", "splits that leave every intergreen",
               "Shorten a split, lengthen the cycle, or free the splits.");
}

Result<std::vector<Allocation>> in_fixed_sequence(const SignalDesign& design, const AllocationRequest& request, std::vector<Allocation> found) {
  if (request.fixed_sequence.empty()) return found;
  std::vector<std::string> orders;
  for (const Allocation& allocation : found) orders.push_back(allocation.order);
  std::erase_if(found, [&](const Allocation& a) { return a.order != request.fixed_sequence; });
  if (found.empty())
    return failure(error("signal " + design.signal, "the fixed sequence \"" + printable(request.fixed_sequence) + "\"", "one of its orders: " + list_of(orders),
                         "Write the order as there (starts of green: + together, > one after the other), or free it."));
  return found;
}

}  // namespace

Result<std::vector<Allocation>> allocate_general(const SignalDesign& design, const AllocationRequest& request) {
  PeriodicModel model = periodic_model(design, request.cycle.count / 10);
  if (model.contradictory)
    return failure(error("signal " + design.signal, "a pedestrian group that conflicts with the group it runs with", "another parent", "Name another group for the crossing."));
  Diagnostics refused = fix_splits(design, request, model);
  if (!refused.empty()) return failure(std::move(refused));
  if (model.anchor < 0) return std::vector<Allocation>{finished(design, request, model, nullptr)};
  const std::vector<FlowDemand> flows = request.fixed_splits.empty() ? flows_of(design, model, request.flows_vph) : std::vector<FlowDemand>{};
  const auto base = closure_of(model.problem);
  const auto best = base ? fair_splits(model, *base, flows) : std::nullopt;
  if (!best) return failure(request.fixed_splits.empty() ? does_not_fit(design, request) : splits_do_not_fit(design, request));
  const Closure closure = grown(model, *base, *best, design.reference_group);
  std::vector<Allocation> found{finished(design, request, model, &closure)};
  for (Allocation& other : alternatives(design, request, model, *base, *best, flows)) found.push_back(std::move(other));
  for (Allocation& allocation : found) allocation.proved = best->proved;
  const std::vector<Trap> traps = possible_traps(design);
  std::erase_if(found, [&](const Allocation& a) {
    return find_clash(design, request.cycle, a.groups) || find_trap(design, traps, request.cycle, arcs_of(a));
  });
  sort_and_thin(found);
  if (found.empty()) return failure(error("signal " + design.signal, "only orders that would trap an opposed turn", "one that does not", "Protect the opposed turn or give its group a green that ends with the opposing one."));
  return in_fixed_sequence(design, request, std::move(found));
}

bool fits_some_order(const PeriodicModel& model, const std::vector<int>& split_s, std::int64_t& nodes_left) {
  if (!may_fit(model, split_s)) return false;
  auto closure = closure_of(model.problem);
  return closure && add_splits(model, split_s, *closure) && find_order(model.problem.choices, *closure, nodes_left).picks.has_value();
}

std::vector<int> clashing_groups(const SignalDesign& design, int cycle_s) {
  const auto fits = [&](const SignalDesign& part) {
    const PeriodicModel model = periodic_model(part, cycle_s);
    std::int64_t nodes_left = most_nodes;
    return !model.contradictory && (model.anchor < 0 || fits_some_order(model, model.least_split_s, nodes_left));
  };
  if (fits(design)) return {};
  SignalDesign left = design;
  std::vector<int> needed;
  for (int g = 0; g < static_cast<int>(design.groups.size()); ++g) {
    SignalDesign without = left;
    std::erase_if(without.conflicts, [&](const Conflict& c) { return c.a == g || c.b == g; });
    if (without.conflicts.size() == left.conflicts.size()) continue;
    if (fits(without))
      needed.push_back(g);
    else
      left = std::move(without);
  }
  return needed;
}

std::optional<int> least_general_cycle_s(const SignalDesign& design, int longest_s) {
  const auto fits = [&](int cycle_s) {
    const PeriodicModel model = periodic_model(design, cycle_s);
    if (model.contradictory) return false;
    if (model.anchor < 0) return true;
    std::int64_t nodes_left = most_nodes;
    return fits_some_order(model, model.least_split_s, nodes_left);
  };
  if (!fits(longest_s)) return std::nullopt;
  int low = 1, high = longest_s;
  while (low < high) {  // a schedule stretches to any longer cycle, so feasibility is monotone
    const int middle = (low + high) / 2;
    if (fits(middle)) high = middle; else low = middle + 1;
  }
  return low;
}

}  // namespace entrain::timing
