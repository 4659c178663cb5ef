#include "drafting/held_signal.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>

#include "base/circle.hpp"
#include "base/number_text.hpp"

namespace entrain::drafting {
namespace {

using project::TimingRow;
using timing::Group;
using timing::GroupKind;

class Holder {
 public:
  Holder(const Inputs& inputs, std::size_t signal, std::size_t period, const PlannedSignal* designed, const demand::SignalDemand& demand)
      : m_inputs(inputs), m_signal(inputs.network.signals[signal]), m_period(inputs.project.periods[period].id), m_designed(designed), m_demand(demand) {
    for (const TimingRow& row : inputs.tables.timing)
      if (row.signal == m_signal.id && (row.period.empty() || row.period == m_period)) m_rows.push_back(&row);
    m_held.planned.network_signal = static_cast<int>(signal);
  }

  Result<Noted<HeldSignal>> run() {
    if (m_rows.empty())
      return failure(error(fmt::format("{}, signal {}, period {}", m_inputs.tables.timing_source.empty() ? "timing table" : m_inputs.tables.timing_source, m_signal.id, m_period), "no row", "the timing that runs there",
                           "Add its rows, or leave the signal out of the project"));
    m_cycle = Tenths::nearest(m_rows[0]->cycle_s);
    if (!m_cycle.is_whole_second() || m_cycle.count <= 0) add_problem(*m_rows[0], "cycle " + number_text(m_rows[0]->cycle_s) + " s", "a whole number of seconds");
    m_held.greens.cycle_s = m_cycle.count / 10;
    add_vehicle_groups();
    place_by_sequence();
    if (!m_problems.empty()) return failure(std::move(m_problems));
    add_pedestrian_groups();
    add_lane_groups();
    add_conflicts();
    settle();
    return Noted<HeldSignal>{std::move(m_held), std::move(m_notes)};
  }

 private:
  timing::SignalDesign& design() { return m_held.planned.design; }
  void add_problem(const TimingRow& row, std::string found, std::string expected) {
    m_problems.push_back(error(fmt::format("{} row {}", m_inputs.tables.timing_source, row.row), std::move(found), std::move(expected), "Correct the row"));
  }
  int group_index(const std::string& id) {
    for (std::size_t g = 0; g < design().groups.size(); ++g)
      if (design().groups[g].id == id) return static_cast<int>(g);
    return -1;
  }
  const Group* designed_group(const std::string& id) const {
    if (m_designed == nullptr) return nullptr;
    for (const Group& g : m_designed->design.groups)
      if (g.id == id) return &g;
    return nullptr;
  }

  // One group for each id, greens where the rows place them.
  void add_vehicle_groups() {
    for (const TimingRow* row : m_rows) {
      if (row->cycle_s != m_rows[0]->cycle_s) add_problem(*row, fmt::format("cycle {} s", number_text(row->cycle_s)), fmt::format("{} s as in row {}", number_text(m_rows[0]->cycle_s), m_rows[0]->row));
      if (group_index(row->group) < 0) add_group(*row);
      const int g = group_index(row->group);
      auto& greens = m_greens[static_cast<std::size_t>(g)];
      if (row->green_start_s && row->green_s) greens.push_back({wrap(Tenths::nearest(*row->green_start_s), m_cycle), Tenths::nearest(*row->green_s)});
      else if (row->split_s) m_split[static_cast<std::size_t>(g)] = Tenths::nearest(*row->split_s);
      if (!row->sequence.empty()) m_sequence = row->sequence;
    }
  }
  void add_group(const TimingRow& row) {
    Group group;
    if (const Group* known = designed_group(row.group)) {
      group = *known;
      group.lane_groups.clear();
    }
    group.id = row.group;
    group.kind = GroupKind::vehicle;
    if (const auto number = parse_whole_number(row.group); number && *number >= 1 && *number <= 16) group.phase_number = static_cast<int>(*number);
    group.yellow = Tenths::nearest(row.yellow_s);
    group.red_clearance = Tenths::nearest(row.red_clearance_s);
    group.minimum_green = Tenths::nearest(row.minimum_green_s.value_or(group.minimum_green.seconds()));
    group.start_up_lost_s = m_inputs.standard.value("start_up_lost_s");
    group.end_gain_s = m_inputs.standard.value("end_gain_s");
    design().groups.push_back(std::move(group));
    m_greens.emplace_back();
    m_split.emplace_back();
  }

