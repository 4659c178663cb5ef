#include "review/review.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "review/rules.hpp"

namespace entrain::review {
namespace {

struct Coverage {
  int whole = 0, listed = 0, none = 0;
  std::vector<std::string> names_without;
};

void judge_safety(const Coverage& coverage, const plan::Plan& plan, Review& review) {
  const int all = static_cast<int>(plan.signals.size());
  std::string without;
  for (std::size_t i = 0; i < coverage.names_without.size() && i < 8; ++i) without += (i > 0 ? ", " : "") + coverage.names_without[i];
  if (coverage.names_without.size() > 8) without += ", ...";
  if (all == 0) {
    review.safety = Safety::not_checked;
    review.why = "the plan has no signals";
  } else if (coverage.whole == all) {
    review.safety = Safety::checked;
    review.why = fmt::format("conflicts re-derived from legs, movements and right of way at {} signals, every lamp looked at in tenths of a second", all);
  } else if (coverage.none == all) {
    review.safety = Safety::not_checked;
    review.why = "no legs and movements and no list of conflicts: nothing says which greens conflict";
  } else {
    review.safety = Safety::partly;
    review.why = fmt::format("{} of {} signals from geometry, {} against their given list of conflicts only, {} not at all ({})", coverage.whole, all, coverage.listed, coverage.none, without);
  }
}

void review_signal(const plan::Plan& plan, const plan::Signal& signal, Review& review, Coverage& coverage) {
  Findings findings(review.findings, signal.id);
  const SignalView view = view_of(plan, signal, findings);
  for (const Rule rule : signal_rules()) rule(view, findings);
  review.conflicts_checked += count_conflicts(view);
  review.tenths_looked_at += view.cycle;
  if (view.has_geometry) {
    ++coverage.whole;
    return;
  }
  coverage.names_without.push_back(signal.id);
  if (signal.conflicts.empty()) {
    ++coverage.none;
    review.unchecked.push_back(fmt::format("{}: conflicts, intergreens and the opposed-turn trap: no legs and movements, no conflicts given", signal.id));
  } else {
    ++coverage.listed;
    review.unchecked.push_back(fmt::format("{}: whether the given list of conflicts is complete, and the opposed-turn trap: no legs and movements", signal.id));
  }
}

}  // namespace

const std::vector<Rule>& signal_rules() {
  static const std::vector<Rule> rules = {check_cycle,  check_offset,  check_greens,    check_minimums, check_yellow_and_red, check_pedestrian_times,
                                          check_splits, check_rings,   check_conflicts, check_trap,     check_saturation,     check_service};
  return rules;
}

bool Review::has_violation() const {
  return std::any_of(findings.begin(), findings.end(), [](const Finding& f) { return f.severity == Severity::violation; });
}

Review review_plan(const plan::Plan& plan, const ReviewOptions& options) {
  Review review;
  review.signals = static_cast<int>(plan.signals.size());
  check_plan(plan, review.findings);
  Coverage coverage;
  for (const plan::Signal& signal : plan.signals) review_signal(plan, signal, review, coverage);
  review.bands = check_bands(plan, review.findings);
  judge_safety(coverage, plan, review);
  if (options.require_safety && review.safety != Safety::checked)
    Findings(review.findings, "").violation("safety-not-checked", "safety was required to be checked, but it could not be: " + review.why, "Give legs, movements and crossings of every signal");
  if (plan.measures) review.unchecked.push_back("delay, stops and queues: models, not re-derived here; compare plans by them");
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
  const auto bands = check_bands(plan, ignored);
  std::size_t next = 0;
  for (plan::Corridor& corridor : plan.corridors)
    for (plan::Direction& direction : corridor.directions) {
      if (next >= bands.size() || bands[next].corridor != corridor.id || bands[next].direction != direction.name) continue;
      const BandCheck& band = bands[next++];
      direction.bandwidth_s = std::round(band.found_s * 1000) / 1000;
      direction.band_start_s = std::round(band.start_s * 1000) / 1000;
      direction.efficiency = band.found_s / plan.cycle_s;
      double least = INFINITY;
      for (const plan::Stop& stop : direction.stops)
        for (const plan::Signal& signal : plan.signals)
          for (const plan::Group& group : signal.groups)
            if (signal.id == stop.signal && group.id == stop.group) {
              double longest = 0;
              for (const plan::Green& g : group.greens) longest = std::max(longest, g.duration_s >= signal.cycle_s ? plan.cycle_s : g.duration_s - stop.queue_clearance_s);
              least = std::min(least, longest);
            }
      direction.attainability = least > 0 && std::isfinite(least) ? band.found_s / least : 0;
      if (direction.bandwidth_bound_s) direction.bandwidth_bound_s = std::max(*direction.bandwidth_bound_s, direction.bandwidth_s);
    }
  for (plan::Signal& signal : plan.signals)
    for (plan::Group& group : signal.groups) {
      if (group.kind == plan::GroupKind::pedestrian || group.greens.size() != 1) continue;
      if (group.split_s) group.split_s = std::round(10 * (group.greens[0].duration_s + group.yellow_s + group.red_clearance_s)) / 10;
      if (group.degree_of_saturation && group.flow_vph && group.saturation_flow_vph && *group.saturation_flow_vph > 0 && signal.cycle_s > 0) {
        const double effective = std::max(0.0, group.greens[0].duration_s - group.start_up_lost_s.value_or(0) + group.end_gain_s.value_or(0));
        const double capacity = *group.saturation_flow_vph * std::min(1.0, effective / signal.cycle_s);
        if (capacity > 0) group.degree_of_saturation = *group.flow_vph / capacity;
      }
    }
  plan.quality.reset();   // the offsets may have been edited: nothing is proved about the delay any more
  plan.measures.reset();
  return plan;
}

}  // namespace entrain::review
