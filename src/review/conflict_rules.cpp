#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/paths.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

using ListedPairs = std::map<std::pair<std::size_t, std::size_t>, std::pair<const plan::Conflict*, bool>>;

// The plan's own list by pairs of groups; entries that name a group twice, or a pair twice, are findings.
ListedPairs listed_pairs(const SignalView& view, Findings& findings) {
  ListedPairs pairs;
  for (const plan::Conflict& c : view.signal.conflicts) {
    const auto a = view.group.find(c.a), b = view.group.find(c.b);
    if (a == view.group.end() || b == view.group.end()) continue;
    if (a == b) {
      findings.violation("conflict-with-itself", fmt::format("the list of conflicts pairs group {} with itself", c.a), "Remove the entry", {c.a});
      continue;
    }
    const bool swapped = b->second < a->second;
    const auto key = std::minmax(a->second, b->second);
    if (!pairs.emplace(key, std::make_pair(&c, swapped)).second)
      findings.violation("conflict-listed-twice", fmt::format("groups {} and {} stand twice in the list of conflicts", c.a, c.b), "Keep the entry with the longer intergreens", {c.a, c.b});
  }
  return pairs;
}

// Why two groups conflict: the pair of movements or crossings, for people. Empty: they do not.
std::string reason_of_conflict(const PathTable& paths, const std::vector<PathUse>& a, const std::vector<PathUse>& b, bool& yield_refused) {
  for (const PathUse& x : a)
    for (const PathUse& y : b) {
      if (!paths.meet(x, y)) continue;
      const Yield first = paths.yield_of(x, y), second = paths.yield_of(y, x);
      if (first == Yield::allowed || second == Yield::allowed) continue;
      yield_refused = first == Yield::not_allowed || second == Yield::not_allowed;
      return fmt::format("{} and {}", paths.name(x), paths.name(y));
    }
  return {};
}

// What the lamps of a group show must be over before the other may start.
int least_intergreen(const SignalView& view, std::size_t ending) { return walks(view.signal.groups[ending]) ? view.buffer() : view.after_green(ending); }

// Tenths from a start to the end of what counts as occupied: green, or walk and clearance.
int occupied(const SignalView& view, std::size_t group, const Span& span) { return span.length + (walks(view.signal.groups[group]) ? view.after_green(group) : 0); }

// Intergreens of a pair in tenths: never below what the lamps need, the list's where it asks for more.
std::pair<int, int> intergreens(const SignalView& view, const ConflictPair& pair) {
  int ab = least_intergreen(view, pair.a), ba = least_intergreen(view, pair.b);
  if (pair.listed != nullptr) {
    ab = std::max(ab, to_tenths_up(pair.swapped ? pair.listed->intergreen_ba_s : pair.listed->intergreen_ab_s));
    ba = std::max(ba, to_tenths_up(pair.swapped ? pair.listed->intergreen_ab_s : pair.listed->intergreen_ba_s));
  }
  return {ab, ba};
}

// The first two greens of the pair that are not apart, or nothing.
const Span* first_too_close(const SignalView& view, const ConflictPair& pair, const Span*& other) {
  const auto [ab, ba] = intergreens(view, pair);
  for (const Span& x : view.greens[pair.a])
    for (const Span& y : view.greens[pair.b]) {
      if (x.length == 0 || y.length == 0) continue;
      const int gap_ab = modulo(y.start - x.start, view.cycle), gap_ba = modulo(x.start - y.start, view.cycle);
      if (gap_ab > 0 && occupied(view, pair.a, x) + ab <= gap_ab && occupied(view, pair.b, y) + ba <= gap_ba) continue;
      other = &y;
      return &x;
    }
  return nullptr;
}

void check_listed(const SignalView& view, const ConflictPair& pair, bool from_a, Findings& findings) {
  const std::size_t ending = from_a ? pair.a : pair.b, starting = from_a ? pair.b : pair.a;
  const plan::Group &e = view.signal.groups[ending], &s = view.signal.groups[starting];
  const double seconds = from_a != pair.swapped ? pair.listed->intergreen_ab_s : pair.listed->intergreen_ba_s;
  const std::string where = fmt::format("intergreen from {} to {}: {} s", e.id, s.id, number_text(seconds, 4));
  if (!std::isfinite(seconds) || seconds < 0 || seconds > 60) return findings.violation("number-out-of-range", where, "Give seconds from 0 to 60", {e.id, s.id});
  if (!is_on_tenth(seconds)) findings.violation("duration-not-in-tenths", where, "Controllers take tenths of a second", {e.id, s.id});
  const int least = least_intergreen(view, ending);
  if (to_tenths(seconds) < least)
    findings.violation("intergreen-too-short", fmt::format("{}, {} needs {} s", where, walks(e) ? "the pedestrian buffer" : "its yellow and red clearance", seconds_of(least)), "Lengthen the intergreen, never the other way", {e.id, s.id});
}

}  // namespace

