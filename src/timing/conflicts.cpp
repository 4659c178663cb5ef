#include "timing/conflicts.hpp"

#include <algorithm>

#include "base/natural_order.hpp"
#include "timing/group_times.hpp"
#include "timing/paths.hpp"

namespace entrain::timing {
namespace {

const network::Movement& movement_of(const network::Signal& signal, const std::string& id) {
  return *std::find_if(signal.movements.begin(), signal.movements.end(), [&](const auto& m) { return m.id == id; });
}

const network::Crossing& crossing_of(const network::Signal& signal, const std::string& id) {
  return *std::find_if(signal.crossings.begin(), signal.crossings.end(), [&](const auto& c) { return c.id == id; });
}

bool lets_pass(const ConflictRules& rules, const Served& served, const network::Movement& own, const network::Movement& other) {
  return served.right_of_way == RightOfWay::permissive && is_allowed(rules.standard, "opposed_turn") && yields_to(rules.signal, own, other);
}

bool served_pair_conflicts(const ConflictRules& rules, const Served& a, const Served& b) {
  const network::Movement &x = movement_of(rules.signal, a.movement), &y = movement_of(rules.signal, b.movement);
  return paths_conflict(rules.signal, x, y) && !lets_pass(rules, a, x, y) && !lets_pass(rules, b, y, x);
}

bool yields_to_people(const ConflictRules& rules, const Served& served, const network::Movement& movement, const network::Crossing& crossing) {
  using network::TurnKind;
  const bool turns = movement.turn == TurnKind::left || movement.turn == TurnKind::right;
  return served.right_of_way == RightOfWay::permissive && turns && movement.to_leg == crossing.leg && movement.from_leg != crossing.leg &&
         is_allowed(rules.standard, "turn_over_crossing");
}

class Pedestrians {
 public:
  Pedestrians(const ConflictRules& rules, const DesignRequest& request, SignalDesign& design)
      : m_rules(rules), m_request(request), m_design(design), m_vehicle_groups(static_cast<int>(design.groups.size())) {}

  Diagnostics add() {
    for (const network::Crossing& crossing : m_rules.signal.crossings) place(crossing);
    std::sort(m_design.groups.begin() + m_vehicle_groups, m_design.groups.end(), [](const Group& a, const Group& b) { return natural_less(a.id, b.id); });
    return std::move(m_errors);
  }

 private:
  const Group& group(int g) const { return m_design.groups[static_cast<std::size_t>(g)]; }
  const std::string& leg_id(const network::Crossing& crossing) const { return m_rules.signal.legs[static_cast<std::size_t>(crossing.leg)].id; }

  std::string named(const network::Crossing& crossing) const {
    const auto change = m_request.crossing_changes.find(leg_id(crossing));
    return change == m_request.crossing_changes.end() ? "" : change->second.group;
  }

  bool on_call(const network::Crossing& crossing) const {
    for (const std::string& key : {crossing.id, leg_id(crossing)})
      if (const auto found = m_request.crossing_service.find(key); found != m_request.crossing_service.end()) return found->second == "on_call";
    return false;
  }

  // Whatever conflicts with the crossing conflicts with the parent too, so that nothing dangerous can start while people cross.
  bool can_carry(int parent, const network::Crossing& crossing) const {
    if (conflicts_with_crossing(m_rules, group(parent), crossing)) return false;
    for (int g = 0; g < m_vehicle_groups; ++g)
      if (g != parent && conflicts_with_crossing(m_rules, group(g), crossing) && !groups_conflict(m_rules, group(parent), group(g))) return false;
    return true;
  }

  bool serves(int parent, const network::Crossing& crossing, bool beside) const {
    return std::any_of(group(parent).serves.begin(), group(parent).serves.end(), [&](const Served& served) {
      const network::Movement& movement = movement_of(m_rules.signal, served.movement);
      if (movement.turn != network::TurnKind::through || path_meets_crossing(movement, crossing)) return false;
      return !beside || is_beside(m_rules.signal, movement, crossing);
    });
  }

