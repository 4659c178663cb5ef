#include <fmt/format.h>

#include <cmath>
#include <map>
#include <set>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

bool divides(double whole, double part) { return part > 0 && std::fabs(whole / part - std::round(whole / part)) < 1e-9; }

void check_clock(const plan::Plan& plan, Findings& findings) {
  if (plan.clock.reference.empty()) findings.violation("clock-reference-missing", "no clock reference: offsets mean nothing without one", "State midnight, time_of_day or pattern_start");
  if (!(plan.cycle_s >= 1) || plan.cycle_s > longest_cycle_s) return findings.violation("number-out-of-range", fmt::format("cycle_s is {}", number_text(plan.cycle_s)), "Give a cycle from 1 to 3600 s");
  if (!divides(86400, plan.cycle_s) && plan.clock.reference == "midnight")
    findings.add("cycle-not-in-day", Severity::note, fmt::format("the cycle of {} s does not divide the day (86,400 s): with a midnight reference the pattern jumps once a day", number_text(plan.cycle_s)));
  else if (!divides(3600, plan.cycle_s))
    findings.add("cycle-not-in-hour", Severity::note, fmt::format("the cycle of {} s does not divide the hour: a change of the clock by an hour shifts the pattern", number_text(plan.cycle_s)));
}

void check_ids(const plan::Plan& plan, Findings& findings) {
  std::set<std::string> seen;
  for (const plan::Signal& s : plan.signals)
    if (!seen.insert(s.id).second) findings.violation("duplicate-id", fmt::format("signal {} stands twice", printable(s.id)), "Give each its own id");
  const auto group_is_there = [&](const std::string& signal, const std::string& group) {
    for (const plan::Signal& s : plan.signals)
      if (s.id == signal)
        for (const plan::Group& g : s.groups)
          if (g.id == group) return true;
    return false;
  };
  for (const plan::Link& l : plan.links) {
    if (!group_is_there(l.to_signal, l.to_group)) findings.violation("unknown-reference", fmt::format("link {} ends at group {} of {}, which is not there", printable(l.id), printable(l.to_group), printable(l.to_signal)));
    for (const plan::LinkFeed& f : l.feeds)
      if (!group_is_there(l.from_signal, f.from_group)) findings.violation("unknown-reference", fmt::format("link {} is fed by group {} of {}, which is not there", printable(l.id), printable(f.from_group), printable(l.from_signal)));
  }
}

}  // namespace

void check_plan(const plan::Plan& plan, std::vector<Finding>& list) {
  Findings findings(list, "");
  check_clock(plan, findings);
  check_ids(plan, findings);
  if (plan.cautions.empty()) findings.violation("cautions-missing", "the plan carries no cautions", "Every plan carries the usual cautions and defers to local codes and licensed practice");
  for (const std::string& key : plan.unknown_keys) findings.add("unknown-key", Severity::note, fmt::format("{} is not known to this version and was not looked at", printable(key)));
}

void check_same_in_all_periods(const std::vector<plan::Plan>& plans, std::vector<Finding>& list) {
  std::map<std::string, std::pair<const plan::Group*, std::string>> first;
  for (const plan::Plan& plan : plans)
    for (const plan::Signal& signal : plan.signals)
      for (const plan::Group& g : signal.groups) {
        const auto [at, is_new] = first.emplace(signal.id + "\n" + g.id, std::make_pair(&g, plan.period));
        if (is_new) continue;
        const plan::Group& other = *at->second.first;
        const auto differ = [&](const char* what, double a, double b) {
          if (std::fabs(a - b) > 1e-6)
            Findings(list, signal.id).violation("differs-between-periods", fmt::format("group {}: {} is {} s in period {} and {} s in {}", g.id, what, number_text(b), at->second.second, number_text(a), plan.period), "One phase table serves all periods");
        };
        differ("yellow", g.yellow_s, other.yellow_s);
        differ("red clearance", g.red_clearance_s, other.red_clearance_s);
        differ("minimum green", g.minimum_green_s, other.minimum_green_s);
        differ("pedestrian clearance", g.clearance_s, other.clearance_s);
      }
}

}  // namespace entrain::review
