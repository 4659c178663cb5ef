#include <algorithm>
#include <cmath>
#include <map>

#include "timing/cliques.hpp"
#include "timing/general_allocation.hpp"
#include "timing/group_times.hpp"
#include "timing/turn_trap.hpp"

namespace entrain::timing {
namespace {

int ceil_seconds(Tenths t) { return round_up_to_second(t).count / 10; }

// time[point.time] + point.offset
struct TimePoint {
  int time = 0, offset_s = 0;
};

class Builder {
 public:
  Builder(const SignalDesign& design, int cycle_s) : m_design(design) {
    m_model.cycle_s = cycle_s;
    m_model.start.assign(design.groups.size(), -1);
    m_model.end.assign(design.groups.size(), -1);
    m_model.least_split_s.assign(design.groups.size(), 0);
  }

  PeriodicModel build() {
    number_times();
    if (m_model.anchor < 0) return m_model;
    bound_times();
    for (const Conflict& conflict : m_design.conflicts) add_conflict(conflict);
    for (const auto& [pair, gaps] : m_pairs) m_model.problem.choices.push_back(order_choice(pair, gaps));
    m_model.conflict_choices = m_model.problem.choices.size();
    for (const Trap& trap : possible_traps(m_design)) add_trap_guard(trap);
    add_cliques();
    return m_model;
  }

 private:
  using Pair = std::pair<int, int>;  // start times, first < second
  struct Gaps {
    std::vector<Difference> forward, backward;  // of the pair's first before its second, of the second before the first
  };

  const Group& group(int g) const { return m_design.groups[static_cast<std::size_t>(g)]; }
  bool has_parent(int g) const { return group(g).kind == GroupKind::pedestrian && group(g).parent >= 0; }
  int& start_of(int g) { return m_model.start[static_cast<std::size_t>(g)]; }
  int& end_of(int g) { return m_model.end[static_cast<std::size_t>(g)]; }

  void number_times() {
    std::vector<bool> used(m_design.groups.size(), false);
    for (const Conflict& conflict : m_design.conflicts)
      for (const int g : {conflict.a, conflict.b}) {
        if (group(g).on_call) continue;
        used[static_cast<std::size_t>(has_parent(g) ? group(g).parent : g)] = true;
      }
    for (int g = 0; g < static_cast<int>(used.size()); ++g)
      if (used[static_cast<std::size_t>(g)]) {
        start_of(g) = m_model.problem.times++;
        if (group(g).kind != GroupKind::pedestrian) end_of(g) = m_model.problem.times++;
      }
    for (int g = 0; g < static_cast<int>(used.size()); ++g)
      if (has_parent(g)) start_of(g) = start_of(group(g).parent);
    const int reference = m_design.reference_group;
    m_model.anchor = start_of(reference) >= 0 ? reference : -1;
    for (int g = 0; m_model.anchor < 0 && g < static_cast<int>(used.size()); ++g)
      if (used[static_cast<std::size_t>(g)]) m_model.anchor = g;
  }

  void bound_times() {
    const int zero = start_of(m_model.anchor), cycle = m_model.cycle_s;
    for (int g = 0; g < static_cast<int>(m_design.groups.size()); ++g) {
      if (start_of(g) < 0 || has_parent(g)) continue;
      if (start_of(g) != zero) {
        m_model.problem.always.push_back({zero, start_of(g), 0});
        m_model.problem.always.push_back({start_of(g), zero, -(cycle - 1)});
      }
      if (end_of(g) < 0) continue;
      m_model.least_split_s[static_cast<std::size_t>(g)] = least_split_s(group(g));
      m_model.problem.always.push_back({end_of(g), start_of(g), -cycle});
    }
  }

  TimePoint start_point(int g) { return {start_of(g), 0}; }
  // The point from which an intergreen of `intergreen` after group g runs out.
  TimePoint clear_point(int g, Tenths intergreen) {
    if (group(g).kind == GroupKind::pedestrian) return {start_of(g), ceil_seconds(pedestrian_occupancy(group(g)) + intergreen)};
    return {end_of(g), ceil_seconds(intergreen - change_time(group(g)))};
  }

