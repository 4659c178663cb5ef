// Time-space diagrams and map pictures, judged from the numbers in the SVG itself.
#include <catch2/catch.hpp>
#include <set>

#include "report/map_picture.hpp"
#include "report/sketch.hpp"
#include "report/time_space.hpp"
#include "svg_reader.hpp"
#include "towns.hpp"

using namespace entrain;
using namespace entrain::report;
using namespace entrain::report::tests;

namespace {

std::string diagram(const plan::Plan& plan, Units units = Units::metric) { return svg_file(time_space_diagram(plan, plan.corridors.front(), {units, 3})); }

struct Bar {
  double left = 0, right = 0, top = 0, bottom = 0;
};

std::vector<Bar> bars_of(const std::vector<Element>& elements, const std::string& lamp, const std::string& direction) {
  std::vector<Bar> bars;
  for (const Element& e : elements)
    if (e.name == "rect" && (e.role() == lamp + " " + direction || e.role() == lamp + " both")) {
      const auto p = places_of(e);
      bars.push_back({p[0].x, p[1].x, p[0].y, p[1].y});
    }
  return bars;
}

// Where the outline of a polygon meets a horizontal line: least and greatest x.
std::pair<double, double> span_at(const std::vector<Place>& polygon, double y) {
  double least = 1e18, most = -1e18;
  for (std::size_t i = 0; i < polygon.size(); ++i) {
    const Place &a = polygon[i], &b = polygon[(i + 1) % polygon.size()];
    if ((a.y - y) * (b.y - y) > 0) continue;
    const double x = std::fabs(b.y - a.y) < 1e-9 ? a.x : a.x + (y - a.y) / (b.y - a.y) * (b.x - a.x);
    least = std::min(least, x), most = std::max(most, x);
    if (std::fabs(b.y - a.y) < 1e-9) least = std::min(least, b.x), most = std::max(most, b.x);
  }
  return {least, most};
}

// Every band at every stop line lies inside one drawn green of its direction. Returns how many crossings were looked at.
int check_bands_in_greens(const std::string& svg) {
  const auto elements = elements_of(svg);
  int looked = 0;
  for (const char* direction : {"first", "second"}) {
    const auto greens = bars_of(elements, "green", direction);
    std::set<double> rows;
    for (const Bar& green : greens) rows.insert(std::round((green.top + green.bottom) * 50) / 100);
    for (const Element& e : elements) {
      if (e.role() != std::string("band ") + direction) continue;
      for (const double y : rows) {
        const auto [from, to] = span_at(places_of(e), y);
        if (to - from < 0.05) continue;  // a corner at the end of the time axis
        ++looked;
        const bool inside = std::any_of(greens.begin(), greens.end(), [&](const Bar& g) { return std::fabs((g.top + g.bottom) / 2 - y) < 3 && g.left <= from + 0.35 && g.right >= to - 0.35; });
        INFO(direction << " at y " << y << ": " << from << " to " << to);
        CHECK(inside);
      }
    }
  }
  return looked;
}

// Offsets that follow the first direction, off by up to `jitter_s`, and the bands that they give.
plan::Plan with_wave(plan::Plan plan, int jitter_s) {
  double travel = 0;
  for (std::size_t i = 0; i < plan.signals.size(); ++i) {
    travel += plan.corridors[0].directions[0].stops[i].travel_time_s;
    plan.signals[i].offset_s = static_cast<double>(std::lround(travel + static_cast<double>(i * 5 % 3) * jitter_s) % 90);
  }
  for (plan::Corridor& corridor : plan.corridors)
    for (plan::Direction& direction : corridor.directions) claim_widest_band(plan, direction);
  return plan;
}

}  // namespace

TEST_CASE("diagram: five signals, bands lie in the drawn greens", "[report]") {
  const plan::Plan plan = with_wave(corridor_town("am", 5, {402, 300, 90, 500}).plan, 3);
  REQUIRE(plan.corridors[0].directions[0].bandwidth_s > 0);
  const std::string svg = diagram(plan);
  check_picture(svg);
  CHECK(check_bands_in_greens(svg) > 10);
}

TEST_CASE("diagram: both bands where travel takes half a cycle, and their widths are printed", "[report]") {
  plan::Plan plan = corridor_town("am", 5, {562.5}).plan;
  for (std::size_t i = 0; i < 5; ++i) plan.signals[i].offset_s = i % 2 == 0 ? 0 : 45;
  for (plan::Direction& direction : plan.corridors[0].directions) claim_widest_band(plan, direction);
  REQUIRE(plan.corridors[0].directions[0].bandwidth_s == Approx(28.5));
  REQUIRE(plan.corridors[0].directions[1].bandwidth_s == Approx(28.5));
  const std::string svg = diagram(plan);
  check_picture(svg);
  CHECK(check_bands_in_greens(svg) > 20);
  CHECK(svg.find(">EB 28.5 s<") != std::string::npos);
  CHECK(svg.find(">WB 28.5 s<") != std::string::npos);
  CHECK(svg.find("NO BAND") == std::string::npos);
}

