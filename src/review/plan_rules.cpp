#include <fmt/format.h>

#include <cmath>
#include <map>
#include <set>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

bool divides(double whole, double part) { return part > 0 && std::fabs(whole / part - std::round(whole / part)) < 1e-9; }

void check_time(const plan::Plan& plan, Findings& findings) {
  const std::string& reference = plan.clock.reference;
  if (reference.empty()) findings.violation("clock-reference-missing", "no clock reference: offsets mean nothing without one", "State midnight, time_of_day or pattern_start");
  else if (reference != "midnight" && reference != "time_of_day" && reference != "pattern_start")
    findings.violation("clock-reference-missing", fmt::format("the clock reference is {}", printable(reference)), "State midnight, time_of_day or pattern_start");
  if (!(plan.cycle_s >= 1) || plan.cycle_s > longest_cycle_s) return findings.violation("number-out-of-range", fmt::format("cycle_s is {}", number_text(plan.cycle_s)), "Give a cycle from 1 to 3600 s");
  if (!is_whole(plan.cycle_s)) findings.violation("cycle-not-whole", fmt::format("the plan's cycle is {} s", number_text(plan.cycle_s, 4)), "Controllers take whole seconds");
  if (!divides(86400, plan.cycle_s))
    findings.add("cycle-not-in-day", Severity::note, fmt::format("the cycle of {} s does not divide the day (86,400 s): a pattern counted from midnight jumps once a day", number_text(plan.cycle_s)), "Choose a cycle that divides 86,400 s, or expect the jump");
  else if (!divides(3600, plan.cycle_s))
    findings.add("cycle-not-in-hour", Severity::note, fmt::format("the cycle of {} s does not divide the hour (3,600 s): a change of the clock by an hour shifts the pattern", number_text(plan.cycle_s)));
}

// Minutes after midnight of "06:30"; negative: no time of day.
int minutes_of(const std::string& text) {
  const auto colon = text.find(':');
  if (colon == std::string::npos) return -1;
  const auto hours = parse_whole_number(text.substr(0, colon)), minutes = parse_whole_number(text.substr(colon + 1));
  if (!hours || !minutes || *hours < 0 || *hours > 24 || *minutes < 0 || *minutes > 59) return -1;
  const int total = static_cast<int>(60 * *hours + *minutes);
  return total <= 24 * 60 ? total : -1;
}

void check_schedule(const plan::Plan& plan, Findings& findings) {
  if (!plan.schedule || (plan.schedule->from.empty() && plan.schedule->to.empty())) return;
  const int from = minutes_of(plan.schedule->from), to = minutes_of(plan.schedule->to);
  if (from < 0 || to < 0 || from == to)
    findings.violation("schedule-unreadable", fmt::format("the schedule runs from {} to {}", printable(plan.schedule->from), printable(plan.schedule->to)), "Give two different times of day as HH:MM (badPlan)");
}

using GroupsOfSignals = std::map<std::string, std::set<std::string>>;

GroupsOfSignals groups_of(const plan::Plan& plan, Findings& findings) {
  GroupsOfSignals groups;
  for (const plan::Signal& s : plan.signals) {
    if (groups.count(s.id) != 0) findings.violation("duplicate-id", fmt::format("signal {} stands twice", printable(s.id)), "Give each its own id");
    for (const plan::Group& g : s.groups) groups[s.id].insert(g.id);
    groups[s.id];
  }
  return groups;
}

bool is_there(const GroupsOfSignals& groups, const std::string& signal, const std::string& group) {
  const auto found = groups.find(signal);
  return found != groups.end() && found->second.count(group) != 0;
}

