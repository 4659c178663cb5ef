#include "review/waits.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"

namespace entrain::review {
namespace {

bool is_coordinated(const plan::Signal& signal, const std::string& group) {
  const auto& list = signal.controller.coordinated;
  return std::find(list.begin(), list.end(), group) != list.end();
}

void compare(const char* what, double claimed_s, const Wait& found, Findings& findings) {
  if (!(std::fabs(claimed_s - found.tenths / 10.0) <= 0.2))
    findings.violation("wait-claim", fmt::format("claims that {} wait at most {} s; it is {} s at {} group {}", what, number_text(claimed_s), seconds_of(found.tenths), found.signal, found.group), "Recompute the plan's measures");
}

}  // namespace

void Waits::look_at(const SignalView& view) {
  if (!view.is_usable) return;
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    Wait& longest = g.kind == plan::GroupKind::pedestrian ? people : side_street;
    if (&longest == &side_street && is_coordinated(view.signal, g.id)) continue;
    if (const int red = longest_red_of(view, i); red > longest.tenths) longest = {red, view.signal.id, g.id};
  }
}

void Waits::report(const plan::Plan& plan, std::vector<Finding>& list) const {
  Findings findings(list, "");
  if (people.tenths > 0) findings.add("longest-pedestrian-wait", Severity::note, fmt::format("people wait longest at {}: {} s from the end of walk to the next, group {}", printable(people.signal), seconds_of(people.tenths), printable(people.group)));
  if (side_street.tenths > 0) findings.add("longest-side-street-wait", Severity::note, fmt::format("a side street waits longest at {}: {} s of red, group {}", printable(side_street.signal), seconds_of(side_street.tenths), printable(side_street.group)));
  if (!plan.measures) return;
  compare("people", plan.measures->longest_pedestrian_wait_s, people, findings);
  compare("side streets", plan.measures->longest_side_street_wait_s, side_street, findings);
}

}  // namespace entrain::review
