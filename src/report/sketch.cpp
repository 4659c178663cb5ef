#include "report/sketch.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <numbers>

#include "report/text_layout.hpp"

namespace entrain::report {
namespace {

constexpr double lane = 18;         // width of the strip of one arrow
constexpr double letters = 15;      // phase numbers
constexpr double name_room = 92;    // beside the legs

struct Direction {
  double x = 0, y = 0;
};

// One arrow: a movement, the groups that serve it, and whether any protects it.
struct Arrow {
  const plan::Movement* movement = nullptr;
  std::string groups;
  bool with_protection = false;
};

struct LegView {
  const plan::Leg* leg = nullptr;
  Direction out;             // from the centre outwards
  Direction right_in;        // to the right of a driver who comes in
  std::vector<Arrow> arrows; // from the driver's left to the right
  double half_width = 0;
};

struct Frame {
  Point centre;
  double stop_line = 0, leg_end = 0;
};

Direction outwards(double bearing_deg) {
  const double angle = bearing_deg * std::numbers::pi / 180;
  return {std::sin(angle), -std::cos(angle)};
}

Point at(const Frame& frame, const LegView& leg, double along, double to_the_right) {
  return {frame.centre.x + leg.out.x * along + leg.right_in.x * to_the_right, frame.centre.y + leg.out.y * along + leg.right_in.y * to_the_right};
}

int turn_order(plan::Turn turn) {
  switch (turn) {
    case plan::Turn::u_turn: return 0;
    case plan::Turn::left: return 1;
    case plan::Turn::through: return 2;
    case plan::Turn::right: return 3;
  }
  return 2;
}

Arrow arrow_of(const plan::Signal& signal, const plan::Movement& movement) {
  Arrow arrow{&movement, {}, false};
  for (const plan::Group& group : signal.groups)
    for (const plan::Served& served : group.serves) {
      if (served.movement != movement.id) continue;
      arrow.groups += (arrow.groups.empty() ? "" : "+") + group.id;
      arrow.with_protection = arrow.with_protection || served.right_of_way == plan::RightOfWay::with_protection;
    }
  return arrow;
}

LegView view_of(const plan::Signal& signal, const plan::Leg& leg) {
  LegView view{&leg, outwards(std::isfinite(leg.bearing_deg) ? leg.bearing_deg : 0), {}, {}, 0};
  view.right_in = {view.out.y, -view.out.x};
  for (const plan::Movement& movement : signal.movements)
    if (movement.from_leg == leg.id) view.arrows.push_back(arrow_of(signal, movement));
  const auto order = [](const Arrow& a, const Arrow& b) { return turn_order(a.movement->turn) < turn_order(b.movement->turn); };
  std::stable_sort(view.arrows.begin(), view.arrows.end(), order);
  view.half_width = lane * std::clamp(static_cast<double>(view.arrows.size()), 2.0, 5.0);
  return view;
}

std::vector<LegView> views_of(const plan::Signal& signal) {
  std::vector<LegView> views;
  for (const plan::Leg& leg : signal.legs) views.push_back(view_of(signal, leg));
  double widest = 0;
  for (const LegView& view : views) widest = std::max(widest, view.half_width);
  for (LegView& view : views) view.half_width = widest;
  return views;
}

double least_angle(const std::vector<LegView>& views) {
  double least = std::numbers::pi / 2;
  for (std::size_t i = 0; i < views.size(); ++i)
    for (std::size_t j = i + 1; j < views.size(); ++j)
      least = std::min(least, std::acos(std::clamp(views[i].out.x * views[j].out.x + views[i].out.y * views[j].out.y, -1.0, 1.0)));
  return least;
}

Frame frame_of(const std::vector<LegView>& views) {
  const double half = views.empty() ? lane * 2 : views.front().half_width;
  Frame frame;
  frame.stop_line = std::clamp(half / std::tan(std::max(0.2, least_angle(views) / 2)) + 10, half, 3 * half);
  frame.leg_end = frame.stop_line + 84;
  frame.centre = {frame.leg_end + name_room, frame.leg_end + 30};
  return frame;
}

// 1 where traffic keeps right: who comes in is right of the middle.
double keeps(const plan::Signal& signal) { return signal.traffic_side == TrafficSide::right ? 1 : -1; }

void draw_road(Drawing& drawing, const Frame& frame, const LegView& leg, double side) {
  const double edge = leg.half_width;
  for (const double where : {-edge, edge}) add_line(drawing, "curb", {at(frame, leg, frame.stop_line - 8, where), at(frame, leg, frame.leg_end, where)}, 1.4);
  add_line(drawing, "middle", {at(frame, leg, frame.stop_line, 0), at(frame, leg, frame.leg_end, 0)}, 0.8, "5 4");
  if (!leg.arrows.empty()) add_line(drawing, "stop_line", {at(frame, leg, frame.stop_line, 0), at(frame, leg, frame.stop_line, side * edge)}, 3);
}

// The middle of the strip of arrow k, to the right of the leg's middle. Strips fill the inbound half from the driver's left.
double strip(const LegView& leg, std::size_t k, double side) {
  const double count = static_cast<double>(leg.arrows.size()), width = leg.half_width / std::max(1.0, count);
  const double from_left = width * (static_cast<double>(k) + 0.5);
  return side > 0 ? from_left : from_left - leg.half_width;
}

Direction exit_of(const std::vector<LegView>& views, const Arrow& arrow, const LegView& from) {
  for (const LegView& view : views)
    if (view.leg->id == arrow.movement->to_leg) return view.out;
  return {-from.out.x, -from.out.y};
}

void draw_arrow(Drawing& drawing, const Frame& frame, const std::vector<LegView>& views, const LegView& leg, std::size_t k, double side) {
  const Arrow& arrow = leg.arrows[k];
  const double right = strip(leg, k, side);
  const Point tail = at(frame, leg, frame.stop_line + 48, right), bend = at(frame, leg, frame.stop_line + 20, right);
  const Direction exit = exit_of(views, arrow, leg);
  const bool straight = exit.x * leg.out.x + exit.y * leg.out.y < -0.9;
  const double reach = straight ? 14 : 12;
  Shape shape;
  shape.kind = ShapeKind::curve;
  shape.role = arrow.with_protection ? "movement" : "movement yields";
  shape.points = {tail, bend, {bend.x + exit.x * reach, bend.y + exit.y * reach}};
  shape.ink = {Fill::none, 1.7, arrow.with_protection ? "" : "3 2.5", 0, 1};
  shape.arrow = true;
  drawing.shapes.push_back(std::move(shape));
}

void put_centred(Drawing& drawing, LabelPlacer& placer, const std::string& role, Point centre, const std::string& text, double size, bool strong) {
  Shape label;
  label.role = role, label.text = text, label.size = size, label.anchor = Anchor::middle, label.strong = strong;
  label.points = {{centre.x, centre.y + size * 0.29}};
  const Box box = label_box(label);
  placer.block(box);
  add_label(drawing, role, label.points[0], text, size, Anchor::middle, strong);
}

// Neighbouring arrows of the same groups share one number.
void draw_numbers(Drawing& drawing, LabelPlacer& placer, const Frame& frame, const LegView& leg, double side) {
  for (std::size_t first = 0; first < leg.arrows.size();) {
    std::size_t last = first;
    while (last + 1 < leg.arrows.size() && leg.arrows[last + 1].groups == leg.arrows[first].groups) ++last;
    const double right = (strip(leg, first, side) + strip(leg, last, side)) / 2;
    const std::string& text = leg.arrows[first].groups;
    const double size = std::min(letters, letters * 2.2 * lane / std::max(1.0, text_width(text, letters, true)));
    if (!text.empty()) put_centred(drawing, placer, "phase", at(frame, leg, frame.stop_line + 64, right), text, size, true);
    first = last + 1;
  }
}

void draw_leg_name(Drawing& drawing, LabelPlacer& placer, const Frame& frame, const LegView& leg) {
  const bool sideways = std::fabs(leg.out.x) > 0.5;
  const double room = sideways ? name_room - 12 : 2 * frame.leg_end;
  auto lines = wrapped(isolated(leg.leg->street), 13, room, sideways ? 4 : 1);
  lines.insert(lines.begin(), fitted(isolated(leg.leg->id), 13, room, true));
  if (!sideways && lines.size() > 1) lines = {fitted(lines[0] + "  " + lines[1], 13, room)};
  const double height = 15, total = height * static_cast<double>(lines.size());
  Point centre = at(frame, leg, frame.leg_end + (sideways ? 6 + (name_room - 12) / 2 : 14), 0);
  for (std::size_t i = 0; i < lines.size(); ++i)
    put_centred(drawing, placer, "leg_name", {centre.x, centre.y - total / 2 + height * (static_cast<double>(i) + 0.5)}, lines[i], 13, i == 0 && sideways);
}

void draw_crossing(Drawing& drawing, LabelPlacer& placer, const Frame& frame, const LegView& leg, const std::string& groups, double side) {
  const double along = frame.stop_line - 9;
  Shape stripes;
  stripes.role = "crossing";
  stripes.points = {at(frame, leg, along, -leg.half_width), at(frame, leg, along, leg.half_width)};
  stripes.ink = {Fill::none, 7, "3 3", 0.35, 1};
  drawing.shapes.push_back(std::move(stripes));
  // On the half of the leg that leads out, where no arrow stands.
  if (!groups.empty()) put_centred(drawing, placer, "crossing_name", at(frame, leg, along + 21, -side * leg.half_width / 2), fitted(groups, 12, leg.half_width, true), 12, true);
}

std::map<std::string, std::string> groups_by_crossed_leg(const plan::Signal& signal) {
  std::map<std::string, std::string> groups;
  for (const plan::Crossing& crossing : signal.crossings) {
    std::string& text = groups[crossing.leg];
    for (const plan::Group& group : signal.groups)
      if (std::find(group.crossings.begin(), group.crossings.end(), crossing.id) != group.crossings.end()) text += (text.empty() ? "" : "+") + group.id;
  }
  return groups;
}

void draw_north(Drawing& drawing, Point foot) {
  Shape arrow;
  arrow.role = "north";
  arrow.points = {{foot.x, foot.y}, {foot.x, foot.y - 30}};
  arrow.ink = {Fill::none, 2, "", 0, 1};
  arrow.arrow = true;
  drawing.shapes.push_back(std::move(arrow));
  add_label(drawing, "north", {foot.x, foot.y + 15}, "N", 15, Anchor::middle, true);
}

}  // namespace

Drawing intersection_sketch(const plan::Signal& signal) {
  const std::vector<LegView> views = views_of(signal);
  const Frame frame = frame_of(views);
  Drawing drawing{2 * frame.centre.x, 2 * frame.centre.y, "Sketch of " + signal.id, "Legs, movements with phase numbers, crossings; not to scale", {}};
  LabelPlacer placer({0, 0, drawing.width, drawing.height});
  const double side = keeps(signal);
  const auto crossed = groups_by_crossed_leg(signal);
  for (const LegView& leg : views) draw_road(drawing, frame, leg, side);
  for (const LegView& leg : views) {
    if (const auto groups = crossed.find(leg.leg->id); groups != crossed.end()) draw_crossing(drawing, placer, frame, leg, groups->second, side);
    for (std::size_t k = 0; k < leg.arrows.size(); ++k) draw_arrow(drawing, frame, views, leg, k, side);
    draw_numbers(drawing, placer, frame, leg, side);
    draw_leg_name(drawing, placer, frame, leg);
  }
  if (views.empty()) add_label(drawing, "remark", {frame.centre.x, frame.centre.y}, "no geometry given", 15, Anchor::middle);
  draw_north(drawing, {drawing.width - 22, 44});
  return drawing;
}

}  // namespace entrain::report