TEST_CASE("diagram: a false claim is drawn as claimed and leaves the greens", "[report]") {
  plan::Plan plan = with_wave(corridor_town("am", 3, {400, 300}).plan, 3);
  REQUIRE(plan.corridors[0].directions[0].bandwidth_s > 0);
  plan.corridors[0].directions[0].band_start_s += 45;
  const auto elements = elements_of(diagram(plan));
  const auto greens = bars_of(elements, "green", "first");
  bool outside = false;
  for (const Element& e : elements)
    if (e.role() == "band first")
      for (const Place& p : places_of(e)) outside = outside || std::none_of(greens.begin(), greens.end(), [&](const Bar& g) { return std::fabs((g.top + g.bottom) / 2 - p.y) < 6 && g.left - 0.1 <= p.x && p.x <= g.right + 0.1; });
  CHECK(outside);
}

TEST_CASE("diagram: the band's width and the distances are to scale", "[report]") {
  const plan::Plan plan = with_wave(corridor_town("am", 4, {300, 600, 150}).plan, 0);
  const auto elements = elements_of(diagram(plan));
  double frame_width = 0;
  for (const Element& e : elements)
    if (e.role() == "frame") frame_width = e.number("width");
  const double per_second = frame_width / 270;
  bool whole = false;
  for (const Element& e : elements) {
    if (e.role() != "band first") continue;
    const auto p = places_of(e);
    if (p.size() != 8) continue;
    whole = true;
    CHECK(p[7].x - p[0].x == Approx(plan.corridors[0].directions[0].bandwidth_s * per_second).margin(0.02));
    CHECK(p[1].x - p[0].x == Approx(600 / 12.5 * per_second).margin(0.02));
    CHECK((p[1].y - p[0].y) / (p[2].y - p[1].y) == Approx(600.0 / 150).epsilon(0.001));
    CHECK((p[3].y - p[2].y) / (p[2].y - p[1].y) == Approx(300.0 / 150).epsilon(0.001));
  }
  CHECK(whole);
}

TEST_CASE("diagram: lamps fill the time axis without gap or overlap", "[report]") {
  plan::Plan plan = corridor_town("am", 4, {300, 90}).plan;
  plan.signals[1].groups[5].greens[0] = {10, 30};                // the directions differ here
  plan.signals[2].cycle_s = 45;                                  // half cycle
  plan.signals[2].groups[1].greens[0] = plan.signals[2].groups[5].greens[0] = {0, 20};
  plan.signals[3].groups[1].greens.push_back({50, 20});          // double service
  plan.signals[3].groups[1].greens[0].duration_s = 30;
  const std::string svg = diagram(plan);
  check_picture(svg);
  const auto elements = elements_of(svg);
  double left = 0, right = 0;
  for (const Element& e : elements)
    if (e.role() == "frame") left = e.number("x"), right = left + e.number("width");
  std::map<double, std::vector<Bar>> rows;
  for (const char* lamp : {"red", "green", "yellow"})
    for (const char* direction : {"first", "second"})
      for (const Bar& bar : bars_of(elements, lamp, direction))
        if (std::none_of(rows[bar.top].begin(), rows[bar.top].end(), [&](const Bar& b) { return b.left == bar.left && b.right == bar.right; })) rows[bar.top].push_back(bar);
  CHECK(rows.size() == 6);  // one bar at signals 1 and 3, two at 2 and 4
  for (auto& [top, bars] : rows) {
    std::sort(bars.begin(), bars.end(), [](const Bar& a, const Bar& b) { return a.left < b.left; });
    CHECK(bars.front().left == Approx(left).margin(0.02));
    CHECK(bars.back().right == Approx(right).margin(0.02));
    for (std::size_t i = 1; i < bars.size(); ++i) CHECK(bars[i].left == Approx(bars[i - 1].right).margin(0.03));
  }
}

TEST_CASE("diagram: forty signals, short links, one-way, long and hostile names", "[report]") {
  plan::Plan forty = corridor_town("am", 40, {90, 300, 120, 600}).plan;
  check_picture(diagram(forty, Units::us));
  CHECK(check_bands_in_greens(diagram(with_wave(forty, 2))) > 100);
  plan::Plan one_way = corridor_town("am", 6, {90, 400}).plan;
  one_way.corridors[0].directions.resize(1);
  check_picture(diagram(one_way));
  plan::Plan names = corridor_town("am<b>", 5, {90, 100}).plan;
  names.corridors[0].name = std::string(400, 'W') + "</svg><script>";
  names.corridors[0].directions[0].label = "\xD7\x9E\xD7\x96\xD7\xA8\xD7\x97 & <East>";
  names.signals[0].name = "\xD7\xA8\xD7\x97\xD7\x95\xD7\x91 \xD7\x94\xD7\xA4\xD7\x9C\xD7\x93\xD7\x94 \xF0\x9F\x9A\xA6\xF0\x9F\x9A\xA6\xF0\x9F\x9A\xA6\xF0\x9F\x9A\xA6\xF0\x9F\x9A\xA6\xF0\x9F\x9A\xA6\xF0\x9F\x9A\xA6\xF0\x9F\x9A\xA6\xF0\x9F\x9A\xA6";
  names.signals[1].name = std::string(300, 'M');
  names.signals[2].name = "\x01\xFF<img src=x>";
  const std::string svg = diagram(names);
  check_picture(svg);
  CHECK(svg.find("<script") == std::string::npos);
  CHECK(svg.find("<img") == std::string::npos);
  CHECK(svg.find("\xF0\x9F\x9A\xA6") != std::string::npos);
}

