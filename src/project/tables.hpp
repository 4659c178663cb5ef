// The project's tables as rows of plain data, from grids of text that `geo/in` reads. Lengths and speeds are SI here.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "base/result.hpp"
#include "project/project.hpp"

namespace entrain::project {

// A table as read from a file or sheet: rows of text, ragged allowed. `source` names it in messages.
struct TextGrid {
  std::string source;
  std::vector<std::vector<std::string>> rows;  // row 1 of the file is rows[0]
};

struct SignalRow {
  std::size_t row = 0;  // 1-based line of the source, for messages
  std::string signal, name;
  std::optional<double> lon, lat;
  std::optional<int> minimum_cycle_s, maximum_cycle_s;
  std::string half_cycle = "never";      // never | allowed | required
  std::string clock;                     // gps | network | line | manual; empty: not stated
  std::string operation;                 // pretimed | coordinated_actuated | free; empty: not stated
  std::optional<double> offset_s;
  bool offset_fixed = false, sequence_fixed = false, splits_fixed = false;
  std::string traffic_side;              // right | left; empty: the project's
};

struct MovementRow {
  std::size_t row = 0;
  std::string period;    // empty: every period
  std::string signal;
  std::string approach;  // by direction of travel: NB, NEB, EB, ...
  std::string turn;      // L T R U
  std::string from;      // neighbour signal or street, where two approaches share a name
  std::optional<double> volume_vph;
  std::string lane_group;
  std::optional<int> lanes;
  std::optional<double> saturation_flow_vph, heavy_vehicle_pct, peak_hour_factor;
  std::string group;
  std::optional<double> storage_m;
  std::string control;         // signal | yield | free | prohibited; empty: not stated
  std::string turn_treatment;  // protected | permissive | protected_permissive; empty: not stated
};

struct CrossingRow {
  std::size_t row = 0;
  std::string signal, leg;
  std::optional<double> length_m;
  std::optional<double> walk_s, walking_speed_mps, refuge_after_m, button_distance_m;
  std::string group;
  std::string service;  // every_cycle | on_call; empty: not stated
};

struct TravelTimeRow {
  std::size_t row = 0;
  std::string from_signal, to_signal;
  double mean_s = 0;
  std::string period;  // empty: every period
  std::optional<double> sd_s;
  std::optional<int> runs;
  std::optional<double> length_m;  // optional column, for projects without roads
};

struct TimingRow {
  std::size_t row = 0;
  std::string period, signal;
  double cycle_s = 0;
  std::optional<double> offset_s;
  std::string offset_reference, reference_group;
  std::string group;
  double yellow_s = 0, red_clearance_s = 0;
  std::optional<double> green_start_s, green_s, split_s;
  std::string sequence;  // "1 2|3 4 / 5 6|7 8"
  std::optional<double> walk_s, pedestrian_clearance_s, minimum_green_s;
  bool coordinated = false;
};

struct ConflictRow {
  std::size_t row = 0;
  std::string signal, group_a, group_b;
  double intergreen_ab_s = 0, intergreen_ba_s = 0;
};

struct Tables {
  std::string signals_source, movements_source, crossings_source, travel_times_source, timing_source, conflicts_source;
  std::vector<SignalRow> signals;
  std::vector<MovementRow> movements;
  std::vector<CrossingRow> crossings;
  std::vector<TravelTimeRow> travel_times;
  std::vector<TimingRow> timing;
  std::vector<ConflictRow> conflicts;
};

// Each finds the header row itself (title rows, blank rows and trailing commas are met in practice), applies `columns`
// (our column -> theirs), reports unknown columns as warnings, and every bad cell as an error with row, column, value, expected, mend.
[[nodiscard]] Result<Noted<std::vector<SignalRow>>> read_signal_rows(const TextGrid& grid, const std::map<std::string, std::string>& columns = {});
[[nodiscard]] Result<Noted<std::vector<MovementRow>>> read_movement_rows(const TextGrid& grid, const std::map<std::string, std::string>& columns = {});
// The same, or a count sheet (see count_layouts.hpp) with the peak hour within each of `periods`; read_movement_rows takes one for all periods.
[[nodiscard]] Result<Noted<std::vector<MovementRow>>> read_movements(const TextGrid& grid, const std::map<std::string, std::string>& columns, const std::vector<Period>& periods);
[[nodiscard]] Result<Noted<std::vector<CrossingRow>>> read_crossing_rows(const TextGrid& grid, const std::map<std::string, std::string>& columns = {});
[[nodiscard]] Result<Noted<std::vector<TravelTimeRow>>> read_travel_time_rows(const TextGrid& grid, const std::map<std::string, std::string>& columns = {});
[[nodiscard]] Result<Noted<std::vector<TimingRow>>> read_timing_rows(const TextGrid& grid, const std::map<std::string, std::string>& columns = {});
[[nodiscard]] Result<Noted<std::vector<ConflictRow>>> read_conflict_rows(const TextGrid& grid, const std::map<std::string, std::string>& columns = {});

}  // namespace entrain::project