void find_conflicts(SignalView& view, Findings& findings) {
  const ListedPairs pairs = listed_pairs(view, findings);
  if (!view.has_geometry) {
    for (const auto& [key, entry] : pairs) view.conflicts.push_back({key.first, key.second, "listed", false, entry.first, entry.second});
    return;
  }
  const PathTable paths(view);
  std::vector<std::vector<PathUse>> uses;
  for (const plan::Group& g : view.signal.groups) uses.push_back(uses_of(view, g));
  for (std::size_t a = 0; a < uses.size(); ++a)
    for (std::size_t b = a + 1; b < uses.size(); ++b) {
      bool refused = false;
      const std::string why = reason_of_conflict(paths, uses[a], uses[b], refused);
      const auto entry = pairs.find({a, b});
      if (why.empty() && entry == pairs.end()) continue;
      ConflictPair pair{a, b, why.empty() ? "listed" : why, !why.empty(), nullptr, false};
      if (entry != pairs.end()) pair.listed = entry->second.first, pair.swapped = entry->second.second;
      if (refused)
        findings.add("yield-not-allowed", Severity::warning, fmt::format("groups {} and {}: the plan's standard does not allow the yield between {}, so they count as conflicting", view.signal.groups[a].id, view.signal.groups[b].id, why), {},
                     {view.signal.groups[a].id, view.signal.groups[b].id});
      view.conflicts.push_back(std::move(pair));
    }
}

void check_listed_conflicts(const SignalView& view, Findings& findings) {
  for (const ConflictPair& pair : view.conflicts) {
    const std::string &a = view.signal.groups[pair.a].id, &b = view.signal.groups[pair.b].id;
    if (pair.listed == nullptr) {
      findings.violation("conflict-not-listed", fmt::format("groups {} and {} conflict ({}), but are not in the plan's list of conflicts", a, b, pair.why), "Add the pair with its intergreens", {a, b});
      continue;
    }
    check_listed(view, pair, true, findings);
    check_listed(view, pair, false, findings);
  }
}

void check_intergreens(const SignalView& view, Findings& findings) {
  if (!view.is_usable) return;
  for (const ConflictPair& pair : view.conflicts) {
    const Span* y = nullptr;
    const Span* x = first_too_close(view, pair, y);
    if (x == nullptr) continue;
    const std::string &a = view.signal.groups[pair.a].id, &b = view.signal.groups[pair.b].id;
    const auto [ab, ba] = intergreens(view, pair);
    const auto part = [&](const std::string& id, std::size_t g, const Span& span) {
      return fmt::format("{} runs from {} s to {} s", id, seconds_of(span.start), seconds_of(modulo(span.start + occupied(view, g, span), view.cycle)));
    };
    findings.violation("intergreen-violated", fmt::format("groups {} and {} conflict ({}): {}, {}; intergreens of {} s and {} s do not fit in a cycle of {} s", a, b, pair.why, part(a, pair.a, *x), part(b, pair.b, *y), seconds_of(ab),
                                                          seconds_of(ba), seconds_of(view.cycle)),
                       "Separate the two greens by their intergreens, both ways round the cycle", {a, b});
  }
}

// The lamps themselves, tenth by tenth: two conflicting groups may never both show something else than red.
void check_lamps(const SignalView& view, Findings& findings) {
  if (!view.is_usable) return;
  for (const ConflictPair& pair : view.conflicts) {
    const std::vector<int> both = view.lit_rows[pair.a].common(view.lit_rows[pair.b]);
    if (both.empty()) continue;
    const std::string &a = view.signal.groups[pair.a].id, &b = view.signal.groups[pair.b].id;
    findings.violation("conflicting-lamps", fmt::format("groups {} and {} conflict ({}) and both show something else than red for {} s, first at {} s", a, b, pair.why, seconds_of(static_cast<int>(both.size())), seconds_of(both.front())),
                       "No two conflicting groups may be lit at once, clearances and pedestrian buffer included", {a, b});
  }
}

int count_green_pairs(const SignalView& view) {
  if (!view.is_usable) return 0;
  std::size_t count = 0;
  for (const ConflictPair& pair : view.conflicts) count += view.greens[pair.a].size() * view.greens[pair.b].size();
  return static_cast<int>(count);
}

}  // namespace entrain::review
