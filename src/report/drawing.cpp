#include "report/drawing.hpp"

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "report/text_layout.hpp"

namespace entrain::report {
namespace {

std::string number(double value) { return number_text(value, 2); }

std::string point_list(const std::vector<Point>& points) {
  std::string out;
  for (const Point& p : points) out += (out.empty() ? "" : " ") + number(p.x) + "," + number(p.y);
  return out;
}

std::string grey_text(double grey) {
  const int level = static_cast<int>(std::lround(std::clamp(grey, 0.0, 1.0) * 255));
  return "rgb(" + std::to_string(level) + "," + std::to_string(level) + "," + std::to_string(level) + ")";
}

std::string fill_text(Fill fill, const std::string& id) {
  switch (fill) {
    case Fill::none: return "none";
    case Fill::black: return "#000";
    case Fill::white: return "#fff";
    case Fill::grey: return "#888";
    case Fill::light: return "#e4e4e4";
    case Fill::forward_hatch: return "url(#" + id + "-forward)";
    case Fill::backward_hatch: return "url(#" + id + "-backward)";
    case Fill::yellow_hatch: return "url(#" + id + "-yellow)";
    case Fill::dots: return "url(#" + id + "-dots)";
  }
  return "none";
}

Attributes with_ink(Attributes attributes, const Shape& shape, const std::string& id) {
  attributes.emplace_back("class", shape.role);
  attributes.emplace_back("fill", fill_text(shape.ink.fill, id));
  if (shape.ink.opacity < 1) attributes.emplace_back("fill-opacity", number(shape.ink.opacity));
  if (shape.ink.stroke_width > 0) {
    attributes.emplace_back("stroke", grey_text(shape.ink.grey));
    attributes.emplace_back("stroke-width", number(shape.ink.stroke_width));
    if (!shape.ink.dash.empty()) attributes.emplace_back("stroke-dasharray", shape.ink.dash);
  }
  return attributes;
}

// A head of fixed size at the end of a line that comes from `before`.
std::string arrow_head(Point before, Point tip, double width) {
  const double length = std::hypot(tip.x - before.x, tip.y - before.y);
  if (length <= 0) return {};
  const double size = 3.2 * width + 2.5, ux = (tip.x - before.x) / length, uy = (tip.y - before.y) / length;
  const Point base{tip.x - ux * size, tip.y - uy * size};
  return point_list({tip, {base.x - uy * size * 0.42, base.y + ux * size * 0.42}, {base.x + uy * size * 0.42, base.y - ux * size * 0.42}});
}

void write_line(XmlWriter& writer, const Shape& shape, const std::string& id) {
  if (shape.points.size() == 2) {
    const auto& [a, b] = std::pair(shape.points[0], shape.points[1]);
    writer.empty("line", with_ink({{"x1", number(a.x)}, {"y1", number(a.y)}, {"x2", number(b.x)}, {"y2", number(b.y)}}, shape, id));
  } else {
    writer.empty("polyline", with_ink({{"points", point_list(shape.points)}}, shape, id));
  }
}

void write_curve(XmlWriter& writer, const Shape& shape, const std::string& id) {
  const Point a = shape.points[0], c = shape.points[1], b = shape.points[2];
  writer.empty("path", with_ink({{"d", "M" + point_list({a}) + " Q" + point_list({c, b})}}, shape, id));
}

void write_box(XmlWriter& writer, const Shape& shape, const std::string& id) {
  const Point a = shape.points[0], b = shape.points[1];
  writer.empty("rect", with_ink({{"x", number(a.x)}, {"y", number(a.y)}, {"width", number(b.x - a.x)}, {"height", number(b.y - a.y)}}, shape, id));
}

void write_circle(XmlWriter& writer, const Shape& shape, const std::string& id) {
  const Point c = shape.points[0];
  writer.empty("circle", with_ink({{"cx", number(c.x)}, {"cy", number(c.y)}, {"r", number(shape.radius)}}, shape, id));
}

void write_label(XmlWriter& writer, const Shape& shape) {
  const char* anchor = shape.anchor == Anchor::start ? "start" : shape.anchor == Anchor::middle ? "middle" : "end";
  Attributes attributes{{"class", shape.role}, {"x", number(shape.points[0].x)}, {"y", number(shape.points[0].y)}, {"font-size", number(shape.size)}};
  if (shape.anchor != Anchor::start) attributes.emplace_back("text-anchor", anchor);
  if (shape.strong) attributes.emplace_back("font-weight", "bold");
  writer.leaf("text", shape.text, attributes);
}

void write_shape(XmlWriter& writer, const Shape& shape, const std::string& id) {
  switch (shape.kind) {
    case ShapeKind::line: write_line(writer, shape, id); break;
    case ShapeKind::curve: write_curve(writer, shape, id); break;
    case ShapeKind::polygon: writer.empty("polygon", with_ink({{"points", point_list(shape.points)}}, shape, id)); break;
    case ShapeKind::box: write_box(writer, shape, id); break;
    case ShapeKind::circle: write_circle(writer, shape, id); break;
    case ShapeKind::label: write_label(writer, shape); break;
  }
  if (shape.arrow && shape.points.size() >= 2) {
    const std::string head = arrow_head(shape.points[shape.points.size() - 2], shape.points.back(), shape.ink.stroke_width);
    if (!head.empty()) writer.empty("polygon", {{"points", head}, {"fill", grey_text(shape.ink.grey)}});
  }
  writer.line_end();
}

void write_stripes(XmlWriter& writer, const std::string& name, double step, double width, const std::string& turn, double grey) {
  const auto pattern = writer.element("pattern", {{"id", name}, {"width", number(step)}, {"height", number(step)}, {"patternUnits", "userSpaceOnUse"},
                                                  {"patternTransform", "rotate(" + turn + ")"}});
  if (grey == 0) writer.empty("rect", {{"width", number(step)}, {"height", number(step)}, {"fill", "#fff"}});
  writer.empty("rect", {{"width", number(width)}, {"height", number(step)}, {"fill", grey_text(grey)}});
}

void write_dots(XmlWriter& writer, const std::string& name) {
  const auto pattern = writer.element("pattern", {{"id", name}, {"width", "4"}, {"height", "4"}, {"patternUnits", "userSpaceOnUse"}});
  writer.empty("rect", {{"width", "4"}, {"height", "4"}, {"fill", "#fff"}});
  writer.empty("circle", {{"cx", "2"}, {"cy", "2"}, {"r", "0.8"}, {"fill", "#000"}});
}

bool uses(const Drawing& drawing, Fill fill) {
  return std::any_of(drawing.shapes.begin(), drawing.shapes.end(), [&](const Shape& shape) { return shape.ink.fill == fill; });
}

void write_patterns(XmlWriter& writer, const Drawing& drawing, const std::string& id) {
  if (!uses(drawing, Fill::forward_hatch) && !uses(drawing, Fill::backward_hatch) && !uses(drawing, Fill::yellow_hatch) && !uses(drawing, Fill::dots)) return;
  const auto definitions = writer.element("defs");
  if (uses(drawing, Fill::forward_hatch)) write_stripes(writer, id + "-forward", 5, 0.9, "-45", 0.45);
  if (uses(drawing, Fill::backward_hatch)) write_stripes(writer, id + "-backward", 5, 0.9, "45", 0.45);
  if (uses(drawing, Fill::yellow_hatch)) write_stripes(writer, id + "-yellow", 2, 1, "0", 0);
  if (uses(drawing, Fill::dots)) write_dots(writer, id + "-dots");
}

}  // namespace

bool overlap(const Box& a, const Box& b, double margin) {
  return a.left < b.right() + margin && b.left < a.right() + margin && a.top < b.bottom() + margin && b.top < a.bottom() + margin;
}

bool is_inside(const Box& inner, const Box& outer, double tolerance) {
  return inner.left >= outer.left - tolerance && inner.top >= outer.top - tolerance && inner.right() <= outer.right() + tolerance &&
         inner.bottom() <= outer.bottom() + tolerance;
}

void add_line(Drawing& drawing, std::string role, std::vector<Point> points, double stroke_width, std::string dash, double grey) {
  Shape shape;
  shape.role = std::move(role);
  shape.points = std::move(points);
  shape.ink = {Fill::none, stroke_width, std::move(dash), grey, 1};
  drawing.shapes.push_back(std::move(shape));
}

void add_box(Drawing& drawing, std::string role, const Box& box, Ink ink) {
  Shape shape;
  shape.kind = ShapeKind::box;
  shape.role = std::move(role);
  shape.points = {{box.left, box.top}, {box.right(), box.bottom()}};
  shape.ink = std::move(ink);
  drawing.shapes.push_back(std::move(shape));
}

void add_polygon(Drawing& drawing, std::string role, std::vector<Point> points, Ink ink) {
  Shape shape;
  shape.kind = ShapeKind::polygon;
  shape.role = std::move(role);
  shape.points = std::move(points);
  shape.ink = std::move(ink);
  drawing.shapes.push_back(std::move(shape));
}

void add_label(Drawing& drawing, std::string role, Point at, std::string text, double size, Anchor anchor, bool strong) {
  Shape shape;
  shape.kind = ShapeKind::label;
  shape.role = std::move(role);
  shape.points = {at};
  shape.text = std::move(text);
  shape.size = size;
  shape.anchor = anchor;
  shape.strong = strong;
  shape.ink.fill = Fill::black;
  drawing.shapes.push_back(std::move(shape));
}

Box label_box(const Shape& label) {
  const double width = text_width(label.text, label.size, label.strong);
  const double shift = label.anchor == Anchor::start ? 0 : label.anchor == Anchor::middle ? width / 2 : width;
  return {label.points[0].x - shift, label.points[0].y - 0.82 * label.size, width, 1.06 * label.size};
}

Markup svg(const Drawing& drawing, const std::string& id) {
  XmlWriter writer(Dialect::xml);
  {
    const auto root = writer.element("svg", {{"xmlns", "http://www.w3.org/2000/svg"},
                                             {"viewBox", "0 0 " + number(drawing.width) + " " + number(drawing.height)},
                                             {"width", number(drawing.width)}, {"height", number(drawing.height)}, {"role", "img"},
                                             {"font-family", "Arial, Helvetica, 'DejaVu Sans', sans-serif"}});
    writer.line_end();
    if (!drawing.title.empty()) writer.leaf("title", drawing.title);
    if (!drawing.description.empty()) writer.leaf("desc", drawing.description);
    write_patterns(writer, drawing, id);
    writer.line_end();
    for (const Shape& shape : drawing.shapes) write_shape(writer, shape, id);
  }
  return writer.take();
}

std::string svg_file(const Drawing& drawing) { return "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n" + svg(drawing, "d").bytes() + "\n"; }

}  // namespace entrain::report