TEST_CASE("diagram: a couplet has its other signals between their neighbours", "[report]") {
  plan::Plan plan = corridor_town("am", 4, {400}).plan;
  plan.signals.push_back(full_signal("H9", "Parallel Street", 90, 4));
  auto& west = plan.corridors[0].directions[1];
  west.stops[1].signal = "H9";  // in place of H3, half way between H4 and H2
  const std::string svg = diagram(plan);
  check_picture(svg);
  const auto rows = svg.find(">H9<");
  CHECK(rows != std::string::npos);
  CHECK(svg.find(">H3<") != std::string::npos);
}

TEST_CASE("diagram: absurd plans are drawn as far as they go", "[report]") {
  plan::Plan plan = corridor_town("am", 4, {300}).plan;
  plan.signals[0].cycle_s = 1e-9;
  plan.signals[1].groups.clear();
  plan.signals[2].offset_s = NAN;
  plan.corridors[0].directions[0].stops[2].signal = "nowhere";
  plan.corridors[0].directions[0].stops[3].distance_m = -1e300;
  plan.corridors[0].directions[0].band_start_s = INFINITY;
  plan.corridors[0].directions[1].bandwidth_s = 1e300;
  check_picture(diagram(plan));
  plan.cycle_s = -5;
  check_picture(diagram(plan));
  plan.corridors[0].directions[0].stops.clear();
  plan.corridors[0].directions[1].stops.clear();
  check_picture(diagram(plan));
  plan.corridors[0].directions.clear();
  check_picture(diagram(plan));
}

TEST_CASE("sketch: labels apart at four legs, five legs, left-hand traffic, no legs", "[report]") {
  plan::Signal signal = full_signal("H1", "Harrow Lane", 90, 0);
  check_picture(svg_file(intersection_sketch(signal)));
  signal.traffic_side = TrafficSide::left;
  check_picture(svg_file(intersection_sketch(signal)));
  signal.legs.push_back({"NE", 45, "Old Quillhaven Turnpike Road"});
  signal.movements.push_back({"SWB-T", "NE", "S", plan::Turn::through});
  check_picture(svg_file(intersection_sketch(signal)));
  signal.legs.clear();
  check_picture(svg_file(intersection_sketch(signal)));
  signal.legs = {{"N", NAN, std::string(200, 'x')}};
  check_picture(svg_file(intersection_sketch(signal)));
}

TEST_CASE("map: labels apart, everything inside, north up, to scale", "[report]") {
  MapContent content;
  content.title = "Quillhaven", content.subtitle = "thirty signals on a grid";
  for (int i = 0; i < 30; ++i) content.signals.push_back({"S" + std::to_string(i + 1), "Street " + std::to_string(i), {-30 + 0.0012 * (i % 6), 45 + 0.0009 * (i / 6)}, i % 7 == 0});
  for (int i = 0; i < 200; ++i) content.roads.push_back({{{-31, 45 + 0.0005 * i}, {-29, 45.001 + 0.0004 * i}}, i % 3 == 0 ? RoadClass::major : RoadClass::minor, i % 2 == 0});
  content.corridors = {{"Harrow Lane", {{{-30, 45}, {-29.994, 45.0036}}}}};
  for (int i = 0; i < 50; ++i) content.findings.push_back({{-30 + 0.0001 * i, 45.001}, "way " + std::to_string(i) + ": no lanes tag, one lane a direction assumed <b>"});
  content.findings.push_back({{NAN, 45}, "nowhere"});
  const std::string svg = map_picture_svg(content, {});
  check_picture(svg);
  std::map<std::string, Place> marks;
  std::vector<Place> circles;
  for (const Element& e : elements_of(svg))
    if (e.role() == "signal") circles.push_back(places_of(e)[0]);
  REQUIRE(circles.size() == 30);
  CHECK(circles[6].y < circles[0].y);  // further north is higher
  CHECK(circles[1].x > circles[0].x);
  // 0.0012 degrees of longitude at 45 degrees north: 94.6 m; 0.0009 of latitude: 100.0 m (WGS 84).
  CHECK((circles[1].x - circles[0].x) / (circles[0].y - circles[6].y) == Approx(94.63 / 100.02).epsilon(0.002));
}

TEST_CASE("map: nothing, one point, and absurd points", "[report]") {
  check_picture(map_picture_svg({}, {}));
  MapContent one;
  one.signals = {{"A", "", {179.99999, 89.9999}, false}, {"B", "", {1e300, NAN}, false}};
  one.roads = {{{{1, 1}}, RoadClass::major, true}, {{}, RoadClass::minor, false}, {{{NAN, 1}, {INFINITY, 2}, {3, 4}}, RoadClass::minor, true}};
  check_picture(map_picture_svg(one, {Units::us, true}));
}
