#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <set>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

// Flow over capacity of a group by its own figures; negative where they are not given.
double saturation_of(const SignalView& view, std::size_t i) {
  const plan::Group& g = view.signal.groups[i];
  if (!g.flow_vph || !g.saturation_flow_vph || !(*g.saturation_flow_vph > 0)) return -1;
  double effective = 0;
  for (const Span& span : view.greens[i])
    effective += span.length == view.cycle ? view.cycle / 10.0 : std::max(0.0, span.length / 10.0 - g.start_up_lost_s.value_or(0) + g.end_gain_s.value_or(0));
  const double capacity = *g.saturation_flow_vph * std::min(1.0, effective * 10 / view.cycle);
  return capacity > 0 ? *g.flow_vph / capacity : (*g.flow_vph > 0 ? INFINITY : 0);
}

bool is_declared(const plan::Signal& signal, const plan::Group& g) {
  for (const plan::LaneGroup& lanes : signal.lane_groups)
    for (const plan::Oversaturation& over : signal.oversaturated)
      if (over.lane_group == lanes.id)
        for (const plan::Served& s : g.serves)
          if (std::find(lanes.movements.begin(), lanes.movements.end(), s.movement) != lanes.movements.end()) return true;
  return false;
}

}  // namespace

void check_saturation(const SignalView& view, Findings& findings) {
  if (view.cycle == 0) return;
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    const double found = saturation_of(view, i);
    if (found < 0) continue;
    if (g.degree_of_saturation && std::isfinite(found) && std::fabs(*g.degree_of_saturation - found) > 0.006 + 0.002 * found)
      findings.violation("degree-of-saturation-claim", fmt::format("group {}: claims a degree of saturation of {}, its own flow and green give {}", g.id, number_text(*g.degree_of_saturation), number_text(found)), "Recompute the claim (review --recompute)");
    if (found > 1.0 + 1e-6) {
      findings.add("oversaturated", Severity::warning, fmt::format("group {}: OVERSATURATED, degree of saturation {}: the queue grows all period", g.id, number_text(found, 2)));
      if (!is_declared(view.signal, g)) findings.violation("oversaturation-not-declared", fmt::format("group {}: degree of saturation {} without a word in the plan", g.id, number_text(found, 2)), "List it under oversaturated");
    }
  }
}

void check_service(const SignalView& view, Findings& findings) {
  std::set<std::string> served, crossed;
  for (const plan::Group& g : view.signal.groups) {
    for (const plan::Served& s : g.serves) served.insert(s.movement);
    crossed.insert(g.crossings.begin(), g.crossings.end());
  }
  for (const plan::Movement& m : view.signal.movements)
    if (served.count(m.id) == 0) findings.add("movement-not-served", Severity::warning, fmt::format("movement {} is served by no group", m.id), "Serve it, or say that it is not under signal control");
  for (const plan::Crossing& c : view.signal.crossings)
    if (crossed.count(c.id) == 0) findings.add("crossing-not-served", Severity::warning, fmt::format("crossing {} is served by no pedestrian group", c.id), "Serve it, or close the crossing");
  if (view.signal.operation == plan::Operation::coordinated_actuated)
    findings.add("early-return", Severity::note, "coordinated-actuated: the coordinated green may start early when side phases end early, and release its platoon ahead of the band; check the begin-of-yellow offset and force-off points");
  for (const plan::Group& g : view.signal.groups)
    if (g.kind == plan::GroupKind::pedestrian && g.service == plan::Service::on_call)
      findings.add("pedestrian-on-call", Severity::note, fmt::format("group {} is served on call: a call may overrun the split (splitOverrun) and drop coordination for a cycle", g.id));
}

}  // namespace entrain::review