  static std::vector<std::vector<std::vector<std::string>>> parts_of(const std::string& sequence) {
    std::vector<std::vector<std::vector<std::string>>> rings{{{}}};
    std::string word;
    for (const char c : sequence + " ") {
      const bool is_mark = c == ' ' || c == '|' || c == '/';
      if (!is_mark) word += c;
      if (is_mark && !word.empty()) rings.back().back().push_back(word), word.clear();
      if (c == '|') rings.back().emplace_back();
      if (c == '/') rings.push_back({{}});
    }
    return rings;
  }

  // Greens of groups that have a split only: one after the other round each ring, meeting at the barriers.
  void place_by_sequence() {
    const bool needed = std::any_of(m_greens.begin(), m_greens.end(), [](const auto& list) { return list.empty(); });
    if (!needed) return;
    if (m_sequence.empty()) return add_problem(*m_rows[0], "splits without a sequence", "sequence, e.g. \"1 2|3 4 / 5 6|7 8\", on any row of the signal, or green_start_s and green_s");
    const auto rings = parts_of(m_sequence);
    std::size_t sides = 0;
    for (const auto& ring : rings) sides = std::max(sides, ring.size());
    Tenths barrier{0};
    for (std::size_t side = 0; side < sides; ++side) {
      Tenths latest = barrier;
      for (const auto& ring : rings) {
        Tenths at = barrier;
        if (side < ring.size())
          for (const std::string& id : ring[side]) at += place(id, at);
        latest = std::max(latest, at);
      }
      barrier = latest;
    }
    if (m_problems.empty() && barrier != m_cycle)
      m_notes.push_back(warning(m_signal.id, fmt::format("the splits add up to {} s in a cycle of {} s", number_text(barrier.seconds()), number_text(m_cycle.seconds()))));
    design().ring_barrier.emplace();
  }
  Tenths place(const std::string& id, Tenths at) {
    const int g = group_index(id);
    if (g < 0) {
      add_problem(*m_rows[0], fmt::format("sequence names group {}", printable(id)), "groups that have a row");
      return {0};
    }
    const auto i = static_cast<std::size_t>(g);
    const Group& group = design().groups[i];
    const Tenths green = m_split[i] - group.yellow - group.red_clearance;
    if (green.count < 0) add_problem(*m_rows[0], fmt::format("group {}: split {} s", id, number_text(m_split[i].seconds())), "at least its yellow and red clearance");
    if (m_greens[i].empty()) m_greens[i].push_back({wrap(at, m_cycle), std::max(Tenths{0}, green)});
    return m_split[i];
  }

  void add_pedestrian_groups() {
    const std::size_t vehicles = design().groups.size();
    for (std::size_t v = 0; v < vehicles; ++v)
      for (const TimingRow* row : m_rows) {
        if (row->group != design().groups[v].id || !row->walk_s || *row->walk_s <= 0 || !row->pedestrian_clearance_s || group_index("P" + row->group) >= 0) continue;
        Group walk;
        if (const Group* known = designed_group("P" + row->group)) walk = *known;
        walk.id = "P" + row->group;
        walk.kind = GroupKind::pedestrian;
        walk.parent = static_cast<int>(v);
        walk.minimum_green = Tenths::nearest(*row->walk_s);
        walk.clearance = Tenths::nearest(*row->pedestrian_clearance_s);
        const Tenths start = m_greens[v].front().start;
        design().groups.push_back(std::move(walk));
        m_greens.push_back({{start, Tenths::nearest(*row->walk_s)}});
        m_split.emplace_back();
      }
  }

  // Movements whose own group does not run today yield under the through group of their approach.
  void serve_left_over() {
    if (m_designed == nullptr) return;
    for (const auto& movement : m_signal.movements) {
      const auto serves = [&](const Group& g) { return std::any_of(g.serves.begin(), g.serves.end(), [&](const auto& s) { return s.movement == movement.id; }); };
      if (std::any_of(design().groups.begin(), design().groups.end(), serves)) continue;
      if (serving_group(m_designed->design, movement.id) < 0) continue;
      for (const auto& other : m_signal.movements) {
        if (other.from_leg != movement.from_leg || other.turn != network::TurnKind::through) continue;
        const int g = serving_group(design(), other.id);
        if (g >= 0) design().groups[static_cast<std::size_t>(g)].serves.push_back({movement.id, timing::RightOfWay::permissive, false});
        break;
      }
    }
  }

