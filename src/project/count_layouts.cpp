#include "project/count_layouts.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <set>

#include "base/number_text.hpp"
#include "project/count_heading.hpp"
#include "project/table_reader.hpp"

namespace entrain::project {
namespace {

constexpr std::size_t header_search_rows = 50;
constexpr std::size_t least_movement_columns = 3;

struct Header {
  std::size_t row = 0;
  std::map<std::size_t, MovementColumn> movements;  // by column
};

// Movement columns of a row; a turn alone takes the direction that stands above it, merged over several columns.
Header header_at(const TextGrid& grid, std::size_t r) {
  Header header{r, {}};
  std::string above;
  for (std::size_t c = 0; c < grid.rows[r].size(); ++c) {
    const std::string upper = r > 0 && c < grid.rows[r - 1].size() ? cell_text(grid.rows[r - 1][c]) : std::string();
    if (!upper.empty()) above = is_direction_alone(upper) ? upper : std::string();
    auto column = movement_column(grid.rows[r][c]);
    if (!column && !above.empty() && !turn_alone(grid.rows[r][c]).empty()) column = movement_column(above + " " + grid.rows[r][c]);
    if (column) header.movements[c] = *column;
  }
  const bool full = std::any_of(header.movements.begin(), header.movements.end(), [](const auto& m) { return !m.second.bare; });
  if (full) std::erase_if(header.movements, [](const auto& m) { return m.second.bare; });  // "ST" beside "SBT" is a street
  return header;
}

Header best_header(const TextGrid& grid) {
  Header best;
  for (std::size_t r = 0; r < std::min(grid.rows.size(), header_search_rows); ++r)
    if (Header header = header_at(grid, r); header.movements.size() > best.movements.size()) best = std::move(header);
  return best;
}

// The side people come from to their direction of travel.
std::string approach_of(const std::string& letters, bool is_leg) {
  static const std::map<std::string, std::string> opposite = {{"N", "S"}, {"S", "N"}, {"E", "W"}, {"W", "E"}, {"NE", "SW"}, {"SW", "NE"}, {"NW", "SE"}, {"SE", "NW"}};
  return (is_leg ? opposite.at(letters) : letters) + "B";
}

struct Interval {
  std::size_t row = 0;  // 1-based
  std::string signal, period, date;
  int start = -1, end = -1;  // minutes of the day; -1: no time
};

using MovementKey = std::pair<std::string, std::string>;  // approach, turn

struct Sum {
  bool counted = false, has_classes = false;
  double total = 0, light = 0, heavy = 0;
  double volume() const { return total > 0 ? total : light + heavy; }
};

class Layout {
 public:
  Layout(const TextGrid& grid, const CountRequest& request, const std::map<std::string, std::string>& columns) : m_request(request), m_header(best_header(grid)), m_grid(grid) {
    name_columns(columns);
  }

  Result<Noted<std::vector<MovementRow>>> read() {
    std::vector<ColumnRule> rules;
    for (const std::string& name : m_names) rules.push_back({name, false});
    TableReader reader(m_grid, rules, {});
    append(reader.notes(), std::move(m_notes));
    m_reader = &reader;
    if (m_header.movements.size() < least_movement_columns)
      return failure(error(m_grid.source, "no row with columns of movements", "columns such as NBL, NBT, NBR", "Add such a row, or use the columns signal, approach, turn, volume_vph"));
    if (!reader.has("signal") && m_request.signal.empty())
      return failure(error(fmt::format("{} row {}", m_grid.source, m_header.row + 1), "no column that names the signal", "a column signal, or another one named under [columns.movements]",
                           "Add signal = \"...\" there with the name of your column"));
    for (const std::size_t row : reader.data_rows()) read_row(row);
    std::vector<MovementRow> rows = reader.has_problems() ? std::vector<MovementRow>{} : make_rows();
    if (reader.has_problems()) return failure(reader.take_problems());
    return Noted<std::vector<MovementRow>>{std::move(rows), std::move(reader.notes())};
  }

