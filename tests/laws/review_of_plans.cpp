// The reviewer accepts every plan the planner makes, and rejects it after any single seeded defect.
#include <catch2/catch.hpp>
#include <functional>
#include <string>
#include <vector>

#include "drafting/draft.hpp"
#include "made_town.hpp"
#include "review/review.hpp"

using namespace entrain;

namespace {

plan::Plan drafted(const drafting::Inputs& inputs) {
  const auto result = drafting::draft(inputs, {}, {});
  REQUIRE(result.has_value());
  return result->value.plans.at(0).plan;
}

std::string violations(const plan::Plan& plan) {
  std::string text;
  for (const auto& finding : review::review_plan(plan).findings)
    if (finding.severity == review::Severity::violation) text += finding.rule + ": " + finding.signal + ": " + finding.sentence + "\n";
  return text;
}

plan::Group& group(plan::Plan& plan, const std::string& id) {
  for (plan::Group& g : plan.signals.at(0).groups)
    if (g.id == id) return g;
  throw std::runtime_error("no group " + id);
}

struct Defect {
  const char* name;
  std::function<void(plan::Plan&)> seed;
};

const std::vector<Defect>& defects() {
  static const std::vector<Defect> list = {
      {"a green a second longer", [](plan::Plan& p) { group(p, "2").greens[0].duration_s += 1; }},
      {"a green a tenth longer", [](plan::Plan& p) { group(p, "4").greens[0].duration_s += 0.1; }},
      {"a green a second earlier", [](plan::Plan& p) { group(p, "4").greens[0].start_s -= 1; }},
      {"yellow shortened", [](plan::Plan& p) { group(p, "2").yellow_s -= 0.5; }},
      {"yellow beyond its limit", [](plan::Plan& p) { group(p, "2").yellow_s = 7; }},
      {"no yellow", [](plan::Plan& p) { group(p, "6").yellow_s = 0; }},
      {"red clearance shortened", [](plan::Plan& p) { group(p, "4").red_clearance_s -= 0.5; }},
      {"no red clearance", [](plan::Plan& p) { group(p, "4").red_clearance_s = 0; }},
      {"a walk cut", [](plan::Plan& p) { group(p, "P2").greens[0].duration_s = 3; }},
      {"pedestrian clearance cut", [](plan::Plan& p) { group(p, "P2").clearance_s -= 2; }},
      {"minimum green raised above the green", [](plan::Plan& p) { group(p, "4").minimum_green_s = 90; }},
      {"a split that is not the sum", [](plan::Plan& p) { *group(p, "2").split_s += 1; }},
      {"an offset beyond the cycle", [](plan::Plan& p) { p.signals[0].offset_s = p.signals[0].cycle_s; }},
      {"an offset that is not whole", [](plan::Plan& p) { p.signals[0].offset_s += 0.5; }},
      {"a cycle that is neither common nor half", [](plan::Plan& p) { p.signals[0].cycle_s += 1; }},
      {"a conflict left out of the list", [](plan::Plan& p) { p.signals[0].conflicts.erase(p.signals[0].conflicts.begin()); }},
      {"an intergreen shortened in the list", [](plan::Plan& p) { p.signals[0].conflicts[0].intergreen_ab_s -= 1; }},
      {"a protected turn green with its opposing through", [](plan::Plan& p) { group(p, "1").greens = group(p, "2").greens; }},
      {"a side street green with the main street", [](plan::Plan& p) { group(p, "8").greens = group(p, "6").greens; }},
      {"a permissive through", [](plan::Plan& p) { group(p, "4").greens[0] = group(p, "2").greens[0]; for (auto& s : group(p, "4").serves) s.right_of_way = plan::RightOfWay::permissive; }},
      {"a walk with the traffic it crosses", [](plan::Plan& p) { group(p, "P2").greens[0].start_s = group(p, "4").greens[0].start_s; }},
      {"a band that is wider than the greens give", [](plan::Plan& p) { p.corridors[0].directions[0].bandwidth_s += 1; }},
      {"a band that starts elsewhere", [](plan::Plan& p) { p.corridors[0].directions[0].band_start_s += 15; }},
      {"an efficiency too good", [](plan::Plan& p) { p.corridors[0].directions[0].efficiency += 0.05; }},
      {"an attainability too good", [](plan::Plan& p) { p.corridors[0].directions[1].attainability += 0.05; }},
      {"an offset moved without its claims", [](plan::Plan& p) { p.signals[1].offset_s = p.signals[1].offset_s > 9 ? p.signals[1].offset_s - 9 : p.signals[1].offset_s + 9; }},
      {"a degree of saturation too good", [](plan::Plan& p) { *group(p, "2").degree_of_saturation -= 0.1; }},
      {"a group of that name twice", [](plan::Plan& p) { p.signals[0].groups.push_back(p.signals[0].groups[0]); }},
      {"a corridor through a group that is not there", [](plan::Plan& p) { p.corridors[0].directions[0].stops[1].group = "99"; }},
      {"a reference group that is not there", [](plan::Plan& p) { p.signals[0].reference_group = "99"; }},
      {"no cautions", [](plan::Plan& p) { p.cautions.clear(); }},
      {"an override nobody takes on", [](plan::Plan& p) { group(p, "2").clearance_basis->override_by = plan::Override{"yellow_s", "", ""}; group(p, "2").yellow_s -= 0.5; }},
  };
  return list;
}

}  // namespace

TEST_CASE("the reviewer accepts what the planner makes") {
  for (const auto& inputs : {made_town::main_street({}), made_town::main_street({6, 180, 700, 200, 80, 2}), made_town::main_street({3, 300, 2600, 600, 120, 2}), made_town::grid(3, 4, 250)}) {
    const plan::Plan plan = drafted(inputs);
    CHECK(violations(plan) == "");
    CHECK(review::review_plan(plan).safety == review::Safety::checked);
  }
}

TEST_CASE("and rejects it after any single seeded defect") {
  const plan::Plan sound = drafted(made_town::main_street({}));
  REQUIRE(violations(sound) == "");
  for (const Defect& defect : defects()) {
    plan::Plan plan = sound;
    defect.seed(plan);
    CAPTURE(defect.name);
    CHECK(violations(plan) != "");
  }
}

TEST_CASE("recomputed claims hold again after an offset was edited; safety findings stay") {
  plan::Plan plan = drafted(made_town::main_street({}));
  plan.signals[1].offset_s = plan.signals[1].offset_s > 7 ? plan.signals[1].offset_s - 7 : plan.signals[1].offset_s + 7;
  CHECK(violations(plan) != "");
  CHECK(violations(review::recomputed_claims(plan)) == "");
  group(plan, "2").yellow_s = 1;
  CHECK(violations(review::recomputed_claims(plan)) != "");
}

TEST_CASE("without geometry safety is partly or not checked, and can be required") {
  plan::Plan plan = drafted(made_town::main_street({}));
  for (auto& signal : plan.signals) signal.legs.clear(), signal.movements.clear(), signal.crossings.clear();
  CHECK(review::review_plan(plan).safety == review::Safety::partly);
  for (auto& signal : plan.signals) signal.conflicts.clear();
  CHECK(review::review_plan(plan).safety == review::Safety::not_checked);
  review::ReviewOptions options;
  options.require_safety = true;
  CHECK(review::review_plan(plan, options).has_violation());
}
