#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

constexpr double gravity = 9.80665;

bool is_vehicle(const plan::Group& g) { return g.kind != plan::GroupKind::pedestrian; }

// The override of that value, if it names who takes it on and why.
bool is_taken_on(const plan::Group& g, const std::string& what) {
  if (!g.clearance_basis || !g.clearance_basis->override_by) return false;
  const plan::Override& by = *g.clearance_basis->override_by;
  return by.what.find(what) != std::string::npos && !by.reason.empty() && !by.author.empty();
}

double braking(const SignalView& view, double grade) { return view.standard("deceleration_mps2", 3.048) + gravity * grade; }

// Least displayed value that the standard's rounding of `computed` allows.
double least_rounded(const SignalView& view, const std::string& value, double computed, double step, bool up) {
  step = view.standard((value + "_rounding_step").c_str(), step);
  up = view.standard((value + "_rounding_up").c_str(), up ? 1 : 0) != 0;
  if (!(step > 0)) step = 0.1;
  return up ? std::ceil(computed / step - 1e-6) * step : computed - step / 2;
}

void check_yellow(const SignalView& view, const plan::Group& g, Findings& findings) {
  const double least = view.standard("yellow_min_s", 3), most = view.standard("yellow_max_s", 6);
  if (g.yellow_s < least - 1e-6 || g.yellow_s > most + 1e-6)
    findings.violation("yellow-outside-limits", fmt::format("group {}: yellow {} s", g.id, number_text(g.yellow_s)), fmt::format("{} to {} s by the plan's standard", number_text(least), number_text(most)));
  if (!g.clearance_basis) return;
  const plan::ClearanceBasis& basis = *g.clearance_basis;
  if (!(basis.speed_mps > 0) || basis.speed_mps > 70 || !(std::fabs(basis.grade) <= 0.25) || braking(view, basis.grade) < 0.2)
    return findings.violation("clearance-basis-absurd", fmt::format("group {}: speed {} m/s, grade {}", g.id, number_text(basis.speed_mps), number_text(basis.grade)), "Correct the clearance basis");
  const double computed = std::min(most, std::max(least, view.standard("perception_s", 1) + basis.speed_mps / (2 * braking(view, basis.grade))));
  const double needed = least_rounded(view, "yellow_s", computed, 0.1, false);
  if (g.yellow_s < needed - 1e-6 && !is_taken_on(g, "yellow"))
    findings.violation("yellow-too-short", fmt::format("group {}: yellow {} s, the kinematic equation gives {} s for {} m/s on a grade of {} %", g.id, number_text(g.yellow_s), number_text(computed, 2),
                                                       number_text(basis.speed_mps, 1), number_text(100 * basis.grade, 1)), "Lengthen the yellow, or state who takes the shorter value on and why");
}

void check_red(const SignalView& view, const plan::Group& g, Findings& findings) {
  const double most = view.standard("red_clearance_max_s", 6);
  if (g.red_clearance_s > most + 1e-6) findings.violation("red-clearance-too-long", fmt::format("group {}: red clearance {} s", g.id, number_text(g.red_clearance_s)), fmt::format("At most {} s by the plan's standard", number_text(most)));
  if (!g.clearance_basis) return;
  const plan::ClearanceBasis& basis = *g.clearance_basis;
  const double speed = basis.clearing_speed_mps.value_or(basis.speed_mps);
  if (!(speed > 0) || !(basis.width_m >= 0) || basis.width_m > 500 || !(basis.vehicle_length_m >= 0) || basis.vehicle_length_m > 100)
    return findings.violation("clearance-basis-absurd", fmt::format("group {}: clearing speed {} m/s, width {} m", g.id, number_text(speed), number_text(basis.width_m)), "Correct the clearance basis");
  const double way = basis.width_m + std::max(basis.vehicle_length_m, view.standard("vehicle_length_m", basis.vehicle_length_m));
  const double computed = std::min(most, std::max(view.standard("red_clearance_min_s", 0), way / speed - view.standard("red_clearance_reduction_s", 0)));
  const double needed = least_rounded(view, "red_clearance_s", computed, 0.1, true);
  if (g.red_clearance_s < needed - 1e-3 && !is_taken_on(g, "red_clearance"))
    findings.violation("red-clearance-too-short", fmt::format("group {}: red clearance {} s, ({} m + {} m) / {} m/s asks for {} s", g.id, number_text(g.red_clearance_s), number_text(basis.width_m, 1),
                                                              number_text(basis.vehicle_length_m, 1), number_text(speed, 1), number_text(needed, 1)), "Lengthen the red clearance, or state who takes the shorter value on and why");
}

double longest_crossing_m(const SignalView& view, const plan::Group& g) {
  double longest = 0;
  for (const std::string& id : g.crossings)
    if (const auto found = view.crossing.find(id); found != view.crossing.end()) longest = std::max(longest, view.signal.crossings[found->second].length_m);
  return longest;
}