  bool conflicts_with_anything(const network::Crossing& crossing) const {
    for (int g = 0; g < m_vehicle_groups; ++g)
      if (conflicts_with_crossing(m_rules, group(g), crossing)) return true;
    return false;
  }

  int parent_for(const network::Crossing& crossing) const {
    for (const int wish : {0, 1, 2})  // beside the crossing, parallel, any
      for (int g = 0; g < m_vehicle_groups; ++g)
        if ((wish == 2 || serves(g, crossing, wish == 0)) && can_carry(g, crossing)) return g;
    return -1;
  }

  std::optional<int> parent_by_name(const network::Crossing& crossing, const std::string& name) {
    const std::string id = name.size() > 1 && name[0] == 'P' ? name.substr(1) : name;
    const int parent = find_group(m_design, id);
    const std::string where = "signal " + m_rules.signal.id + ", crossing " + crossing.id;
    if (parent < 0 || parent >= m_vehicle_groups) {
      m_errors.push_back(error(where, "group " + printable(name), "P and the id of a vehicle group of the signal", "Correct crossings.group."));
      return std::nullopt;
    }
    if (!can_carry(parent, crossing)) {
      m_errors.push_back(error(where, "group " + printable(name) + ", with whose green people would meet traffic that does not yield", "a group that keeps such traffic off",
                               "Correct crossings.group or leave it empty."));
      return std::nullopt;
    }
    return parent;
  }

  void place(const network::Crossing& crossing) {
    const std::string name = named(crossing);
    const auto parent = name.empty() ? std::optional<int>(parent_for(crossing)) : parent_by_name(crossing, name);
    if (!parent) return;
    const bool call = on_call(crossing);
    for (Group& existing : m_design.groups)
      if (existing.kind == GroupKind::pedestrian && existing.parent == *parent && existing.on_call == call && (*parent >= 0 || exclusive_together(existing, crossing))) {
        existing.crossings.push_back(crossing.id);
        return;
      }
    m_design.groups.push_back(fresh(crossing, *parent, call));
  }

  // Exclusive groups with the same conflicts may share one green.
  bool exclusive_together(const Group& existing, const network::Crossing& crossing) const {
    const network::Crossing& first = crossing_of(m_rules.signal, existing.crossings.front());
    for (int g = 0; g < m_vehicle_groups; ++g)
      if (conflicts_with_crossing(m_rules, group(g), first) != conflicts_with_crossing(m_rules, group(g), crossing)) return false;
    return true;
  }

  Group fresh(const network::Crossing& crossing, int parent, bool call) {
    Group pedestrians;
    pedestrians.kind = GroupKind::pedestrian;
    pedestrians.parent = parent;
    pedestrians.on_call = call;
    pedestrians.crossings = {crossing.id};
    std::string id = parent >= 0 ? "P" + group(parent).id : "P" + leg_id(crossing);
    while (find_group(m_design, id) >= 0) id += "'";
    pedestrians.id = id;
    if (parent < 0)
      m_design.assumptions.push_back("crossing " + crossing.id + ": no group runs beside it safely, people get a green of their own");
    else if (!serves(parent, crossing, false))
      m_design.assumptions.push_back("crossing " + crossing.id + ": runs with group " + group(parent).id + ", no through movement runs beside it");
    return pedestrians;
  }

