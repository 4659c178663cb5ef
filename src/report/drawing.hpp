// A picture as plain data: shapes in order, each with its ink and a role that tests and style sheets can find.
#pragma once

#include <string>
#include <vector>

#include "report/xml.hpp"

namespace entrain::report {

struct Point {
  double x = 0, y = 0;
};

// Axis-parallel, y downwards.
struct Box {
  double left = 0, top = 0, width = 0, height = 0;
  double right() const { return left + width; }
  double bottom() const { return top + height; }
};

bool overlap(const Box& a, const Box& b, double margin = 0);
bool is_inside(const Box& inner, const Box& outer, double tolerance = 1e-6);

enum class Fill { none, black, white, grey, light, forward_hatch, backward_hatch, yellow_hatch, dots };
enum class Anchor { start, middle, end };

struct Ink {
  Fill fill = Fill::none;
  double stroke_width = 0;   // 0: no outline
  std::string dash;          // "4 2": lengths of dash and gap; empty: solid
  double grey = 0;           // of the outline: 0 black .. 1 white
  double opacity = 1;        // of the fill
};

enum class ShapeKind { line, polygon, box, circle, curve, label };

struct Shape {
  ShapeKind kind = ShapeKind::line;
  std::string role;           // SVG class: words of this project
  std::vector<Point> points;  // line: any number; polygon; box: two corners; circle: centre; curve: start, control, end; label: base point
  Ink ink;
  double radius = 0;          // circle
  bool arrow = false;         // line and curve: a head at the end
  std::string text;           // label
  double size = 0;            // label: height of the letters' em, drawing units
  Anchor anchor = Anchor::start;
  bool strong = false;        // label
};

struct Drawing {
  double width = 0, height = 0;
  std::string title, description;  // for readers that can't see it
  std::vector<Shape> shapes;
};

void add_line(Drawing& drawing, std::string role, std::vector<Point> points, double stroke_width, std::string dash = {}, double grey = 0);
void add_box(Drawing& drawing, std::string role, const Box& box, Ink ink);
void add_polygon(Drawing& drawing, std::string role, std::vector<Point> points, Ink ink);
void add_label(Drawing& drawing, std::string role, Point at, std::string text, double size, Anchor anchor = Anchor::start, bool strong = false);

// The box a label covers: from the estimated width of its text, generous rather than tight.
Box label_box(const Shape& label);

// As an <svg> element. `id` makes names inside unique where several pictures share a page. A file of its own names its namespace either way.
Markup svg(const Drawing& drawing, const std::string& id);
std::string svg_file(const Drawing& drawing);

}  // namespace entrain::report
