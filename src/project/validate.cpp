#include "project/validate.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

#include "base/near_name.hpp"
#include "base/number_text.hpp"

namespace entrain::project {
namespace {

std::string row_of(const std::string& source, std::size_t row) { return fmt::format("{} row {}", source, row); }

class Checks {
 public:
  Checks(const Project& project, const Tables& tables) : m_project(project), m_tables(tables) {
    for (const SignalRow& row : tables.signals) m_signals.insert(row.signal);
    for (const Period& period : project.periods) m_periods.insert(period.id);
  }

  Diagnostics run() {
    check_duplicates();
    check_references();
    check_corridors();
    check_exceptions();
    report_unknown();
    check_offsets();
    check_same_in_one_pattern();
    check_same_in_all_periods();
    check_movements();
    check_conflicts();
    return std::move(m_found);
  }

 private:
  // An id that nothing defines is said once a table, with the first place and how often it is used.
  struct Unknown {
    std::string where;
    std::size_t times = 0;
  };

  // Without a signals table any id may come from the roads: the network stage will tell.
  void check_signal(const std::string& signal, const std::string& source, const std::string& where) {
    if (m_signals.empty() || signal.empty() || m_signals.count(signal) != 0) return;
    Unknown& unknown = m_unknown_signals[{source, signal}];
    if (unknown.times++ == 0) unknown.where = where;
  }
  void check_period(const std::string& period, const std::string& source, const std::string& where) {
    if (period.empty() || m_periods.count(period) != 0) return;
    Unknown& unknown = m_unknown_periods[{source, period}];
    if (unknown.times++ == 0) unknown.where = where;
  }
  void check_row(const std::string& signal, const std::string& period, const std::string& source, std::size_t row) {
    const std::string where = row_of(source, row);
    check_signal(signal, source, where);
    check_period(period, source, where);
  }

  void report_unknown() {
    const auto times = [](const Unknown& unknown) { return unknown.times > 1 ? fmt::format(" ({} places)", unknown.times) : std::string(); };
    for (const auto& [key, unknown] : m_unknown_signals)
      m_found.push_back(error(unknown.where, "unknown signal " + printable(key.second) + times(unknown), "a signal of " + m_tables.signals_source,
                              did_you_mean(key.second, m_signals, "Correct the id or add the signal to the signals table")));
    std::string all;
    for (const std::string& id : m_periods) all += (all.empty() ? "one of " : ", ") + id;
    for (const auto& [key, unknown] : m_unknown_periods)
      m_found.push_back(error(unknown.where, "unknown period " + printable(key.second) + times(unknown), all.empty() ? "a [[period]] of that id" : all,
                              did_you_mean(key.second, m_periods, "Correct the id or add a [[period]]")));
  }

  // `key` may stand in one row of `source` only; `what` names it.
  void check_once(std::map<std::string, std::size_t>& first, const std::string& key, const std::string& source, std::size_t row, const std::string& what, const char* rule) {
    if (const auto [at, is_new] = first.emplace(key, row); !is_new)
      m_found.push_back(error(row_of(source, row), what + " again", fmt::format("{} (it stands in row {})", rule, at->second), "Remove or correct one of the rows"));
  }

  void check_duplicates() {
    std::map<std::string, std::size_t> signals, movements, crossings, times;
    for (const SignalRow& row : m_tables.signals) check_once(signals, row.signal, m_tables.signals_source, row.row, "signal " + printable(row.signal), "each signal once");
    for (const MovementRow& row : m_tables.movements)
      check_once(movements, row.period + "\n" + row.signal + "\n" + row.approach + "\n" + row.turn + "\n" + row.from, m_tables.movements_source, row.row,
                 fmt::format("{} {}-{}", printable(row.signal), row.approach, row.turn), "each movement of a period once");
    for (const CrossingRow& row : m_tables.crossings)
      check_once(crossings, row.signal + "\n" + row.leg, m_tables.crossings_source, row.row, fmt::format("crossing of leg {} at {}", printable(row.leg), printable(row.signal)), "each crossing once");
    for (const TravelTimeRow& row : m_tables.travel_times)
      check_once(times, row.period + "\n" + row.from_signal + "\n" + row.to_signal, m_tables.travel_times_source, row.row,
                 fmt::format("{} to {}", printable(row.from_signal), printable(row.to_signal)), "each pair of a period once");
  }

