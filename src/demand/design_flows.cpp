#include <fmt/format.h>

#include <algorithm>
#include <map>
#include <set>

#include "base/number_text.hpp"
#include "demand/demand.hpp"

namespace entrain::demand {
namespace {

using network::TurnKind;
using project::MovementRow;

char letter(TurnKind turn) {
  constexpr char letters[] = {'L', 'T', 'R', 'U'};
  return letters[static_cast<int>(turn)];
}

Control control_of(const std::string& word) {
  if (word == "yield") return Control::yield;
  if (word == "free") return Control::free;
  return word == "prohibited" ? Control::prohibited : Control::signal;
}

TurnTreatment treatment_of(const std::string& word) {
  if (word == "protected") return TurnTreatment::with_protection;
  if (word == "permissive") return TurnTreatment::permissive;
  return word == "protected_permissive" ? TurnTreatment::protected_permissive : TurnTreatment::not_stated;
}

bool is_major(network::RoadClass road_class) { return road_class <= network::RoadClass::secondary; }

// Reads the rows of one signal for one period.
class SignalReader {
 public:
  SignalReader(const network::Signal& signal, const std::string& source, const DemandDefaults& defaults) : m_signal(signal), m_source(source), m_defaults(defaults) {}

  SignalDemand read(const std::vector<const MovementRow*>& rows) {
    m_demand.signal = m_signal.id;
    if (m_signal.movements.empty()) return read_without_geometry(rows);
    m_row_of.assign(m_signal.movements.size(), nullptr);
    for (const MovementRow* row : rows) assign(*row);
    for (std::size_t m = 0; m < m_signal.movements.size(); ++m) add_movement(m);
    add_lane_groups();
    return std::move(m_demand);
  }

  Diagnostics problems;
  int assumed_flows = 0, assumed_peak_factors = 0, assumed_lane_groups = 0;

 private:
  std::string where(const MovementRow& row) const { return fmt::format("{} row {}", m_source, row.row); }
  const network::Leg& leg_of(std::size_t movement) const { return m_signal.legs[static_cast<std::size_t>(m_signal.movements[movement].from_leg)]; }

  void assign(const MovementRow& row) {
    std::vector<std::size_t> matches;
    std::set<std::string> approaches;
    for (std::size_t m = 0; m < m_signal.movements.size(); ++m) {
      const auto& movement = m_signal.movements[m];
      approaches.insert(movement.approach + "-" + letter(movement.turn));
      if (movement.approach != row.approach || std::string(1, letter(movement.turn)) != row.turn) continue;
      const network::Leg& leg = leg_of(m);
      if (!row.from.empty() && row.from != leg.neighbour && row.from != leg.street && row.from != leg.id) continue;
      matches.push_back(m);
    }
    if (matches.empty() && row.volume_vph.value_or(0) == 0) return;
    if (matches.empty() && row.control == "prohibited") return;
    if (matches.empty()) {
      std::string all;
      for (const auto& name : approaches) all += (all.empty() ? "" : ", ") + name;
      problems.push_back(error(where(row), fmt::format("{}-{} at {}", row.approach, row.turn, m_signal.id), "a movement that the roads allow there: " + all,
                               "Correct the row, the map or the turn restriction (approaches are named by direction of travel)"));
      return;
    }
    if (matches.size() > 1 && row.from.empty() && m_signal.movements[matches[0]].from_leg != m_signal.movements[matches[1]].from_leg) {
      problems.push_back(error(where(row), fmt::format("{}-{} at {} fits {} approaches", row.approach, row.turn, m_signal.id, matches.size()), "column from: the neighbour signal or street it comes from",
                               "Fill the column from"));
      return;
    }
    for (const std::size_t m : matches) m_row_of[m] = &row;
    m_share[&row] = 1.0 / static_cast<double>(matches.size());
  }

  double assumed_flow(std::size_t m) {
    const network::Leg& leg = leg_of(m);
    const double through = (is_major(leg.road_class) ? m_defaults.through_vph_per_lane_major : m_defaults.through_vph_per_lane_minor) * std::max(1, leg.lanes_in);
    ++assumed_flows;
    switch (m_signal.movements[m].turn) {
      case TurnKind::through: return through;
      case TurnKind::left: return through * m_defaults.left_share;
      case TurnKind::right: return through * m_defaults.right_share;
      case TurnKind::u_turn: return 0;
    }
    return 0;
  }

  double counted_flow(const MovementRow& row) {
    if (!row.peak_hour_factor) ++assumed_peak_factors;
    return *row.volume_vph * m_share.at(&row) / row.peak_hour_factor.value_or(m_defaults.peak_hour_factor);
  }

