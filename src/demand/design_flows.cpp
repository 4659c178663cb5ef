#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <map>
#include <set>

#include "base/near_name.hpp"
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

constexpr std::array<const char*, 8> compass = {"NB", "NEB", "EB", "SEB", "SB", "SWB", "WB", "NWB"};

int compass_index(const std::string& approach) {
  const auto found = std::find(compass.begin(), compass.end(), approach);
  return found == compass.end() ? -1 : static_cast<int>(found - compass.begin());
}

// Names that differ by one of the eight directions: a street at 23 degrees is "north" to the people who count it.
bool are_neighbours(const std::string& a, const std::string& b) {
  const int i = compass_index(a), j = compass_index(b);
  return i >= 0 && j >= 0 && ((i + 1) % 8 == j || (j + 1) % 8 == i);
}

bool same_name(const std::string& a, const std::string& b) { return a.size() == b.size() && name_distance(trim(a), trim(b)) == 0; }

bool is_major(network::RoadClass road_class) { return road_class <= network::RoadClass::secondary; }

// Reads the rows of one signal for one period.
class SignalReader {
 public:
  SignalReader(const network::Signal& signal, const std::string& source, const DemandDefaults& defaults) : m_signal(signal), m_source(source), m_defaults(defaults) {}

  // `rows` of the period; `others` of other periods, from which lanes and control are taken where the period's own say nothing.
  SignalDemand read(const std::vector<const MovementRow*>& rows, const std::vector<const MovementRow*>& others) {
    m_demand.signal = m_signal.id;
    if (m_signal.movements.empty()) return read_without_geometry(rows);
    m_row_of.assign(m_signal.movements.size(), nullptr);
    m_geometry_of.assign(m_signal.movements.size(), nullptr);
    for (const MovementRow* row : rows) m_named.insert(row->approach);
    for (const MovementRow* row : rows) assign(*row);
    for (const MovementRow* row : others)
      for (const std::size_t m : matches_of(*row))
        if (m_geometry_of[m] == nullptr || (m_geometry_of[m]->lane_group.empty() && !row->lane_group.empty())) m_geometry_of[m] = row;
    for (std::size_t m = 0; m < m_signal.movements.size(); ++m) add_movement(m);
    add_lane_groups();
    return std::move(m_demand);
  }

  Diagnostics problems, notes;
  int assumed_flows = 0, assumed_peak_factors = 0, assumed_lane_groups = 0;

 private:
  std::string where(const MovementRow& row) const { return fmt::format("{} row {}", m_source, row.row); }
  const network::Leg& leg_of(std::size_t movement) const { return m_signal.legs[static_cast<std::size_t>(m_signal.movements[movement].from_leg)]; }

  bool has_approach(const std::string& name) const {
    return std::any_of(m_signal.movements.begin(), m_signal.movements.end(), [&](const network::Movement& m) { return m.approach == name; });
  }

  // The approach of the roads that the row means: its own name, else the only neighbour that no row names.
  std::string approach_of(const MovementRow& row) const {
    if (has_approach(row.approach)) return row.approach;
    std::set<std::string> candidates;
    for (const network::Movement& movement : m_signal.movements)
      if (are_neighbours(movement.approach, row.approach) && m_named.count(movement.approach) == 0) candidates.insert(movement.approach);
    return candidates.size() == 1 ? *candidates.begin() : std::string();
  }

  bool comes_from(const MovementRow& row, std::size_t m) const {
    const network::Leg& leg = leg_of(m);
    return row.from.empty() || same_name(row.from, leg.neighbour) || same_name(row.from, leg.street) || same_name(row.from, leg.id);
  }

  std::vector<std::size_t> matches_of(const MovementRow& row) const {
    std::vector<std::size_t> matches;
    const std::string approach = approach_of(row);
    for (std::size_t m = 0; m < m_signal.movements.size(); ++m)
      if (m_signal.movements[m].approach == approach && std::string(1, letter(m_signal.movements[m].turn)) == row.turn && comes_from(row, m)) matches.push_back(m);
    return matches;
  }

  void report_no_match(const MovementRow& row) {
    const std::string name = fmt::format("{}-{} at {}", row.approach, row.turn, printable(m_signal.id));
    if (row.control == "prohibited") return;
    if (row.volume_vph.value_or(0) == 0) {
      notes.push_back(note(where(row), name + ": no such movement on the roads and no volume: left out"));
      return;
    }
    std::set<std::string> approaches, origins;
    for (std::size_t m = 0; m < m_signal.movements.size(); ++m) {
      approaches.insert(m_signal.movements[m].approach + "-" + letter(m_signal.movements[m].turn));
      if (m_signal.movements[m].approach == approach_of(row))
        for (const std::string& origin : {leg_of(m).neighbour, leg_of(m).street})
          if (!origin.empty()) origins.insert(printable(origin));
    }
    const auto joined = [](const std::set<std::string>& names) {
      std::string all;
      for (const auto& one : names) all += (all.empty() ? "" : ", ") + one;
      return all;
    };
    if (!row.from.empty() && approaches.count(approach_of(row) + "-" + row.turn) != 0)
      problems.push_back(error(where(row), fmt::format("{} from {}", name, printable(row.from)), "one of the approach's neighbours or streets: " + joined(origins),
                               did_you_mean(row.from, origins, "Correct the column from, or leave it empty")));
    else
      problems.push_back(error(where(row), name, "a movement that the roads allow there: " + joined(approaches),
                               "Correct the row, the map or the turn restriction (approaches are named by direction of travel)"));
  }

