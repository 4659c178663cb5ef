#include "timing/general_allocation.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <limits>
#include <set>

#include "base/natural_order.hpp"
#include "base/number_text.hpp"
#include "timing/allocation_parts.hpp"
#include "timing/group_times.hpp"
#include "timing/turn_trap.hpp"

namespace entrain::timing {
namespace {

constexpr std::int64_t node_limit = 200'000;  // nodes of one order search
constexpr std::size_t most_orders = 24;       // orders looked at as alternatives

struct Flow {  // of one vehicle group that has any
  std::size_t group = 0;
  double ratio = 0, lost_s = 0;
};

// Least split that keeps the degree of saturation at or below `degree`, by the same arithmetic that rates it.
int split_for(const Flow& flow, double degree, int least_s, int cycle_s) {
  int split = least_s;
  const auto too_high = [&](int s) { return degree_of_saturation(flow.ratio, cycle_s, s - flow.lost_s) > degree; };
  const double guess = degree > 0 ? flow.lost_s + flow.ratio * cycle_s / degree : 0;
  if (std::isfinite(guess) && guess - 2 > split) split = static_cast<int>(std::min(guess - 2, 1e6));
  while (too_high(split)) ++split;
  return split;
}

// Max-min fair splits: fix the level of the worst group, then of the next, trying each group that can be the one where several tie.
class FairSearch {
 public:
  FairSearch(const PeriodicModel& model, std::vector<Flow> flows) : m_model(model), m_flows(std::move(flows)) {}

  // Splits by group and a feasible choice of orders; nothing if even the minimums do not fit.
  bool run(const std::vector<int>& hint) {
    m_hint = hint;
    std::vector<int> splits = m_model.least_split_s;
    if (!feasible(splits)) return false;
    m_fixed.assign(m_flows.size(), false);
    descend(splits, {}, 0, std::numeric_limits<double>::infinity());
    return true;
  }

  const std::vector<int>& splits() const { return m_best_splits; }
  const std::vector<int>& picks() const { return m_best_picks; }
  const std::vector<double>& vector() const { return m_best; }
  bool complete() const { return m_complete; }
  // Only these picks are allowed (a given order) from here on.
  void hold(const std::vector<int>& picks) { m_held = picks; }

 private:
  bool feasible(const std::vector<int>& splits) {
    const OrderProblem problem = with_splits(m_model, splits);
    if (!m_held.empty()) return closure_of(problem, m_held).has_value();
    const SearchResult result = find_order(problem, m_hint, node_limit);
    m_complete = m_complete && result.complete;
    if (result.picks) m_hint = *result.picks;
    return result.picks.has_value();
  }

  std::vector<int> raised(std::vector<int> splits, double degree) const {
    for (std::size_t f = 0; f < m_flows.size(); ++f) {
      if (m_fixed[f]) continue;
      const std::size_t g = m_flows[f].group;
      splits[g] = split_for(m_flows[f], degree, m_model.least_split_s[g], m_model.cycle_s);
    }
    return splits;
  }

  // All degrees that an open group can have, ascending.
  std::vector<double> levels() const {
    std::vector<double> all;
    for (std::size_t f = 0; f < m_flows.size(); ++f) {
      if (m_fixed[f]) continue;
      const int least = m_model.least_split_s[m_flows[f].group];
      for (int split = least; split <= std::max(least, m_model.cycle_s); ++split)
        all.push_back(degree_of_saturation(m_flows[f].ratio, m_model.cycle_s, split - m_flows[f].lost_s));
    }
    std::sort(all.begin(), all.end());
    all.erase(std::unique(all.begin(), all.end()), all.end());
    return all;
  }

  // Smallest level at which all open groups can stand.
  double least_level(const std::vector<int>& splits) {
    const std::vector<double> all = levels();
    std::size_t low = 0, high = all.size() - 1;  // the highest is feasible: every open group at its minimum
    while (low < high) {
      const std::size_t middle = (low + high) / 2;
      if (feasible(raised(splits, all[middle]))) high = middle; else low = middle + 1;
    }
    return all[low];
  }

  void descend(std::vector<int> splits, std::vector<double> vector, std::size_t first, double level_before) {
    if (vector.size() == m_flows.size()) {
      if (m_best_splits.empty() || vector < m_best) keep(splits, std::move(vector));
      return;
    }
    const double level = least_level(splits);
    vector.push_back(level);
    if (!m_best.empty() && std::lexicographical_compare(m_best.begin(), m_best.begin() + static_cast<std::ptrdiff_t>(vector.size()), vector.begin(), vector.end())) return;
    const std::vector<int> at_level = raised(splits, level);
    for (std::size_t f = level == level_before ? first : 0; f < m_flows.size(); ++f) {
      const std::size_t g = m_flows[f].group;
      if (m_fixed[f] || degree_of_saturation(m_flows[f].ratio, m_model.cycle_s, at_level[g] - m_flows[f].lost_s) != level) continue;
      m_fixed[f] = true;
      std::vector<int> next = splits;
      next[g] = at_level[g];
      descend(std::move(next), vector, f + 1, level);
      m_fixed[f] = false;
    }
  }