 private:
  std::string place() const { return fmt::format("{} row {}", m_grid.source, m_header.row + 1); }

  // Gives the header row our names; columns nobody knows lose theirs and are listed once.
  void name_columns(const std::map<std::string, std::string>& columns) {
    static const std::map<std::string, std::vector<std::string>> known = {{"signal", {"signal", "signal_id", "intersection_id", "intersection", "node", "location"}},
                                                                          {"period", {"period"}},
                                                                          {"time", {"time", "time_start", "start_time", "start", "begin", "time_begin", "interval", "time_interval"}},
                                                                          {"end", {"end", "time_end", "end_time"}},
                                                                          {"date", {"date", "count_date"}}};
    if (m_grid.rows.empty()) return;
    for (const auto& [ours, theirs] : columns)
      if (known.count(ours) == 0) m_notes.push_back(warning(m_grid.source + " [columns]", "a column that a count sheet does not have: " + printable(ours), "signal, period, time, end or date", "It was not used"));
    std::vector<std::string>& cells = m_grid.rows[m_header.row];
    std::vector<std::string> original = cells;
    std::fill(cells.begin(), cells.end(), std::string());
    for (const auto& [c, column] : m_header.movements) name_movement(c, column, cells);
    for (const auto& [name, candidates] : known) {
      const auto mapped = columns.find(name);
      const std::vector<std::string> wanted = mapped != columns.end() ? std::vector<std::string>{heading_name(mapped->second)} : candidates;
      for (const std::string& heading : wanted) {
        const auto at = std::find_if(original.begin(), original.end(), [&](const std::string& cell) { return heading_name(cell) == heading; });
        if (at == original.end()) continue;
        const std::size_t c = static_cast<std::size_t>(at - original.begin());
        if (!cells[c].empty()) continue;
        cells[c] = name;
        m_names.insert(name);
        if (name == "signal" && mapped == columns.end() && heading != "signal") m_notes.push_back(warning(place(), "ASSUMED: column " + printable(*at) + " names the signals"));
        break;
      }
    }
    std::string unused;
    for (std::size_t c = 0; c < cells.size(); ++c)
      if (cells[c].empty() && !cell_text(original[c]).empty()) unused += (unused.empty() ? "" : ", ") + printable(original[c], 40);
    if (!unused.empty()) m_notes.push_back(note(place(), "columns not used: " + printable(unused, 600)));
  }

  void name_movement(std::size_t c, const MovementColumn& column, std::vector<std::string>& cells) {
    const bool leg = m_request.bare_letters != "travel";
    const MovementKey key{column.bare ? approach_of(column.approach, leg) : column.approach, column.turn};
    if (column.bare && m_request.bare_letters.empty() && !m_said_bare) {
      m_said_bare = true;
      m_notes.push_back(warning(place(), "ASSUMED: N, E, S, W name the leg that traffic comes from (N is southbound)", "NB, EB, ... where directions of travel are meant", "Rename the columns if that is wrong"));
    }
    std::string name = fmt::format("{}_{}_{}", key.first, key.second, column.counted == CountClass::heavy ? "heavy" : column.counted == CountClass::light ? "light" : "total");
    std::transform(name.begin(), name.end(), name.begin(), [](unsigned char l) { return static_cast<char>(std::tolower(l)); });
    for (int n = 2; m_names.count(name) != 0; ++n) name = fmt::format("{}_{}", name.substr(0, name.find_last_not_of("0123456789_") + 1), n);
    m_names.insert(name);
    cells[c] = name;
    m_counted.push_back({name, key, column.counted});
  }