  void add_lane_groups() {
    serve_left_over();
    if (m_designed != nullptr) {
      design().lane_groups = m_designed->design.lane_groups;
      design().traffic_side = m_designed->design.traffic_side;
      design().opposed = m_designed->design.opposed;
    }
    m_held.greens.flows_vph.assign(design().lane_groups.size(), 0.0);
    for (const auto& lanes : m_demand.lane_groups) add_lane_group(lanes);
    for (std::size_t i = 0; i < design().lane_groups.size(); ++i) {
      const int g = design().lane_groups[i].movements.empty() ? -1 : group_of_movement(design().lane_groups[i].movements[0]);
      if (g >= 0) design().groups[static_cast<std::size_t>(g)].lane_groups.push_back(static_cast<int>(i));
    }
  }
  int group_of_movement(const std::string& movement) {
    if (const int g = serving_group(design(), movement); g >= 0) return g;
    for (const auto& flow : m_demand.movements)
      if (flow.movement == movement) return group_index(flow.group);
    return -1;
  }
  void add_lane_group(const demand::LaneGroup& lanes) {
    for (std::size_t i = 0; i < design().lane_groups.size(); ++i)
      if (design().lane_groups[i].id == lanes.id) {
        m_held.greens.flows_vph[i] = lanes.flow_vph;
        return;
      }
    if (m_designed != nullptr) return;
    timing::LaneGroup made;
    made.id = lanes.id;
    made.movements = lanes.movements;
    made.lanes = lanes.lanes;
    made.saturation_flow_vph = lanes.saturation_flow_vph.value_or(m_inputs.standard.value("base_saturation_flow_vph") * 0.9 * lanes.lanes);
    design().lane_groups.push_back(std::move(made));
    m_held.greens.flows_vph.push_back(lanes.flow_vph);
  }

  Tenths leaving(const Group& group) const {
    if (group.kind == GroupKind::pedestrian) return Tenths::nearest(std::ceil(m_inputs.standard.value("pedestrian_buffer_s") * 10 - 1e-6) / 10);
    return group.yellow + group.red_clearance;
  }
  void add_conflict(int a, int b, Tenths ab, Tenths ba) {
    if (a > b) std::swap(a, b), std::swap(ab, ba);
    const auto same = [&](const timing::Conflict& c) { return c.a == a && c.b == b; };
    if (a != b && std::none_of(design().conflicts.begin(), design().conflicts.end(), same)) design().conflicts.push_back({a, b, ab, ba});
  }

  // The table where it speaks of this signal; else the design's pairs, with the intergreens that today's yellow and red give.
  void add_conflicts() {
    for (const auto& row : m_inputs.tables.conflicts) {
      if (row.signal != m_signal.id) continue;
      const int a = group_index(row.group_a), b = group_index(row.group_b);
      if (a < 0 || b < 0) m_notes.push_back(warning(fmt::format("{} row {}", m_inputs.tables.conflicts_source, row.row), fmt::format("{} and {} at {}: a group without timing; not used", row.group_a, row.group_b, row.signal)));
      else add_conflict(a, b, Tenths::nearest(row.intergreen_ab_s), Tenths::nearest(row.intergreen_ba_s));
    }
    m_held.planned.conflicts_given = !design().conflicts.empty();
    if (m_designed != nullptr && !m_held.planned.conflicts_given)
      for (const auto& c : m_designed->design.conflicts) {
        const int a = group_index(m_designed->design.groups[static_cast<std::size_t>(c.a)].id), b = group_index(m_designed->design.groups[static_cast<std::size_t>(c.b)].id);
        if (a >= 0 && b >= 0) add_conflict(a, b, leaving(design().groups[static_cast<std::size_t>(a)]), leaving(design().groups[static_cast<std::size_t>(b)]));
      }
    add_pedestrian_conflicts();
  }
  // A walk conflicts with whatever conflicts with the vehicle group it runs with.
  void add_pedestrian_conflicts() {
    const auto known = design().conflicts;
    for (std::size_t p = 0; p < design().groups.size(); ++p) {
      const int parent = design().groups[p].parent;
      if (design().groups[p].kind != GroupKind::pedestrian || parent < 0) continue;
      for (const auto& c : known) {
        const int other = c.a == parent ? c.b : c.b == parent ? c.a : -1;
        if (other < 0 || design().groups[static_cast<std::size_t>(other)].kind == GroupKind::pedestrian) continue;
        add_conflict(static_cast<int>(p), other, leaving(design().groups[p]), leaving(design().groups[static_cast<std::size_t>(other)]));
      }
    }
  }

