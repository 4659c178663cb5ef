#include "project/validate.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

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
    check_offsets();
    check_same_in_all_periods();
    check_movements();
    return std::move(m_found);
  }

 private:
  // Without a signals table any id may come from the roads: the network stage will tell.
  void check_signal(const std::string& signal, const std::string& where) {
    if (m_signals.empty() || signal.empty() || m_signals.count(signal) != 0) return;
    m_found.push_back(error(where, "unknown signal " + printable(signal), "a signal of " + m_tables.signals_source + nearest(signal), "Correct the id or add the signal to the signals table"));
  }
  void check_period(const std::string& period, const std::string& where) {
    if (period.empty() || m_periods.count(period) != 0) return;
    std::string all;
    for (const std::string& id : m_periods) all += (all.empty() ? "" : ", ") + id;
    m_found.push_back(error(where, "unknown period " + printable(period), "one of " + all, "Correct the id or add a [[period]]"));
  }
  std::string nearest(const std::string& signal) const {
    for (const std::string& id : m_signals)
      if (id.size() == signal.size() && std::equal(id.begin(), id.end(), signal.begin(), [](char a, char b) { return (a | 32) == (b | 32); })) return ", did you mean " + id + "?";
    return "";
  }

  void check_duplicates() {
    std::map<std::string, std::size_t> first;
    for (const SignalRow& row : m_tables.signals)
      if (const auto [at, is_new] = first.emplace(row.signal, row.row); !is_new)
        m_found.push_back(error(row_of(m_tables.signals_source, row.row), "signal " + printable(row.signal) + " again", fmt::format("each signal once (it stands in row {})", at->second),
                                "Remove or rename one of the rows"));
    std::map<std::string, std::size_t> movements;
    for (const MovementRow& row : m_tables.movements)
      if (const auto [at, is_new] = movements.emplace(row.period + "\n" + row.signal + "\n" + row.approach + "\n" + row.turn + "\n" + row.from, row.row); !is_new)
        m_found.push_back(error(row_of(m_tables.movements_source, row.row), fmt::format("{} {}-{} again", printable(row.signal), row.approach, row.turn),
                                fmt::format("each movement of a period once (it stands in row {})", at->second), "Remove one of the rows"));
  }

  void check_references() {
    for (const MovementRow& row : m_tables.movements) check_signal(row.signal, row_of(m_tables.movements_source, row.row)), check_period(row.period, row_of(m_tables.movements_source, row.row));
    for (const CrossingRow& row : m_tables.crossings) check_signal(row.signal, row_of(m_tables.crossings_source, row.row));
    for (const TravelTimeRow& row : m_tables.travel_times) {
      const std::string where = row_of(m_tables.travel_times_source, row.row);
      check_signal(row.from_signal, where);
      check_signal(row.to_signal, where);
      check_period(row.period, where);
    }
    for (const TimingRow& row : m_tables.timing) check_signal(row.signal, row_of(m_tables.timing_source, row.row)), check_period(row.period, row_of(m_tables.timing_source, row.row));
    for (const ConflictRow& row : m_tables.conflicts) check_signal(row.signal, row_of(m_tables.conflicts_source, row.row));
  }

  void check_corridors() {
    for (const Corridor& corridor : m_project.corridors) {
      const std::string where = fmt::format("{} [[corridor]] {}", m_project.file, corridor.id);
      for (const std::string& signal : corridor.signals) check_signal(signal, where);
      for (const std::string& signal : corridor.signals_backward) check_signal(signal, where);
      for (const auto& [period, weights] : corridor.weights_by_period) check_period(period, where + " [[corridor.period]]");
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

  // The cabinet has one phase table: yellow and the rest may not differ between periods.
  void check_same_in_all_periods() {
    std::map<std::string, const TimingRow*> first;
    for (const TimingRow& row : m_tables.timing) {
      const auto [at, is_new] = first.emplace(row.signal + "\n" + row.group, &row);
      if (is_new) continue;
      const TimingRow& other = *at->second;
      const auto differ = [&](const char* column, std::optional<double> a, std::optional<double> b) {
        if (!a || !b || std::fabs(*a - *b) < 1e-9) return;
        m_found.push_back(error(row_of(m_tables.timing_source, row.row) + ", column " + column, fmt::format("{} for group {} of {}", number_text(*a), row.group, row.signal),
                                fmt::format("{} as in row {}: one phase table serves all periods", number_text(*b), other.row), "Make the rows agree"));
      };
      differ("yellow_s", row.yellow_s, other.yellow_s);
      differ("red_clearance_s", row.red_clearance_s, other.red_clearance_s);
      differ("walk_s", row.walk_s, other.walk_s);
      differ("pedestrian_clearance_s", row.pedestrian_clearance_s, other.pedestrian_clearance_s);
      differ("minimum_green_s", row.minimum_green_s, other.minimum_green_s);
    }
  }

  // Rows of one lane group must agree on its lanes and saturation flow.
  void check_movements() {
    std::map<std::string, const MovementRow*> first;
    for (const MovementRow& row : m_tables.movements) {
      if (row.lane_group.empty()) continue;
      const auto [at, is_new] = first.emplace(row.period + "\n" + row.signal + "\n" + row.lane_group, &row);
      if (is_new || !row.lanes || !at->second->lanes || *row.lanes == *at->second->lanes) continue;
      m_found.push_back(error(row_of(m_tables.movements_source, row.row) + ", column lanes", fmt::format("{} lanes for lane group {}", *row.lanes, printable(row.lane_group)),
                              fmt::format("{} as in row {}: lanes count the whole lane group", *at->second->lanes, at->second->row), "Make the rows agree"));
    }
  }

  const Project& m_project;
  const Tables& m_tables;
  std::set<std::string> m_signals, m_periods;
  Diagnostics m_found;
};

}  // namespace

Diagnostics validate(const Project& project, const Tables& tables) { return Checks(project, tables).run(); }

}  // namespace entrain::project
