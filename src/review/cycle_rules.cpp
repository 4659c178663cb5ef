#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {

void check_cycle(const SignalView& view, Findings& findings) {
  if (view.cycle == 0) return;
  const double cycle = view.signal.cycle_s, common = view.plan.cycle_s;
  if (!is_whole(cycle)) findings.violation("cycle-not-whole", fmt::format("the cycle is {} s", number_text(cycle, 4)), "Controllers take whole seconds; a half cycle needs an even one");
  if (cycle > 255) findings.add("cycle-beyond-controller", Severity::warning, fmt::format("a cycle of {} s: controllers of NTCIP 1202 take at most 255 s (badCycleTime)", number_text(cycle)));
  if (cycle < 30) findings.add("cycle-very-short", Severity::warning, fmt::format("a cycle of {} s is shorter than any in common practice (30 s)", number_text(cycle)));
  if (view.signal.operation == plan::Operation::free) return;
  const bool half = std::fabs(2 * cycle - common) < 1e-6;
  if (std::fabs(cycle - common) > 1e-6 && !half)
    findings.violation("cycle-not-common", fmt::format("the cycle is {} s, the plan's {} s: neither the same nor exactly half", number_text(cycle), number_text(common)), "Use the plan's cycle or its exact half, or let the signal run free");
}

void check_offset(const SignalView& view, Findings& findings) {
  if (view.cycle == 0) return;
  const double offset = view.signal.offset_s;
  if (!std::isfinite(offset) || offset < 0 || offset >= view.signal.cycle_s)
    findings.violation("offset-out-of-range", fmt::format("the offset is {} s in a cycle of {} s (invalidOffset)", number_text(offset), number_text(view.signal.cycle_s)), "0 <= offset < the signal's own cycle");
  else if (!is_whole(offset)) findings.violation("offset-not-whole", fmt::format("the offset is {} s", number_text(offset, 4)), "Controllers take whole seconds");
  const auto reference = view.group.find(view.signal.reference_group);
  if (reference == view.group.end()) return;
  const auto& greens = view.signal.groups[reference->second].greens;
  if (greens.empty() || !(std::fabs(greens.front().start_s) <= 1e-6))
    findings.violation("reference-not-at-zero", fmt::format("local zero is not the start of the first listed green of the reference group {}", view.signal.reference_group),
                       "Rotate the local times so that it is, or offsets mean another instant than they say", {view.signal.reference_group});
  const auto& coordinated = view.signal.controller.coordinated;
  if (!coordinated.empty() && std::find(coordinated.begin(), coordinated.end(), view.signal.reference_group) == coordinated.end())
    findings.add("reference-not-coordinated", Severity::note, fmt::format("the offset refers to group {}, which is not among the coordinated groups", view.signal.reference_group));
}

void check_clock(const SignalView& view, Findings& findings) {
  const std::string& clock = view.signal.clock;
  if (view.signal.operation == plan::Operation::free) return;
  if (clock == "manual") findings.add("clock-drifts", Severity::warning, "the clock is set by hand: a crystal of 35 ppm drifts 3 s a day, and the offset with it", "Give it a common clock, or check it often");
  else if (clock != "gps" && clock != "network" && clock != "line")
    findings.violation("clock-unknown", fmt::format("the clock is {}", printable(clock)), "gps, network, line or manual");
}

}  // namespace entrain::review