  const ConflictRules& m_rules;
  const DesignRequest& m_request;
  SignalDesign& m_design;
  int m_vehicle_groups;
  Diagnostics m_errors;
};

bool pair_conflicts(const ConflictRules& rules, const Group& a, const Group& b) {
  const bool a_walks = a.kind == GroupKind::pedestrian, b_walks = b.kind == GroupKind::pedestrian;
  if (a_walks && b_walks) return false;
  if (!a_walks && !b_walks) return groups_conflict(rules, a, b);
  const Group &walkers = a_walks ? a : b, &vehicles = a_walks ? b : a;
  return std::any_of(walkers.crossings.begin(), walkers.crossings.end(),
                     [&](const std::string& id) { return conflicts_with_crossing(rules, vehicles, crossing_of(rules.signal, id)); });
}

int ring_of(int number) { return number <= 4 ? 0 : 1; }
int side_of(int number) { return number == 1 || number == 2 || number == 5 || number == 6 ? 0 : 1; }

// In one ring groups follow each other, over the barrier too; what stands in different rings on one side may run together.
bool may_run_together(const Group& a, const Group& b) {
  return side_of(*a.phase_number) == side_of(*b.phase_number) && ring_of(*a.phase_number) != ring_of(*b.phase_number);
}

}  // namespace

bool groups_conflict(const ConflictRules& rules, const Group& a, const Group& b) {
  for (const Served& x : a.serves)
    for (const Served& y : b.serves)
      if (served_pair_conflicts(rules, x, y)) return true;
  return false;
}

bool conflicts_with_crossing(const ConflictRules& rules, const Group& group, const network::Crossing& crossing) {
  return std::any_of(group.serves.begin(), group.serves.end(), [&](const Served& served) {
    const network::Movement& movement = movement_of(rules.signal, served.movement);
    return path_meets_crossing(movement, crossing) && !yields_to_people(rules, served, movement, crossing);
  });
}

Diagnostics add_pedestrian_groups(const ConflictRules& rules, const DesignRequest& request, SignalDesign& design) {
  return Pedestrians(rules, request, design).add();
}

std::vector<Conflict> conflicting_pairs(const ConflictRules& rules, const SignalDesign& design) {
  std::vector<Conflict> pairs;
  const int n = static_cast<int>(design.groups.size());
  for (int a = 0; a < n; ++a)
    for (int b = a + 1; b < n; ++b)
      if (pair_conflicts(rules, design.groups[static_cast<std::size_t>(a)], design.groups[static_cast<std::size_t>(b)])) pairs.push_back({a, b, {}, {}});
  return pairs;
}

std::optional<RingBarrier> ring_barrier_from_numbers(const SignalDesign& design) {
  std::vector<std::vector<std::vector<int>>> rings(2, std::vector<std::vector<int>>(2));
  for (const int number : {1, 2, 3, 4, 5, 6, 7, 8})
    for (std::size_t g = 0; g < design.groups.size(); ++g)
      if (design.groups[g].phase_number == number)
        rings[static_cast<std::size_t>(ring_of(number))][static_cast<std::size_t>(side_of(number))].push_back(static_cast<int>(g));
  for (std::size_t g = 0; g < design.groups.size(); ++g) {
    const Group& group = design.groups[g];
    const bool walks = group.kind == GroupKind::pedestrian;
    if (walks ? group.parent < 0 : !group.phase_number || *group.phase_number > 8) return std::nullopt;
  }
  for (const Conflict& conflict : design.conflicts) {
    const Group* pair[2] = {&design.groups[static_cast<std::size_t>(conflict.a)], &design.groups[static_cast<std::size_t>(conflict.b)]};
    for (const Group*& group : pair)
      if (group->kind == GroupKind::pedestrian) group = &design.groups[static_cast<std::size_t>(group->parent)];
    if (pair[0] == pair[1] || may_run_together(*pair[0], *pair[1])) return std::nullopt;
  }
  if (rings[1][0].empty() && rings[1][1].empty()) rings.pop_back();
  for (std::size_t side = 2; side-- > 0;)
    if (std::all_of(rings.begin(), rings.end(), [&](const auto& ring) { return ring[side].empty(); }))
      for (auto& ring : rings) ring.erase(ring.begin() + static_cast<std::ptrdiff_t>(side));
  return RingBarrier{std::move(rings)};
}

}  // namespace entrain::timing
