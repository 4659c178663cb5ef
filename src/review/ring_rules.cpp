#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

struct RingStep {
  std::size_t group;
  int start, split;  // tenths
};

// The phases of a ring in the listed order; nothing where one is missing or has several greens.
std::vector<RingStep> steps_of(const SignalView& view, const std::vector<std::string>& ring, Findings& findings) {
  std::vector<RingStep> steps;
  for (const std::string& id : ring) {
    const auto found = view.group.find(id);
    if (found == view.group.end()) return {};
    const auto& spans = view.greens[found->second];
    const plan::Group& g = view.signal.groups[found->second];
    if (spans.size() != 1) {
      findings.add("ring-not-checked", Severity::note, fmt::format("group {} has {} greens: its ring was not followed", id, spans.size()));
      return {};
    }
    steps.push_back({found->second, spans[0].start, g.split_s ? to_tenths(*g.split_s) : spans[0].length + view.after_green(found->second)});
  }
  return steps;
}

// A ring that ends no phase at some barrier rests there: it has nothing to serve on that side.
bool rests(const plan::RingBarrier& rings, const std::vector<std::string>& ring) {
  return std::any_of(rings.barriers_after.begin(), rings.barriers_after.end(), [&](const std::vector<std::string>& barrier) {
    return std::none_of(barrier.begin(), barrier.end(), [&](const std::string& id) { return std::find(ring.begin(), ring.end(), id) != ring.end(); });
  });
}

void follow_ring(const SignalView& view, const std::vector<RingStep>& steps, std::size_t number, bool may_rest, Findings& findings) {
  int total = 0;
  for (std::size_t k = 0; k < steps.size(); ++k) {
    total += steps[k].split;
    const RingStep& next = steps[(k + 1) % steps.size()];
    const int due = modulo(steps[k].start + steps[k].split, view.cycle);
    if (steps.size() > 1 && !may_rest && modulo(next.start - due, view.cycle) != 0 && (k + 1 < steps.size() || total == view.cycle))
      findings.violation("ring-sequence", fmt::format("ring {}: group {} ends its split at {} s, group {} starts at {} s", number + 1, view.signal.groups[steps[k].group].id, number_text(due / 10.0),
                                                      view.signal.groups[next.group].id, number_text(next.start / 10.0)), "A phase starts where its predecessor's yellow and red clearance end");
    if (steps[k].start % 10 != 0) findings.violation("phase-start-not-whole", fmt::format("group {} starts at {} s", view.signal.groups[steps[k].group].id, number_text(steps[k].start / 10.0)), "Phases of a ring start on whole seconds");
  }
  if (may_rest ? total > view.cycle : total != view.cycle)
    findings.violation("ring-not-closed", fmt::format("the splits of ring {} add up to {} s in a cycle of {} s", number + 1, number_text(total / 10.0), number_text(view.cycle / 10.0)), "The splits of each ring add up to the cycle");
}

void check_barriers(const SignalView& view, Findings& findings) {
  const plan::RingBarrier& rings = *view.signal.controller.ring_barrier;
  for (const auto& barrier : rings.barriers_after) {
    int at = -1;
    for (const std::string& id : barrier) {
      const auto found = view.group.find(id);
      if (found == view.group.end() || view.greens[found->second].size() != 1) continue;
      const plan::Group& g = view.signal.groups[found->second];
      const Span& span = view.greens[found->second][0];
      const int end = modulo(span.start + (g.split_s ? to_tenths(*g.split_s) : span.length + view.after_green(found->second)), view.cycle);
      if (at >= 0 && end != at)
        findings.violation("barrier-not-met", fmt::format("group {} reaches its barrier at {} s, another ring at {} s", id, number_text(end / 10.0), number_text(at / 10.0)), "Rings meet at the barriers");
      at = end;
    }
  }
}

}  // namespace

void check_splits(const SignalView& view, Findings& findings) {
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    if (g.kind == plan::GroupKind::pedestrian || !g.split_s) continue;
    if (!std::isfinite(*g.split_s) || *g.split_s < 0 || *g.split_s > longest_cycle_s) {
      findings.violation("number-out-of-range", fmt::format("group {}: split {} s", g.id, number_text(*g.split_s)), "Give seconds from 0 to 3600");
      continue;
    }
    if (*g.split_s != std::floor(*g.split_s)) findings.violation("split-not-whole", fmt::format("group {}: split {} s", g.id, number_text(*g.split_s)), "Controllers take whole seconds");
    for (const Span& span : view.greens[i]) {
      if (span.length == view.cycle) continue;
      if (to_tenths(*g.split_s) != span.length + view.after_green(i))
        findings.violation("split-not-sum", fmt::format("group {}: split {} s, but green {} s + yellow {} s + red clearance {} s", g.id, number_text(*g.split_s), number_text(span.length / 10.0), number_text(g.yellow_s),
                                                        number_text(g.red_clearance_s)), "Split = green + yellow + red clearance");
    }
  }
}

void check_rings(const SignalView& view, Findings& findings) {
  if (!view.signal.controller.ring_barrier || view.greens.empty()) return;
  const auto& rings = view.signal.controller.ring_barrier->rings;
  for (std::size_t r = 0; r < rings.size(); ++r) {
    const auto steps = steps_of(view, rings[r], findings);
    if (!steps.empty()) follow_ring(view, steps, r, rests(*view.signal.controller.ring_barrier, rings[r]), findings);
  }
  check_barriers(view, findings);
}

}  // namespace entrain::review
