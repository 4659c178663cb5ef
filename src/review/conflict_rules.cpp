#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <set>

#include "base/number_text.hpp"
#include "review/paths.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

// Why two groups conflict: the pair of movements or crossings, for people. Empty: they do not.
std::string reason_of_conflict(const SignalView& view, const PathTable& paths, const plan::Group& a, const plan::Group& b, Findings* yields) {
  for (const PathUse& x : uses_of(view, a))
    for (const PathUse& y : uses_of(view, b)) {
      if (!paths.meet(x, y)) continue;
      const Yield first = paths.yield_of(x, y), second = paths.yield_of(y, x);
      if (first == Yield::allowed || second == Yield::allowed) continue;
      if (yields != nullptr && (first == Yield::not_allowed || second == Yield::not_allowed))
        yields->add("yield-not-allowed", Severity::warning, fmt::format("groups {} and {}: {} may not yield to {} by the plan's standard, so they count as conflicting", a.id, b.id, x.id, y.id));
      return fmt::format("{} and {}", x.id, y.id);
    }
  return {};
}

const plan::Conflict* listed(const plan::Signal& signal, const std::string& a, const std::string& b, bool& swapped) {
  for (const plan::Conflict& c : signal.conflicts) {
    swapped = c.a == b && c.b == a;
    if (swapped || (c.a == a && c.b == b)) return &c;
  }
  return nullptr;
}

// What the lamps of a group show must be over before the other may start.
int least_intergreen(const SignalView& view, const plan::Group& ending) {
  if (ending.kind == plan::GroupKind::pedestrian) return to_tenths(view.standard("pedestrian_buffer_s", 3));
  return to_tenths(ending.yellow_s) + to_tenths(ending.red_clearance_s);
}

// Tenths from a's start to the end of what counts as occupied: green, or walk and clearance.
int occupied(const SignalView& view, std::size_t group, const Span& span) {
  return span.length + (view.signal.groups[group].kind == plan::GroupKind::pedestrian ? view.after_green(group) : 0);
}

void check_pair_in_time(const SignalView& view, std::size_t a, std::size_t b, int intergreen_ab, int intergreen_ba, const std::string& why, Findings& findings) {
  const auto name = [&](std::size_t g) { return view.signal.groups[g].id; };
  for (const Span& x : view.greens[a])
    for (const Span& y : view.greens[b]) {
      if (x.length == 0 || y.length == 0) continue;
      const int gap_ab = modulo(y.start - x.start, view.cycle), gap_ba = modulo(x.start - y.start, view.cycle);
      const bool apart = gap_ab > 0 && occupied(view, a, x) + intergreen_ab <= gap_ab && occupied(view, b, y) + intergreen_ba <= gap_ba;
      if (apart) continue;
      findings.violation("intergreen-violated",
                         fmt::format("groups {} and {} conflict ({}): {} ends at {} s, {} starts at {} s; {} ends at {} s, {} starts at {} s; intergreens {} s and {} s do not fit", name(a), name(b), why, name(a),
                                     number_text(modulo(x.start + occupied(view, a, x), view.cycle) / 10.0), name(b), number_text(y.start / 10.0), name(b),
                                     number_text(modulo(y.start + occupied(view, b, y), view.cycle) / 10.0), name(a), number_text(x.start / 10.0), number_text(intergreen_ab / 10.0), number_text(intergreen_ba / 10.0)),
                         "Separate the two greens by their intergreens, both ways round the cycle");
      return;
    }
}

// The lamps themselves, tenth by tenth: the two groups may never both show something else than red.
void look_at_lamps(const SignalView& view, std::size_t a, std::size_t b, Findings& findings) {
  const auto lit = [&](std::size_t g) {
    std::vector<char> row(static_cast<std::size_t>(view.cycle), 0);
    for (const Span& span : view.greens[g]) {
      const int length = span.length == 0 ? 0 : std::min(view.cycle, span.length + view.after_green(g));
      for (int k = 0; k < length; ++k) row[static_cast<std::size_t>(modulo(span.start + k, view.cycle))] = 1;
    }
    return row;
  };
  const auto first = lit(a), second = lit(b);
  int both = 0, from = -1;
  for (int k = 0; k < view.cycle; ++k)
    if (first[static_cast<std::size_t>(k)] && second[static_cast<std::size_t>(k)]) {
      if (from < 0) from = k;
      ++both;
    }
  if (both > 0)
    findings.violation("conflicting-lamps", fmt::format("groups {} and {} conflict and both show something else than red for {} s, first at {} s", view.signal.groups[a].id, view.signal.groups[b].id, number_text(both / 10.0),
                                                        number_text(from / 10.0)), "No two conflicting groups may be lit at once, clearances included");
}

struct PairCheck {
  const SignalView& view;
  Findings& findings;

