#include "report/map_picture.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <optional>

#include "report/text_layout.hpp"

namespace entrain::report {
namespace {

constexpr double map_width = 900, key_width = 330, head = 62, least_height = 360, most_height = 1100;
constexpr std::size_t most_findings = 40;

bool is_on_earth(const MapPoint& p) { return std::fabs(p.lon) <= 180 && std::fabs(p.lat) <= 90; }

// Metres a degree on the WGS 84 ellipsoid at a latitude: meridian and prime vertical radii of curvature.
struct Degrees {
  double lon_m = 0, lat_m = 0;
};

Degrees metres_a_degree(double lat) {
  constexpr double a = 6378137.0, e2 = 0.00669437999014;
  const double phi = lat * std::numbers::pi / 180, w = std::sqrt(1 - e2 * std::sin(phi) * std::sin(phi)), degree = std::numbers::pi / 180;
  return {std::max(1.0, a / w * std::cos(phi) * degree), a * (1 - e2) / (w * w * w) * degree};
}

struct Extent {
  double west = 1e9, south = 1e9, east = -1e9, north = -1e9;
  bool empty() const { return west > east; }
  void add(const MapPoint& p) {
    if (!is_on_earth(p)) return;
    west = std::min(west, p.lon), east = std::max(east, p.lon), south = std::min(south, p.lat), north = std::max(north, p.lat);
  }
};

Extent extent_of(const MapContent& content, bool whole) {
  Extent extent;
  if (!whole) {
    for (const MapSignal& signal : content.signals) extent.add(signal.at);
    for (const MapCorridor& corridor : content.corridors)
      for (const auto& path : corridor.paths)
        for (const MapPoint& p : path) extent.add(p);
    for (const MapFinding& finding : content.findings) extent.add(finding.at);
  }
  if (!extent.empty()) return extent;
  for (const MapRoad& road : content.roads)
    for (const MapPoint& p : road.points) extent.add(p);
  if (extent.empty()) extent.add({0, 0});
  return extent;
}

struct Scene {
  Box frame;
  double west = 0, north = 0, x_scale = 1, y_scale = 1;  // drawing units a degree
  double metre = 1;                                      // drawing units
  Drawing drawing;
  LabelPlacer placer{{}};
  std::vector<Box> better_free;  // labels go here only where nothing else is left: corridors