  void add_movement(std::size_t m) {
    const MovementRow* row = m_row_of[m];
    MovementFlow flow;
    flow.movement = m_signal.movements[m].id;
    flow.heavy_vehicle_pct = m_defaults.heavy_vehicle_pct;
    if (row != nullptr) {
      flow.control = control_of(row->control);
      flow.treatment = treatment_of(row->turn_treatment);
      flow.group = row->group;
      flow.heavy_vehicle_pct = row->heavy_vehicle_pct.value_or(flow.heavy_vehicle_pct);
    }
    if (flow.control == Control::prohibited) return;
    const bool counted = row != nullptr && row->volume_vph;
    flow.flow_vph = counted ? counted_flow(*row) : assumed_flow(m);
    flow.origin = counted ? Origin::counted : Origin::assumed;
    m_movement_index.push_back(m);
    m_demand.movements.push_back(std::move(flow));
  }

  // The lane group's name: the row's, else by the lanes the map marks, else all turns of the leg together.
  std::string lane_group_name(std::size_t i) const {
    const std::size_t m = m_movement_index[i];
    if (m_row_of[m] != nullptr && !m_row_of[m]->lane_group.empty()) return m_row_of[m]->lane_group;
    const network::Leg& leg = leg_of(m);
    const auto& movement = m_signal.movements[m];
    const bool own_left = movement.turn == TurnKind::left && marked_lanes(leg.turn_lanes_in, "left") > 0;
    const bool own_right = movement.turn == TurnKind::right && marked_lanes(leg.turn_lanes_in, "right") > 0;
    if (own_left) return movement.approach + "-L@" + leg.id;
    if (own_right) return movement.approach + "-R@" + leg.id;
    return movement.approach + "@" + leg.id;
  }

  // Lanes marked for that turn alone.
  static int marked_lanes(const std::string& turn_lanes, const std::string& turn) {
    int count = 0;
    std::size_t from = 0;
    while (from <= turn_lanes.size() && !turn_lanes.empty()) {
      const std::size_t bar = std::min(turn_lanes.find('|', from), turn_lanes.size());
      const std::string lane = turn_lanes.substr(from, bar - from);
      count += lane == turn || lane == "slight_" + turn || lane == "sharp_" + turn;
      from = bar + 1;
    }
    return count;
  }

  int lanes_by_map(const LaneGroup& group, std::size_t first) const {
    const network::Leg& leg = leg_of(first);
    const int left = marked_lanes(leg.turn_lanes_in, "left"), right = marked_lanes(leg.turn_lanes_in, "right");
    const TurnKind turn = m_signal.movements[first].turn;
    if (group.movements.size() == 1 && turn == TurnKind::left && left > 0) return left;
    if (group.movements.size() == 1 && turn == TurnKind::right && right > 0) return right;
    return std::max(1, leg.lanes_in - left - right);
  }

  void add_to_lane_group(std::size_t i, LaneGroup& group) {
    const MovementFlow& flow = m_demand.movements[i];
    const MovementRow* row = m_row_of[m_movement_index[i]];
    const double before = group.flow_vph;
    group.movements.push_back(flow.movement);
    group.flow_vph += flow.flow_vph;
    if (group.flow_vph > 0) group.heavy_vehicle_pct = (group.heavy_vehicle_pct * before + flow.heavy_vehicle_pct * flow.flow_vph) / group.flow_vph;
    if (flow.origin == Origin::counted) group.flow_origin = Origin::counted;
    if (row == nullptr) return;
    if (row->lanes) group.lanes = *row->lanes, group.lanes_origin = Origin::counted;
    if (row->saturation_flow_vph) group.saturation_flow_vph = row->saturation_flow_vph;
    if (row->storage_m) group.storage_m = row->storage_m;
  }

  // "EB@W" becomes "EB-LTR"; a name the project gave stays.
  static std::string shown_name(const std::string& name, const LaneGroup& group) {
    const auto at = name.find('@');
    if (at == std::string::npos) return name;
    std::string letters;
    for (const std::string& movement : group.movements) {
      const auto dash = movement.find('-');
      if (dash != std::string::npos && dash + 1 < movement.size() && letters.find(movement[dash + 1]) == std::string::npos) letters += movement[dash + 1];
    }
    std::sort(letters.begin(), letters.end(), [](char a, char b) { return std::string("ULTR").find(a) < std::string("ULTR").find(b); });
    return name.substr(0, name.find_first_of("-@")) + "-" + letters;
  }

