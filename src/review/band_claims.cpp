#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/bands.hpp"

namespace entrain::review {
namespace {

constexpr const char* recompute = "Recompute the claim (review --recompute)";

// Whether a band of that width from that instant on lies within what is open, up to the tolerance.
bool fits(const OpenSet& open, double start_s, double width_s, double cycle_s) {
  const Micros cycle = to_micros(cycle_s), slack = to_micros(tolerance_s);
  const Micros width = to_micros(width_s);
  if (width <= 2 * slack) return true;
  const Open at = stretch_at(open, to_micros(start_s) + slack, cycle);
  return at.to > at.from && (at.to - at.from >= cycle || to_micros(start_s) + width - slack <= at.to);
}

void check_width(const plan::Direction& direction, const BandCheck& check, const std::string& where, Findings& findings) {
  if (!(std::fabs(check.claimed_s - check.found_s) <= tolerance_s))
    findings.violation("bandwidth-claim", fmt::format("{}: claims a band of {} s, the greens give {} s", where, number_text(check.claimed_s, 2), number_text(check.found_s, 2)), recompute);
  if (!direction.bandwidth_bound_s) return;
  if (!(*direction.bandwidth_bound_s >= std::max(check.found_s, check.claimed_s) - tolerance_s))
    findings.violation("bound-below-band", fmt::format("{}: claims that no band is wider than {} s, but this plan's is {} s", where, number_text(*direction.bandwidth_bound_s, 2), number_text(check.found_s, 2)), "The bound is no bound");
}

}  // namespace

void check_band_claims(const plan::Plan& plan, const plan::Direction& direction, const OpenSet& open, const BandCheck& check, Findings& findings) {
  const std::string where = fmt::format("corridor {} {}", printable(check.corridor), printable(check.direction));
  check_width(direction, check, where, findings);
  const double start = direction.band_start_s, width = std::min(check.claimed_s, check.found_s);
  if (!(start >= 0) || !(start < plan.cycle_s + 1e-6))
    findings.violation("band-start-claim", fmt::format("{}: the band is said to start at {} s of a cycle of {} s", where, number_text(start), number_text(plan.cycle_s)), recompute);
  else if (std::isfinite(width) && !fits(open, start, width, plan.cycle_s))
    findings.violation("band-start-claim", fmt::format("{}: a band of {} s does not fit from {} s on; the widest starts at {} s", where, number_text(width, 2), number_text(start, 2), number_text(check.start_s, 2)), recompute);
  if (!(std::fabs(direction.efficiency - check.efficiency) <= 0.002))
    findings.violation("efficiency-claim", fmt::format("{}: claims an efficiency of {}, {} s of {} s are {}", where, number_text(direction.efficiency), number_text(check.found_s, 2), number_text(plan.cycle_s), number_text(check.efficiency)), recompute);
  if (!(std::fabs(direction.attainability - check.attainability) <= 0.004))
    findings.violation("attainability-claim", fmt::format("{}: claims an attainability of {}, {} s of the shortest green of {} s are {}", where, number_text(direction.attainability), number_text(check.found_s, 2), number_text(check.shortest_green_s, 2),
                                                          number_text(check.attainability)), recompute);
}

void check_freedom_claims(const plan::Plan& plan, const Bands& bands, std::vector<Finding>& list) {
  for (const plan::Signal& s : plan.signals) {
    if (!s.freedom_early_s && !s.freedom_late_s) continue;
    const auto found = bands.freedom.find(s.id);
    const double cycle_s = std::isfinite(s.cycle_s) ? s.cycle_s : 0;
    const Freedom freedom = found == bands.freedom.end() ? Freedom{cycle_s, cycle_s} : found->second;
    const double early = s.freedom_early_s.value_or(0), late = s.freedom_late_s.value_or(0);
    if (early >= 0 && late >= 0 && early <= freedom.early_s + tolerance_s && late <= freedom.late_s + tolerance_s) continue;
    Findings(list, s.id).violation("freedom-claim", fmt::format("claims that its offset may move {} s earlier and {} s later with every band as it is; the greens allow {} s and {} s", number_text(early, 2), number_text(late, 2),
                                                                number_text(freedom.early_s, 2), number_text(freedom.late_s, 2)), recompute);
  }
}

}  // namespace entrain::review
