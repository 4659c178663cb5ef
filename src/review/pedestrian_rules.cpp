#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

double longest_crossing_m(const SignalView& view, const plan::Group& g) {
  double longest = 0;
  for (const std::string& id : g.crossings)
    if (const auto found = view.crossing.find(id); found != view.crossing.end()) longest = std::max(longest, view.signal.crossings[found->second].length_m);
  return longest;
}

void check_walk(const SignalView& view, const plan::Group& g, int walk, Findings& findings) {
  const double walk_s = walk / 10.0, least = view.standard("walk_min_s", 7), limit = view.standard("walk_limit_s", 4);
  if (walk < to_tenths_up(g.minimum_green_s)) findings.violation("walk-below-minimum", fmt::format("group {}: walk {} s, its least is {} s", g.id, number_text(walk_s), number_text(g.minimum_green_s)), "Lengthen the walk", {g.id});
  if (walk_s < limit - 1e-6)
    findings.violation("walk-below-standard", fmt::format("group {}: walk {} s; below {} s it is too short whoever signs", g.id, number_text(walk_s), number_text(limit)), "Lengthen the walk", {g.id});
  else if (walk_s < least - 1e-6 && !is_taken_on(g, "walk"))
    findings.violation("walk-below-standard", fmt::format("group {}: walk {} s, the standard asks for {} s", g.id, number_text(walk_s), number_text(least)), "Lengthen the walk, or state who takes the shorter value on and why", {g.id});
  if (walk % 10 != 0 && walk < view.cycle) findings.violation("walk-not-whole", fmt::format("group {}: walk {} s", g.id, number_text(walk_s)), "Controllers take whole seconds", {g.id});
}

void check_clearance(const SignalView& view, const plan::Group& g, double length_m, Findings& findings) {
  if (!is_whole(g.clearance_s)) findings.violation("pedestrian-clearance-not-whole", fmt::format("group {}: pedestrian clearance {} s", g.id, number_text(g.clearance_s)), "Controllers take whole seconds", {g.id});
  const double speed = view.standard("walking_speed_mps", 1.0668);
  if (!(length_m > 0) || !(speed > 0.1)) {
    if (g.clearance_s < 1) findings.violation("pedestrian-clearance-too-short", fmt::format("group {}: pedestrian clearance {} s", g.id, number_text(g.clearance_s)), "State crossing and clearance", {g.id});
    else findings.add("crossing-length-missing", Severity::note, fmt::format("group {}: no length of its crossings; pedestrian clearance {} s could not be recomputed", g.id, number_text(g.clearance_s)), {}, {g.id});
    return;
  }
  const double needed = least_rounded(view, "pedestrian_clearance_s", length_m / speed, 1, true);
  if (g.clearance_s < needed - 1e-6 && !is_taken_on(g, "pedestrian_clearance"))
    findings.violation("pedestrian-clearance-too-short", fmt::format("group {}: pedestrian clearance {} s; {} m at {} m/s take {} s", g.id, number_text(g.clearance_s), number_text(length_m, 1), number_text(speed, 2),
                                                                     number_text(length_m / speed, 1)), "Lengthen the pedestrian clearance", {g.id});
}

// Walk and clearance together at the slower speed, from the push button or behind the kerb.
void check_total(const SignalView& view, const plan::Group& g, int shortest_walk, double length_m, Findings& findings) {
  const double speed = view.standard("walking_speed_total_mps", 0), back = view.standard("curb_setback_m", 0);
  if (!(speed > 0.1) || !(length_m > 0)) return;
  const double total = shortest_walk / 10.0 + g.clearance_s, needed = (length_m + back) / speed;
  if (total < needed - written_s)
    findings.add("pedestrian-total-short", Severity::warning, fmt::format("group {}: walk and clearance {} s; ({} + {}) m at {} m/s take {} s", g.id, number_text(total), number_text(length_m, 1), number_text(back, 1),
                                                                          number_text(speed, 2), number_text(needed, 1)), "Lengthen the walk unless the push button is nearer", {g.id});
}