  Point at(const MapPoint& p) const { return {frame.left + (p.lon - west) * x_scale, frame.top + (north - p.lat) * y_scale}; }
};

Scene scene_of(const MapContent& content, const MapOptions& options) {
  const Extent extent = extent_of(content, options.whole_extent);
  const double middle = (extent.south + extent.north) / 2;
  const Degrees degree = metres_a_degree(middle);
  const double width_m = std::max(200.0, (extent.east - extent.west) * degree.lon_m) * 1.16, height_m = std::max(120.0, (extent.north - extent.south) * degree.lat_m) * 1.16;
  const double metre = std::min(map_width / width_m, most_height / height_m);
  Scene scene;
  scene.metre = metre;
  scene.frame = {8, head, map_width, std::clamp(height_m * metre, least_height, most_height)};
  scene.x_scale = degree.lon_m * metre, scene.y_scale = degree.lat_m * metre;
  scene.west = (extent.west + extent.east) / 2 - scene.frame.width / 2 / scene.x_scale;
  scene.north = middle + scene.frame.height / 2 / scene.y_scale;
  scene.drawing = {scene.frame.right() + key_width, scene.frame.bottom() + 30, content.title, content.subtitle, {}};
  scene.placer = LabelPlacer(scene.frame);
  return scene;
}

// The part of a-b inside the box (Liang and Barsky 1984).
std::optional<std::pair<Point, Point>> clipped(Point a, Point b, const Box& box) {
  const double dx = b.x - a.x, dy = b.y - a.y;
  const double p[] = {-dx, dx, -dy, dy}, q[] = {a.x - box.left, box.right() - a.x, a.y - box.top, box.bottom() - a.y};
  double from = 0, to = 1;
  for (int i = 0; i < 4; ++i) {
    if (p[i] == 0 && q[i] < 0) return std::nullopt;
    if (p[i] == 0) continue;
    const double t = q[i] / p[i];
    if (p[i] < 0) from = std::max(from, t);
    else to = std::min(to, t);
  }
  if (from > to) return std::nullopt;
  return std::pair{Point{a.x + from * dx, a.y + from * dy}, Point{a.x + to * dx, a.y + to * dy}};
}

bool is_near(Point a, Point b, double distance) { return std::hypot(a.x - b.x, a.y - b.y) <= distance; }

// The pieces of a line inside the frame, without points that no eye could tell apart.
std::vector<std::vector<Point>> pieces_of(const Scene& scene, const std::vector<MapPoint>& points) {
  std::vector<std::vector<Point>> pieces;
  std::optional<Point> last;
  for (std::size_t i = 0; i < points.size(); ++i) {
    if (!is_on_earth(points[i])) continue;
    const Point next = scene.at(points[i]);
    if (last && is_near(*last, next, 0.4) && i + 1 < points.size()) continue;
    if (last) {
      if (const auto part = clipped(*last, next, scene.frame)) {
        if (pieces.empty() || !is_near(pieces.back().back(), part->first, 1e-9)) pieces.push_back({part->first});
        pieces.back().push_back(part->second);
      }
    }
    last = next;
  }
  return pieces;
}

struct Pen {
  double width = 1, grey = 0;
};

Pen pen_of(RoadClass road_class) {
  switch (road_class) {
    case RoadClass::major: return {2.6, 0.45};
    case RoadClass::middle: return {1.7, 0.55};
    case RoadClass::minor: return {0.8, 0.65};
  }
  return {};
}

// In the middle of a piece, the way traffic runs.
void draw_one_way(Scene& scene, const std::vector<Point>& piece, const Pen& pen) {
  const std::size_t k = piece.size() / 2;
  const Point a = piece[k - 1], b = piece[k];
  if (is_near(a, b, 12)) return;
  add_line(scene.drawing, "one_way", {a, {(a.x + b.x) / 2, (a.y + b.y) / 2}}, std::max(1.2, pen.width), "", pen.grey);
  scene.drawing.shapes.back().arrow = true;
}

void draw_roads(Scene& scene, const MapContent& content) {
  for (const RoadClass road_class : {RoadClass::minor, RoadClass::middle, RoadClass::major}) {
    const Pen pen = pen_of(road_class);
    for (const MapRoad& road : content.roads) {
      if (road.road_class != road_class) continue;
      for (auto& piece : pieces_of(scene, road.points)) {
        if (road.one_way) draw_one_way(scene, piece, pen);
        add_line(scene.drawing, "road", std::move(piece), pen.width, "", pen.grey);
      }
    }
  }
}

void keep_free(Scene& scene, const std::vector<Point>& piece) {
  for (std::size_t i = 1; i < piece.size(); ++i) {
    const double length = std::hypot(piece[i].x - piece[i - 1].x, piece[i].y - piece[i - 1].y);
    for (double along = 0; along <= length; along += 12) {
      const double share = length > 0 ? along / length : 0;
      const Point p{piece[i - 1].x + share * (piece[i].x - piece[i - 1].x), piece[i - 1].y + share * (piece[i].y - piece[i - 1].y)};
      scene.better_free.push_back({p.x - 4, p.y - 4, 8, 8});
    }
  }
}

void draw_corridors(Scene& scene, const MapContent& content) {
  for (const MapCorridor& corridor : content.corridors)
    for (const auto& path : corridor.paths) {
      for (const auto& piece : pieces_of(scene, path)) add_line(scene.drawing, "corridor_edge", piece, 8, "", 0), keep_free(scene, piece);
      for (const auto& piece : pieces_of(scene, path)) add_line(scene.drawing, "corridor", piece, 5.4, "", 0.86);
    }
}

bool is_visible(const Scene& scene, Point p) { return is_inside({p.x - 4, p.y - 4, 8, 8}, scene.frame); }

void draw_signal_mark(Scene& scene, const MapSignal& signal, Point p) {
  Shape mark;
  mark.kind = ShapeKind::circle, mark.role = "signal", mark.points = {p}, mark.radius = signal.pedestrian_only ? 3.2 : 5;
  mark.ink = {signal.pedestrian_only ? Fill::white : Fill::black, 1.4, "", 0, 1};
  scene.drawing.shapes.push_back(std::move(mark));
  scene.placer.block({p.x - 6, p.y - 6, 12, 12});
}

void draw_finding_mark(Scene& scene, Point p) {
  const double r = 9;
  add_polygon(scene.drawing, "finding", {{p.x, p.y - r}, {p.x + r, p.y}, {p.x, p.y + r}, {p.x - r, p.y}}, {Fill::white, 1.8, "", 0, 1});
  scene.placer.block({p.x - r, p.y - r, 2 * r, 2 * r});
}

// Sixteen directions, nearer ones first.
std::vector<Box> places_round(Point p, double width, double height) {
  std::vector<Box> places;
  for (const double far : {9.0, 18.0, 30.0, 46.0})
    for (int k = 0; k < 16; ++k) {
      const double angle = (k % 2 == 0 ? k : -k - 1) * std::numbers::pi / 16 - 0.5;
      const double cx = p.x + std::cos(angle) * (far + width / 2), cy = p.y + std::sin(angle) * (far + height / 2);
      places.push_back({cx - width / 2, cy - height / 2, width, height});
    }
  return places;
}

bool put_beside(Scene& scene, const std::string& role, Point p, const std::string& text, double size, bool strong) {
  const double width = text_width(text, size, strong) + 4, height = size * 1.2;
  const std::vector<Box> places = places_round(p, width, height);
  std::vector<Box> better;
  for (const Box& place : places)
    if (std::none_of(scene.better_free.begin(), scene.better_free.end(), [&](const Box& other) { return overlap(place, other); })) better.push_back(place);
  better.insert(better.end(), places.begin(), places.end());
  const int chosen = scene.placer.place(better);
  if (chosen < 0) return false;
  const Box& box = better[static_cast<std::size_t>(chosen)];
  const Point near{std::clamp(p.x, box.left, box.right()), std::clamp(p.y, box.top, box.bottom())};
  if (!is_near(near, p, 14)) add_line(scene.drawing, "leader", {p, near}, 0.7, "", 0.2);
  add_box(scene.drawing, "plate", box, {Fill::white, 0, "", 0, 0.85});
  add_label(scene.drawing, role, {box.left + 2, box.bottom() - size * 0.3}, text, size, Anchor::start, strong);
  return true;
}

std::string letter_of(std::size_t k) { return k < 26 ? std::string(1, static_cast<char>('a' + k)) : letter_of(k / 26 - 1) + static_cast<char>('a' + k % 26); }

struct Unplaced {
  std::size_t labels = 0, outside = 0;
};

Unplaced draw_points(Scene& scene, const MapContent& content) {
  Unplaced unplaced;
  for (const MapFinding& finding : content.findings)
    if (is_on_earth(finding.at) && is_visible(scene, scene.at(finding.at))) draw_finding_mark(scene, scene.at(finding.at));
  for (const MapSignal& signal : content.signals) {
    if (!is_on_earth(signal.at) || !is_visible(scene, scene.at(signal.at))) ++unplaced.outside;
    else draw_signal_mark(scene, signal, scene.at(signal.at));
  }
  for (const MapSignal& signal : content.signals) {
    if (!is_on_earth(signal.at) || !is_visible(scene, scene.at(signal.at)) || signal.pedestrian_only) continue;
    if (!put_beside(scene, "signal_id", scene.at(signal.at), fitted(isolated(signal.id), 13, 110, true), 13, true)) ++unplaced.labels;
  }
  for (std::size_t k = 0; k < std::min(content.findings.size(), most_findings); ++k) {
    const MapPoint& at = content.findings[k].at;
    if (is_on_earth(at) && is_visible(scene, scene.at(at)) && !put_beside(scene, "finding_letter", scene.at(at), letter_of(k), 12, false)) ++unplaced.labels;
  }
  return unplaced;
}

// A corridor's name near its middle.
void name_corridors(Scene& scene, const MapContent& content) {
  for (const MapCorridor& corridor : content.corridors) {
    if (corridor.paths.empty() || corridor.paths.front().empty() || corridor.name.empty()) continue;
    const auto& path = corridor.paths.front();
    for (const double share : {0.5, 0.3, 0.7, 0.1, 0.9}) {
      const MapPoint& p = path[static_cast<std::size_t>(share * static_cast<double>(path.size() - 1))];
      if (is_on_earth(p) && is_visible(scene, scene.at(p)) && put_beside(scene, "corridor_name", scene.at(p), fitted(isolated(corridor.name), 14, 260, true), 14, true)) break;
    }
  }
}

double round_length(double target) {
  const double power = std::pow(10, std::floor(std::log10(std::max(1.0, target))));
  return target >= 5 * power ? 5 * power : target >= 2 * power ? 2 * power : power;
}

void draw_scale(Scene& scene, Units units) {
  const double unit = units == Units::us ? 0.3048 : 1, length = round_length(scene.frame.width * 0.2 / scene.metre / unit), pixels = length * unit * scene.metre;
  const double x = scene.frame.left + 4, y = scene.frame.bottom() + 14;
  add_line(scene.drawing, "scale", {{x, y - 4}, {x, y + 4}, {x, y}, {x + pixels, y}, {x + pixels, y - 4}, {x + pixels, y + 4}}, 1.6);
  add_label(scene.drawing, "scale", {x + pixels + 8, y + 4}, length_text(length * unit, units), 12);
}

void draw_north(Scene& scene) {
  const double x = scene.frame.right() - 22, y = scene.frame.top + 14;
  add_box(scene.drawing, "plate", {x - 14, y - 6, 28, 62}, {Fill::white, 0, "", 0, 0.85});
  add_line(scene.drawing, "north", {{x, y + 34}, {x, y}}, 2);
  scene.drawing.shapes.back().arrow = true;
  add_label(scene.drawing, "north", {x, y + 50}, "N", 15, Anchor::middle, true);
  scene.placer.block({x - 14, y - 6, 28, 62});
}

// Lines of text beside the map, from the top down, as long as there is room.
class Key {
 public:
  explicit Key(Scene& scene) : m_scene(scene), m_y(scene.frame.top + 4) {}
  bool has_room(std::size_t lines) const { return m_y + 15 * static_cast<double>(lines) < m_scene.frame.bottom() - 18; }
  void line(const std::string& label, const std::string& text, bool strong = false) {
    m_y += 15;
    const double x = m_scene.frame.right() + 14;
    if (!label.empty()) add_label(m_scene.drawing, "key", {x, m_y}, fitted(label, 11.5, 62, true), 11.5, Anchor::start, true);
    add_label(m_scene.drawing, "key", {label.empty() && strong ? x : x + 66, m_y}, fitted(text, 11.5, key_width - 86, strong), 11.5, Anchor::start, strong);
  }
  void skip() { m_y += 8; }

