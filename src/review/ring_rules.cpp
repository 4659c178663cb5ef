#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <set>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

struct RingStep {
  std::size_t group;
  int start, split;  // tenths
};

int split_of(const SignalView& view, std::size_t i, const Span& span) {
  const plan::Group& g = view.signal.groups[i];
  const int shown = span.length + view.after_green(i);
  return g.split_s && std::isfinite(*g.split_s) ? to_tenths(*g.split_s) : shown;
}

// The greens of a group in the order in which they follow `from`, round the cycle.
std::vector<Span> greens_after(const SignalView& view, std::size_t group, int from) {
  std::vector<Span> spans = view.greens[group];
  std::stable_sort(spans.begin(), spans.end(), [&](const Span& a, const Span& b) { return modulo(a.start - from, view.cycle) < modulo(b.start - from, view.cycle); });
  return spans;
}

// The phases of a ring in the listed order, a group that is listed twice with its two greens; nothing where that does not come out.
std::vector<RingStep> steps_of(const SignalView& view, const std::vector<std::string>& ring, std::size_t number, Findings& findings) {
  std::vector<RingStep> steps;
  std::map<std::size_t, std::size_t> listed, used;
  for (const std::string& id : ring) {
    if (view.group.count(id) == 0) return {};
    ++listed[view.group.at(id)];
  }
  for (const auto& [g, times] : listed)
    if (view.greens[g].size() != times) {
      findings.violation("ring-sequence", fmt::format("ring {} lists group {} {} times, which has {} greens", number + 1, view.signal.groups[g].id, times, view.greens[g].size()), "List a group once for each of its greens", {view.signal.groups[g].id});
      return {};
    }
  for (const std::string& id : ring) {
    const std::size_t g = view.group.at(id);
    const Span span = greens_after(view, g, steps.empty() ? view.greens[g][0].start : steps[0].start)[used[g]++];
    steps.push_back({g, span.start, split_of(view, g, span)});
  }
  return steps;
}

// A ring that ends no phase at some barrier rests there: it has nothing to serve on that side.
bool rests(const plan::RingBarrier& rings, const std::vector<std::string>& ring) {
  return std::any_of(rings.barriers_after.begin(), rings.barriers_after.end(), [&](const std::vector<std::string>& barrier) {
    return std::none_of(barrier.begin(), barrier.end(), [&](const std::string& id) { return std::find(ring.begin(), ring.end(), id) != ring.end(); });
  });
}

void check_succession(const SignalView& view, const std::vector<RingStep>& steps, std::size_t number, Findings& findings) {
  for (std::size_t k = 0; k < steps.size(); ++k) {
    const RingStep &step = steps[k], &next = steps[(k + 1) % steps.size()];
    const int due = modulo(step.start + step.split, view.cycle);
    if (steps.size() < 2 || next.start == due) continue;
    const std::string &a = view.signal.groups[step.group].id, &b = view.signal.groups[next.group].id;
    findings.violation("ring-sequence", fmt::format("ring {}: group {} ends its split at {} s, group {} starts at {} s", number + 1, a, seconds_of(due), b, seconds_of(next.start)),
                       "A phase starts where its predecessor's yellow and red clearance end", {a, b});
  }
}

void follow_ring(const SignalView& view, const std::vector<RingStep>& steps, std::size_t number, bool may_rest, Findings& findings) {
  int total = 0;
  for (const RingStep& step : steps) {
    const std::string& id = view.signal.groups[step.group].id;
    total += step.split;
    if (step.start % 10 != 0) findings.violation("phase-start-not-whole", fmt::format("group {} starts at {} s", id, seconds_of(step.start)), "Phases of a ring start on whole seconds", {id});
  }
  if (!may_rest) check_succession(view, steps, number, findings);
  if (may_rest ? total > view.cycle : total != view.cycle)
    findings.violation("ring-not-closed", fmt::format("the splits of ring {} add up to {} s in a cycle of {} s", number + 1, seconds_of(total), seconds_of(view.cycle)), "The splits of each ring add up to the cycle");
}

std::set<int> split_ends(const SignalView& view, std::size_t group) {
  std::set<int> ends;
  for (const Span& span : view.greens[group]) ends.insert(modulo(span.start + split_of(view, group, span), view.cycle));
  return ends;
}

void check_barrier(const SignalView& view, const std::vector<std::string>& barrier, Findings& findings) {
  std::set<int> common;
  bool first = true;
  for (const std::string& id : barrier) {
    const auto found = view.group.find(id);
    if (found == view.group.end() || view.greens[found->second].empty()) return;
    const std::set<int> ends = split_ends(view, found->second);
    std::set<int> both;
    if (first) both = ends;
    else std::set_intersection(common.begin(), common.end(), ends.begin(), ends.end(), std::inserter(both, both.end()));
    if (both.empty())
      return findings.violation("barrier-not-met", fmt::format("group {} reaches its barrier at {} s, another ring at {} s", id, seconds_of(*ends.begin()), common.empty() ? "-" : seconds_of(*common.begin())), "Rings meet at the barriers", barrier);
    common = both;
    first = false;
  }
}