void check_times(const SignalView& view, std::size_t i, Findings& findings) {
  const plan::Group& g = view.signal.groups[i];
  if (view.is_always_green(i)) return;
  const double length_m = longest_crossing_m(view, g);
  int shortest = view.cycle;
  for (const Span& span : view.greens[i]) {
    check_walk(view, g, span.length, findings);
    shortest = std::min(shortest, span.length);
  }
  check_clearance(view, g, length_m, findings);
  if (!view.greens[i].empty()) check_total(view, g, shortest, length_m, findings);
}

// The walk must begin in the parent's green; walk and clearance must end with it.
void check_in_parent(const SignalView& view, std::size_t i, std::size_t parent, const Span& walk, Findings& findings) {
  const plan::Group &g = view.signal.groups[i], &p = view.signal.groups[parent];
  const int needs = walk.length + view.after_green(i);
  int best = -1;  // seconds of the parent's green left at the start of walk
  for (const Span& green : view.greens[parent])
    if (const int into = modulo(walk.start - green.start, view.cycle); into < green.length) best = std::max(best, green.length == view.cycle ? view.cycle : green.length - into);
  if (best >= needs) return;
  if (best < 0)
    return findings.violation("pedestrian-outside-parent", fmt::format("group {}: walk starts at {} s, when its parent {} is not green", g.id, seconds_of(walk.start), p.id), "Start the walk within the parent's green", {g.id, p.id});
  const int over = needs - best;
  if (g.service == plan::Service::on_call)
    return findings.add("pedestrian-on-call", Severity::note, fmt::format("group {}: a call needs {} s of {}'s green where {} s are left: it overruns the split by {} s (splitOverrun) and drops coordination for that cycle", g.id,
                                                                          seconds_of(needs), p.id, seconds_of(best), seconds_of(over)), {}, {g.id, p.id});
  findings.violation("pedestrian-outside-parent", fmt::format("group {}: walk and clearance need {} s, {} s of {}'s green are left: {} s too few", g.id, seconds_of(needs), seconds_of(best), p.id, seconds_of(over)),
                     "Lengthen the parent's split, or serve people on call", {g.id, p.id});
}

}  // namespace

void check_pedestrian_times(const SignalView& view, Findings& findings) {
  for (const plan::Crossing& c : view.signal.crossings)
    if (!(c.length_m > 0) || !(c.length_m <= 200)) findings.violation("number-out-of-range", fmt::format("crossing {}: length {} m", printable(c.id), number_text(c.length_m)), "Give metres from kerb to kerb, up to 200");
  for (std::size_t i = 0; i < view.greens.size(); ++i)
    if (view.signal.groups[i].kind == plan::GroupKind::pedestrian) check_times(view, i, findings);
}

void check_parents(const SignalView& view, Findings& findings) {
  std::vector<std::string> calling;
  for (std::size_t i = 0; i < view.greens.size(); ++i) {
    const plan::Group& g = view.signal.groups[i];
    if (g.parent) {
      const auto parent = view.group.find(*g.parent);
      if (parent == view.group.end()) continue;
      if (parent->second == i || walks(view.signal.groups[parent->second])) {
        findings.violation("parent-not-a-vehicle-group", fmt::format("group {} names {} as its parent", g.id, printable(*g.parent)), "Name the vehicle group it runs with", {g.id});
        continue;
      }
      for (const Span& walk : view.greens[i])
        if (walk.length > 0) check_in_parent(view, i, parent->second, walk, findings);
    }
    if (walks(g) && g.service == plan::Service::on_call) calling.push_back(g.id);
  }
  if (!calling.empty() && view.signal.operation == plan::Operation::pretimed)
    findings.add("on-call-at-pretimed", Severity::note, fmt::format("{} groups are served on call at a signal that runs pretimed: they need push buttons", calling.size()), {}, calling);
}

}  // namespace entrain::review
