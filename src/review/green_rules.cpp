#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

void check_apart(const SignalView& view, std::size_t i, Findings& findings) {
  const plan::Group& g = view.signal.groups[i];
  const auto& spans = view.greens[i];
  for (std::size_t a = 0; a < spans.size(); ++a)
    for (std::size_t b = 0; b < spans.size(); ++b) {
      if (a == b || spans[a].length == 0 || spans[b].length == 0) continue;
      if (modulo(spans[b].start - spans[a].start, view.cycle) >= spans[a].length + view.after_green(i)) continue;
      return findings.violation("greens-overlap", fmt::format("group {}: a green starts at {} s, before the one from {} s has ended and cleared", g.id, seconds_of(spans[b].start), seconds_of(spans[a].start)),
                                "Separate the greens by the group's own change and clearance, or join them", {g.id});
    }
}

// Green and clearance together may not be longer than the cycle.
void check_room(const SignalView& view, std::size_t i, Findings& findings) {
  const plan::Group& g = view.signal.groups[i];
  for (const Span& span : view.greens[i])
    if (span.length > 0 && span.length < view.cycle && span.length + view.after_green(i) > view.cycle)
      findings.violation("clearance-beyond-cycle", fmt::format("group {}: green {} s and {} s of clearance do not fit in a cycle of {} s", g.id, seconds_of(span.length), seconds_of(view.after_green(i)), seconds_of(view.cycle)),
                         "Shorten the green: its own clearance would be cut off", {g.id});
}

double least_minimum(const SignalView& view) {
  double least = INFINITY;
  for (const char* key : {"minimum_green_major_fast_s", "minimum_green_major_s", "minimum_green_minor_s", "minimum_green_collector_s", "minimum_green_left_s"}) least = std::min(least, view.standard(key, INFINITY));
  return least;
}

// Rolling start, then riding speed, over the width that the group's vehicles clear.
double bicycle_time_s(const SignalView& view, double width_m) {
  const double v = view.standard("bicycle_speed_mps", 0), a = view.standard("bicycle_acceleration_mps2", 0);
  if (!(v > 0) || !(a > 0)) return 0;
  const double way = width_m + view.standard("bicycle_length_m", 1.8), start = v * v / (2 * a);
  return view.standard("bicycle_perception_s", 1) + (way <= start ? std::sqrt(2 * way / a) : v / a + (way - start) / v);
}

void check_minimum_itself(const SignalView& view, std::size_t i, double least, Findings& findings) {
  const plan::Group& g = view.signal.groups[i];
  const double minimum = g.minimum_green_s;
  if (!is_whole(minimum)) findings.violation("minimum-green-not-whole", fmt::format("group {}: minimum green {} s", g.id, number_text(minimum, 4)), "Controllers take whole seconds", {g.id});
  if (minimum < 1) findings.add("minimum-green-missing", Severity::warning, fmt::format("group {}: minimum green {} s", g.id, number_text(minimum)), "State a minimum green", {g.id});
  else if (std::isfinite(least) && minimum < least - 1e-6 && !is_taken_on(g, "minimum_green"))
    findings.add("minimum-green-below-standard", Severity::warning, fmt::format("group {}: minimum green {} s, the least of the plan's standard is {} s", g.id, number_text(minimum), number_text(least)), "Lengthen it, or state who takes it on and why", {g.id});
  if (!g.clearance_basis || !std::isfinite(g.clearance_basis->width_m)) return;
  const double riding = bicycle_time_s(view, std::max(0.0, g.clearance_basis->width_m)), have = minimum + g.yellow_s + g.red_clearance_s;
  if (riding > have + tolerance_s)
    findings.add("bicycle-minimum-green", Severity::note, fmt::format("group {}: a bicycle that starts with the green needs {} s to clear {} m; minimum green and clearance give {} s", g.id, number_text(riding, 1),
                                                                      number_text(g.clearance_basis->width_m, 1), number_text(have, 1)), "Where bicycles are detected or common, raise the minimum green", {g.id});
}

}  // namespace

void check_greens(const SignalView& view, Findings& findings) {
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    const auto& spans = view.greens[i];
    if (std::all_of(spans.begin(), spans.end(), [](const Span& s) { return s.length == 0; }))
      findings.add("group-never-green", walks(g) ? Severity::warning : Severity::violation, fmt::format("group {} is never green", g.id), "Give it a green, or remove it", {g.id});
    check_apart(view, i, findings);
    check_room(view, i, findings);
  }
}

void check_minimums(const SignalView& view, Findings& findings) {
  const double least = least_minimum(view);
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    if (walks(g)) continue;
    for (const Span& span : view.greens[i])
      if (span.length < to_tenths_up(g.minimum_green_s))
        findings.violation("minimum-green", fmt::format("group {}: green {} s, its minimum is {} s (splitOverrun)", g.id, seconds_of(span.length), number_text(g.minimum_green_s)), "Lengthen the green", {g.id});
    check_minimum_itself(view, i, least, findings);
  }
}

}  // namespace entrain::review
