#include "review/review.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "review/bands.hpp"
#include "review/rules.hpp"
#include "review/traffic_figures.hpp"
#include "review/waits.hpp"

namespace entrain::review {
namespace {

std::string shown(const std::vector<std::string>& names) {
  std::string text;
  for (std::size_t i = 0; i < names.size() && i < 8; ++i) text += (i > 0 ? ", " : "") + printable(names[i]);
  return names.size() > 8 ? text + ", ..." : text;
}

struct Coverage {
  int whole = 0, listed = 0, none = 0;
  std::vector<std::string> names_without;

  void count(const SignalView& view, std::vector<std::string>& unchecked) {
    const std::string id = printable(view.signal.id);
    if (view.has_geometry && view.is_usable) {
      ++whole;
      return;
    }
    names_without.push_back(view.signal.id);
    const bool has_list = view.is_usable && !view.conflicts.empty();
    ++(has_list ? listed : none);
    const std::string why = !view.is_usable && view.why_no_geometry.empty() ? "its cycle is out of range" : view.why_no_geometry;
    if (has_list) unchecked.push_back(fmt::format("{}: whether the given list of conflicts is complete, and the opposed-turn trap: {}", id, why));
    else unchecked.push_back(fmt::format("{}: conflicts, intergreens and the opposed-turn trap: {}{}", id, why, view.signal.conflicts.empty() ? ", no conflicts given" : ""));
  }

