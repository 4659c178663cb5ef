#include "report/time_space.hpp"

#include <algorithm>
#include <cmath>
#include <functional>

#include "base/circle.hpp"
#include "base/number_text.hpp"
#include "report/corridor_line.hpp"
#include "report/plan_view.hpp"
#include "report/text_layout.hpp"

namespace entrain::report {
namespace {

constexpr double width = 1240, names_room = 372, link_room = 152, gap = 12;
constexpr double letters = 12.5, small = 11, row_height = 17;
constexpr double head_room = 104, foot_room = 118;

// Everything that the parts of the picture share.
struct Scene {
  const plan::Plan& plan;
  const plan::Corridor& corridor;
  Units units;
  std::vector<CorridorRow> rows;
  double until_s = 0;
  Box plot;
  double length_m = 0;
  Drawing drawing;
  LabelPlacer placer;

  double x(double time_s) const { return plot.left + time_s / until_s * plot.width; }
  double y(double position_m) const { return plot.top + 14 + (length_m > 0 ? position_m / length_m : 0.5) * (plot.height - 28); }
  std::size_t directions() const { return std::min<std::size_t>(corridor.directions.size(), 2); }
};

const char* role_of(std::size_t direction) { return direction == 0 ? "first" : "second"; }

void put(Scene& scene, const std::string& role, Point at, const std::string& text, double size, Anchor anchor = Anchor::start, bool strong = false) {
  add_label(scene.drawing, role, at, text, size, anchor, strong);
  scene.placer.block(label_box(scene.drawing.shapes.back()));
}

std::string direction_name(const plan::Direction& direction) { return isolated(direction.label.empty() ? direction.name : direction.label); }

double least_gap(const std::vector<CorridorRow>& rows) {
  double least = 1e9;
  for (std::size_t i = 1; i < rows.size(); ++i)
    if (rows[i].position_m - rows[i - 1].position_m > 1) least = std::min(least, rows[i].position_m - rows[i - 1].position_m);
  return least;
}

double plot_height(const std::vector<CorridorRow>& rows, double length_m) {
  const double for_names = row_height * static_cast<double>(rows.size() + 1), for_bars = length_m / least_gap(rows) * 15;
  return std::max(for_names, std::clamp(for_bars, 380.0, 1100.0)) + 28;
}

Scene scene_of(const plan::Plan& plan, const plan::Corridor& corridor, const TimeSpaceOptions& options) {
  std::vector<CorridorRow> rows = corridor_rows(corridor);
  const double length = rows.empty() ? 0 : rows.back().position_m;
  const double right = link_room * static_cast<double>(std::min<std::size_t>(corridor.directions.size(), 2));
  const Box plot{names_room + gap, head_room, width - names_room - 2 * gap - right, plot_height(rows, length)};
  Drawing drawing{width, head_room + plot.height + foot_room, "Time-space diagram of " + corridor.name, "", {}};
  const double cycle = is_drawable_cycle(plan.cycle_s) ? plan.cycle_s : 60;
  LabelPlacer placer({0, 0, drawing.width, drawing.height});
  return Scene{plan, corridor, options.units, std::move(rows), cycle * std::clamp(options.cycles, 1, 6), plot, length, std::move(drawing), std::move(placer)};
}

// --- Lamps -------------------------------------------------------------------------------------------------------------------------

struct BarPlace {
  double top = 0, height = 0;
  std::string role;
};

Ink ink_of(Lamp lamp) {
  if (lamp == Lamp::green) return {Fill::none, 0.7, "", 0.25, 1};
  if (lamp == Lamp::yellow) return {Fill::yellow_hatch, 0.7, "", 0, 1};
  return {Fill::black, 0, "", 0, 1};
}

const char* word_of(Lamp lamp) { return lamp == Lamp::green ? "green" : lamp == Lamp::yellow ? "yellow" : "red"; }

void draw_spans(Scene& scene, const std::vector<LampSpan>& spans, const BarPlace& place) {
  for (const LampSpan& span : spans)
    add_box(scene.drawing, std::string(word_of(span.lamp)) + " " + place.role, {scene.x(span.from_s), place.top, scene.x(span.to_s) - scene.x(span.from_s), place.height}, ink_of(span.lamp));
}

// The start of each green in which a queue still leaves.
void draw_queue(Scene& scene, const std::vector<LampSpan>& spans, const plan::Stop& stop, const BarPlace& place) {
  if (!(stop.queue_clearance_s > 0)) return;
  for (const LampSpan& span : spans) {
    if (span.lamp != Lamp::green || span.from_s <= 0) continue;
    const double to = std::min(span.to_s, span.from_s + stop.queue_clearance_s);
    add_box(scene.drawing, "queue " + place.role, {scene.x(span.from_s), place.top, scene.x(to) - scene.x(span.from_s), place.height}, {Fill::dots, 0.5, "", 0.25, 1});
  }
}

struct StopLamps {
  const plan::Stop* stop = nullptr;
  std::vector<LampSpan> spans;
};

StopLamps lamps_of(const Scene& scene, const CorridorRow& row, std::size_t direction) {
  const auto& index = direction == 0 ? row.first : row.second;
  if (!index || direction >= scene.directions()) return {};
  const plan::Stop& stop = scene.corridor.directions[direction].stops[*index];
  const plan::Signal* signal = find_signal(scene.plan, stop.signal);
  const plan::Group* group = signal == nullptr ? nullptr : find_group(*signal, stop.group);
  if (group == nullptr || signal->operation == plan::Operation::free) return {&stop, {}};
  return {&stop, lamp_spans(*signal, *group, scene.until_s)};
}

double bar_height(const Scene& scene, std::size_t k) {
  double room = 16;
  if (k > 0) room = std::min(room, scene.y(scene.rows[k].position_m) - scene.y(scene.rows[k - 1].position_m));
  if (k + 1 < scene.rows.size()) room = std::min(room, scene.y(scene.rows[k + 1].position_m) - scene.y(scene.rows[k].position_m));
  return std::max(0.8, std::min(10.0, room * 0.66));
}

void draw_lamps(Scene& scene, std::size_t k) {
  const CorridorRow& row = scene.rows[k];
  const StopLamps first = lamps_of(scene, row, 0), second = lamps_of(scene, row, 1);
  const double height = bar_height(scene, k), middle = scene.y(row.position_m);
  const auto draw = [&](const StopLamps& lamps, const BarPlace& place) {
    if (lamps.stop == nullptr) return;
    if (lamps.spans.empty()) add_line(scene.drawing, "unknown", {{scene.plot.left, middle}, {scene.plot.right(), middle}}, 0.8, "2 4");
    draw_spans(scene, lamps.spans, place);
    draw_queue(scene, lamps.spans, *lamps.stop, place);
  };
  const bool same = first.stop != nullptr && second.stop != nullptr && first.spans == second.spans && first.stop->queue_clearance_s == second.stop->queue_clearance_s;
  if (same) return draw(first, {middle - height / 2, height, "both"});
  const bool halves = first.stop != nullptr && second.stop != nullptr;
  draw(first, {middle - height / 2, halves ? height / 2 - 0.4 : height, "first"});
  draw(second, {halves ? middle + 0.4 : middle - height / 2, halves ? height / 2 - 0.4 : height, "second"});
}

// --- Bands -------------------------------------------------------------------------------------------------------------------------

// Cuts a polygon at one side of a vertical line.
std::vector<Point> cut(const std::vector<Point>& polygon, double at, bool keep_greater) {
  std::vector<Point> out;
  const auto inside = [&](const Point& p) { return keep_greater ? p.x >= at : p.x <= at; };
  for (std::size_t i = 0; i < polygon.size(); ++i) {
    const Point &a = polygon[i], &b = polygon[(i + 1) % polygon.size()];
    if (inside(a)) out.push_back(a);
    if (inside(a) != inside(b)) out.push_back({at, a.y + (at - a.x) / (b.x - a.x) * (b.y - a.y)});
  }
  return out;
}

struct Trace {
  std::vector<double> times_s, positions_m;  // by stop
};

Trace trace_of(const Scene& scene, std::size_t direction) {
  Trace trace;
  const plan::Direction& d = scene.corridor.directions[direction];
  trace.times_s = running_times(d);
  trace.positions_m.resize(d.stops.size());
  for (const CorridorRow& row : scene.rows)
    if (const auto& index = direction == 0 ? row.first : row.second) trace.positions_m[*index] = row.position_m;
  return trace;
}

std::vector<Point> band_polygon(const Scene& scene, const Trace& trace, double start_s, double bandwidth_s) {
  std::vector<Point> points;
  for (std::size_t k = 0; k < trace.times_s.size(); ++k) points.push_back({scene.x(start_s + trace.times_s[k]), scene.y(trace.positions_m[k])});
  for (std::size_t k = trace.times_s.size(); k-- > 0;) points.push_back({scene.x(start_s + trace.times_s[k] + bandwidth_s), scene.y(trace.positions_m[k])});
  points = cut(cut(points, scene.plot.left, true), scene.plot.right(), false);
  const auto [least, most] = std::minmax_element(points.begin(), points.end(), [](const Point& a, const Point& b) { return a.x < b.x; });
  return points.empty() || most->x - least->x < 0.05 ? std::vector<Point>{} : points;
}

bool has_band(const plan::Direction& d, const Trace& trace) { return d.bandwidth_s > 0 && d.bandwidth_s <= 86400 && std::fabs(d.band_start_s) <= 1e7 && trace.times_s.size() >= 2; }

// Calls `each(start)` for every repetition of the band that can be seen.
void for_each_band(const Scene& scene, const plan::Direction& d, const Trace& trace, const std::function<void(double)>& each) {
  const double cycle = is_drawable_cycle(scene.plan.cycle_s) ? scene.plan.cycle_s : scene.until_s;
  const double base = wrap(d.band_start_s, cycle), reach = trace.times_s.back() + d.bandwidth_s;
  const int first = -static_cast<int>(std::min(1000.0, std::ceil((base + reach) / cycle)));
  for (int n = first; base + n * cycle < scene.until_s; ++n) each(base + n * cycle);
}

void draw_bands(Scene& scene, std::size_t direction) {
  const plan::Direction& d = scene.corridor.directions[direction];
  const Trace trace = trace_of(scene, direction);
  if (!has_band(d, trace)) return;
  const Ink ink{direction == 0 ? Fill::forward_hatch : Fill::backward_hatch, 1.1, "", 0.1, 1};
  for_each_band(scene, d, trace, [&](double start) {
    std::vector<Point> points = band_polygon(scene, trace, start, d.bandwidth_s);
    if (points.size() >= 3) add_polygon(scene.drawing, std::string("band ") + role_of(direction), std::move(points), ink);
  });
}

// In the middle of a link, where the band is whole and no other label stands; the longest links are asked first.
std::vector<Point> label_places(const Scene& scene, const plan::Direction& d, const Trace& trace) {
  std::vector<std::pair<double, std::size_t>> links;
  for (std::size_t k = 1; k < trace.positions_m.size(); ++k) links.emplace_back(-std::fabs(trace.positions_m[k] - trace.positions_m[k - 1]), k);
  std::sort(links.begin(), links.end());
  std::vector<Point> places;
  for (const auto& [length, k] : links)
    for_each_band(scene, d, trace, [&, k = k](double start) {
      const double time = start + (trace.times_s[k] + trace.times_s[k - 1] + d.bandwidth_s) / 2;
      if (time - d.bandwidth_s / 2 > 0 && time + d.bandwidth_s / 2 < scene.until_s) places.push_back({scene.x(time), (scene.y(trace.positions_m[k]) + scene.y(trace.positions_m[k - 1])) / 2});
    });
  return places;
}

void label_band(Scene& scene, std::size_t direction) {
  const plan::Direction& d = scene.corridor.directions[direction];
  const Trace trace = trace_of(scene, direction);
  if (!has_band(d, trace)) return;
  const std::string text = direction_name(d) + " " + seconds_text(d.bandwidth_s) + " s";
  const double size = 14, w = text_width(text, size, true);
  int placed = 0;
  for (const Point& at : label_places(scene, d, trace)) {
    const Box box{at.x - w / 2 - 3, at.y - size * 0.62, w + 6, size * 1.24};
    if (!is_inside(box, scene.plot) || scene.placer.place({box}, 2) < 0) continue;
    add_box(scene.drawing, "band_plate", box, {Fill::white, 0.8, "", 0, 1});
    add_label(scene.drawing, "band_width", {at.x, at.y + size * 0.3}, text, size, Anchor::middle, true);
    if (++placed == 2) return;
  }
}

// --- Axes, names, links ------------------------------------------------------------------------------------------------------------

void draw_time_axis(Scene& scene) {
  const double cycle = scene.until_s / std::max(1.0, std::round(scene.until_s / (is_drawable_cycle(scene.plan.cycle_s) ? scene.plan.cycle_s : 60)));
  const double step = cycle <= 150 ? 10 : std::ceil(cycle / 120) * 10;
  for (double t = 0; t <= scene.until_s + 1e-6; t += step) add_line(scene.drawing, "tick", {{scene.x(t), scene.plot.top}, {scene.x(t), scene.plot.bottom()}}, 0.4, "", 0.82);
  for (double t = 0; t <= scene.until_s + 1e-6; t += cycle) {
    add_line(scene.drawing, "cycle", {{scene.x(t), scene.plot.top - 6}, {scene.x(t), scene.plot.bottom() + 6}}, 0.9, "6 3", 0.3);
    const bool last = t > scene.until_s - cycle / 2;
    put(scene, "time", {scene.x(t), scene.plot.top - 10}, number_text(t, 1) + " s", letters, last ? Anchor::end : t > 0 ? Anchor::middle : Anchor::start, true);
  }
  for (double t = 0; t <= scene.until_s + 1e-6; t += step)
    if (const auto tenth = std::llround(t / step); tenth % 2 == 0) put(scene, "time", {scene.x(t), scene.plot.bottom() + 19}, number_text(t, 1), small, Anchor::middle);
  add_box(scene.drawing, "frame", scene.plot, {Fill::none, 1, "", 0, 1});
}

std::string offset_text(const Scene& scene, const std::string& signal_id, bool yellow) {
  const plan::Signal* signal = find_signal(scene.plan, signal_id);
  if (signal == nullptr || signal->operation == plan::Operation::free) return signal == nullptr ? "-" : "free";
  const auto offsets = coordinated_offsets(*signal);
  return offsets.empty() ? "-" : seconds_text(yellow ? offsets.front().begin_of_yellow_s : offsets.front().begin_of_green_s);
}

// "Tessaly Avenue at Kiln Street" -> "Kiln Street" on the diagram of Tessaly Avenue.
std::string cross_street(const std::string& name, const std::string& corridor) {
  const std::string before = corridor + " at ", after = " at " + corridor;
  if (corridor.empty() || name.size() <= before.size()) return name;
  if (name.compare(0, before.size(), before) == 0) return name.substr(before.size());
  if (name.compare(name.size() - after.size(), after.size(), after) == 0) return name.substr(0, name.size() - after.size());
  return name;
}

struct NameColumns {
  double id = 6, name = 64, reference = 270, green = 306, yellow = 350, leader = 354;
};

void draw_name(Scene& scene, const CorridorRow& row, double y) {
  const NameColumns at;
  const plan::Signal* signal = find_signal(scene.plan, row.signal);
  put(scene, "signal_id", {at.id, y}, fitted(isolated(row.signal), letters, at.name - at.id - 6, true), letters, Anchor::start, true);
  if (signal != nullptr) put(scene, "signal_name", {at.name, y}, fitted(isolated(cross_street(signal->name, scene.corridor.name)), small, at.reference - at.name - 30), small);
  if (signal != nullptr) put(scene, "offset", {at.reference, y}, fitted(isolated(signal->reference_group), small, 28), small, Anchor::end);
  put(scene, "offset", {at.green, y}, offset_text(scene, row.signal, false), letters, Anchor::end, true);
  put(scene, "offset", {at.yellow, y}, offset_text(scene, row.signal, true), letters, Anchor::end);
}

void draw_leader(Scene& scene, double x_label, double y_label, double x_plot, double y_plot) {
  const double turn = x_label < x_plot ? 4 : -4;
  add_line(scene.drawing, "leader", {{x_label, y_label}, {x_label + turn, y_label}, {x_plot - turn, y_plot}, {x_plot, y_plot}}, 0.6, "", 0.4);
}

void draw_names(Scene& scene) {
  const NameColumns at;
  std::vector<double> wanted;
  for (const CorridorRow& row : scene.rows) wanted.push_back(scene.y(row.position_m));
  const std::vector<double> centres = spread(wanted, row_height, scene.plot.top, scene.plot.bottom());
  put(scene, "column", {at.id, scene.plot.top - 10}, "Signal", small);
  put(scene, "column", {at.reference, scene.plot.top - 10}, "offset of", small, Anchor::end);
  put(scene, "column", {at.green, scene.plot.top - 10}, "green", small, Anchor::end);
  put(scene, "column", {at.yellow, scene.plot.top - 10}, "yellow", small, Anchor::end);
  for (std::size_t k = 0; k < scene.rows.size(); ++k) {
    draw_name(scene, scene.rows[k], centres[k] + letters * 0.35);
    draw_leader(scene, at.leader, centres[k], scene.plot.left, wanted[k]);
  }
}

std::string link_text(const plan::Stop& stop, Units units) {
  std::string text = length_text(stop.distance_m, units) + ", " + seconds_text(stop.travel_time_s) + " s";
  if (stop.travel_time_s > 0) text += ", " + speed_text(stop.distance_m / stop.travel_time_s, units);
  return text;
}

// One column a direction: length, travel time and speed of each of its links, in the middle of the link.
void draw_links(Scene& scene, std::size_t direction) {
  const plan::Direction& d = scene.corridor.directions[direction];
  const Trace trace = trace_of(scene, direction);
  const double left = scene.plot.right() + gap + link_room * static_cast<double>(direction);
  put(scene, "column", {left + 6, scene.plot.top - 10}, fitted(direction_name(d) + (direction == 0 ? " \xE2\x86\x93" : " \xE2\x86\x91") + " running", small, link_room - 8, true), small, Anchor::start, true);
  std::vector<std::pair<double, std::size_t>> links;
  for (std::size_t k = 1; k < d.stops.size(); ++k) links.emplace_back((scene.y(trace.positions_m[k]) + scene.y(trace.positions_m[k - 1])) / 2, k);
  std::sort(links.begin(), links.end());
  std::vector<double> wanted;
  for (const auto& link : links) wanted.push_back(link.first);
  const std::vector<double> centres = spread(wanted, row_height, scene.plot.top, scene.plot.bottom());
  for (std::size_t i = 0; i < links.size(); ++i) {
    const std::string text = fitted(link_text(d.stops[links[i].second], scene.units), small, link_room - 8);
    put(scene, "link", {left + 6, centres[i] + small * 0.35}, text, small);
    if (direction == 0) draw_leader(scene, left + 3, centres[i], scene.plot.right(), wanted[i]);
  }
}

// --- Title, legend, cautions -------------------------------------------------------------------------------------------------------

std::string band_sentence(const plan::Direction& d) {
  std::string text = direction_name(d) + ": ";
  if (!(d.bandwidth_s > 0)) return text + "NO BAND";
  text += "band " + seconds_text(d.bandwidth_s) + " s, efficiency " + share_text(d.efficiency) + ", attainability " + share_text(d.attainability);
  if (d.bandwidth_bound_s) text += ", bound " + seconds_text(*d.bandwidth_bound_s) + " s";
  return text;
}

void draw_title(Scene& scene) {
  const plan::Plan& plan = scene.plan;
  put(scene, "title", {6, 26}, fitted(isolated(scene.corridor.name.empty() ? scene.corridor.id : scene.corridor.name) + ", " + isolated(plan.period) + ": cycle " + seconds_text(plan.cycle_s) + " s", 22, width - 12, true), 22, Anchor::start, true);
  std::string bands;
  for (std::size_t d = 0; d < scene.directions(); ++d) bands += (d == 0 ? "" : "  \xC2\xB7  ") + band_sentence(scene.corridor.directions[d]);
  put(scene, "subtitle", {6, 48}, fitted(bands, letters + 0.5, width - 12), letters + 0.5);
  std::string when = isolated(plan.project) + ". System time from " + plan.clock.reference + ", " + plan.clock.time_zone + ".";
  if (plan.schedule) when += " " + plan.schedule->days + " " + plan.schedule->from + "\xE2\x80\x93" + plan.schedule->to + ".";
  put(scene, "subtitle", {6, 67}, fitted(when, small + 0.5, width - 12), small + 0.5);
}

double legend_entry(Scene& scene, double x, double y, const std::string& role, const Ink& ink, const std::string& text) {
  add_box(scene.drawing, "legend_" + role, {x, y - 9, 28, 10}, ink);
  put(scene, "legend", {x + 34, y}, text, small + 0.5);
  return x + 34 + text_width(text, small + 0.5) + 20;
}

bool any_shape(const Scene& scene, const std::string& role_start) {
  return std::any_of(scene.drawing.shapes.begin(), scene.drawing.shapes.end(), [&](const Shape& s) { return s.role.rfind(role_start, 0) == 0; });
}

bool has_halves(const Scene& scene) { return any_shape(scene, "green first") && any_shape(scene, "green second"); }

void draw_legend(Scene& scene) {
  const double y = scene.plot.bottom() + 44;
  double x = legend_entry(scene, 6, y, "red", ink_of(Lamp::red), "red");
  x = legend_entry(scene, x, y, "green", ink_of(Lamp::green), "green");
  x = legend_entry(scene, x, y, "yellow", ink_of(Lamp::yellow), "yellow");
  if (any_shape(scene, "queue")) x = legend_entry(scene, x, y, "queue", {Fill::dots, 0.5, "", 0.25, 1}, "green for the queue");
  for (std::size_t d = 0; d < scene.directions(); ++d)
    x = legend_entry(scene, x, y, "band", {d == 0 ? Fill::forward_hatch : Fill::backward_hatch, 1.1, "", 0.1, 1}, fitted("band " + direction_name(scene.corridor.directions[d]), small + 0.5, 160));
  if (has_halves(scene))
    put(scene, "legend", {x, y}, fitted("two bars: upper " + direction_name(scene.corridor.directions[0]) + ", lower " + direction_name(scene.corridor.directions[1]), small + 0.5, 330), small + 0.5);
}

// A round length that takes 8..20 % of the plot's height.
void draw_scale(Scene& scene) {
  if (scene.length_m <= 0) return;
  const double unit = scene.units == Units::us ? 0.3048 : 1, target = scene.length_m * 0.15 / unit;
  const double power = std::pow(10, std::floor(std::log10(target)));
  const double round = target >= 5 * power ? 5 * power : target >= 2 * power ? 2 * power : power;
  const double pixels = scene.y(round * unit) - scene.y(0), right = width - 10, bottom = scene.plot.bottom() + 104;
  const double x = right - 6, top = std::max(bottom - pixels, scene.plot.bottom() + 30);
  if (pixels > 74) return put(scene, "scale", {right, scene.plot.bottom() + 44}, "distance to scale: " + length_text(scene.length_m, scene.units) + " in all", small, Anchor::end);
  add_line(scene.drawing, "scale", {{x - 4, top}, {x + 4, top}, {x, top}, {x, top + pixels}, {x - 4, top + pixels}, {x + 4, top + pixels}}, 1.2);
  put(scene, "scale", {x - 8, top + pixels / 2 + small * 0.35}, length_text(round * unit, scene.units) + ", down", small, Anchor::end);
}

void draw_caution(Scene& scene) {
  const std::string text =
      "A draft for engineering review: local codes come first, a licensed engineer signs, verify in the field. Bands assume that every phase uses its full split and that platoons run at the "
      "speeds shown; actuated phases that end early let green begin early.";
  const auto lines = wrapped(text, small, width - 220, 3);
  for (std::size_t i = 0; i < lines.size(); ++i) put(scene, "caution", {6, scene.plot.bottom() + 70 + 15 * static_cast<double>(i)}, lines[i], small);
}

}  // namespace

Drawing time_space_diagram(const plan::Plan& plan, const plan::Corridor& corridor, const TimeSpaceOptions& options) {
  Scene scene = scene_of(plan, corridor, options);
  draw_title(scene);
  draw_time_axis(scene);
  for (std::size_t d = 0; d < scene.directions(); ++d) draw_bands(scene, d);
  for (std::size_t k = 0; k < scene.rows.size(); ++k) draw_lamps(scene, k);
  draw_names(scene);
  for (std::size_t d = 0; d < scene.directions(); ++d) draw_links(scene, d);
  for (std::size_t d = 0; d < scene.directions(); ++d) label_band(scene, d);
  draw_legend(scene);
  draw_scale(scene);
  draw_caution(scene);
  return std::move(scene.drawing);
}

std::vector<OutputFile> time_space_files(const plan::Plan& plan, const TimeSpaceOptions& options) {
  std::vector<std::string> ids;
  for (const plan::Corridor& corridor : plan.corridors) ids.push_back(corridor.id);
  const std::vector<std::string> names = file_names(ids);
  std::vector<OutputFile> files;
  for (std::size_t i = 0; i < names.size(); ++i) files.push_back({names[i] + ".svg", svg_file(time_space_diagram(plan, plan.corridors[i], options))});
  return files;
}

}  // namespace entrain::report