  void assign(const MovementRow& row) {
    const std::vector<std::size_t> matches = matches_of(row);
    if (matches.empty()) return report_no_match(row);
    const bool several_legs = std::any_of(matches.begin(), matches.end(), [&](std::size_t m) { return m_signal.movements[m].from_leg != m_signal.movements[matches[0]].from_leg; });
    if (several_legs) {
      problems.push_back(error(where(row), fmt::format("{}-{} at {} fits {} approaches", row.approach, row.turn, printable(m_signal.id), matches.size()),
                               "column from: the neighbour signal or street it comes from", "Fill the column from"));
      return;
    }
    const std::string& approach = m_signal.movements[matches[0]].approach;
    if (approach != row.approach && m_renamed.insert(row.approach).second)
      notes.push_back(warning(where(row), fmt::format("ASSUMED: {} at {} is the roads' {}, the only approach near that direction that no row names", row.approach, printable(m_signal.id), approach)));
    if (matches.size() > 1 && row.volume_vph)
      notes.push_back(warning(where(row), fmt::format("ASSUMED: {}-{} at {} goes in equal parts to {} legs that the map calls by one turn", row.approach, row.turn, printable(m_signal.id), matches.size())));
    for (const std::size_t m : matches) take(row, m);
    m_share[&row] = 1.0 / static_cast<double>(matches.size());
  }

  // A row of the period goes before one for every period; two alike contradict each other.
  void take(const MovementRow& row, std::size_t m) {
    const MovementRow*& place = m_row_of[m];
    if (place != nullptr && place->period.empty() == row.period.empty() && place->from.empty() == row.from.empty()) {
      problems.push_back(error(where(row), fmt::format("{}-{} at {} again", row.approach, row.turn, printable(m_signal.id)), fmt::format("each movement once (row {} speaks of it)", place->row),
                               "Remove one of the rows, or fill the column from"));
      return;
    }
    const bool is_closer = place == nullptr || (place->period.empty() && !row.period.empty()) || (place->period.empty() == row.period.empty() && !row.from.empty());
    if (is_closer) place = &row;
  }

  // Flow of a movement nobody counted: from the approach's counted through flow, else from the street's class.
  double through_flow(std::size_t m) const {
    for (std::size_t other = 0; other < m_signal.movements.size(); ++other) {
      const MovementRow* row = m_row_of[other];
      if (m_signal.movements[other].from_leg == m_signal.movements[m].from_leg && m_signal.movements[other].turn == TurnKind::through && row != nullptr && row->volume_vph)
        return *row->volume_vph / row->peak_hour_factor.value_or(m_defaults.peak_hour_factor);
    }
    const network::Leg& leg = leg_of(m);
    return (is_major(leg.road_class) ? m_defaults.through_vph_per_lane_major : m_defaults.through_vph_per_lane_minor) * std::max(1, leg.lanes_in);
  }

  double assumed_flow(std::size_t m) {
    const double through = through_flow(m);
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
    for (const MovementRow* from : {m_geometry_of[m], row}) {
      if (from == nullptr) continue;
      if (!from->control.empty() && (from == row || from->control != "prohibited")) flow.control = control_of(from->control);  // a ban holds in its period
      if (!from->turn_treatment.empty()) flow.treatment = treatment_of(from->turn_treatment);
      if (!from->group.empty()) flow.group = from->group;
      if (from == row) flow.heavy_vehicle_pct = row->heavy_vehicle_pct.value_or(flow.heavy_vehicle_pct);
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
    for (const MovementRow* row : {m_row_of[m], m_geometry_of[m]})
      if (row != nullptr && !row->lane_group.empty()) return row->lane_group;
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
    for (const MovementRow* from : {m_geometry_of[m_movement_index[i]], row}) {
      if (from == nullptr) continue;
      if (from->lanes) group.lanes = *from->lanes, group.lanes_origin = Origin::counted;
      if (from->saturation_flow_vph) group.saturation_flow_vph = from->saturation_flow_vph;
      if (from->storage_m) group.storage_m = from->storage_m;
    }
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
      check_one_leg(name, members[name]);
      if (group.lanes_origin == Origin::assumed) group.lanes = lanes_by_map(group, m_movement_index[members[name][0]]), ++assumed_lane_groups;
      group.id = shown_name(name, group);
      for (int n = 2; !used.insert(group.id).second; ++n) group.id = fmt::format("{}.{}", shown_name(name, group), n);
      m_demand.lane_groups.push_back(std::move(group));
    }
  }