  void check_references() {
    for (const MovementRow& row : m_tables.movements) check_row(row.signal, row.period, m_tables.movements_source, row.row);
    for (const CrossingRow& row : m_tables.crossings) check_row(row.signal, "", m_tables.crossings_source, row.row);
    for (const TravelTimeRow& row : m_tables.travel_times) {
      check_row(row.from_signal, row.period, m_tables.travel_times_source, row.row);
      check_row(row.to_signal, "", m_tables.travel_times_source, row.row);
    }
    for (const TimingRow& row : m_tables.timing) check_row(row.signal, row.period, m_tables.timing_source, row.row);
    for (const ConflictRow& row : m_tables.conflicts) check_row(row.signal, "", m_tables.conflicts_source, row.row);
  }

  void check_corridors() {
    for (const Corridor& corridor : m_project.corridors) {
      const std::string where = fmt::format("{} [[corridor]] {}", m_project.file, corridor.id);
      for (const std::string& signal : corridor.signals) check_signal(signal, where, where);
      for (const std::string& signal : corridor.signals_backward) check_signal(signal, where, where);
      check_signal(corridor.from, where, where);
      check_signal(corridor.to, where, where);
      for (const auto& [signal, groups] : corridor.groups_at) check_signal(signal, where + " groups_at", where + " groups_at");
      for (const auto& [period, weights] : corridor.weights_by_period) check_period(period, where, where + " [[corridor.period]]");
      for (const auto& [period, speed] : corridor.progression_speed_by_period_mps)
        if (corridor.weights_by_period.count(period) == 0) check_period(period, where, where + " [[corridor.period]]");
      if (!m_project.roads && corridor.signals.empty() && !corridor.street.empty())
        m_found.push_back(error(where, "street " + printable(corridor.street) + " without roads", "a list of signals, or [roads]", "Write signals = [...], or name the roads"));
    }
  }

  void check_exceptions() {
    for (std::size_t i = 0; i < m_project.exceptions.size(); ++i) {
      const std::string where = fmt::format("{} [[standards.exception]] {}", m_project.file, i + 1);
      check_signal(m_project.exceptions[i].signal, where, where);
    }
  }

  void check_offsets() {
    std::set<std::string> said;
    for (const TimingRow& row : m_tables.timing) {
      if (!row.offset_s || *row.offset_s == 0 || (!row.offset_reference.empty() && !row.reference_group.empty())) continue;
      if (!said.insert(row.signal + "\n" + row.period).second) continue;
      m_found.push_back(error(row_of(m_tables.timing_source, row.row), fmt::format("offset {} s without its {}", number_text(*row.offset_s), row.offset_reference.empty() ? "instant" : "group"),
                              "offset_reference (begin_of_green, begin_of_yellow, begin_of_red, begin_of_pedestrian_clearance) and reference_group",
                              "Fill the two columns: an offset means nothing without them"));
    }
  }

  // Rows of one signal and period speak of one pattern: cycle, offset, instant, reference group and sequence agree where they are given.
  void check_same_in_one_pattern() {
    std::map<std::string, std::vector<const TimingRow*>> patterns;
    for (const TimingRow& row : m_tables.timing) patterns[row.signal + "\n" + row.period].push_back(&row);
    for (const auto& [key, rows] : patterns) {
      check_alike(rows, "cycle_s", [](const TimingRow& row) { return number_text(row.cycle_s); });
      check_alike(rows, "offset_s", [](const TimingRow& row) { return row.offset_s ? number_text(*row.offset_s) : std::string(); });
      check_alike(rows, "offset_reference", [](const TimingRow& row) { return row.offset_reference; });
      check_alike(rows, "reference_group", [](const TimingRow& row) { return row.reference_group; });
      check_alike(rows, "sequence", [](const TimingRow& row) { return row.sequence; });
      check_reference_group(rows);
    }
  }
  template <class Text>
  void check_alike(const std::vector<const TimingRow*>& rows, const char* column, Text text) {
    const TimingRow* first = nullptr;
    for (const TimingRow* row : rows) {
      if (text(*row).empty()) continue;
      if (first == nullptr) first = row;
      if (text(*row) == text(*first)) continue;
      m_found.push_back(error(row_of(m_tables.timing_source, row->row) + ", column " + column, printable(text(*row)) + " for " + printable(row->signal),
                              fmt::format("{} as in row {}: one signal has one in a period", printable(text(*first)), first->row), "Make the rows agree"));
      return;
    }
  }
  void check_reference_group(const std::vector<const TimingRow*>& rows) {
    std::set<std::string> groups;
    for (const TimingRow* row : rows) groups.insert(row->group);
    for (const TimingRow* row : rows) {
      if (row->reference_group.empty() || groups.count(row->reference_group) != 0) continue;
      m_found.push_back(error(row_of(m_tables.timing_source, row->row) + ", column reference_group", printable(row->reference_group), "a group of " + printable(row->signal),
                              did_you_mean(row->reference_group, groups, "Name a group that has a row")));
      return;
    }
  }