  void read_row(std::size_t row) {
    Interval interval{row, m_reader->has("signal") ? m_reader->text(row, "signal") : m_request.signal, m_reader->text(row, "period"), m_reader->text(row, "date"), -1, -1};
    const std::string time = m_reader->text(row, "time");
    if (m_reader->has("time") && (time.empty() || minutes_of_day(time) < 0)) {
      if (std::any_of(time.begin(), time.end(), [](char c) { return c >= '0' && c <= '9'; }))
        m_reader->problem(row, "time", printable(time), "a time such as 07:15", "Correct the cell");
      else ++m_without_time;  // totals and blank lines below the counts
      return;
    }
    if (m_reader->has("signal") && interval.signal.empty()) return void(m_reader->required_text(row, "signal"));
    interval.start = time.empty() ? -1 : minutes_of_day(time);
    if (const auto dash = time.find('-', time.find(':') == std::string::npos ? 0 : time.find(':')); dash != std::string::npos) interval.end = minutes_of_day(time.substr(dash + 1));
    if (const std::string end = m_reader->text(row, "end"); !end.empty()) interval.end = minutes_of_day(end);
    if (interval.date.empty() && time.size() > 10 && (time[10] == 'T' || time[10] == ' ')) interval.date = time.substr(0, 10);
    for (const Counted& column : m_counted) (void)m_reader->number(row, column.name, 0, 20000);
    m_intervals.push_back(interval);
  }

  double cell(std::size_t row, const std::string& column) const { return parse_number(m_reader->text(row, column)).value_or(0); }

  double interval_total(const Interval& interval) const {
    double all = 0;
    for (const auto& [key, sum] : sums({&interval})) all += sum.volume();
    return all;
  }

  std::map<MovementKey, Sum> sums(const std::vector<const Interval*>& hour) const {
    std::map<MovementKey, Sum> all;
    for (const Counted& column : m_counted) {
      Sum& sum = all[column.key];
      sum.has_classes = sum.has_classes || column.counted == CountClass::heavy;
      for (const Interval* interval : hour) {
        if (m_reader->text(interval->row, column.name).empty()) continue;
        sum.counted = true;
        const double value = cell(interval->row, column.name);
        (column.counted == CountClass::total ? sum.total : column.counted == CountClass::light ? sum.light : sum.heavy) += value;
      }
    }
    return all;
  }

  void add_rows(const std::vector<const Interval*>& hour, const std::string& period, double scale, std::optional<double> peak_hour_factor, std::vector<MovementRow>& rows) const {
    for (const auto& [key, sum] : sums(hour)) {
      MovementRow row;
      row.row = hour.front()->row, row.period = period, row.signal = hour.front()->signal, row.approach = key.first, row.turn = key.second;
      if (sum.counted) row.volume_vph = sum.volume() * scale;
      if (sum.has_classes && sum.volume() > 0) row.heavy_vehicle_pct = std::min(100.0, 100 * sum.heavy / sum.volume());
      row.peak_hour_factor = peak_hour_factor;
      rows.push_back(std::move(row));
    }
  }

  std::vector<MovementRow> make_rows() {
    std::vector<MovementRow> rows;
    if (m_without_time > 0) m_reader->notes().push_back(note(m_grid.source, fmt::format("{} rows without a time (totals, blank lines) are left out", m_without_time)));
    if (!m_reader->has("time")) {
      for (const Interval& interval : m_intervals) add_rows({&interval}, interval.period, 1, std::nullopt, rows);
      return rows;
    }
    std::map<std::string, std::vector<const Interval*>> by_signal;
    for (const Interval& interval : m_intervals) by_signal[interval.signal].push_back(&interval);
    std::vector<Period> periods = m_request.periods;
    if (periods.empty()) {
      periods.push_back({});
      m_reader->notes().push_back(warning(m_grid.source, "ASSUMED: the busiest hour of the table stands for every period"));
    }
    for (const auto& [signal, intervals] : by_signal)
      for (const Period& period : periods) add_peak_hour(signal, intervals, period, rows);
    return rows;
  }

  // Length of the intervals of one day in minutes, 0 if it can't be told.
  static int interval_length(const std::vector<const Interval*>& day) {
    int length = 0;
    for (std::size_t i = 0; i < day.size(); ++i) {
      const int step = day[i]->end > day[i]->start ? day[i]->end - day[i]->start : i + 1 < day.size() ? day[i + 1]->start - day[i]->start : 0;
      if (step > 0 && (length == 0 || step < length)) length = step;
    }
    return length;
  }