void check_link_numbers(const plan::Link& l, Findings& findings) {
  double feeds = 0;
  for (const plan::LinkFeed& f : l.feeds) feeds = std::isfinite(f.flow_vph) && f.flow_vph >= 0 && feeds >= 0 ? feeds + f.flow_vph : -1;
  const bool sound = l.travel_time_s > 0 && l.travel_time_s <= 3600 && l.length_m >= 0 && l.length_m <= 100000 && feeds >= 0 && feeds <= 100000 && l.uniform_flow_vph >= 0 && l.uniform_flow_vph <= 100000 &&
                     (!l.storage_veh || *l.storage_veh >= 0) && (!l.travel_time_sd_s || *l.travel_time_sd_s >= 0);
  if (!sound)
    findings.violation("number-out-of-range", fmt::format("link {}: {} m, {} s, {} veh/h from its feeds, {} veh/h beside them", printable(l.id), number_text(l.length_m), number_text(l.travel_time_s), number_text(feeds), number_text(l.uniform_flow_vph)),
                       "Give a travel time up to 3600 s and flows from 0 to 100,000 veh/h");
  else if (l.length_m > 0 && l.length_m / l.travel_time_s > 50)
    findings.add("speed-unusual", Severity::warning, fmt::format("link {}: {} m in {} s is {} m/s", printable(l.id), number_text(l.length_m, 0), number_text(l.travel_time_s, 1), number_text(l.length_m / l.travel_time_s, 0)), "Check length and travel time");
  else if (l.travel_time_s < 5)
    findings.add("signals-close-together", Severity::note, fmt::format("link {}: {} s from stop line to stop line; two signals so close are often run as one", printable(l.id), number_text(l.travel_time_s, 1)));
}

void check_links(const plan::Plan& plan, const GroupsOfSignals& groups, Findings& findings) {
  std::set<std::string> seen;
  for (const plan::Link& l : plan.links) {
    if (!seen.insert(l.id).second) findings.add("parallel-links", Severity::note, fmt::format("link {} stands twice: both count", printable(l.id)));
    if (!is_there(groups, l.to_signal, l.to_group)) findings.violation("unknown-reference", fmt::format("link {} ends at group {} of {}, which is not there", printable(l.id), printable(l.to_group), printable(l.to_signal)), "Correct the id");
    if (l.feeds.empty() && groups.count(l.from_signal) == 0) findings.violation("unknown-reference", fmt::format("link {} starts at {}, which is not there", printable(l.id), printable(l.from_signal)), "Correct the id");
    for (const plan::LinkFeed& f : l.feeds)
      if (!is_there(groups, l.from_signal, f.from_group))
        findings.violation("unknown-reference", fmt::format("link {} is fed by group {} of {}, which is not there", printable(l.id), printable(f.from_group), printable(l.from_signal)), "Correct the id");
    check_link_numbers(l, findings);
  }
}

void check_quality(const plan::Plan& plan, Findings& findings) {
  if (!plan.quality) return;
  const plan::Quality& q = *plan.quality;
  if (!std::isfinite(q.value) || !std::isfinite(q.bound) || !std::isfinite(q.gap)) return findings.violation("gap-claim", "value, bound or gap is no number", "Give value >= bound and the gap between them");
  if (q.bound > q.value + 1e-6 * std::fabs(q.value))
    findings.violation("bound-above-value", fmt::format("claims that nothing is better than {}, but the plan itself has {}", number_text(q.bound), number_text(q.value)), "The bound is no bound");
  const double gap = q.bound > 0 ? (q.value - q.bound) / q.bound : (q.value > 0 ? 1 : 0);
  if (std::fabs(gap - q.gap) > 0.0006) findings.violation("gap-claim", fmt::format("claims a gap of {}, value {} and bound {} give {}", number_text(q.gap, 4), number_text(q.value), number_text(q.bound), number_text(gap, 4)), "Gap = (value - bound) / bound");
}

}  // namespace

void check_plan(const plan::Plan& plan, std::vector<Finding>& list) {
  Findings findings(list, "");
  check_time(plan, findings);
  check_schedule(plan, findings);
  const GroupsOfSignals groups = groups_of(plan, findings);
  check_links(plan, groups, findings);
  std::set<std::string> seen;
  for (const plan::Corridor& c : plan.corridors)
    if (!seen.insert(c.id).second) findings.violation("duplicate-id", fmt::format("corridor {} stands twice", printable(c.id)), "Give each its own id");
  check_quality(plan, findings);
  if (plan.cautions.empty()) findings.violation("cautions-missing", "the plan carries no cautions", "Every plan carries the usual cautions and defers to local codes and licensed practice");
  for (const std::string& key : plan.unknown_keys) findings.add("unknown-key", Severity::note, fmt::format("{} is not known to this version and was not looked at", printable(key)));
}

}  // namespace entrain::review