  // The cabinet has one phase table: yellow and the rest may not differ between periods.
  void check_same_in_all_periods() {
    std::map<std::string, const TimingRow*> first;
    for (const TimingRow& row : m_tables.timing) {
      const auto [at, is_new] = first.emplace(row.signal + "\n" + row.group, &row);
      if (is_new) continue;
      const TimingRow& other = *at->second;
      const auto differ = [&](const char* column, std::optional<double> a, std::optional<double> b) {
        if (!a || !b || std::fabs(*a - *b) < 1e-9) return;
        m_found.push_back(error(row_of(m_tables.timing_source, row.row) + ", column " + column, fmt::format("{} for group {} of {}", number_text(*a), printable(row.group), printable(row.signal)),
                                fmt::format("{} as in row {}: one phase table serves all periods", number_text(*b), other.row), "Make the rows agree"));
      };
      differ("yellow_s", row.yellow_s, other.yellow_s);
      differ("red_clearance_s", row.red_clearance_s, other.red_clearance_s);
      differ("walk_s", row.walk_s, other.walk_s);
      differ("pedestrian_clearance_s", row.pedestrian_clearance_s, other.pedestrian_clearance_s);
      differ("minimum_green_s", row.minimum_green_s, other.minimum_green_s);
    }
  }

  // Rows of one lane group must agree on its lanes and saturation flow and lie on one approach.
  void check_movements() {
    std::map<std::string, const MovementRow*> first;
    for (const MovementRow& row : m_tables.movements) {
      if (row.lane_group.empty()) continue;
      const auto [at, is_new] = first.emplace(row.period + "\n" + row.signal + "\n" + row.lane_group, &row);
      if (is_new) continue;
      const MovementRow& other = *at->second;
      const auto differ = [&](const char* column, const std::string& a, const std::string& b) {
        if (a.empty() || b.empty() || a == b) return;
        m_found.push_back(error(row_of(m_tables.movements_source, row.row) + ", column " + column, fmt::format("{} for lane group {}", printable(a), printable(row.lane_group)),
                                fmt::format("{} as in row {}: it is counted for the whole lane group", printable(b), other.row), "Make the rows agree"));
      };
      const auto text = [](const auto& value) { return value ? number_text(static_cast<double>(*value)) : std::string(); };
      differ("lanes", text(row.lanes), text(other.lanes));
      differ("saturation_flow_vph", text(row.saturation_flow_vph), text(other.saturation_flow_vph));
      differ("storage_m", text(row.storage_m), text(other.storage_m));
      differ("approach", row.approach, other.approach);
    }
  }

  // A pair may stand in either order; two rows that disagree are an error.
  void check_conflicts() {
    std::map<std::string, const ConflictRow*> first;
    for (const ConflictRow& row : m_tables.conflicts) {
      const bool in_order = row.group_a < row.group_b;
      const auto [at, is_new] = first.emplace(row.signal + "\n" + (in_order ? row.group_a + "\n" + row.group_b : row.group_b + "\n" + row.group_a), &row);
      if (is_new) continue;
      const ConflictRow& other = *at->second;
      const bool same_order = other.group_a == row.group_a;
      if (row.intergreen_ab_s == (same_order ? other.intergreen_ab_s : other.intergreen_ba_s) && row.intergreen_ba_s == (same_order ? other.intergreen_ba_s : other.intergreen_ab_s)) continue;
      m_found.push_back(error(row_of(m_tables.conflicts_source, row.row), fmt::format("{} and {} at {} again with other intergreens", printable(row.group_a), printable(row.group_b), printable(row.signal)),
                              fmt::format("the values of row {}", other.row), "Remove one of the rows"));
    }
  }

  const Project& m_project;
  const Tables& m_tables;
  std::set<std::string> m_signals, m_periods;
  std::map<std::pair<std::string, std::string>, Unknown> m_unknown_signals, m_unknown_periods;  // (table, id)
  Diagnostics m_found;
};

}  // namespace

Diagnostics validate(const Project& project, const Tables& tables) { return Checks(project, tables).run(); }

}  // namespace entrain::project