  struct Hour {
    std::vector<const Interval*> intervals;
    double total = -1;
    int length = 0;
  };

  Hour busiest(const std::vector<const Interval*>& day, int length, int from, int to) const {
    Hour best;
    const std::size_t needed = static_cast<std::size_t>(60 / length);
    for (std::size_t i = 0; i < day.size(); ++i) {
      Hour hour{{}, 0, length};
      for (std::size_t k = i; k < day.size() && hour.intervals.size() < needed; ++k) {
        const int start = day[i]->start + static_cast<int>(k - i) * length;
        if (day[k]->start != start || start < from || start + length > to) break;
        hour.intervals.push_back(day[k]);
        hour.total += interval_total(*day[k]);
      }
      if (hour.intervals.size() > best.intervals.size() || (hour.intervals.size() == best.intervals.size() && !hour.intervals.empty() && hour.total > best.total)) best = hour;
    }
    return best;
  }

  void add_peak_hour(const std::string& signal, const std::vector<const Interval*>& intervals, const Period& period, std::vector<MovementRow>& rows) {
    const std::string name = printable(signal) + (period.id.empty() ? "" : ", period " + period.id);
    const int from = period.from.empty() ? 0 : minutes_of_day(period.from), to = period.to.empty() ? 24 * 60 : minutes_of_day(period.to);
    std::map<std::string, std::vector<const Interval*>> days;
    for (const Interval* interval : intervals) days[interval->date].push_back(interval);
    Hour best;
    for (auto& [date, day] : days) {
      std::sort(day.begin(), day.end(), [](const Interval* a, const Interval* b) { return std::pair(a->start, a->row) < std::pair(b->start, b->row); });
      for (std::size_t i = 1; i < day.size(); ++i)
        if (day[i]->start == day[i - 1]->start) return m_reader->problem(day[i]->row, "time", clock(day[i]->start) + " at " + name + " again", fmt::format("each interval of a day once (row {} holds it)", day[i - 1]->row), "Remove one of the rows");
      const int length = interval_length(day);
      if (length <= 0 || length > 60 || std::lround(60.0 / length) * length != 60)
        return m_reader->problem(day.front()->row, "time", fmt::format("intervals of {} minutes at {}", length, name), "intervals that divide the hour", "Correct the times, or add a column end");
      if (Hour hour = busiest(day, length, from, to); hour.intervals.size() * static_cast<std::size_t>(length) > best.intervals.size() * static_cast<std::size_t>(best.length) ||
                                                      (hour.intervals.size() * static_cast<std::size_t>(length) == best.intervals.size() * static_cast<std::size_t>(best.length) && hour.total > best.total))
        best = std::move(hour);
    }
    if (best.intervals.empty()) return m_reader->notes().push_back(warning(m_grid.source, fmt::format("no count of {} between {} and {}", name, clock(from), clock(to))));
    report(name, days.size(), best, rows, period.id);
  }

  static std::string clock(int minutes) { return fmt::format("{:02}:{:02}", minutes / 60, minutes - minutes / 60 * 60); }

  void report(const std::string& name, std::size_t days, const Hour& best, std::vector<MovementRow>& rows, const std::string& period) {
    const int covered = static_cast<int>(best.intervals.size()) * best.length, start = best.intervals.front()->start;
    const std::optional<double> factor = peak_hour_factor(best, covered);
    std::string sentence = fmt::format("{}: {} to {}, {} vehicles", name, clock(start), clock(start + covered), number_text(best.total));
    if (factor) sentence += ", peak-hour factor " + number_text(*factor, 3);
    if (days > 1) sentence += fmt::format(", the busiest of {} days ({})", days, printable(best.intervals.front()->date));
    m_reader->notes().push_back(note(m_grid.source, sentence));
    if (covered < 60) m_reader->notes().push_back(warning(m_grid.source, fmt::format("ASSUMED: {}: only {} minutes in a row were counted; they stand for an hour", name, covered)));
    add_rows(best.intervals, period, 60.0 / covered, factor, rows);
  }

