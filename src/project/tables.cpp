#include "project/tables.hpp"

#include "base/number_text.hpp"
#include "base/quantity.hpp"
#include "project/count_layouts.hpp"
#include "project/table_reader.hpp"

namespace entrain::project {
namespace {

using Columns = std::map<std::string, std::string>;

// Reads every data row by `read_row(reader, row)`; `check_columns` looks at the header first.
template <class Row, class ReadRow, class CheckColumns>
Result<Noted<std::vector<Row>>> read_rows(const TextGrid& grid, const std::vector<ColumnRule>& rules, const Columns& columns, ReadRow read_row, CheckColumns check_columns) {
  TableReader reader(grid, rules, columns);
  check_columns(reader);
  std::vector<Row> rows;
  if (reader.has_header() && !reader.has_problems())
    for (const std::size_t row : reader.data_rows()) rows.push_back(read_row(reader, row));
  if (reader.has_problems()) return failure(reader.take_problems());
  if (rows.empty()) reader.notes().push_back(warning(grid.source, "no rows below the column names", "", "Fill the table or leave it out of [tables]"));
  return Noted<std::vector<Row>>{std::move(rows), std::move(reader.notes())};
}

template <class Row, class ReadRow>
Result<Noted<std::vector<Row>>> read_rows(const TextGrid& grid, const std::vector<ColumnRule>& rules, const Columns& columns, ReadRow read_row) {
  return read_rows<Row>(grid, rules, columns, read_row, [](TableReader&) {});
}

const std::vector<std::string> clock_words = {"gps", "network", "line", "manual"};
const std::vector<std::string> operation_words = {"pretimed", "coordinated_actuated", "free"};
const std::vector<std::string> half_words = {"never", "allowed", "required"};
const std::vector<std::string> approach_words = {"nb", "neb", "eb", "seb", "sb", "swb", "wb", "nwb"};
const std::vector<std::string> reference_words = {"begin_of_green", "begin_of_yellow", "begin_of_red", "begin_of_pedestrian_clearance"};

std::string upper(std::string text) {
  for (char& c : text) c = c >= 'a' && c <= 'z' ? static_cast<char>(c - 'a' + 'A') : c;
  return text;
}

SignalRow signal_row(TableReader& in, std::size_t r) {
  SignalRow row;
  row.row = r;
  row.signal = in.required_text(r, "signal");
  row.name = in.text(r, "name");
  row.lon = in.number(r, "lon", -180, 180);
  row.lat = in.number(r, "lat", -90, 90);
  if (row.lon.has_value() != row.lat.has_value()) in.problem(r, row.lon ? "lat" : "lon", "nothing", "both lon and lat, or neither", "Fill the cell");
  row.minimum_cycle_s = in.whole(r, "min_cycle_s", 1, 3600);
  row.maximum_cycle_s = in.whole(r, "max_cycle_s", 1, 3600);
  if (row.minimum_cycle_s && row.maximum_cycle_s && *row.minimum_cycle_s > *row.maximum_cycle_s)
    in.problem(r, "min_cycle_s", std::to_string(*row.minimum_cycle_s), "at most max_cycle_s = " + std::to_string(*row.maximum_cycle_s), "Exchange them or correct one");
  if (const std::string half = in.word(r, "half_cycle", half_words); !half.empty()) row.half_cycle = half;
  row.clock = in.word(r, "clock", clock_words);
  row.operation = in.word(r, "operation", operation_words);
  row.offset_s = in.number(r, "offset_s", -3600, 3600);
  row.offset_fixed = in.truth(r, "offset_fixed");
  row.sequence_fixed = in.truth(r, "sequence_fixed");
  row.splits_fixed = in.truth(r, "splits_fixed");
  row.traffic_side = in.word(r, "traffic_side", {"right", "left"});
  return row;
}

MovementRow movement_row(TableReader& in, std::size_t r) {
  MovementRow row;
  row.row = r;
  row.period = in.text(r, "period");
  row.signal = in.required_text(r, "signal");
  in.required_text(r, "approach");
  row.approach = upper(in.word(r, "approach", approach_words));
  in.required_text(r, "turn");
  row.turn = upper(in.word(r, "turn", {"l", "t", "r", "u"}));
  row.from = in.text(r, "from");
  row.volume_vph = in.number(r, "volume_vph", 0, 20000);
  row.lane_group = in.text(r, "lane_group");
  row.lanes = in.whole(r, "lanes", 1, 12);
  row.saturation_flow_vph = in.number(r, "saturation_flow_vph", 100, 30000);
  row.heavy_vehicle_pct = in.number(r, "heavy_vehicle_pct", 0, 100);
  row.peak_hour_factor = in.number(r, "peak_hour_factor", 0.25, 1);
  row.group = in.text(r, "group");
  row.storage_m = in.in_either_unit(r, "storage_m", "storage_ft", metres_per_foot, 0, 3000);
  row.control = in.word(r, "control", {"signal", "yield", "free", "prohibited"});
  row.turn_treatment = in.word(r, "turn_treatment", {"protected", "permissive", "protected_permissive"});
  return row;
}

// "north", "n", "N2" -> "N", "N", "N2": legs are named by the side they lie on.
std::string leg_name(const std::string& text) {
  static const std::map<std::string, std::string> words = {{"NORTH", "N"}, {"EAST", "E"}, {"SOUTH", "S"}, {"WEST", "W"}, {"NORTHEAST", "NE"}, {"SOUTHEAST", "SE"}, {"SOUTHWEST", "SW"}, {"NORTHWEST", "NW"}};
  const std::string name = upper(text);
  const auto found = words.find(name);
  return found == words.end() ? name : found->second;
}

CrossingRow crossing_row(TableReader& in, std::size_t r) {
  CrossingRow row;
  row.row = r;
  row.signal = in.required_text(r, "signal");
  in.required_text(r, "leg");
  row.leg = leg_name(in.text(r, "leg"));
  row.length_m = in.in_either_unit(r, "length_m", "length_ft", metres_per_foot, 1, 150);
  row.walk_s = in.number(r, "walk_s", 0, 300);
  row.walking_speed_mps = in.in_either_unit(r, "walking_speed_m_per_s", "walking_speed_ft_per_s", metres_per_foot, 0.3, 3);
  row.refuge_after_m = in.in_either_unit(r, "refuge_after_m", "refuge_after_ft", metres_per_foot, 0, 150);
  row.button_distance_m = in.in_either_unit(r, "button_distance_m", "button_distance_ft", metres_per_foot, 0, 50);
  row.group = in.text(r, "group");
  row.service = in.word(r, "service", {"every_cycle", "on_call"});
  return row;
}

TravelTimeRow travel_time_row(TableReader& in, std::size_t r) {
  TravelTimeRow row;
  row.row = r;
  row.from_signal = in.required_text(r, "from_signal");
  row.to_signal = in.required_text(r, "to_signal");
  if (!row.from_signal.empty() && row.from_signal == row.to_signal) in.problem(r, "to_signal", printable(row.to_signal), "another signal than from_signal", "Correct the cell or remove the row");
  row.mean_s = in.required_number(r, "mean_s", 0.5, 3600);
  row.period = in.text(r, "period");
  row.sd_s = in.number(r, "sd_s", 0, 1000);
  row.runs = in.whole(r, "runs", 1, 1000000);
  row.length_m = in.in_either_unit(r, "length_m", "length_ft", metres_per_foot, 1, 100000);
  return row;
}

TimingRow timing_row(TableReader& in, std::size_t r) {
  TimingRow row;
  row.row = r;
  row.period = in.text(r, "period");
  row.signal = in.required_text(r, "signal");
  const std::optional<double> cycle = in.number(r, "cycle_s", 10, 3600);
  if (in.text(r, "cycle_s").empty()) in.required_text(r, "cycle_s");
  row.cycle_s = cycle.value_or(0);
  row.offset_s = in.number(r, "offset_s", -3600, 3600);
  row.offset_reference = in.word(r, "offset_reference", reference_words);
  row.reference_group = in.text(r, "reference_group");
  row.group = in.required_text(r, "group");
  row.yellow_s = in.required_number(r, "yellow_s", 0, 20);
  row.red_clearance_s = in.required_number(r, "red_clearance_s", 0, 20);
  row.green_start_s = in.number(r, "green_start_s", -3600, 3600);
  row.green_s = in.number(r, "green_s", 0, 3600);
  row.split_s = in.number(r, "split_s", 0, 3600);
  row.sequence = in.text(r, "sequence");
  row.walk_s = in.number(r, "walk_s", 0, 300);
  row.pedestrian_clearance_s = in.number(r, "pedestrian_clearance_s", 0, 300);
  row.minimum_green_s = in.number(r, "minimum_green_s", 0, 300);
  row.coordinated = in.truth(r, "coordinated");
  const auto below_cycle = [&](const char* column, std::optional<double> value, bool may_equal) {
    if (value && row.cycle_s > 0 && (*value < 0 || *value > row.cycle_s || (*value == row.cycle_s && !may_equal)))
      in.problem(r, column, number_text(*value), may_equal ? "0 to the signal's cycle_s" : "0 or more and below the signal's cycle_s", "Correct the cell or cycle_s = " + number_text(row.cycle_s));
  };
  below_cycle("offset_s", row.offset_s, false);
  below_cycle("green_start_s", row.green_start_s, false);
  below_cycle("green_s", row.green_s, true);
  below_cycle("split_s", row.split_s, true);
  if (!row.split_s && !(row.green_start_s && row.green_s)) in.problem(r, "split_s", "nothing", "split_s, or green_start_s and green_s", "Fill the cells");
  return row;
}

ConflictRow conflict_row(TableReader& in, std::size_t r) {
  ConflictRow row{r, in.required_text(r, "signal"), in.required_text(r, "group_a"), in.required_text(r, "group_b"), in.required_number(r, "intergreen_ab_s", 0, 60),
                  in.required_number(r, "intergreen_ba_s", 0, 60)};
  if (!row.group_a.empty() && row.group_a == row.group_b) in.problem(r, "group_b", printable(row.group_b), "another group than group_a", "Correct the cell or remove the row");
  return row;
}

}  // namespace

Result<Noted<std::vector<SignalRow>>> read_signal_rows(const TextGrid& grid, const Columns& columns) {
  return read_rows<SignalRow>(grid, {{"signal", true}, {"name"}, {"lon"}, {"lat"}, {"min_cycle_s"}, {"max_cycle_s"}, {"half_cycle"}, {"clock"}, {"operation"}, {"offset_s"},
                                     {"offset_fixed"}, {"sequence_fixed"}, {"splits_fixed"}, {"traffic_side"}}, columns, signal_row);
}

Result<Noted<std::vector<MovementRow>>> read_movement_rows(const TextGrid& grid, const Columns& columns) { return read_movements(grid, columns, {}); }

Result<Noted<std::vector<MovementRow>>> read_movements(const TextGrid& grid, const Columns& columns, const std::vector<Period>& periods) {
  if (is_count_layout(grid)) return read_count_layouts(grid, {periods, {}, {}}, columns);
  return read_rows<MovementRow>(grid, {{"period"}, {"signal", true}, {"approach", true}, {"turn", true}, {"from"}, {"volume_vph", true}, {"lane_group"}, {"lanes"},
                                       {"saturation_flow_vph"}, {"heavy_vehicle_pct"}, {"peak_hour_factor"}, {"group"}, {"storage_m"}, {"storage_ft"}, {"control"},
                                       {"turn_treatment"}}, columns, movement_row);
}

Result<Noted<std::vector<CrossingRow>>> read_crossing_rows(const TextGrid& grid, const Columns& columns) {
  return read_rows<CrossingRow>(grid, {{"signal", true}, {"leg", true}, {"length_m"}, {"length_ft"}, {"walk_s"}, {"group"}, {"walking_speed_m_per_s"}, {"walking_speed_ft_per_s"},
                                       {"refuge_after_m"}, {"refuge_after_ft"}, {"button_distance_m"}, {"button_distance_ft"}, {"service"}}, columns, crossing_row,
                                [](TableReader& reader) { reader.require_one_of("length_m", "length_ft"); });
}

Result<Noted<std::vector<TravelTimeRow>>> read_travel_time_rows(const TextGrid& grid, const Columns& columns) {
  return read_rows<TravelTimeRow>(grid, {{"from_signal", true}, {"to_signal", true}, {"mean_s", true}, {"period"}, {"sd_s"}, {"runs"}, {"length_m"}, {"length_ft"}}, columns,
                                  travel_time_row);
}

Result<Noted<std::vector<TimingRow>>> read_timing_rows(const TextGrid& grid, const Columns& columns) {
  return read_rows<TimingRow>(grid, {{"period"}, {"signal", true}, {"cycle_s", true}, {"offset_s"}, {"offset_reference"}, {"reference_group"}, {"group", true}, {"yellow_s", true},
                                     {"red_clearance_s", true}, {"green_start_s"}, {"green_s"}, {"split_s"}, {"sequence"}, {"walk_s"}, {"pedestrian_clearance_s"},
                                     {"minimum_green_s"}, {"coordinated"}}, columns, timing_row);
}

Result<Noted<std::vector<ConflictRow>>> read_conflict_rows(const TextGrid& grid, const Columns& columns) {
  return read_rows<ConflictRow>(grid, {{"signal", true}, {"group_a", true}, {"group_b", true}, {"intergreen_ab_s", true}, {"intergreen_ba_s", true}}, columns, conflict_row);
}

}  // namespace entrain::project
