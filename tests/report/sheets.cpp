// Timing sheets and pages: what they must say, in whatever form, and that no input breaks them.
#include "report/sheets.hpp"

#include <catch2/catch.hpp>
#include <regex>
#include <set>

#include "report/page.hpp"
#include "report/plan_view.hpp"
#include "towns.hpp"

using namespace entrain;
using namespace entrain::report;
using namespace entrain::report::tests;

namespace {

bool has(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

std::string file_of(const std::vector<OutputFile>& files, const std::string& path) {
  for (const OutputFile& file : files)
    if (file.path == path) return file.bytes;
  FAIL("no file " << path);
  return {};
}

std::string csv_sheet(const std::vector<PlanWithFigures>& periods, const std::string& signal) { return file_of(timing_sheets(periods, {}), signal + ".csv"); }
std::string html_sheet(const std::vector<PlanWithFigures>& periods, const std::string& signal) { return file_of(timing_sheets(periods, {}), signal + ".html"); }

// Every element that opens closes, in order; the elements that hold nothing aside.
bool is_balanced(const std::string& html) {
  static const std::set<std::string> lone = {"meta", "br", "!DOCTYPE"};
  std::vector<std::string> open;
  for (auto at = html.find('<'); at != std::string::npos; at = html.find('<', at + 1)) {
    const auto end = html.find('>', at);
    if (end == std::string::npos) return false;
    const std::string inside = html.substr(at + 1, end - at - 1);
    const std::string name = inside.substr(0, inside.find_first_of(" /", 1));
    if (inside[0] == '/') {
      if (open.empty() || open.back() != inside.substr(1)) return false;
      open.pop_back();
    } else if (inside.back() != '/' && lone.count(name) == 0) {
      open.push_back(name);
    }
  }
  return open.empty();
}

// Nothing is fetched, nothing runs.
void check_self_contained(const std::string& html) {
  CHECK_FALSE(has(html, "<script"));
  CHECK_FALSE(has(html, "<img"));
  CHECK_FALSE(has(html, "src="));
  CHECK_FALSE(has(html, "@import"));
  CHECK_FALSE(std::regex_search(html, std::regex("url\\((?!#)")));
  std::string rest = html;
  for (auto at = rest.find("http://www.w3.org/2000/svg"); at != std::string::npos; at = rest.find("http://www.w3.org/2000/svg")) rest.erase(at, 26);
  CHECK_FALSE(has(rest, "http"));
}

PlanWithFigures hostile_town() {
  PlanWithFigures town = corridor_town("am\"><script>alert(1)</script>", 3, {90, 400});
  plan::Plan& plan = town.plan;
  plan.project = "</title><script>alert(2)</script>";
  plan.signals[0].name = std::string(3000, 'W');
  plan.signals[1].id = "../../<img src=x>";
  plan.signals[1].name = "\xD7\xA8\xD7\x97\xD7\x95\xD7\x91 \xE2\x80\xAE \xF0\x9F\x9A\xA6 \x01\xFF";
  plan.signals[2].groups[1].id = "'\" onload=\"x";
  plan.assumptions.push_back("<b onmouseover=alert(3)>");
  plan.cautions.push_back("]]> --> */ }");
  town.review = {"<i>", "\" style=\"", {{"rule<", "H1", "text</li>"}}, 0};
  return town;
}

}  // namespace

TEST_CASE("sheet: both offset references of the coordinated groups", "[report]") {
  PlanWithFigures town = corridor_town("am", 2, {400});
  town.plan.signals[0].offset_s = 80;
  const auto offsets = coordinated_offsets(town.plan.signals[0]);
  REQUIRE(offsets.size() == 2);
  CHECK(offsets[0].group == "2");
  CHECK(offsets[0].begin_of_green_s == Approx(80));
  CHECK(offsets[0].begin_of_yellow_s == Approx(18.5));  // 80 + 28.5 - 90
  const std::string csv = csv_sheet({town}, "H1");
  CHECK(has(csv, "\"Offset, begin of green 2\",80 s,was 12"));
  CHECK(has(csv, "\"Offset, begin of yellow 2\",18.5 s"));
  CHECK(has(csv, "Begin of green / yellow 6,80 / 18.5 s"));
  CHECK(has(csv, "Cycle length,90 s,was 100"));
}

TEST_CASE("sheet: an offset a hair below the cycle is 0, not the cycle", "[report]") {
  plan::Signal signal = full_signal("H1", "", 90, 89.99999);
  CHECK(coordinated_offsets(signal).front().begin_of_green_s == 0);
}

TEST_CASE("sheet: coordinated-actuated leads with the begin of yellow, force-offs and a caution", "[report]") {
  PlanWithFigures town = corridor_town("am", 2, {400});
  plan::Signal& signal = town.plan.signals[0];
  signal.operation = plan::Operation::coordinated_actuated;
  const std::string csv = csv_sheet({town}, "H1"), page = html_sheet({town}, "H1");
  CHECK(csv.find("begin of yellow 2") < csv.find("begin of green 2"));
  CHECK(has(csv, "am force-off"));
  CHECK(has(csv, "green may return early"));
  CHECK(*force_off_s(signal, *find_group(signal, "2")) == 0);
  CHECK(*force_off_s(signal, *find_group(signal, "3")) == Approx(15));  // 4 yellow + 1.5 red + 9.5 green
  CHECK(*force_off_s(signal, *find_group(signal, "4")) == Approx(41));  // and 4 + 1.5 + 20.5 more
  CHECK_FALSE(has(csv_sheet({town}, "H2"), "force-off"));
  CHECK(page.find("begin of yellow 2") < page.find("begin of green 2"));
}

TEST_CASE("sheet: splits, constants, ring and place, old split beside the new", "[report]") {
  const std::string csv = csv_sheet({corridor_town("am", 2, {400})}, "H1");
  CHECK(has(csv, "Phases,2,\"EB T; EB R yields; walk P2\",1.2,10,7,14,4.0,1.5,34 (was 40),0.52"));
  CHECK(has(csv, "Phases,1,WB L,1.1,5,,,4.0,1.5,15,0.51"));
  CHECK(has(csv, "Sequence,1 2 | 3 4 / 5 6 | 7 8"));
}

TEST_CASE("sheet: all periods on one sheet, one sheet an intersection", "[report]") {
  PlanWithFigures evening = corridor_town("pm", 3, {400});
  evening.plan.signals[0].groups[1].minimum_green_s = 12;  // the cabinet has one table: a contradiction must show
  const auto files = timing_sheets({corridor_town("am", 2, {400}), evening}, {});
  CHECK(files.size() == 6);
  const std::string csv = file_of(files, "H1.csv");
  CHECK(has(csv, "am split"));
  CHECK(has(csv, "pm split"));
  CHECK(has(csv, "10 / 12"));
  CHECK_FALSE(has(file_of(files, "H3.csv"), "am split"));
}

TEST_CASE("sheet: what is not checked says so in large letters, what is wrong louder", "[report]") {
  PlanWithFigures town = corridor_town("am", 1, {400});
  CHECK(safety_notice({town}).role == "quiet");
  PlanWithFigures partly = town, not_checked = town, wrong = town;
  partly.review = {"partly", "two signals without geometry", {}, 0};
  not_checked.review = {"not checked", "no geometry", {}, 0};
  wrong.review = {"checked", "all looked at", {{"intergreen-violated", "H1", "group 4 begins 1 s early"}}, 1};
  CHECK(safety_notice({partly}).text == "SAFETY PARTLY CHECKED");
  CHECK(safety_notice({town, partly, not_checked}).text == "SAFETY NOT CHECKED");
  CHECK(has(safety_notice({not_checked, wrong}).text, "DO NOT USE"));
  for (const auto& period : {partly, not_checked, wrong}) {
    CHECK(has(html_sheet({period}, "H1"), "class=\"notice alarm\""));
    const std::string page = html(period_page(period, {}), {});
    CHECK(page.find("class=\"notice alarm\"") < page.find("<h1>"));
  }
  CHECK(has(csv_sheet({wrong}, "H1"), "group 4 begins 1 s early"));
}

TEST_CASE("sheet: intergreens with their slack, a short one in capitals", "[report]") {
  PlanWithFigures town = corridor_town("am", 1, {400});
  plan::Signal& signal = town.plan.signals[0];
  // Group 2 ends at 28.5, group 4 begins at 49: 20.5 s between, 5.5 s asked. Walk and clearance of P2 end at 21: 28 s, 3 asked.
  CHECK(*slack_s(signal, *find_group(signal, "2"), *find_group(signal, "4"), 5.5) == Approx(15));
  CHECK(*slack_s(signal, *find_group(signal, "P2"), *find_group(signal, "4"), 3) == Approx(25));
  CHECK(*slack_s(signal, *find_group(signal, "2"), *find_group(signal, "6"), 5.5) < 0);  // equal starts
  CHECK(has(csv_sheet({town}, "H1"), "5.5 (+15)"));
  signal.groups[3].greens[0].start_s = 32;
  CHECK(has(csv_sheet({town}, "H1"), "5.5 (SHORT -2)"));
}

TEST_CASE("sheet: assumptions and cautions of this signal and of none, overrides with author and reason", "[report]") {
  PlanWithFigures town = corridor_town("am", 12, {400});
  town.plan.signals[0].groups[1].clearance_basis->override_by = plan::Override{"yellow_s", "measured speeds", "R. Quill"};
  const std::string csv = csv_sheet({town}, "H1");
  CHECK(has(csv, "H1: speed limit of class residential"));
  CHECK_FALSE(has(csv, "H2: one lane assumed"));
  CHECK(has(csv, "no counts: defaults"));
  CHECK(has(csv, "yellow_s set by R. Quill: measured speeds"));
  CHECK(has(csv, "H1: the queue may reach the next signal"));
  CHECK_FALSE(has(csv_sheet({town}, "H12"), "H1: the queue"));  // H12 is not H1
  for (const std::string& caution : standing_cautions()) CHECK(has(html_sheet({town}, "H5"), caution.substr(0, 30)));
}

TEST_CASE("sheet: units as asked", "[report]") {
  const PlanWithFigures town = corridor_town("am", 1, {400});
  SheetOptions us;
  us.units = Units::us;
  CHECK(has(file_of(timing_sheets({town}, us), "H1.csv"), "40 mph,-1 %,79 ft"));  // 17.9 m/s, 24 m
  CHECK(has(csv_sheet({town}, "H1"), "64 km/h,-1 %,24 m"));
}

TEST_CASE("page: whole, self-contained, the verdict first", "[report]") {
  for (const auto& town : {corridor_town("am", 3, {90, 400}), hostile_town()}) {
    const auto files = all_reports({town}, {});
    for (const OutputFile& file : files) {
      if (!has(file.path, ".html")) continue;
      INFO(file.path);
      CHECK(is_balanced(file.bytes));
      if (town.plan.project == "Quillhaven") check_self_contained(file.bytes);
      CHECK_FALSE(has(file.bytes, "<script"));
      CHECK_FALSE(has(file.bytes, "<img"));
      CHECK_FALSE(std::regex_search(file.bytes, std::regex("<[^>]*\\son[a-z]+=")));
    }
  }
}

TEST_CASE("page: links of the index lead to files, names are plain and unique", "[report]") {
  PlanWithFigures am = corridor_town("am", 3, {400}), pm = corridor_town("../pm", 3, {400}), odd = corridor_town("sheets", 2, {400});
  am.plan.signals[2].id = "h1";  // H1 but for its case
  const auto files = all_reports({am, pm, odd}, {});
  std::set<std::string> paths;
  for (const OutputFile& file : files) {
    std::string lower = file.path;
    for (char& c : lower) c = c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
    CHECK(paths.insert(lower).second);
    CHECK(std::regex_match(file.path, std::regex("([A-Za-z0-9_-]+/)?[A-Za-z0-9_-]+\\.(html|csv|svg)")));
  }
  const std::string index = file_of(files, "index.html");
  static const std::regex link("href=\"([^\"]+)\"");
  int links = 0;
  for (std::sregex_iterator it(index.begin(), index.end(), link), none; it != none; ++it, ++links) CHECK_NOTHROW(file_of(files, (*it)[1]));
  CHECK(links == 3 + 4);
}

TEST_CASE("page: changes go old to new, shifts the short way round", "[report]") {
  PlanWithFigures town = corridor_town("am", 2, {400});
  plan::Signal& signal = town.plan.signals[0];
  signal.running = plan::Running{90, 85, {{"2", 30}, {"4", 26}}, "1 2 | 3 4 / 5 6 | 8 7"};
  signal.offset_s = 5;
  const std::string changes = csv(changes_table(town.plan));
  CHECK(has(changes, "H1,90 \xE2\x86\x92 90,85 \xE2\x86\x92 5 (+10 s),2,2: 30 \xE2\x86\x92 34,1 2 | 3 4 / 5 6 | 8 7 \xE2\x86\x92 1 2 | 3 4 / 5 6 | 7 8"));
}

TEST_CASE("page: same input, same bytes", "[report]") {
  const auto once = all_reports({corridor_town("am", 3, {90, 400})}, {}), again = all_reports({corridor_town("am", 3, {90, 400})}, {});
  REQUIRE(once.size() == again.size());
  for (std::size_t i = 0; i < once.size(); ++i) CHECK((once[i].path == again[i].path && once[i].bytes == again[i].bytes));
}

TEST_CASE("page: bare and broken plans give whole pages", "[report]") {
  PlanWithFigures bare;
  bare.plan.signals.emplace_back();
  PlanWithFigures broken = corridor_town("am", 3, {400});
  broken.plan.signals[0].cycle_s = -1;
  broken.plan.signals[1].offset_s = NAN;
  broken.plan.signals[1].groups[0].greens = {{1e300, -5}, {INFINITY, 3}};
  broken.plan.signals[2].reference_group = "none";
  broken.plan.corridors.emplace_back();
  for (const auto& periods : {std::vector<PlanWithFigures>{}, {PlanWithFigures{}}, {bare}, {broken, bare}})
    for (const OutputFile& file : all_reports(periods, {})) {
      if (has(file.path, ".html")) CHECK(is_balanced(file.bytes));
      CHECK_FALSE(std::regex_search(file.bytes, std::regex("[^a-z](nan|inf)[^a-z]")));
    }
}

TEST_CASE("sequence: rings with barriers, groups by their greens", "[report]") {
  plan::Signal signal = full_signal("H1", "", 90, 0);
  CHECK(sequence_text(signal) == "1 2 | 3 4 / 5 6 | 7 8");
  signal.controller = {};
  CHECK(sequence_text(signal) == "2+6 > 3+7 > 4+8 > 1+5");
}
