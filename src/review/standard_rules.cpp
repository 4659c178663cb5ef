// The values of the standard that the plan carries with it: the review works with them, so they must be plausible themselves.
#include <fmt/format.h>

#include <cmath>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

struct Bounds {
  const char* key;
  double least, most, assumed;
  bool is_needed;
};

// Ranges outside of which no practice known to us lies: MUTCD 11th edition part 4, NCHRP Reports 731 and 812, RiLSA, from memory where they
// are wider than one of these.
constexpr Bounds bounds[] = {
    {"perception_s", 0.5, 3, 1, true},           {"deceleration_mps2", 1.5, 5, 3.048, true},      {"yellow_min_s", 3, 6, 3, true},
    {"yellow_max_s", 3, 8, 6, true},             {"vehicle_length_m", 3, 30, 6.096, false},       {"red_clearance_reduction_s", 0, 1, 0, false},
    {"red_clearance_min_s", 0, 6, 1, true},      {"red_clearance_max_s", 1, 20, 6, false},        {"clearing_speed_mps", 2, 30, 0, false},
    {"walking_speed_mps", 0.5, 1.5, 1.0668, true}, {"walking_speed_total_mps", 0.5, 1.5, 0, false}, {"curb_setback_m", 0, 10, 0, false},
    {"walk_min_s", 4, 60, 7, true},              {"walk_limit_s", 4, 60, 4, false},               {"pedestrian_buffer_s", 0, 20, 3, true},
    {"minimum_green_major_fast_s", 1, 60, 0, false}, {"minimum_green_major_s", 1, 60, 0, false},    {"minimum_green_minor_s", 1, 60, 0, false},
    {"minimum_green_collector_s", 1, 60, 0, false}, {"minimum_green_left_s", 1, 60, 0, false},     {"vehicle_spacing_m", 3, 30, 7.62, false},
};

bool ends_with(const std::string& text, const std::string& end) { return text.size() >= end.size() && text.compare(text.size() - end.size(), end.size(), end) == 0; }

// What any value must be, known to us or not.
bool is_possible(const std::string& key, double value) {
  if (ends_with(key, "_rounding_step")) return value == 0.1 || value == 0.5 || value == 1;
  if (ends_with(key, "_rounding_up") || key.rfind("allow_", 0) == 0) return value == 0 || value == 1;
  return std::fabs(value) <= 1e6;
}

bool has_people(const plan::Plan& plan) {
  for (const plan::Signal& s : plan.signals)
    for (const plan::Group& g : s.groups)
      if (walks(g)) return true;
  return false;
}

bool concerns_people(const std::string& key) { return key.rfind("walk", 0) == 0 || key.rfind("pedestrian", 0) == 0 || key.rfind("curb", 0) == 0; }

}  // namespace

void check_standard(const plan::Plan& plan, std::vector<Finding>& list) {
  Findings findings(list, "");
  const bool people = has_people(plan);
  for (const Bounds& b : bounds) {
    const auto found = plan.standard.values.find(b.key);
    if (found == plan.standard.values.end()) {
      if (b.is_needed && !plan.signals.empty() && (people || !concerns_people(b.key)))
        findings.add("standard-value-assumed", Severity::note, fmt::format("the plan's standard says nothing of {}: {} was taken", b.key, number_text(b.assumed)), "State it, so that the plan can be checked by its own standard");
    } else if (!(found->second >= b.least - 1e-9 && found->second <= b.most + 1e-9)) {
      findings.violation("standard-value-absurd", fmt::format("the plan's standard has {} = {}", b.key, number_text(found->second)), fmt::format("No practice lies outside {} to {}", number_text(b.least), number_text(b.most)));
    }
  }
  for (const auto& [key, value] : plan.standard.values)
    if (!is_possible(key, value)) findings.violation("standard-value-absurd", fmt::format("the plan's standard has {} = {}", printable(key), number_text(value)), "Correct the standard's values");
  const auto value = [&](const char* key, double otherwise) {
    const auto found = plan.standard.values.find(key);
    return found == plan.standard.values.end() ? otherwise : found->second;
  };
  if (value("yellow_min_s", 3) > value("yellow_max_s", 6)) findings.violation("standard-value-absurd", "the plan's standard has yellow_min_s above yellow_max_s", "Correct the standard's values");
}

}  // namespace entrain::review
