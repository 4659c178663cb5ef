#include <fmt/format.h>

#include <cmath>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {

void check_cycle(const SignalView& view, Findings& findings) {
  if (view.cycle == 0) return;
  const double cycle = view.signal.cycle_s, common = view.plan.cycle_s;
  if (cycle != std::floor(cycle)) findings.violation("cycle-not-whole", fmt::format("the cycle is {} s", number_text(cycle, 4)), "Controllers take whole seconds");
  if (view.signal.operation == plan::Operation::free) return;
  const bool half = std::fabs(2 * cycle - common) < 1e-6;
  if (std::fabs(cycle - common) > 1e-6 && !half)
    findings.violation("cycle-not-common", fmt::format("the cycle is {} s, the plan's {} s: neither the same nor exactly half", number_text(cycle), number_text(common)),
                       "Use the plan's cycle or its exact half, or let the signal run free");
  if (cycle > 255) findings.add("cycle-beyond-controller", Severity::warning, fmt::format("a cycle of {} s: controllers of NTCIP 1202 take at most 255 s (badCycleTime)", number_text(cycle)));
}

void check_offset(const SignalView& view, Findings& findings) {
  if (view.cycle == 0) return;
  const double offset = view.signal.offset_s;
  if (!std::isfinite(offset) || offset < 0 || offset >= view.signal.cycle_s)
    findings.violation("offset-out-of-range", fmt::format("the offset is {} s in a cycle of {} s (invalidOffset)", number_text(offset), number_text(view.signal.cycle_s)), "0 <= offset < the signal's own cycle");
  else if (std::fabs(offset - std::round(offset)) > 1e-6)
    findings.violation("offset-not-whole", fmt::format("the offset is {} s", number_text(offset, 4)), "Controllers take whole seconds");
  const auto reference = view.group.find(view.signal.reference_group);
  if (reference == view.group.end()) return;
  const auto& greens = view.signal.groups[reference->second].greens;
  if (greens.empty() || std::fabs(greens.front().start_s) > 1e-6)
    findings.violation("reference-not-at-zero", fmt::format("local zero is not the start of the first listed green of the reference group {}", view.signal.reference_group),
                       "Rotate the local times so that it is, or offsets mean another instant than they say");
}

}  // namespace entrain::review