  void keep(const std::vector<int>& splits, std::vector<double> vector) {
    if (!feasible(splits)) return;
    m_best = std::move(vector);
    m_best_splits = splits;
    m_best_picks = m_held.empty() ? m_hint : m_held;
  }

  const PeriodicModel& m_model;
  std::vector<Flow> m_flows;
  std::vector<bool> m_fixed;
  std::vector<int> m_hint, m_held, m_best_splits, m_best_picks;
  std::vector<double> m_best;
  bool m_complete = true;
};

std::vector<Flow> flows_of(const SignalDesign& design, const PeriodicModel& model, const std::vector<double>& flows_vph) {
  std::vector<Flow> flows;
  for (std::size_t g = 0; g < design.groups.size(); ++g) {
    const double ratio = flow_ratio(design, design.groups[g], flows_vph);
    if (model.end[g] >= 0 && ratio > 0) flows.push_back({g, ratio, lost_in_split_s(design.groups[g])});
  }
  return flows;
}

// Lets every group grow as far as the order allows, one after the other, then reads the earliest starts.
Closure grown(const PeriodicModel& model, const std::vector<int>& splits, const std::vector<int>& picks, int coordinated) {
  Closure closure = *closure_of(with_splits(model, splits), picks);
  const auto grow = [&](std::size_t g) {
    if (model.end[g] < 0) return;
    const int most = -closure.gap(model.end[g], model.start[g]);
    closure.add({model.start[g], model.end[g], most});
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

std::vector<Allocation> alternatives(const SignalDesign& design, const AllocationRequest& request, const PeriodicModel& model,
                                     const FairSearch& best, const std::vector<Flow>& flows) {
  std::vector<int> splits = model.least_split_s;
  if (!best.vector().empty())
    for (const Flow& flow : flows)
      splits[flow.group] = split_for(flow, best.vector().front() * (1 + request.keep_share), splits[flow.group], model.cycle_s);
  const Orders orders = all_orders(with_splits(model, splits), most_orders, node_limit);
  std::vector<Allocation> found;
  for (const auto& picks : orders.picks) {
    FairSearch fair(model, flows);
    fair.hold(picks);
    if (!fair.run({})) continue;
    const Closure closure = grown(model, fair.splits(), picks, design.reference_group);
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

}  // namespace

Result<std::vector<Allocation>> allocate_general(const SignalDesign& design, const AllocationRequest& request) {
  const int cycle_s = request.cycle.count / 10;
  const PeriodicModel model = periodic_model(design, cycle_s);
  if (model.contradictory)
    return failure(error("signal " + design.signal, "a pedestrian group that conflicts with the group it runs with", "another parent", "Name another group for the crossing."));
  if (model.anchor < 0) return std::vector<Allocation>{finished(design, request, model, nullptr)};
  const std::vector<Flow> flows = flows_of(design, model, request.flows_vph);
  FairSearch best(model, flows);
  if (!best.run({})) return failure(does_not_fit(design, request));
  const Closure closure = grown(model, best.splits(), best.picks(), design.reference_group);
  std::vector<Allocation> found{finished(design, request, model, &closure)};
  for (Allocation& other : alternatives(design, request, model, best, flows)) found.push_back(std::move(other));
  for (Allocation& allocation : found) allocation.proved = best.complete();
  const std::vector<Trap> traps = possible_traps(design);
  std::erase_if(found, [&](const Allocation& a) {
    return find_clash(design, request.cycle, a.groups) || find_trap(design, traps, request.cycle, arcs_of(a));
  });
  sort_and_thin(found);
  if (found.empty()) return failure(error("signal " + design.signal, "only orders that would trap an opposed turn", "one that does not", "Protect the opposed turn or give its group a green that ends with the opposing one."));
  return found;
}

std::optional<int> least_general_cycle_s(const SignalDesign& design, int longest_s) {
  const auto fits = [&](int cycle_s) {
    const PeriodicModel model = periodic_model(design, cycle_s);
    if (model.contradictory) return false;
    if (model.anchor < 0) return true;
    return find_order(with_splits(model, model.least_split_s), {}, node_limit).picks.has_value();
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