  void judge(std::size_t all, Review& review) const {
    const auto count = static_cast<int>(all);
    review.safety = count > 0 && whole == count ? Safety::checked : none == count ? Safety::not_checked : Safety::partly;
    if (all == 0) review.why = "the plan has no signals";
    else if (whole == count) review.why = fmt::format("conflicts re-derived from legs, movements and right of way at {} signals, every lamp looked at in tenths of a second", all);
    else if (none == count) review.why = "nothing says which greens conflict: " + (review.unchecked.empty() ? std::string("no geometry and no list") : review.unchecked.front());
    else review.why = fmt::format("{} of {} signals from geometry, {} against their given list of conflicts only, {} not at all ({})", whole, all, listed, none, shown(names_without));
  }
};

int count_clearances(const SignalView& view) {
  return static_cast<int>(std::count_if(view.signal.groups.begin(), view.signal.groups.end(), [](const plan::Group& g) { return walks(g) ? !g.crossings.empty() : g.clearance_basis.has_value(); }));
}

void review_signal(const plan::Plan& plan, const plan::Signal& signal, Review& review, Coverage& coverage, Waits& waits) {
  SignalCheck& check = review.per_signal.emplace_back();
  check.signal = signal.id;
  Findings findings(review.findings, signal.id);
  SignalView view = view_of(plan, signal, findings);
  if (view.is_usable) find_conflicts(view, findings);
  for (const Rule rule : signal_rules()) rule(view, findings);
  waits.look_at(view);
  coverage.count(view, review.unchecked);
  check.conflicts_from = !view.is_usable ? "nothing" : view.has_geometry ? "geometry" : view.conflicts.empty() ? "nothing" : "list";
  check.conflicting_pairs = static_cast<int>(view.conflicts.size());
  check.green_pairs = count_green_pairs(view);
  check.tenths = view.is_usable ? view.cycle : 0;
  check.clearances = count_clearances(view);
  review.conflicts_checked += check.conflicting_pairs;
  review.tenths_looked_at += check.tenths;
}

void sum_up_signals(const Bands& bands, Review& review) {
  std::map<std::string, SignalCheck*> by_id;
  for (SignalCheck& check : review.per_signal) by_id.emplace(check.signal, &check);
  for (const Finding& f : review.findings) {
    const auto found = by_id.find(f.signal);
    if (found == by_id.end()) continue;
    ++(f.severity == Severity::violation ? found->second->violations : f.severity == Severity::warning ? found->second->warnings : found->second->notes);
  }
  for (const auto& [signal, freedom] : bands.freedom)
    if (const auto found = by_id.find(signal); found != by_id.end()) found->second->freedom_early_s = freedom.early_s, found->second->freedom_late_s = freedom.late_s;
}

double to_thousandths(double value) { return std::round(value * 1000) / 1000; }

void recompute_direction(const BandCheck& band, plan::Direction& direction) {
  direction.bandwidth_s = to_thousandths(band.found_s);
  direction.band_start_s = to_thousandths(band.start_s);
  if (direction.band_start_s >= band.cycle_s) direction.band_start_s = 0;
  direction.efficiency = band.efficiency;
  direction.attainability = band.attainability;
  if (direction.bandwidth_bound_s && std::isfinite(*direction.bandwidth_bound_s)) direction.bandwidth_bound_s = std::max(*direction.bandwidth_bound_s, direction.bandwidth_s);
}

void recompute_group(const plan::Signal& signal, plan::Group& group) {
  if (walks(group)) return;
  if (group.split_s && group.greens.size() == 1 && group.greens[0].duration_s < signal.cycle_s) group.split_s = std::round(10 * (group.greens[0].duration_s + group.yellow_s + group.red_clearance_s)) / 10;
  if (!group.degree_of_saturation) return;
  if (const double found = degree_of_saturation(group, signal.cycle_s); found >= 0 && std::isfinite(found)) group.degree_of_saturation = found;
}

}  // namespace

const std::vector<Rule>& signal_rules() {
  static const std::vector<Rule> list = {check_cycle,  check_offset, check_clock,        check_greens, check_minimums, check_change_intervals, check_overrides, check_pedestrian_times, check_parents, check_splits,
                                         check_rings,  check_listed_conflicts, check_intergreens, check_lamps,  check_trap,     check_saturation,       check_flows,     check_queues,           check_service, check_evidence};
  return list;
}

int Review::count(Severity severity) const {
  return static_cast<int>(std::count_if(findings.begin(), findings.end(), [&](const Finding& f) { return f.severity == severity; }));
}

bool Review::has_violation() const { return count(Severity::violation) > 0; }

Review review_plan(const plan::Plan& plan, const ReviewOptions& options) {
  Review review;
  review.signals = static_cast<int>(plan.signals.size());
  check_plan(plan, review.findings);
  check_standard(plan, review.findings);
  Coverage coverage;
  Waits waits;
  for (const plan::Signal& signal : plan.signals) review_signal(plan, signal, review, coverage, waits);
  waits.report(plan, review.findings);
  Bands bands = check_bands(plan, review.findings);
  sum_up_signals(bands, review);
  review.bands = std::move(bands.checks);
  coverage.judge(plan.signals.size(), review);
  if (options.require_safety && review.safety != Safety::checked)
    Findings(review.findings, "").violation("safety-not-checked", "safety was required to be checked, but it could not be: " + review.why, "Give legs, movements and crossings of every signal");
  if (plan.measures) review.unchecked.emplace_back("delay and stops: models, not re-derived here; compare plans by them");
  return review;
}

std::vector<Review> review_plans(const std::vector<plan::Plan>& plans, const ReviewOptions& options) {
  std::vector<Review> reviews;
  for (const plan::Plan& plan : plans) reviews.push_back(review_plan(plan, options));
  if (!reviews.empty()) check_same_in_all_periods(plans, reviews[0].findings);
  return reviews;
}

plan::Plan recomputed_claims(plan::Plan plan) {
  std::vector<Finding> ignored;
  const Bands bands = check_bands(plan, ignored);
  std::size_t next = 0;
  for (plan::Corridor& corridor : plan.corridors)
    for (plan::Direction& direction : corridor.directions)
      if (next < bands.checks.size() && bands.checks[next].corridor == corridor.id && bands.checks[next].direction == direction.name) recompute_direction(bands.checks[next++], direction);
  for (plan::Signal& signal : plan.signals) {
    const auto freedom = bands.freedom.find(signal.id);
    signal.freedom_early_s.reset(), signal.freedom_late_s.reset();
    if (freedom != bands.freedom.end()) signal.freedom_early_s = to_thousandths(freedom->second.early_s), signal.freedom_late_s = to_thousandths(freedom->second.late_s);
    for (plan::Group& group : signal.groups) recompute_group(signal, group);
  }
  plan.quality.reset();   // the offsets may have been edited: nothing is proved about the delay any more
  plan.measures.reset();
  return plan;
}

}  // namespace entrain::review