  void run(std::size_t a, std::size_t b, const std::string& derived, bool has_geometry) {
    const plan::Group &x = view.signal.groups[a], &y = view.signal.groups[b];
    bool swapped = false;
    const plan::Conflict* entry = listed(view.signal, x.id, y.id, swapped);
    if (derived.empty() && entry == nullptr) return;
    const std::string why = derived.empty() ? "listed" : derived;
    if (entry == nullptr && has_geometry)
      findings.violation("conflict-not-listed", fmt::format("groups {} and {} conflict ({}), but are not in the plan's list of conflicts", x.id, y.id, derived), "Add the pair with its intergreens");
    int ab = least_intergreen(view, x), ba = least_intergreen(view, y);
    if (entry != nullptr) {
      check_listed(x, y, swapped ? entry->intergreen_ba_s : entry->intergreen_ab_s, ab);
      check_listed(y, x, swapped ? entry->intergreen_ab_s : entry->intergreen_ba_s, ba);
      ab = std::max(ab, to_tenths(swapped ? entry->intergreen_ba_s : entry->intergreen_ab_s));
      ba = std::max(ba, to_tenths(swapped ? entry->intergreen_ab_s : entry->intergreen_ba_s));
    }
    if (view.cycle == 0) return;
    check_pair_in_time(view, a, b, ab, ba, why, findings);
    look_at_lamps(view, a, b, findings);
  }

  void check_listed(const plan::Group& ending, const plan::Group& starting, double intergreen_s, int least) {
    if (!std::isfinite(intergreen_s) || intergreen_s < 0 || intergreen_s > 60)
      return findings.violation("number-out-of-range", fmt::format("intergreen from {} to {}: {} s", ending.id, starting.id, number_text(intergreen_s)), "Give seconds from 0 to 60");
    if (to_tenths(intergreen_s) < least)
      findings.violation("intergreen-too-short", fmt::format("intergreen from {} to {}: {} s, {} needs {} s", ending.id, starting.id, number_text(intergreen_s),
                                                             ending.kind == plan::GroupKind::pedestrian ? "the pedestrian buffer" : "its yellow and red clearance", number_text(least / 10.0)), "Lengthen the intergreen");
  }
};

}  // namespace

int count_conflicts(const SignalView& view) {
  if (!view.has_geometry) return static_cast<int>(view.signal.conflicts.size());
  const PathTable paths(view);
  int count = 0;
  for (std::size_t a = 0; a < view.signal.groups.size(); ++a)
    for (std::size_t b = a + 1; b < view.signal.groups.size(); ++b) {
      bool swapped = false;
      count += !reason_of_conflict(view, paths, view.signal.groups[a], view.signal.groups[b], nullptr).empty() || listed(view.signal, view.signal.groups[a].id, view.signal.groups[b].id, swapped) != nullptr;
    }
  return count;
}

void check_conflicts(const SignalView& view, Findings& findings) {
  const PathTable paths(view);
  for (std::size_t a = 0; a < view.signal.groups.size(); ++a)
    for (std::size_t b = a + 1; b < view.signal.groups.size(); ++b) {
      const std::string derived = view.has_geometry ? reason_of_conflict(view, paths, view.signal.groups[a], view.signal.groups[b], &findings) : std::string();
      PairCheck{view, findings}.run(a, b, derived, view.has_geometry);
    }
}

void check_trap(const SignalView& view, Findings& findings) {
  if (view.cycle == 0 || !view.has_geometry) return;
  const PathTable paths(view);
  const auto green_at = [&](std::size_t g, int t) {
    return std::any_of(view.greens[g].begin(), view.greens[g].end(), [&](const Span& s) { return modulo(t - s.start, view.cycle) < s.length; });
  };
  std::set<std::string> said;
  for (std::size_t a = 0; a < view.signal.groups.size(); ++a)
    for (const plan::Served& turn : view.signal.groups[a].serves) {
      if (turn.right_of_way != plan::RightOfWay::permissive || turn.flashing_yellow_arrow) continue;
      const PathUse x{turn.movement, false, true};
      for (const Span& green : view.greens[a]) {
        if (green.length == 0 || green.length == view.cycle) continue;
        const int end = modulo(green.start + green.length, view.cycle);
        for (std::size_t b = 0; b < view.signal.groups.size(); ++b)
          for (const plan::Served& through : view.signal.groups[b].serves) {
            const bool opposed = paths.is_opposed_turn(x, {through.movement, false, false}) && paths.is_through(through.movement);
            if (b == a || !opposed || !green_at(b, end)) continue;
            bool arrow = false;  // the turn's own arrow, without a gap
            for (std::size_t k = 0; k < view.signal.groups.size(); ++k)
              for (const plan::Served& own : view.signal.groups[k].serves)
                arrow = arrow || (k != a && own.movement == turn.movement && own.right_of_way == plan::RightOfWay::with_protection && green_at(k, end));
            // The same turn may go on yielding under another group's circular green.
            bool goes_on = false;
            for (std::size_t k = 0; k < view.signal.groups.size(); ++k)
              for (const plan::Served& own : view.signal.groups[k].serves) goes_on = goes_on || (k != a && own.movement == turn.movement && own.right_of_way == plan::RightOfWay::permissive && green_at(k, end));
            if (arrow || goes_on || !said.insert(turn.movement + "<" + through.movement).second) continue;
            findings.violation("opposed-turn-trap", fmt::format("{} yields to {} under group {}, whose green ends at {} s while group {} stays green", turn.movement, through.movement, view.signal.groups[a].id,
                                                                number_text(end / 10.0), view.signal.groups[b].id),
                               "End both greens together, let the turn's own arrow follow without a gap, protect the turn, or display a flashing yellow arrow");
          }
      }
    }
}

}  // namespace entrain::review