  void add_lane_groups() {
    std::vector<std::string> names;
    std::map<std::string, std::vector<std::size_t>> members;
    for (std::size_t i = 0; i < m_demand.movements.size(); ++i) {
      if (m_demand.movements[i].control != Control::signal) continue;
      const std::string name = lane_group_name(i);
      if (members[name].empty()) names.push_back(name);
      members[name].push_back(i);
    }
    std::set<std::string> used;
    for (const std::string& name : names) {
      LaneGroup group;
      for (const std::size_t i : members[name]) add_to_lane_group(i, group);
      if (group.lanes_origin == Origin::assumed) group.lanes = lanes_by_map(group, m_movement_index[members[name][0]]), ++assumed_lane_groups;
      group.id = shown_name(name, group);
      for (int n = 2; !used.insert(group.id).second; ++n) group.id = fmt::format("{}.{}", shown_name(name, group), n);
      m_demand.lane_groups.push_back(std::move(group));
    }
  }

  SignalDemand read_without_geometry(const std::vector<const MovementRow*>& rows) {
    for (const MovementRow* row : rows) {
      if (!row->volume_vph || row->control == "prohibited") continue;
      m_share[row] = 1;
      MovementFlow flow;
      flow.movement = row->approach + "-" + row->turn;
      flow.flow_vph = counted_flow(*row);
      flow.origin = Origin::counted;
      flow.group = row->group;
      flow.treatment = treatment_of(row->turn_treatment);
      flow.control = control_of(row->control);
      LaneGroup group;
      group.id = row->lane_group.empty() ? flow.movement : row->lane_group;
      const auto same = std::find_if(m_demand.lane_groups.begin(), m_demand.lane_groups.end(), [&](const LaneGroup& g) { return g.id == group.id; });
      LaneGroup& to = same == m_demand.lane_groups.end() ? m_demand.lane_groups.emplace_back(group) : *same;
      to.movements.push_back(flow.movement);
      to.flow_vph += flow.flow_vph;
      to.lanes = row->lanes.value_or(to.lanes);
      if (row->saturation_flow_vph) to.saturation_flow_vph = row->saturation_flow_vph;
      to.flow_origin = Origin::counted;
      m_demand.movements.push_back(std::move(flow));
    }
    return std::move(m_demand);
  }

  const network::Signal& m_signal;
  const std::string& m_source;
  const DemandDefaults& m_defaults;
  SignalDemand m_demand;
  std::vector<const MovementRow*> m_row_of;      // by network movement
  std::vector<std::size_t> m_movement_index;     // by demand movement
  std::map<const MovementRow*, double> m_share;  // part of the row's volume for each movement it fits
};

void note_assumptions(const DemandDefaults& d, const std::string& period, int flows, int peak, int lanes, Diagnostics& notes) {
  const std::string where = "period " + period;
  if (flows > 0)
    notes.push_back(warning(where, fmt::format("ASSUMED: {} movements were not counted; {} veh/h a lane through on major streets, {} on minor ones, {} % turning left, {} % right", flows,
                                               number_text(d.through_vph_per_lane_major), number_text(d.through_vph_per_lane_minor), number_text(100 * d.left_share),
                                               number_text(100 * d.right_share))));
  if (peak > 0) notes.push_back(warning(where, fmt::format("ASSUMED: peak-hour factor {} for {} counted movements", number_text(d.peak_hour_factor), peak)));
  if (lanes > 0) notes.push_back(warning(where, fmt::format("ASSUMED: the lanes of {} lane groups are the map's or its defaults", lanes)));
}

}  // namespace

Result<Noted<Demand>> design_flows(const network::Network& network, const std::vector<MovementRow>& rows, const std::string& rows_source, const DemandDefaults& defaults,
                                   const std::string& period) {
  Demand demand;
  demand.period = period;
  Diagnostics problems, notes;
  std::map<std::string, std::vector<const MovementRow*>> by_signal;
  for (const MovementRow& row : rows)
    if (row.period.empty() || row.period == period) by_signal[row.signal].push_back(&row);
  int flows = 0, peak = 0, lanes = 0;
  for (const network::Signal& signal : network.signals) {
    SignalReader reader(signal, rows_source, defaults);
    demand.signals.push_back(reader.read(by_signal[signal.id]));
    append(problems, std::move(reader.problems));
    flows += reader.assumed_flows, peak += reader.assumed_peak_factors, lanes += reader.assumed_lane_groups;
    by_signal.erase(signal.id);
  }
  for (const auto& [signal, left] : by_signal)
    problems.push_back(error(fmt::format("{} row {}", rows_source, left.front()->row), "unknown signal " + printable(signal), "a signal of the network", "Correct the id; entrain import lists the signals"));
  note_assumptions(defaults, period, flows, peak, lanes, notes);
  if (!problems.empty()) return failure(std::move(problems));
  return Noted<Demand>{std::move(demand), std::move(notes)};
}

}  // namespace entrain::demand
