// Complete plans that the review must accept, and what it must say about them.
#include <catch2/catch.hpp>
#include <cmath>
#include <fstream>
#include <nlohmann/json.hpp>
#include <set>
#include <sstream>

#include "plan/plan_text.hpp"
#include "review/review.hpp"
#include "review/review_text.hpp"
#include "sample_plans.hpp"

namespace entrain::review {
namespace {

struct Fixture {
  const char* file;
  plan::Plan (*make)();
  Safety safety;
};

const std::vector<Fixture>& fixtures() {
  static const std::vector<Fixture> list = {{"two_corridors.json", samples::two_corridors, Safety::checked},
                                            {"half_cycle.json", samples::half_cycle, Safety::checked},
                                            {"double_service.json", samples::double_service, Safety::checked},
                                            {"protected_permissive.json", samples::protected_permissive, Safety::checked},
                                            {"without_geometry.json", samples::without_geometry, Safety::partly}};
  return list;
}

std::string path_of(const Fixture& fixture) { return std::string(ENTRAIN_SOURCE_DIR) + "/tests/fixtures/plans/" + fixture.file; }

std::string bytes_of(const std::string& path) {
  std::ifstream in(path, std::ios::binary);
  std::stringstream text;
  text << in.rdbuf();
  return text.str();
}

std::string listed(const Review& review, Severity most) {
  std::string text;
  for (const Finding& f : review.findings)
    if (f.severity <= most) text += f.rule + ": " + f.signal + ": " + f.sentence + "\n";
  return text;
}

}  // namespace

// Writes the fixtures anew after the plans above them were changed: run this test by its name.
TEST_CASE("write the fixtures", "[.]") {
  for (const Fixture& fixture : fixtures()) std::ofstream(path_of(fixture), std::ios::binary) << plan::write_plan(fixture.make());
}

TEST_CASE("the review accepts complete plans written by hand") {
  for (const Fixture& fixture : fixtures()) {
    INFO(fixture.file);
    const Review review = review_plan(fixture.make());
    CHECK(listed(review, Severity::warning) == "");
    CHECK(review.safety == fixture.safety);
    CHECK_FALSE(review.has_violation());
  }
}

TEST_CASE("plan files stand for the same plans and are accepted") {
  for (const Fixture& fixture : fixtures()) {
    INFO(fixture.file);
    const std::string text = bytes_of(path_of(fixture));
    REQUIRE(text == plan::write_plan(fixture.make()));
    const auto plan = plan::read_plan(text, fixture.file);
    REQUIRE(plan);
    CHECK(listed(review_plan(*plan), Severity::warning) == "");
  }
}

TEST_CASE("mirroring a plan with its side changes nothing that is found") {
  for (const Fixture& fixture : fixtures()) {
    INFO(fixture.file);
    CHECK(listed(review_plan(samples::mirrored(fixture.make())), Severity::warning) == "");
    CHECK(review_plan(samples::mirrored(fixture.make())).conflicts_checked == review_plan(fixture.make()).conflicts_checked);
  }
}

TEST_CASE("turning every leg by any angle changes nothing that is found") {
  for (const double by : {1.0, 44.0, 90.0, 133.0, 181.0, 300.0, -60.0}) {
    plan::Plan plan = samples::two_corridors();
    for (plan::Signal& s : plan.signals)
      for (plan::Leg& leg : s.legs) leg.bearing_deg += by;
    CHECK(listed(review_plan(plan), Severity::warning) == "");
    CHECK(review_plan(plan).conflicts_checked == 4 * 36);
  }
}

TEST_CASE("a common shift of all offsets changes no finding and no band") {
  for (const double by : {1.0, 17.0, 45.0, 89.0}) {
    plan::Plan plan = samples::two_corridors();
    for (plan::Signal& s : plan.signals) s.offset_s = std::fmod(s.offset_s + by, 90);
    for (plan::Corridor& c : plan.corridors)
      for (plan::Direction& d : c.directions) d.band_start_s = std::fmod(d.band_start_s + by, 90);
    CHECK(listed(review_plan(plan), Severity::warning) == "");
  }
}

TEST_CASE("the bands of two corridors, worked out by hand") {
  const Review review = review_plan(samples::two_corridors());
  REQUIRE(review.bands.size() == 4);
  const BandCheck& east = review.bands[0];
  CHECK(east.found_s == Approx(26.7).margin(1e-6));
  CHECK(east.start_s == Approx(3).margin(1e-6));
  REQUIRE(east.stops.size() == 3);
  // T3 begins late and limits the start; T1 and T2 end together and limit the end.
  CHECK_FALSE(east.stops[0].pinches_lead);
  CHECK(east.stops[2].pinches_lead);
  CHECK(east.stops[0].pinches_trail);
  CHECK(east.stops[1].pinches_trail);
  CHECK_FALSE(east.stops[2].pinches_trail);
  CHECK(east.stops[0].lead_s == Approx(3).margin(1e-6));
  CHECK(east.stops[2].trail_s == Approx(3).margin(1e-6));
  CHECK(east.stops[2].gain_lead_s == Approx(1).margin(1e-6));   // T3 green a second earlier
  CHECK(east.stops[0].gain_trail_s == Approx(0).margin(1e-6));  // T2 still ends the band
  CHECK(east.stops[2].width_without_s == Approx(29.7).margin(1e-6));
  CHECK(review.bands[1].found_s == Approx(24.7).margin(1e-6));
  CHECK(review.bands[2].found_s == Approx(19.7).margin(1e-6));
  CHECK(review.bands[3].start_s == Approx(5).margin(1e-6));
}

TEST_CASE("a half-cycle signal is green twice in the plan's cycle") {
  const Review review = review_plan(samples::half_cycle());
  REQUIRE(review.bands.size() == 2);
  CHECK(review.bands[0].found_s == Approx(19.7).margin(1e-6));
  CHECK(review.bands[1].found_s == Approx(12.7).margin(1e-6));
  CHECK(review.bands[1].start_s == Approx(72).margin(1e-6));
}

TEST_CASE("every signal is summed up") {
  const Review review = review_plan(samples::two_corridors());
  REQUIRE(review.per_signal.size() == 4);
  const SignalCheck& t1 = review.per_signal[0];
  CHECK(t1.conflicts_from == "geometry");
  CHECK(t1.conflicting_pairs == 36);
  CHECK(t1.green_pairs == 36);
  CHECK(t1.tenths == 900);
  CHECK(t1.clearances == 12);
  CHECK(t1.violations == 0);
  REQUIRE(t1.freedom_late_s);
  CHECK(*t1.freedom_early_s == Approx(0).margin(1e-6));
  CHECK(*t1.freedom_late_s == Approx(3).margin(1e-6));
  // 2 against 5 and 4, 5 against 4 and both walks, 4 against both walks; 2 and the walks come twice.
  const Review twice = review_plan(samples::double_service());
  CHECK(twice.per_signal[0].conflicting_pairs == 5);
  CHECK(twice.per_signal[0].green_pairs == 2 + 2 + 1 + 2 + 2);
}

TEST_CASE("the verdict on safety says what could be looked at") {
  CHECK(review_plan({}).safety == Safety::not_checked);
  plan::Plan plan = samples::without_geometry();
  CHECK(review_plan(plan).safety == Safety::partly);
  CHECK(review_plan(plan).unchecked.size() >= 4);
  for (plan::Signal& s : plan.signals) s.conflicts.clear();
  const Review none = review_plan(plan);
  CHECK(none.safety == Safety::not_checked);
  CHECK(review_plan(plan, {true}).has_violation());
  CHECK_FALSE(review_plan(samples::two_corridors(), {true}).has_violation());
  plan::Plan one_missing = samples::two_corridors();
  samples::signal(one_missing, "T3").movements.pop_back();
  CHECK(review_plan(one_missing).safety == Safety::partly);
}

TEST_CASE("text begins with the verdict, JSON names its parts") {
  const Review checked = review_plan(samples::two_corridors()), partly = review_plan(samples::without_geometry());
  CHECK(to_text(checked, "plan.json").rfind("safety: checked: ", 0) == 0);
  CHECK(to_text(partly, "plan.json").rfind("safety: PARTLY CHECKED: ", 0) == 0);
  CHECK(to_text(review_plan({}), "plan.json").rfind("safety: NOT CHECKED: the plan has no signals\n", 0) == 0);
  const auto json = nlohmann::json::parse(to_json(checked, "plan.json"));
  CHECK(json["safety"] == "checked");
  CHECK(json["violations"] == 0);
  CHECK(json["signals"].size() == 4);
  CHECK(json["bands"][0]["bandwidth_s"] == 26.7);
  CHECK(json["bands"][0]["stops"][2]["pinches_lead"] == true);
}

TEST_CASE("rule names are sorted, unique and cover every finding") {
  std::set<std::string> names;
  std::string last;
  for (const RuleName& rule : rules()) {
    CHECK(last < rule.name);
    last = rule.name;
    names.insert(rule.name);
  }
  for (const Fixture& fixture : fixtures())
    for (const Finding& f : review_plan(fixture.make()).findings) CHECK(names.count(f.rule) == 1);
}

TEST_CASE("recomputing the claims of an edited plan makes them hold again") {
  plan::Plan plan = samples::two_corridors();
  samples::signal(plan, "T2").offset_s = 50;
  samples::group(plan, "T1", "2").degree_of_saturation = 0.1;
  plan.quality = plan::Quality{"band, then delay", 10, 10, 0, {}};
  CHECK(review_plan(plan).has_violation());
  const plan::Plan mended = recomputed_claims(plan);
  CHECK(listed(review_plan(mended), Severity::warning) == "");
  CHECK_FALSE(mended.quality);
  // Eastbound: [0, 29.7), [5, 34.7), [3, 32.7) share [5, 29.7).
  CHECK(mended.corridors[0].directions[0].bandwidth_s == Approx(24.7).margin(1e-6));
  CHECK(mended.corridors[0].directions[0].band_start_s == Approx(5).margin(1e-6));
  const plan::Plan again = recomputed_claims(mended);
  CHECK(plan::write_plan(again) == plan::write_plan(mended));
}

TEST_CASE("recomputing claims leaves everything that bears on safety as it was found") {
  plan::Plan plan = samples::two_corridors();
  samples::group(plan, "T1", "2").greens[0].duration_s = 36;
  samples::group(plan, "T1", "4").yellow_s = 2;
  const Review review = review_plan(recomputed_claims(plan));
  std::set<std::string> found;
  for (const Finding& f : review.findings)
    if (f.severity == Severity::violation) found.insert(f.rule);
  CHECK(found.count("intergreen-violated") == 1);
  CHECK(found.count("yellow-outside-limits") == 1);
}

}  // namespace entrain::review
