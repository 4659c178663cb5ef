// The second pair of eyes: re-checks a plan's safety and its claims from the plan alone, by code that shares nothing with the code that made
// it. It lays the plan out as lamp states by tenths of a second and looks; it has its own circle and its own geometry.
#pragma once

#include <string>
#include <vector>

#include "plan/plan.hpp"

namespace entrain::review {

enum class Severity { violation, warning, note };
enum class Safety { checked, partly, not_checked };

struct Finding {
  std::string rule;  // a stable name, e.g. "intergreen-violated"
  Severity severity = Severity::violation;
  std::string signal;  // may be empty
  std::string sentence, mend;
};

struct StopSlack {
  std::string signal;
  double lead_s = 0, trail_s = 0;  // from the green's (cleared) start to the band, from the band to the green's end
  bool pinches_lead = false, pinches_trail = false;
  double width_without_s = 0;      // the band if this signal were always green
};

struct BandCheck {
  std::string corridor, direction, label;
  double claimed_s = 0, found_s = 0;
  double start_s = 0;              // leading edge at the first stop, system time
  double cycle_s = 0;
  std::vector<StopSlack> stops;
};

struct Review {
  Safety safety = Safety::not_checked;
  std::string why;
  std::vector<Finding> findings;
  std::vector<BandCheck> bands;
  std::vector<std::string> unchecked;  // what was not looked at, and why
  int signals = 0, conflicts_checked = 0, tenths_looked_at = 0;

  bool has_violation() const;
};

struct ReviewOptions {
  bool require_safety = false;  // anything but "checked" is a violation
};

// Never fails and never hangs: what is out of every range is a finding.
Review review_plan(const plan::Plan& plan, const ReviewOptions& options = {});

// Several periods of one project: each plan's review, with findings where the periods contradict each other added to the first.
std::vector<Review> review_plans(const std::vector<plan::Plan>& plans, const ReviewOptions& options = {});

// The plan with bands, starts, efficiencies, attainabilities, splits and degrees of saturation recomputed; nothing else is touched.
plan::Plan recomputed_claims(plan::Plan plan);

}  // namespace entrain::review