  void check_one_leg(const std::string& name, const std::vector<std::size_t>& members) {
    for (const std::size_t i : members) {
      const std::size_t m = m_movement_index[i];
      if (m_signal.movements[m].from_leg == m_signal.movements[m_movement_index[members[0]]].from_leg) continue;
      const MovementRow* row = m_row_of[m] != nullptr ? m_row_of[m] : m_geometry_of[m];
      problems.push_back(error(row != nullptr ? where(*row) : m_source, fmt::format("lane group {} at {} holds {} and {}", printable(name), printable(m_signal.id),
                                                                                      m_demand.movements[members[0]].movement, m_demand.movements[i].movement),
                               "movements of one approach", "Give each approach lane groups of its own"));
      return;
    }
  }

  SignalDemand read_without_geometry(const std::vector<const MovementRow*>& rows) {
    std::map<std::string, const MovementRow*> chosen;  // by movement: the period's own row goes first
    std::vector<std::string> order;
    for (const MovementRow* row : rows) {
      const std::string id = row->approach + "-" + row->turn + (row->from.empty() ? "" : "." + row->from);
      const auto [at, is_new] = chosen.emplace(id, row);
      if (is_new) order.push_back(id);
      else if (at->second->period.empty() && !row->period.empty()) at->second = row;
      else if (at->second->period.empty() == row->period.empty())
        problems.push_back(error(where(*row), fmt::format("{} at {} again", printable(id), printable(m_signal.id)), fmt::format("each movement once (it stands in row {})", at->second->row), "Remove one of the rows"));
    }
    for (const std::string& id : order) add_without_geometry(id, *chosen.at(id));
    return std::move(m_demand);
  }

  void add_without_geometry(const std::string& id, const MovementRow& row) {
    if (row.control == "prohibited") return;
    if (!row.volume_vph) {
      notes.push_back(warning(where(row), fmt::format("{} at {} has no volume and no road to assume one from: left out", printable(id), printable(m_signal.id))));
      return;
    }
    m_share[&row] = 1;
    MovementFlow flow;
    flow.movement = id;
    flow.flow_vph = counted_flow(row);
    flow.origin = Origin::counted;
    flow.group = row.group;
    flow.treatment = treatment_of(row.turn_treatment);
    flow.control = control_of(row.control);
    flow.heavy_vehicle_pct = row.heavy_vehicle_pct.value_or(m_defaults.heavy_vehicle_pct);
    m_demand.movements.push_back(flow);
    if (flow.control != Control::signal) return;
    const std::string name = row.lane_group.empty() ? id : row.lane_group;
    auto to = std::find_if(m_demand.lane_groups.begin(), m_demand.lane_groups.end(), [&](const LaneGroup& g) { return g.id == name; });
    if (to == m_demand.lane_groups.end()) to = m_demand.lane_groups.insert(to, {name, {}, 1, 0, {}, 0, {}, Origin::counted, Origin::assumed});
    const double before = to->flow_vph;
    to->movements.push_back(id);
    to->flow_vph += flow.flow_vph;
    if (to->flow_vph > 0) to->heavy_vehicle_pct = (to->heavy_vehicle_pct * before + flow.heavy_vehicle_pct * flow.flow_vph) / to->flow_vph;
    if (row.lanes) to->lanes = *row.lanes, to->lanes_origin = Origin::counted;
    if (row.saturation_flow_vph) to->saturation_flow_vph = row.saturation_flow_vph;
    if (row.storage_m) to->storage_m = row.storage_m;
  }

  const network::Signal& m_signal;
  const std::string& m_source;
  const DemandDefaults& m_defaults;
  SignalDemand m_demand;
  std::vector<const MovementRow*> m_row_of;      // by network movement
  std::vector<const MovementRow*> m_geometry_of; // the same of another period
  std::set<std::string> m_named, m_renamed;      // approaches that rows name; those that the roads call otherwise
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
  std::map<std::string, std::vector<const MovementRow*>> by_signal, of_others;
  for (const MovementRow& row : rows) (row.period.empty() || row.period == period ? by_signal : of_others)[row.signal].push_back(&row);
  int flows = 0, peak = 0, lanes = 0;
  for (const network::Signal& signal : network.signals) {
    SignalReader reader(signal, rows_source, defaults);
    demand.signals.push_back(reader.read(by_signal[signal.id], of_others[signal.id]));
    append(problems, std::move(reader.problems));
    append(notes, std::move(reader.notes));
    flows += reader.assumed_flows, peak += reader.assumed_peak_factors, lanes += reader.assumed_lane_groups;
    by_signal.erase(signal.id);
  }
  std::vector<std::string> ids;
  for (const network::Signal& signal : network.signals) ids.push_back(signal.id);
  for (const auto& [signal, left] : by_signal)
    problems.push_back(error(fmt::format("{} row {}", rows_source, left.front()->row), fmt::format("unknown signal {} ({} row{})", printable(signal), left.size(), left.size() > 1 ? "s" : ""), "a signal of the network",
                             did_you_mean(signal, ids, "Correct the id; entrain import lists the signals")));
  note_assumptions(defaults, period, flows, peak, lanes, notes);
  if (!problems.empty()) return failure(std::move(problems));
  return Noted<Demand>{std::move(demand), std::move(notes)};
}

}  // namespace entrain::demand