void check_walk(const SignalView& view, const plan::Group& g, double walk_s, Findings& findings) {
  const double least = view.standard("walk_min_s", 7);
  if (walk_s < g.minimum_green_s - 1e-6) findings.violation("walk-below-minimum", fmt::format("group {}: walk {} s, its least is {} s", g.id, number_text(walk_s), number_text(g.minimum_green_s)), "Lengthen the walk");
  if (walk_s < least - 1e-6 && !is_taken_on(g, "walk"))
    findings.violation("walk-below-standard", fmt::format("group {}: walk {} s, the standard asks for {} s", g.id, number_text(walk_s), number_text(least)), "Lengthen the walk, or state who takes the shorter value on and why");
}

}  // namespace

void check_greens(const SignalView& view, Findings& findings) {
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    const auto& spans = view.greens[i];
    if (spans.empty() || std::all_of(spans.begin(), spans.end(), [](const Span& s) { return s.length == 0; }))
      findings.add("group-never-green", is_vehicle(g) ? Severity::violation : Severity::warning, fmt::format("group {} is never green", g.id), "Give it a green, or remove it");
    for (std::size_t a = 0; a < spans.size(); ++a)
      for (std::size_t b = 0; b < spans.size(); ++b)
        if (a != b && spans[a].length > 0 && modulo(spans[b].start - spans[a].start, view.cycle) < spans[a].length + view.after_green(i) && spans[a].length < view.cycle)
          findings.violation("greens-overlap", fmt::format("group {}: a green starts at {} s, before the one from {} s has ended and cleared", g.id, number_text(spans[b].start / 10.0), number_text(spans[a].start / 10.0)),
                             "Separate the greens by the group's own change and clearance");
  }
}

void check_minimums(const SignalView& view, Findings& findings) {
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    if (!is_vehicle(g)) continue;
    for (const Span& span : view.greens[i])
      if (span.length < to_tenths(g.minimum_green_s))
        findings.violation("minimum-green", fmt::format("group {}: green {} s, its minimum is {} s", g.id, number_text(span.length / 10.0), number_text(g.minimum_green_s)), "Lengthen the green (splitOverrun)");
    if (g.minimum_green_s < 1) findings.add("minimum-green-missing", Severity::warning, fmt::format("group {}: minimum green {} s", g.id, number_text(g.minimum_green_s)), "State a minimum green");
  }
}

void check_yellow_and_red(const SignalView& view, Findings& findings) {
  for (std::size_t i = 0; i < view.signal.groups.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    if (g.clearance_basis && g.clearance_basis->override_by && (g.clearance_basis->override_by->reason.empty() || g.clearance_basis->override_by->author.empty()))
      findings.violation("override-without-author", fmt::format("group {}: an override without reason or author", g.id), "Say why and who takes it on");
    const bool always = i < view.greens.size() && std::any_of(view.greens[i].begin(), view.greens[i].end(), [&](const Span& s) { return s.length == view.cycle; });
    if (!is_vehicle(g) || always) continue;
    check_yellow(view, g, findings);
    check_red(view, g, findings);
    if (!g.clearance_basis) findings.add("clearance-basis-missing", Severity::note, fmt::format("group {}: no clearance basis; only the limits of yellow and red were checked", g.id));
  }
}

void check_pedestrian_times(const SignalView& view, Findings& findings) {
  const double speed = view.standard("walking_speed_mps", 1.0668), slower = view.standard("walking_speed_total_mps", 0), setback = view.standard("curb_setback_m", 0);
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    if (is_vehicle(g)) continue;
    const double length = longest_crossing_m(view, g);
    for (const Span& span : view.greens[i]) check_walk(view, g, span.length / 10.0, findings);
    if (!(length > 0) || !(speed > 0.1)) continue;
    if (g.clearance_s < length / speed - 1e-3 && !is_taken_on(g, "pedestrian_clearance"))
      findings.violation("pedestrian-clearance-too-short", fmt::format("group {}: pedestrian clearance {} s, {} m at {} m/s take {} s", g.id, number_text(g.clearance_s), number_text(length, 1), number_text(speed, 2),
                                                                       number_text(length / speed, 1)), "Lengthen the pedestrian clearance");
    if (g.clearance_s != std::floor(g.clearance_s)) findings.violation("pedestrian-clearance-not-whole", fmt::format("group {}: pedestrian clearance {} s", g.id, number_text(g.clearance_s)), "Whole seconds");
    if (slower > 0.1 && !view.greens[i].empty()) {
      const double total = view.greens[i].front().length / 10.0 + g.clearance_s;
      if (total < (length + setback) / slower - 1e-3)
        findings.add("pedestrian-total-short", Severity::warning, fmt::format("group {}: walk and clearance {} s, ({} + {}) m at {} m/s take {} s", g.id, number_text(total), number_text(length, 1), number_text(setback, 1),
                                                                              number_text(slower, 2), number_text((length + setback) / slower, 1)), "Lengthen the walk unless the push button is nearer");
    }
  }
}

}  // namespace entrain::review