// Each barrier names at most one group a ring, each of them in some ring.
void check_barrier_names(const plan::RingBarrier& rings, Findings& findings) {
  if (rings.rings.size() > 1 && rings.barriers_after.empty())
    findings.violation("controller-malformed", fmt::format("{} rings and no barrier", rings.rings.size()), "Name the last group of each ring before every barrier");
  for (const auto& barrier : rings.barriers_after)
    for (const auto& ring : rings.rings) {
      const auto named = std::count_if(barrier.begin(), barrier.end(), [&](const std::string& id) { return std::find(ring.begin(), ring.end(), id) != ring.end(); });
      if (named > 1) findings.violation("controller-malformed", fmt::format("a barrier names {} groups of one ring", named), "Name the last group of each ring before the barrier", barrier);
    }
  for (const auto& barrier : rings.barriers_after)
    for (const std::string& id : barrier)
      if (std::none_of(rings.rings.begin(), rings.rings.end(), [&](const auto& ring) { return std::find(ring.begin(), ring.end(), id) != ring.end(); }))
        findings.violation("controller-malformed", fmt::format("a barrier names group {}, which is in no ring", printable(id)), "Name the last group of each ring before the barrier", {id});
}

void check_phase_numbers(const SignalView& view, Findings& findings) {
  std::map<int, std::string> seen;
  for (const plan::Group& g : view.signal.groups) {
    if (!g.phase_number || walks(g)) continue;
    if (*g.phase_number < 1 || *g.phase_number > 255) findings.violation("number-out-of-range", fmt::format("group {}: phase number {}", g.id, *g.phase_number), "1 to 255", {g.id});
    const auto [at, is_new] = seen.emplace(*g.phase_number, g.id);
    if (!is_new) findings.violation("duplicate-id", fmt::format("groups {} and {} both have phase number {}", at->second, g.id, *g.phase_number), "Give each its own number", {at->second, g.id});
  }
}

void check_one_split(const SignalView& view, std::size_t i, Findings& findings) {
  const plan::Group& g = view.signal.groups[i];
  if (!std::isfinite(*g.split_s) || *g.split_s < 0 || *g.split_s > longest_cycle_s)
    return findings.violation("number-out-of-range", fmt::format("group {}: split {} s", g.id, number_text(*g.split_s)), "Give seconds from 0 to 3600", {g.id});
  if (!is_whole(*g.split_s)) findings.violation("split-not-whole", fmt::format("group {}: split {} s", g.id, number_text(*g.split_s, 4)), "Controllers take whole seconds", {g.id});
  if (*g.split_s > 255) findings.add("split-beyond-controller", Severity::warning, fmt::format("group {}: a split of {} s: controllers of NTCIP 1202 take at most 255 s", g.id, number_text(*g.split_s)), {}, {g.id});
  const int least = to_tenths_up(g.minimum_green_s) + view.after_green(i);
  if (to_tenths(*g.split_s) < least)
    findings.violation("split-below-minimum", fmt::format("group {}: split {} s, minimum green and clearance need {} s (splitOverrun)", g.id, number_text(*g.split_s), seconds_of(least)), "Lengthen the split", {g.id});
  for (const Span& span : view.greens[i])
    if (span.length < view.cycle && to_tenths(*g.split_s) != span.length + view.after_green(i))
      findings.violation("split-not-sum", fmt::format("group {}: split {} s, but green {} s + yellow {} s + red clearance {} s", g.id, number_text(*g.split_s), seconds_of(span.length), number_text(g.yellow_s), number_text(g.red_clearance_s)),
                         "Split = green + yellow + red clearance", {g.id});
}

}  // namespace

void check_splits(const SignalView& view, Findings& findings) {
  check_phase_numbers(view, findings);
  for (std::size_t i = 0; i < view.greens.size(); ++i)
    if (!walks(view.signal.groups[i]) && view.signal.groups[i].split_s) check_one_split(view, i, findings);
}

void check_rings(const SignalView& view, Findings& findings) {
  const plan::Controller& controller = view.signal.controller;
  if (controller.kind != "ring_barrier" && controller.kind != "signal_group")
    findings.violation("controller-malformed", fmt::format("the controller's kind is {}", printable(controller.kind)), "ring_barrier or signal_group");
  if (controller.kind == "ring_barrier" && !controller.ring_barrier) findings.violation("controller-malformed", "a ring-and-barrier controller without rings", "List rings and barriers");
  if (!controller.ring_barrier || !view.is_usable) return;
  const auto& rings = controller.ring_barrier->rings;
  check_barrier_names(*controller.ring_barrier, findings);
  for (std::size_t r = 0; r < rings.size() && r < most_groups; ++r) {
    if (rings[r].size() > most_groups) continue;
    const auto steps = steps_of(view, rings[r], r, findings);
    if (!steps.empty()) follow_ring(view, steps, r, rests(*controller.ring_barrier, rings[r]), findings);
  }
  for (const auto& barrier : controller.ring_barrier->barriers_after) check_barrier(view, barrier, findings);
}

}  // namespace entrain::review
