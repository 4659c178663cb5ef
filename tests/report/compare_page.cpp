// The comparison of cycle lengths in all its forms.
#include "report/compare_page.hpp"

#include <catch2/catch.hpp>
#include <algorithm>
#include <cmath>
#include <nlohmann/json.hpp>

using namespace entrain::report;

namespace {

CompareRow row_at(double cycle_s, double delay_s, double first_band_s, double second_band_s) {
  CompareRow row;
  row.cycle_s = cycle_s, row.fits = true, row.delay_s = delay_s, row.stops_per_h = 12345, row.worst_degree = 0.88, row.worst_degree_at = "H4 EB-T";
  row.longest_pedestrian_wait_s = 70, row.longest_side_street_wait_s = 81;
  row.bands = {{"Harrow Lane", "EB", first_band_s, first_band_s / cycle_s, 0.9}, {"Harrow Lane", "WB", second_band_s, second_band_s / cycle_s, 0.5}};
  return row;
}

Comparison example() {
  Comparison comparison{"Quillhaven", "am", "90 s: least delay with every band; 100 s is second.", {}};
  CompareRow today = row_at(110, 31, 5, 0), small;
  today.existing = true;
  small.cycle_s = 70;
  small.why_not = "H4: groups 1, 2, 3 and 4 need 82 s";
  comparison.rows = {today, small, row_at(90, 20.04, 28, 14), row_at(100, 22, 30, 15)};
  comparison.rows[2].recommended = true;
  comparison.rows[3].runner_up = true;
  return comparison;
}

std::size_t count_of(const Drawing& drawing, const std::string& role) {
  return static_cast<std::size_t>(std::count_if(drawing.shapes.begin(), drawing.shapes.end(), [&](const Shape& s) { return s.role == role; }));
}

}  // namespace

TEST_CASE("compare: the terminal table", "[report]") {
  CHECK(compare_text({example()}) ==
        "Quillhaven, am\n"
        "                    Harrow              Harrow                                             Wait\n"
        "                      Lane                Lane                                               on\n"
        "Cycle                   EB  eff.  att.      WB  eff.  att.  Delay   Stops                  foot  Side-street\n"
        "    s               band s     %     %  band s     %     %      s      /h  Highest v/c        s       wait s  Minimums fit\n"
        "-----  -----------  ------  ----  ----  ------  ----  ----  -----  ------  --------------  ----  -----------  --------------------------------------\n"
        "  110     today          5     5    90       0     0    50   31.0  12,345  0.88 (H4 EB-T)    70           81  yes\n"
        "   70                    -     -     -       -     -     -      -       -  -                  -            -  no: H4: groups 1, 2, 3 and 4 need 82 s\n"
        "   90  recommended      28    31    90      14    16    50   20.0  12,345  0.88 (H4 EB-T)    70           81  yes\n"
        "  100   runner-up       30    30    90      15    15    50   22.0  12,345  0.88 (H4 EB-T)    70           81  yes\n"
        "90 s: least delay with every band; 100 s is second.\n");
}

TEST_CASE("compare: JSON says the same, rows that do not fit say why and nothing else", "[report]") {
  const auto json = nlohmann::json::parse(compare_json({example()}));
  CHECK(json["project"] == "Quillhaven");
  const auto& period = json["periods"][0];
  CHECK(period["recommended_cycle_s"] == 90);
  CHECK(period["runner_up_cycle_s"] == 100);
  CHECK(period["rows"].size() == 4);
  CHECK(period["rows"][0]["existing"] == true);
  CHECK(period["rows"][1]["why_not"] == "H4: groups 1, 2, 3 and 4 need 82 s");
  CHECK(!period["rows"][1].contains("delay_s"));
  CHECK(period["rows"][2]["bands"][0]["bandwidth_s"] == 28);
  CHECK(period["rows"][2]["delay_s"].get<double>() == Approx(20.04));
}

TEST_CASE("compare: the plot marks every row that fits once a line, and what runs today apart", "[report]") {
  const Drawing plot = compare_plot(example());
  CHECK(count_of(plot, "mark") == 2 * 3);
  CHECK(count_of(plot, "today") == 1 * 3);
  CHECK(count_of(plot, "recommended") == 2);
  CHECK(count_of(plot, "no_plan") == 2);
  for (const Shape& shape : plot.shapes)
    for (const Point& p : shape.points) {
      CHECK((std::isfinite(p.x) && std::isfinite(p.y)));
      CHECK((p.x >= 0 && p.x <= plot.width && p.y >= 0 && p.y <= plot.height));
    }
}

TEST_CASE("compare: no rows, one row, absurd values and hostile names make whole files", "[report]") {
  Comparison odd = example();
  odd.period = "<script>alert(1)</script>";
  odd.rows[2].delay_s = std::nan("");
  odd.rows[3].bands[0].bandwidth_s = INFINITY;
  odd.rows[3].bands[0].corridor = "\"><img src=x onerror=alert(1)>";
  for (const auto& comparisons : {std::vector<Comparison>{}, {Comparison{}}, {odd}, {Comparison{"a", "b", "", {odd.rows[1]}}}})
    for (const OutputFile& file : compare_files(comparisons)) {
      if (file.path != "compare.html") continue;
      CHECK(file.bytes.find("<script") == std::string::npos);
      CHECK(file.bytes.find("<img") == std::string::npos);
      CHECK(file.bytes.find("nan") == std::string::npos);
    }
  CHECK_NOTHROW(nlohmann::json::parse(compare_json({odd})));
}