  double saturation(std::size_t g) const {
    double effective = 0, worst = 0;
    const Group& group = m_held.planned.design.groups[g];
    for (const Arc& arc : m_greens[g]) effective += std::max(0.0, arc.duration.seconds() - group.start_up_lost_s + group.end_gain_s);
    for (const int index : group.lane_groups) {
      const auto i = static_cast<std::size_t>(index);
      const double capacity = m_held.planned.design.lane_groups[i].saturation_flow_vph * std::min(1.0, effective / m_cycle.seconds());
      if (capacity > 0) worst = std::max(worst, m_held.greens.flows_vph[i] / capacity);
    }
    return worst;
  }

  void settle() {
    design().signal = m_signal.id;
    apply_signal_row(m_inputs, m_signal.id, m_held.planned);
    std::string reference = m_rows[0]->reference_group;
    for (const TimingRow* row : m_rows)
      if (row->coordinated && reference.empty()) reference = row->group;
    design().reference_group = std::max(0, group_index(reference));
    settle_coordinated(m_inputs, m_held.planned);
    timing::Allocation order;
    order.order = "as it runs";
    order.sequence = m_sequence;
    const Tenths zero = m_greens[static_cast<std::size_t>(design().reference_group)].front().start;
    for (std::size_t g = 0; g < design().groups.size(); ++g) {
      for (Arc& arc : m_greens[g]) arc.start = wrap(arc.start - zero, m_cycle);
      timing::GroupGreen green{m_greens[g], {0}, saturation(g)};
      const Group& group = design().groups[g];
      if (group.kind == GroupKind::vehicle && m_greens[g].size() == 1) green.split = m_greens[g][0].duration + group.yellow + group.red_clearance;
      order.oversaturated = order.oversaturated || green.degree_of_saturation > 1;
      order.groups.push_back(std::move(green));
    }
    m_held.greens.orders = {std::move(order)};
    take_offset();
  }

  void take_offset() {
    for (const TimingRow* row : m_rows) {
      if (!row->offset_s) continue;
      const int g = row->reference_group.empty() ? design().reference_group : group_index(row->reference_group);
      if (g < 0) return;
      const Group& group = design().groups[static_cast<std::size_t>(g)];
      const Arc& green = m_greens[static_cast<std::size_t>(g)].front();
      double instant = green.start.seconds();
      if (row->offset_reference == "begin_of_yellow") instant += green.duration.seconds();
      if (row->offset_reference == "begin_of_red") instant += green.duration.seconds() + group.yellow.seconds();
      if (row->offset_reference == "begin_of_pedestrian_clearance") instant += row->walk_s.value_or(0);
      m_held.offset_s = wrap(*row->offset_s - instant, m_cycle.seconds());
      return;
    }
  }

  const Inputs& m_inputs;
  const network::Signal& m_signal;
  std::string m_period;
  const PlannedSignal* m_designed;
  const demand::SignalDemand& m_demand;
  std::vector<const TimingRow*> m_rows;
  HeldSignal m_held;
  Tenths m_cycle;
  std::string m_sequence;
  std::vector<std::vector<Arc>> m_greens;  // by group
  std::vector<Tenths> m_split;
  Diagnostics m_problems, m_notes;
};

}  // namespace

Result<Noted<HeldSignal>> held_signal(const Inputs& inputs, std::size_t network_signal, std::size_t period, const PlannedSignal* designed, const demand::SignalDemand& demand) {
  return Holder(inputs, network_signal, period, designed, demand).run();
}

}  // namespace entrain::drafting