  void add_conflict(const Conflict& conflict) {
    const int a = conflict.a, b = conflict.b;
    if (group(a).on_call || group(b).on_call) return;  // checked when its green is placed
    if (start_of(a) == start_of(b)) {
      m_model.contradictory = true;
      return;
    }
    const TimePoint after_a = clear_point(a, conflict.intergreen_ab), after_b = clear_point(b, conflict.intergreen_ba);
    const Difference ab{after_a.time, start_of(b), after_a.offset_s}, ba{after_b.time, start_of(a), after_b.offset_s};
    const bool in_order = start_of(a) < start_of(b);
    Gaps& gaps = m_pairs[in_order ? Pair{start_of(a), start_of(b)} : Pair{start_of(b), start_of(a)}];
    (in_order ? gaps.forward : gaps.backward).push_back(ab);
    (in_order ? gaps.backward : gaps.forward).push_back(ba);
  }

  // All starts lie in one cycle from the anchor, so one of the two starts first and the other ends a cycle before it starts again.
  Choice order_choice(const Pair&, const Gaps& gaps) const {
    std::vector<Difference> first = gaps.forward, second = gaps.backward;
    for (Difference d : gaps.backward) first.push_back({d.from, d.to, d.least - m_model.cycle_s});
    for (Difference d : gaps.forward) second.push_back({d.from, d.to, d.least - m_model.cycle_s});
    return {{first, second}};
  }

  // The turn's green must end inside no green of the opposing group: for some whole number of cycles k,
  // opposing green end <= turn's green end + k C <= opposing start + C.
  void add_trap_guard(const Trap& trap) {
    const int turn = trap.turn_group, opposing = trap.opposing_group;
    if (end_of(turn) < 0 || end_of(opposing) < 0) return;
    const Tenths turn_change = change_time(group(turn)), opposing_change = change_time(group(opposing));
    Choice choice;
    for (const int k : {0, -1, 1}) {
      const int after = ceil_seconds(turn_change - opposing_change) - k * m_model.cycle_s;
      const int before = ceil_seconds(-turn_change) + (k - 1) * m_model.cycle_s;
      choice.alternatives.push_back({{end_of(opposing), end_of(turn), after}, {end_of(turn), start_of(opposing), before}});
    }
    m_model.problem.choices.push_back(std::move(choice));
  }

  void add_cliques() {
    std::vector<int> vehicles;
    for (int g = 0; g < static_cast<int>(m_model.end.size()); ++g)
      if (end_of(g) >= 0) vehicles.push_back(g);
    for (const auto& clique : maximal_cliques(m_design, vehicles)) {
      std::vector<std::vector<double>> between(clique.size(), std::vector<double>(clique.size(), 0));
      for (std::size_t i = 0; i < clique.size(); ++i)
        for (std::size_t j = 0; j < clique.size(); ++j)
          if (const Conflict* c = i == j ? nullptr : find_conflict(m_design, clique[i], clique[j]))
            between[i][j] = clear_point(clique[i], c->a == clique[i] ? c->intergreen_ab : c->intergreen_ba).offset_s;
      CliqueBound bound;
      bound.groups.assign(clique.begin(), clique.end());
      if (clique.size() > 12) continue;  // the order would not be the cheapest for certain
      bound.between_s = static_cast<int>(std::lround(cheapest_cyclic_order(clique, between).sum));
      m_model.cliques.push_back(std::move(bound));
    }
  }

  const SignalDesign& m_design;
  PeriodicModel m_model;
  std::map<Pair, Gaps> m_pairs;
};

}  // namespace

PeriodicModel periodic_model(const SignalDesign& design, int cycle_s) { return Builder(design, cycle_s).build(); }

bool may_fit(const PeriodicModel& model, const std::vector<int>& split_s) {
  return std::none_of(model.cliques.begin(), model.cliques.end(), [&](const CliqueBound& clique) {
    int sum = clique.between_s;
    for (const std::size_t g : clique.groups) sum += split_s[g];
    return sum > model.cycle_s;
  });
}

bool add_splits(const PeriodicModel& model, const std::vector<int>& split_s, Closure& closure) {
  for (std::size_t g = 0; g < split_s.size(); ++g)
    if (model.end[g] >= 0 && !closure.add(Difference{model.start[g], model.end[g], split_s[g]})) return false;
  return true;
}

}  // namespace entrain::timing