  // Of the whole intersection: volume over four times the busiest 15 minutes (Highway Capacity Manual).
  std::optional<double> peak_hour_factor(const Hour& hour, int covered) const {
    if (covered != 60 || hour.length > 15 || 15 / hour.length * hour.length != 15 || hour.total <= 0) return std::nullopt;
    const std::size_t each = static_cast<std::size_t>(15 / hour.length);
    double most = 0;
    for (std::size_t i = 0; i < hour.intervals.size(); i += each) {
      double quarter = 0;
      for (std::size_t k = i; k < i + each; ++k) quarter += interval_total(*hour.intervals[k]);
      most = std::max(most, quarter);
    }
    return std::clamp(hour.total / (4 * most), 0.25, 1.0);
  }

  struct Counted {
    std::string name;
    MovementKey key;
    CountClass counted;
  };

  const CountRequest& m_request;
  Header m_header;
  TextGrid m_grid;
  std::set<std::string> m_names;
  std::vector<Counted> m_counted;
  std::vector<Interval> m_intervals;
  Diagnostics m_notes;
  TableReader* m_reader = nullptr;
  std::size_t m_without_time = 0;
  bool m_said_bare = false;
};

// "7:15 pm" -> 19:15; hours and minutes as found.
int with_half_day(int hours, int minutes, const std::string& rest) {
  std::string half;
  for (const char c : rest)
    if ((c | 32) >= 'a' && (c | 32) <= 'z') half += static_cast<char>(c | 32);
  if (half == "am" || half == "pm") {
    if (hours < 1 || hours > 12) return -1;
    hours = (hours == 12 ? 0 : hours) + (half == "pm" ? 12 : 0);
  } else if (!half.empty()) {
    return -1;
  }
  if (hours > 24 || minutes > 59 || (hours == 24 && minutes > 0)) return -1;
  return hours * 60 + minutes;
}

}  // namespace

int minutes_of_day(const std::string& text) {
  std::string_view time = trim(text);
  if (time.size() > 11 && (time[10] == 'T' || time[10] == ' ') && time.find_first_not_of("0123456789-/.") == 10) time.remove_prefix(11);
  if (const auto number = parse_number(time); number && time.find('.') != std::string_view::npos) return *number >= 0 && *number < 1 ? static_cast<int>(std::lround(*number * 1440)) : -1;
  std::size_t i = 0;
  while (i < time.size() && time[i] >= '0' && time[i] <= '9') ++i;
  const auto first = parse_whole_number(time.substr(0, i));
  if (!first || i > 4) return -1;
  const int value = static_cast<int>(*first);
  if (i < time.size() && time[i] == ':') {
    std::string_view rest = time.substr(i + 1);
    const auto minutes = parse_whole_number(rest.substr(0, 2));
    if (i > 2 || rest.size() < 2 || !minutes || *minutes < 0) return -1;
    rest.remove_prefix(2);
    if (const auto dash = rest.find('-'); dash != std::string_view::npos) rest = rest.substr(0, dash);
    return with_half_day(value, static_cast<int>(*minutes), std::string(rest));
  }
  if (time == "0") return 0;  // midnight as a part of a day
  if (i < 3) return -1;       // "7" alone is no time
  std::string_view rest = time.substr(i);
  if (const auto dash = rest.find('-'); dash != std::string_view::npos) rest = rest.substr(0, dash);
  return with_half_day(value / 100, value - value / 100 * 100, std::string(rest));
}

bool is_count_layout(const TextGrid& grid) { return best_header(grid).movements.size() >= least_movement_columns; }

Result<Noted<std::vector<MovementRow>>> read_count_layouts(const TextGrid& grid, const CountRequest& request, const std::map<std::string, std::string>& columns) {
  return Layout(grid, request, columns).read();
}

}  // namespace entrain::project
