#include "report/compare_page.hpp"

#include <algorithm>
#include <cmath>
#include <nlohmann/json.hpp>

#include "base/number_text.hpp"
#include "report/text_layout.hpp"
#include "report/units.hpp"

namespace entrain::report {
namespace {

std::string name_of(const CompareBand& band) { return isolated(band.corridor) + " " + isolated(band.direction); }

// The bands of all rows by name, in order of first appearance.
std::vector<std::string> band_names(const Comparison& comparison) {
  std::vector<std::string> names;
  for (const CompareRow& row : comparison.rows)
    for (const CompareBand& band : row.bands)
      if (std::find(names.begin(), names.end(), name_of(band)) == names.end()) names.push_back(name_of(band));
  return names;
}

const CompareBand* band_of(const CompareRow& row, const std::string& name) {
  for (const CompareBand& band : row.bands)
    if (name_of(band) == name) return &band;
  return nullptr;
}

std::string mark_of(const CompareRow& row) {
  std::string mark = row.existing ? "today" : "";
  if (row.recommended) mark += mark.empty() ? "recommended" : ", recommended";
  if (row.runner_up) mark += mark.empty() ? "runner-up" : ", runner-up";
  return mark;
}

std::vector<Cell> row_cells(const CompareRow& row, const std::vector<std::string>& names) {
  std::vector<Cell> cells{Cell(number_text(row.cycle_s, 1), "", row.recommended), Cell(mark_of(row), "", row.recommended)};
  for (const std::string& name : names) {
    const CompareBand* band = row.fits ? band_of(row, name) : nullptr;
    cells.emplace_back(band == nullptr ? "-" : seconds_text(band->bandwidth_s), "", row.recommended);
    cells.emplace_back(band == nullptr ? "-" : fixed_text(band->efficiency * 100, 0));
    cells.emplace_back(band == nullptr ? "-" : fixed_text(band->attainability * 100, 0));
  }
  if (!row.fits) {
    cells.insert(cells.end(), 5, Cell("-"));
    cells.emplace_back(row.why_not.empty() ? "no" : "no: " + row.why_not);
    return cells;
  }
  cells.emplace_back(fixed_text(row.delay_s, 1), "", row.recommended);
  cells.emplace_back(count_text(row.stops_per_h));
  cells.emplace_back(ratio_text(row.worst_degree), isolated(row.worst_degree_at), row.worst_degree > 1);
  cells.emplace_back(seconds_text(row.longest_pedestrian_wait_s));
  cells.emplace_back(seconds_text(row.longest_side_street_wait_s));
  cells.emplace_back("yes");
  return cells;
}

// --- The plot ----------------------------------------------------------------------------------------------------------------------

struct Panel {
  Box box;
  double low_x = 0, high_x = 1, high_y = 1;
  double x(double cycle) const { return box.left + (cycle - low_x) / (high_x - low_x) * box.width; }
  double y(double value) const { return box.bottom() - value / high_y * box.height; }
};

struct Line {
  std::string name;
  std::vector<Point> points;  // cycle, value
  std::vector<Point> today;
};

double drawable(double value) { return std::isfinite(value) ? std::clamp(value, 0.0, 1e6) : 0; }

std::vector<Line> lines_of(const Comparison& comparison) {
  std::vector<Line> lines;
  for (const std::string& name : band_names(comparison)) {
    Line line{name, {}, {}};
    for (const CompareRow& row : comparison.rows)
      if (const CompareBand* band = row.fits ? band_of(row, name) : nullptr) (row.existing ? line.today : line.points).push_back({drawable(row.cycle_s), drawable(band->bandwidth_s)});
    lines.push_back(std::move(line));
  }
  return lines;
}

Line delay_line(const Comparison& comparison) {
  Line line{"delay", {}, {}};
  for (const CompareRow& row : comparison.rows)
    if (row.fits) (row.existing ? line.today : line.points).push_back({drawable(row.cycle_s), drawable(row.delay_s)});
  return line;
}

// A round number of at least `value` and the step of its ticks.
double round_step(double value) {
  const double power = std::pow(10, std::floor(std::log10(std::max(value, 1e-3) / 4)));
  for (const double factor : {1.0, 2.0, 5.0, 10.0})
    if (value / (factor * power) <= 5) return factor * power;
  return 10 * power;
}

void scale_to(Panel& panel, const std::vector<Line>& lines) {
  double most = 0;
  for (const Line& line : lines)
    for (const auto& points : {line.points, line.today})
      for (const Point& p : points) most = std::max(most, p.y);
  const double step = round_step(std::max(most, 1.0));
  panel.high_y = std::ceil(std::max(most, 1.0) * 1.02 / step) * step;
}

void draw_panel(Drawing& drawing, const Panel& panel, const std::string& title, const Comparison& comparison, bool with_cycles) {
  const double step = round_step(panel.high_y);
  for (double v = 0; v <= panel.high_y + 1e-9; v += step) {
    add_line(drawing, "grid", {{panel.box.left, panel.y(v)}, {panel.box.right(), panel.y(v)}}, 0.5, "", v == 0 ? 0 : 0.75);
    add_label(drawing, "value", {panel.box.left - 6, panel.y(v) + 4}, number_text(v, 3), 11, Anchor::end);
  }
  add_label(drawing, "panel", {panel.box.left, panel.box.top - 12}, title, 13, Anchor::start, true);
  double last = -1e9;
  for (const CompareRow& row : comparison.rows) {
    const double x = panel.x(drawable(row.cycle_s));
    add_line(drawing, "tick", {{x, panel.box.bottom()}, {x, panel.box.bottom() + 4}}, 0.8);
    if (!with_cycles || row.existing || x - last < 34) continue;
    add_label(drawing, "cycle", {x, panel.box.bottom() + 18}, number_text(row.cycle_s, 1), 11, Anchor::middle);
    last = x;
  }
}

// Grey columns where no plan fits.
void draw_gaps(Drawing& drawing, const Panel& panel, const Comparison& comparison) {
  for (const CompareRow& row : comparison.rows) {
    if (row.fits || row.existing) continue;
    const double x = panel.x(drawable(row.cycle_s));
    const double left = std::max(panel.box.left - 8, x - 6), right = std::min(panel.box.right() + 8, x + 6);
    add_box(drawing, "no_plan", {left, panel.box.top, right - left, panel.box.height}, {Fill::light, 0, "", 0, 1});
  }
}

void draw_choice(Drawing& drawing, const Panel& panel, const Comparison& comparison, bool with_words) {
  for (const CompareRow& row : comparison.rows) {
    if (!row.recommended && !row.runner_up) continue;
    const double x = panel.x(drawable(row.cycle_s));
    add_line(drawing, row.recommended ? "recommended" : "runner_up", {{x, panel.box.top}, {x, panel.box.bottom()}}, row.recommended ? 1.6 : 0.9, row.recommended ? "" : "2 3", row.recommended ? 0 : 0.3);
    if (with_words) add_label(drawing, "choice", {x, panel.box.bottom() + (row.recommended ? 34 : 49)}, row.recommended ? "recommended" : "runner-up", 12, Anchor::middle, row.recommended);
  }
}

void draw_mark(Drawing& drawing, Point at, std::size_t kind, bool today) {
  const double r = today ? 5 : 3.4;
  const Ink ink{kind % 2 == 0 && !today ? Fill::black : Fill::white, 1.3, "", 0, 1};
  if (kind % 4 < 2) {
    Shape circle;
    circle.kind = ShapeKind::circle, circle.role = today ? "today" : "mark", circle.points = {at}, circle.radius = r, circle.ink = ink;
    return drawing.shapes.push_back(std::move(circle));
  }
  add_polygon(drawing, today ? "today" : "mark", {{at.x - r, at.y - r}, {at.x + r, at.y - r}, {at.x + r, at.y + r}, {at.x - r, at.y + r}}, ink);
}

void draw_line(Drawing& drawing, const Panel& panel, const Line& line, std::size_t kind) {
  static const char* const dashes[] = {"", "7 3", "2 3", "9 3 2 3"};
  std::vector<Point> points;
  for (const Point& p : line.points) points.push_back({panel.x(p.x), panel.y(p.y)});
  if (points.size() > 1) add_line(drawing, "curve", points, 1.5, dashes[kind % 4]);
  for (const Point& p : points) draw_mark(drawing, p, kind, false);
  for (const Point& p : line.today) {
    draw_mark(drawing, {panel.x(p.x), panel.y(p.y)}, kind, true);
  }
}

// Names at the right ends, spread, each with a leader to its last point.
void name_lines(Drawing& drawing, const Panel& panel, const std::vector<Line>& lines) {
  std::vector<std::pair<double, std::size_t>> ends;
  for (std::size_t i = 0; i < lines.size(); ++i)
    if (!lines[i].points.empty()) ends.emplace_back(panel.y(lines[i].points.back().y), i);
  std::sort(ends.begin(), ends.end());
  std::vector<double> wanted;
  for (const auto& end : ends) wanted.push_back(end.first);
  const std::vector<double> at = spread(wanted, 15, panel.box.top, panel.box.bottom());
  for (std::size_t k = 0; k < ends.size(); ++k) {
    const Line& line = lines[ends[k].second];
    const Point last{panel.x(line.points.back().x), ends[k].first};
    add_line(drawing, "leader", {{last.x + 5, last.y}, {panel.box.right() + 12, at[k]}, {panel.box.right() + 16, at[k]}}, 0.6, "", 0.4);
    const std::string text = fitted(line.name + " " + number_text(line.points.back().y, 1) + " s", 12, 196);
    add_label(drawing, "line_name", {panel.box.right() + 19, at[k] + 4}, text, 12);
  }
}

// What runs today stands at one cycle: its marks are named there, beside each other's way.
void name_today(Drawing& drawing, const Panel& panel, const std::vector<Line>& lines) {
  std::vector<std::pair<Point, std::string>> marks;
  for (const Line& line : lines)
    for (const Point& p : line.today) marks.push_back({{panel.x(p.x), panel.y(p.y)}, line.name});
  std::sort(marks.begin(), marks.end(), [](const auto& a, const auto& b) { return a.first.y < b.first.y; });
  std::vector<double> wanted;
  for (const auto& mark : marks) wanted.push_back(mark.first.y);
  const std::vector<double> at = spread(wanted, 13, panel.box.top, panel.box.bottom());
  for (std::size_t k = 0; k < marks.size(); ++k) {
    const std::string text = fitted("today " + marks[k].second, 10.5, 150);
    const double width = text_width(text, 10.5), left = std::min(marks[k].first.x + 9, panel.box.right() - width - 2);
    add_box(drawing, "plate", {left - 1, at[k] - 6, width + 2, 12}, {Fill::white, 0, "", 0, 0.85});
    add_label(drawing, "today_name", {left, at[k] + 3.8}, text, 10.5);
  }
}

bool has_today(const Comparison& comparison) {
  return std::any_of(comparison.rows.begin(), comparison.rows.end(), [](const CompareRow& row) { return row.existing && row.fits; });
}

bool has_gap(const Comparison& comparison) {
  return std::any_of(comparison.rows.begin(), comparison.rows.end(), [](const CompareRow& row) { return !row.existing && !row.fits; });
}

void set_range(Panel& panel, const Comparison& comparison) {
  double low = 1e9, high = -1e9;
  for (const CompareRow& row : comparison.rows) low = std::min(low, drawable(row.cycle_s)), high = std::max(high, drawable(row.cycle_s));
  if (comparison.rows.empty()) low = 0, high = 1;
  const double margin = std::max(1.0, (high - low) * 0.03);
  panel.low_x = low - margin, panel.high_x = high + margin;
}

std::string sentence_of(const Comparison& comparison) {
  std::string text = "Cycle length, seconds.";
  if (has_today(comparison)) text += " Large open marks: the timing that runs today.";
  if (has_gap(comparison)) text += " Grey: no plan fits every minimum.";
  return text;
}

nlohmann::ordered_json number(double value) {
  if (!std::isfinite(value)) return nullptr;
  const double rounded = std::round(value * 1000) / 1000;
  if (rounded == std::floor(rounded) && std::fabs(rounded) < 1e15) return static_cast<std::int64_t>(rounded);
  return rounded;
}

nlohmann::ordered_json bands_json(const CompareRow& row) {
  auto bands = nlohmann::ordered_json::array();
  for (const CompareBand& band : row.bands)
    bands.push_back({{"corridor", band.corridor}, {"direction", band.direction}, {"bandwidth_s", number(band.bandwidth_s)}, {"efficiency", number(band.efficiency)}, {"attainability", number(band.attainability)}});
  return bands;
}

nlohmann::ordered_json row_json(const CompareRow& row) {
  nlohmann::ordered_json json{{"cycle_s", number(row.cycle_s)}, {"existing", row.existing}, {"fits", row.fits}};
  if (!row.fits) {
    json["why_not"] = row.why_not;
    return json;
  }
  json["bands"] = bands_json(row);
  json["delay_s"] = number(row.delay_s);
  json["stops_per_h"] = number(row.stops_per_h);
  json["worst_degree_of_saturation"] = number(row.worst_degree);
  json["worst_degree_at"] = row.worst_degree_at;
  json["longest_pedestrian_wait_s"] = number(row.longest_pedestrian_wait_s);
  json["longest_side_street_wait_s"] = number(row.longest_side_street_wait_s);
  json["recommended"] = row.recommended;
  json["runner_up"] = row.runner_up;
  return json;
}

nlohmann::ordered_json marked_cycle(const Comparison& comparison, bool CompareRow::* flag) {
  for (const CompareRow& row : comparison.rows)
    if (row.*flag) return number(row.cycle_s);
  return nullptr;
}

Document compare_document(const std::vector<Comparison>& comparisons) {
  Document page{comparisons.empty() ? "Cycle lengths" : isolated(comparisons.front().project) + ", cycle lengths", {}};
  page.blocks.push_back({Heading{1, page.title}});
  for (std::size_t i = 0; i < comparisons.size(); ++i) {
    const Comparison& comparison = comparisons[i];
    page.blocks.push_back({Heading{2, isolated(comparison.period)}});
    for (const CompareRow& row : comparison.rows)
      if (row.recommended) page.blocks.push_back({Notice{number_text(row.cycle_s, 1) + " s", comparison.reason, ""}});
    if (marked_cycle(comparison, &CompareRow::recommended).is_null()) page.blocks.push_back({Notice{"NO CYCLE LENGTH FITS", comparison.reason, "alarm"}});
    page.blocks.push_back({Figure{"", "plot-" + std::to_string(i + 1), compare_plot(comparison)}});
    Table table = compare_table(comparison);
    table.title.clear();
    page.blocks.push_back({std::move(table)});
  }
  page.blocks.push_back({List{"", "Cautions", {"A draft for engineering review: local codes come first, a licensed engineer decides and signs, the field decides over the table.",
                                               "Delay: uniform part from the arrival profile against the green, overflow part by the Highway Capacity Manual's formula. Bands assume that every phase uses its full split."}}});
  return page;
}

}  // namespace

Table compare_table(const Comparison& comparison) {
  Table table{"", comparison.project + ", " + comparison.period, {{"Cycle s", Align::right}, {"", Align::centre}}, {}, {}};
  const std::vector<std::string> names = band_names(comparison);
  for (const std::string& name : names) {
    table.columns.push_back({name + " band s", Align::right});
    table.columns.push_back({"eff. %", Align::right});
    table.columns.push_back({"att. %", Align::right});
  }
  for (const char* name : {"Delay s", "Stops /h"}) table.columns.push_back({name, Align::right});
  table.columns.push_back({"Highest v/c", Align::left});
  for (const char* name : {"Wait on foot s", "Side-street wait s"}) table.columns.push_back({name, Align::right});
  table.columns.push_back({"Minimums fit", Align::left});
  for (const CompareRow& row : comparison.rows) table.rows.push_back(row_cells(row, names));
  table.note = comparison.reason;
  return table;
}

Drawing compare_plot(const Comparison& comparison) {
  Drawing drawing{900, 560, "Bands and delay over the cycle length, " + comparison.period, comparison.reason, {}};
  Panel bands{{60, 40, 610, 210}}, delay{{60, 300, 610, 170}};
  set_range(bands, comparison);
  set_range(delay, comparison);
  const std::vector<Line> lines = lines_of(comparison), delays{delay_line(comparison)};
  scale_to(bands, lines);
  scale_to(delay, delays);
  for (const Panel* panel : {&bands, &delay}) {
    draw_gaps(drawing, *panel, comparison);
    draw_panel(drawing, *panel, panel == &bands ? "Band, seconds" : "Control delay, seconds a vehicle", comparison, panel == &delay);
    draw_choice(drawing, *panel, comparison, panel == &delay);
  }
  for (std::size_t i = 0; i < lines.size(); ++i) draw_line(drawing, bands, lines[i], i);
  draw_line(drawing, delay, delays.front(), 0);
  name_today(drawing, bands, lines);
  name_today(drawing, delay, delays);
  name_lines(drawing, bands, lines);
  name_lines(drawing, delay, delays);
  add_label(drawing, "legend", {60, 550}, sentence_of(comparison), 12);
  return drawing;
}

std::string compare_text(const std::vector<Comparison>& comparisons) {
  std::string text;
  for (const Comparison& comparison : comparisons) text += (text.empty() ? "" : "\n") + terminal_text(compare_table(comparison));
  return text;
}

std::string compare_json(const std::vector<Comparison>& comparisons) {
  nlohmann::ordered_json json{{"project", comparisons.empty() ? "" : comparisons.front().project}, {"periods", nlohmann::ordered_json::array()}};
  for (const Comparison& comparison : comparisons) {
    auto rows = nlohmann::ordered_json::array();
    for (const CompareRow& row : comparison.rows) rows.push_back(row_json(row));
    json["periods"].push_back({{"period", comparison.period}, {"reason", comparison.reason}, {"recommended_cycle_s", marked_cycle(comparison, &CompareRow::recommended)},
                               {"runner_up_cycle_s", marked_cycle(comparison, &CompareRow::runner_up)}, {"rows", std::move(rows)}});
  }
  return json.dump(1, ' ', false, nlohmann::ordered_json::error_handler_t::replace) + "\n";
}

std::vector<OutputFile> compare_files(const std::vector<Comparison>& comparisons) {
  HtmlOptions options;
  options.landscape = true;
  options.letters_pt = 10;
  std::vector<OutputFile> files{{"compare.html", html(compare_document(comparisons), options)}};
  std::vector<std::string> periods;
  for (const Comparison& comparison : comparisons) periods.push_back(comparison.period);
  const std::vector<std::string> names = file_names(periods);
  for (std::size_t i = 0; i < comparisons.size(); ++i) files.push_back({"compare_" + names[i] + ".csv", csv(compare_table(comparisons[i]))});
  return files;
}

}  // namespace entrain::report