 private:
  Scene& m_scene;
  double m_y;
};

void write_findings(Key& key, const MapContent& content) {
  if (content.findings.empty()) return;
  key.skip();
  key.line("", "Findings (diamonds)", true);
  std::size_t k = 0;
  for (; k < content.findings.size() && k < most_findings; ++k) {
    const auto lines = wrapped(isolated(content.findings[k].text), 11.5, key_width - 86, 3);
    if (!key.has_room(lines.size() + 1)) break;
    for (std::size_t i = 0; i < lines.size(); ++i) key.line(i == 0 ? letter_of(k) : "", lines[i]);
  }
  if (k < content.findings.size()) key.line("", "and " + std::to_string(content.findings.size() - k) + " more");
}

void write_key(Scene& scene, const MapContent& content, const Unplaced& unplaced) {
  Key key(scene);
  key.line("", std::to_string(content.signals.size()) + " signals, " + std::to_string(content.corridors.size()) + " corridors", true);
  const std::size_t reserve = std::min<std::size_t>(content.findings.size(), 6) * 2 + 4;
  std::size_t shown = 0;
  for (const MapSignal& signal : content.signals) {
    if (!key.has_room(reserve)) break;
    key.line(isolated(signal.id), isolated(signal.name) + (signal.pedestrian_only ? " (on foot)" : ""));
    ++shown;
  }
  if (shown < content.signals.size()) key.line("", "and " + std::to_string(content.signals.size() - shown) + " more");
  if (unplaced.labels > 0) key.line("", std::to_string(unplaced.labels) + " labels found no room");
  if (unplaced.outside > 0) key.line("", std::to_string(unplaced.outside) + " signals lie outside");
  write_findings(key, content);
}

}  // namespace

Drawing map_picture(const MapContent& content, const MapOptions& options) {
  Scene scene = scene_of(content, options);
  add_label(scene.drawing, "title", {8, 26}, fitted(isolated(content.title), 22, scene.drawing.width - 16, true), 22, Anchor::start, true);
  add_label(scene.drawing, "subtitle", {8, 48}, fitted(isolated(content.subtitle), 13, scene.drawing.width - 16), 13);
  draw_corridors(scene, content);
  draw_roads(scene, content);
  draw_north(scene);
  const Unplaced unplaced = draw_points(scene, content);
  name_corridors(scene, content);
  add_box(scene.drawing, "frame", scene.frame, {Fill::none, 1, "", 0, 1});
  draw_scale(scene, options.units);
  write_key(scene, content, unplaced);
  return std::move(scene.drawing);
}

std::string map_picture_svg(const MapContent& content, const MapOptions& options) { return svg_file(map_picture(content, options)); }

}  // namespace entrain::report
