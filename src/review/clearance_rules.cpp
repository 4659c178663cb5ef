// Yellow and red clearance recomputed from the plan's own clearance basis and standard, by the kinematic equation t + v / (2a + 2gG) and
// (W + L) / v. What the longest yellow cuts off belongs to red clearance.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "base/quantity.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

double braking(const SignalView& view, double grade) { return view.standard("deceleration_mps2", 3.048) + gravity_mps2 * grade; }

bool is_sound(const SignalView& view, const plan::ClearanceBasis& basis) {
  return basis.speed_mps > 0 && basis.speed_mps <= 70 && std::fabs(basis.grade) <= 0.25 && braking(view, basis.grade) >= 0.2 && basis.width_m >= 0 && basis.width_m <= 500 && basis.vehicle_length_m >= 0 &&
         basis.vehicle_length_m <= 100 && (!basis.clearing_speed_mps || (*basis.clearing_speed_mps > 0.5 && *basis.clearing_speed_mps <= 70));
}

// Before limits.
double kinematic_yellow_s(const SignalView& view, const plan::ClearanceBasis& basis) { return view.standard("perception_s", 1) + basis.speed_mps / (2 * braking(view, basis.grade)); }

void check_yellow(const SignalView& view, const plan::Group& g, Findings& findings) {
  const plan::ClearanceBasis& basis = *g.clearance_basis;
  const double kinematic = kinematic_yellow_s(view, basis);
  const double computed = std::min(view.standard("yellow_max_s", 6), std::max(view.standard("yellow_min_s", 3), kinematic));
  if (g.yellow_s >= least_rounded(view, "yellow_s", computed, 0.1, false) - 1e-6 || is_taken_on(g, "yellow")) return;
  findings.violation("yellow-too-short", fmt::format("group {}: yellow {} s, the kinematic equation gives {} s for {} m/s on a grade of {} %", g.id, number_text(g.yellow_s), number_text(kinematic, 2), number_text(basis.speed_mps, 1),
                                                     number_text(100 * basis.grade, 1)), "Lengthen the yellow, or state who takes the shorter value on and why", {g.id});
}

double slower(double speed, double stated) { return stated > 0.5 ? std::min(speed, stated) : speed; }

void check_red(const SignalView& view, const plan::Group& g, Findings& findings) {
  const plan::ClearanceBasis& basis = *g.clearance_basis;
  const double speed = slower(basis.clearing_speed_mps.value_or(basis.speed_mps), view.standard("clearing_speed_mps", 0));
  const double length = std::max(basis.vehicle_length_m, view.standard("vehicle_length_m", basis.vehicle_length_m));
  const double clearing = std::max(view.standard("red_clearance_min_s", 1), (basis.width_m + length) / speed - view.standard("red_clearance_reduction_s", 0));
  const double cut = std::max(0.0, kinematic_yellow_s(view, basis) - std::max(view.standard("yellow_max_s", 6), g.yellow_s));
  const double needed = least_rounded(view, "red_clearance_s", clearing + cut, 0.1, true);
  if (g.red_clearance_s >= needed - 1e-6 || is_taken_on(g, "red_clearance")) return;
  findings.violation("red-clearance-too-short", fmt::format("group {}: red clearance {} s, ({} m + {} m) / {} m/s{} asks for {} s", g.id, number_text(g.red_clearance_s), number_text(basis.width_m, 1), number_text(length, 1),
                                                            number_text(speed, 1), cut > 0 ? fmt::format(" and {} s that the longest yellow cuts off", number_text(cut, 1)) : "", number_text(needed, 1)),
                     "Lengthen the red clearance, or state who takes the shorter value on and why", {g.id});
}

void check_limits(const SignalView& view, const plan::Group& g, Findings& findings) {
  const double least = view.standard("yellow_min_s", 3), most = view.standard("yellow_max_s", 6);
  if (g.yellow_s < least - 1e-6 || g.yellow_s > most + 1e-6)
    findings.violation("yellow-outside-limits", fmt::format("group {}: yellow {} s", g.id, number_text(g.yellow_s)), fmt::format("{} to {} s by the plan's standard", number_text(least), number_text(most)), {g.id});
  const double shortest = view.standard("red_clearance_min_s", 1), longest = view.standard("red_clearance_max_s", 6);
  if (g.red_clearance_s < shortest - 1e-6 && !is_taken_on(g, "red_clearance"))
    findings.violation("red-clearance-too-short", fmt::format("group {}: red clearance {} s, the plan's standard asks for {} s at least", g.id, number_text(g.red_clearance_s), number_text(shortest)), "Lengthen the red clearance", {g.id});
  // Longer than the standard's longest is never cut, but somebody should look at it.
  if (g.red_clearance_s > longest + 1e-6)
    findings.add("red-clearance-too-long", g.red_clearance_s > 20 ? Severity::violation : Severity::warning, fmt::format("group {}: red clearance {} s", g.id, number_text(g.red_clearance_s)),
                 fmt::format("At most {} s by the plan's standard; check width and speed before it is accepted", number_text(longest)), {g.id});
}

}  // namespace

bool is_taken_on(const plan::Group& g, const std::string& what) {
  if (!g.clearance_basis || !g.clearance_basis->override_by) return false;
  const plan::Override& by = *g.clearance_basis->override_by;
  return by.what.find(what) != std::string::npos && !trim(by.reason).empty() && !trim(by.author).empty();
}

double least_rounded(const SignalView& view, const std::string& value, double computed, double step, bool up) {
  step = view.standard((value + "_rounding_step").c_str(), step);
  up = view.standard((value + "_rounding_up").c_str(), up ? 1 : 0) != 0;
  if (!(step > 0) || step > 1) step = 0.1;
  const double steps = (computed - written_s) / step;
  return (up ? std::ceil(steps - 1e-9) : std::floor(steps + 0.5 + 1e-9)) * step;
}

void check_change_intervals(const SignalView& view, Findings& findings) {
  for (std::size_t i = 0; i < view.signal.groups.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    if (walks(g) || view.is_always_green(i)) continue;
    check_limits(view, g, findings);
    if (!g.clearance_basis) {
      findings.add("clearance-basis-missing", Severity::note, fmt::format("group {}: no clearance basis; only the limits of yellow and red clearance were checked", g.id), {}, {g.id});
      continue;
    }
    if (!is_sound(view, *g.clearance_basis)) {
      const plan::ClearanceBasis& b = *g.clearance_basis;
      findings.violation("clearance-basis-absurd", fmt::format("group {}: speed {} m/s, grade {}, width {} m, vehicle {} m", g.id, number_text(b.speed_mps), number_text(b.grade), number_text(b.width_m), number_text(b.vehicle_length_m)),
                         "Correct the clearance basis: its intervals could not be recomputed", {g.id});
      continue;
    }
    check_yellow(view, g, findings);
    check_red(view, g, findings);
  }
}

void check_overrides(const SignalView& view, Findings& findings) {
  for (const plan::Group& g : view.signal.groups) {
    if (!g.clearance_basis || !g.clearance_basis->override_by) continue;
    const plan::Override& by = *g.clearance_basis->override_by;
    if (trim(by.what).empty() || trim(by.reason).empty() || trim(by.author).empty())
      findings.violation("override-without-author", fmt::format("group {}: an override of {} without what, reason or author", g.id, printable(by.what)), "Say what, why and who takes it on", {g.id});
    else
      findings.add("override", Severity::note, fmt::format("group {}: {} by {}: {}", g.id, printable(by.what), printable(by.author), printable(by.reason, 300)), {}, {g.id});
  }
}

}  // namespace entrain::review
