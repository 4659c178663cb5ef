// The longest waits of a plan, from its lamps. Private to the review.
#pragma once

#include <string>
#include <vector>

#include "review/signal_view.hpp"
#include "review/traffic_figures.hpp"

namespace entrain::review {

struct Wait {
  int tenths = 0;
  std::string signal, group;
};

struct Waits {
  Wait people;       // from the end of walk to its next begin
  Wait side_street;  // red of a vehicle group that is not coordinated

  void look_at(const SignalView& view);
  // Notes the longest, and compares them with what the plan says.
  void report(const plan::Plan& plan, std::vector<Finding>& findings) const;
};

// A group that is never green waits for ever: its cycle is what is counted.
inline int longest_red_of(const SignalView& view, std::size_t group) { return longest_red(view.green_rows[group]); }

}  // namespace entrain::review
