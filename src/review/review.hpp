// The second pair of eyes: re-checks a plan's safety and its claims from the plan alone, by code that shares nothing with the code that made
// it. It lays the plan out as lamp states by tenths of a second and looks; it has its own circle and its own geometry.
//
// The verdict on safety says what could be looked at, not what was found: "checked" where legs, movements and crossings of every signal are
// given and conflicts were re-derived from them, "partly" where some signals have only a list of conflicts or nothing, "not checked" where
// nothing says which greens conflict. A list of conflicts alone can be obeyed and still be incomplete: such a signal never counts as checked.
// What was found stands in `findings`; a violation is worth exit code 1.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "plan/plan.hpp"

namespace entrain::review {

enum class Severity { violation, warning, note };
enum class Safety { checked, partly, not_checked };

struct Finding {
  std::string rule;  // a stable name out of rules(), e.g. "intergreen-violated"
  Severity severity = Severity::violation;
  std::string signal;  // may be empty
  std::string sentence, mend;
  std::vector<std::string> groups;  // the signal groups concerned, where there are any
};

// How one stop of a corridor limits a band.
struct StopSlack {
  std::string signal, group;
  double lead_s = 0, trail_s = 0;  // from the green's (cleared) start to the band, from the band to the green's end; infinite: always green
  bool pinches_lead = false, pinches_trail = false;
  double width_without_s = 0;              // the band if this signal were always green
  double gain_lead_s = 0, gain_trail_s = 0;  // band won by a green that starts, ends one second earlier, later; looked at where it pinches
};

struct BandCheck {
  std::string corridor, direction, label;
  double claimed_s = 0, found_s = 0;
  double start_s = 0;              // leading edge at the first stop, system time
  double cycle_s = 0;
  std::vector<StopSlack> stops;
  double claimed_start_s = 0;
  double shortest_green_s = 0;     // of the (cleared) longest greens on the way
  double efficiency = 0, attainability = 0;
};

// What was looked at, signal by signal.
struct SignalCheck {
  std::string signal;
  std::string conflicts_from;      // "geometry" | "list" | "nothing"
  int conflicting_pairs = 0;       // of groups
  int green_pairs = 0;             // of greens of conflicting groups, each looked at both ways round the cycle
  int tenths = 0;                  // of its cycle
  int clearances = 0;              // yellow, red, pedestrian clearance recomputed from their basis
  int violations = 0, warnings = 0, notes = 0;
  // How far its offset may move, earlier and later, with every band as wide as it is; absent: on no corridor with a band.
  std::optional<double> freedom_early_s, freedom_late_s;
};

struct Review {
  Safety safety = Safety::not_checked;
  std::string why;
  std::vector<Finding> findings;
  std::vector<BandCheck> bands;
  std::vector<std::string> unchecked;  // what was not looked at, and why
  int signals = 0, conflicts_checked = 0, tenths_looked_at = 0;
  std::vector<SignalCheck> per_signal;  // plan order

  bool has_violation() const;
  int count(Severity severity) const;
};

struct ReviewOptions {
  bool require_safety = false;  // anything but "checked" is a violation
};

// Never fails and never hangs: what is out of every range is a finding.
Review review_plan(const plan::Plan& plan, const ReviewOptions& options = {});

// Several periods of one project: each plan's review, with findings where the periods contradict each other added to the first.
std::vector<Review> review_plans(const std::vector<plan::Plan>& plans, const ReviewOptions& options = {});

// The plan with bands, starts, efficiencies, attainabilities, freedom, splits and degrees of saturation recomputed from its greens and
// offsets. What can't be recomputed here (quality, measures) is taken out; everything that bears on safety stays as it is.
plan::Plan recomputed_claims(plan::Plan plan);

// Every rule the review knows: its name and what it asks for, sorted by name.
struct RuleName {
  const char* name;
  const char* asks_for;
};
const std::vector<RuleName>& rules();

}  // namespace entrain::review
