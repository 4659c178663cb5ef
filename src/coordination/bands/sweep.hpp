// The highest point of a lower envelope: max over phi of min over stations of max over terms of reserve - ((phi + c)
// mod period).
#pragma once

#include <limits>
#include <vector>

#include "coordination/bands/ticks.hpp"

namespace entrain::bands {

// Larger than any reserve, small enough to add to: a station that leaves every phi free.
inline constexpr Tick unlimited = std::numeric_limits<Tick>::max() / 8;

struct SweepTerm {
  Tick c = 0;  // in [0, period)
  Tick reserve = 0;
};

struct SweepStation {
  Tick period = 0;         // the cycle or half of it
  int begin = 0, end = 0;  // its terms
};

struct Peak {
  Tick value = 0;  // `unlimited` where no station limits; -unlimited where a station has no term
  Tick phi = 0;    // the least phi in [0, cycle) that reaches it
};

// Every term falls with slope -1 and jumps up where it is reset, so level = value + phi is a rising staircase for each
// station. A stair that ends at r with level L caps the envelope at L - phi for *every* phi before r, because the
// stairs before it are lower still. So the envelope is a running minimum over stairs in order of r, and its peaks lie
// at the r. Buckets over r find the few that can hold the highest: linear time in the number of stairs as a rule, and
// never more than one sort of them.
class Sweep {
 public:
  // `cycle` is a multiple of every period.
  Peak highest(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick cycle);

  // Few stations that together leave no phi with a value above `value`, ascending; empty if some phi has one.
  std::vector<int> blockers(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick cycle,
                            Tick value);

 private:
  struct Stair {
    Tick end = 0;    // phi at which the station steps up; the last stair of each station ends at the cycle
    Tick level = 0;  // value + phi until then
  };
  struct Step {
    Tick at = 0, level = 0;
  };
  // Appends the station's stairs; false if it has no term.
  bool add_stairs(const SweepStation& station, const std::vector<SweepTerm>& terms, Tick cycle);
  Peak highest_by_buckets(Tick cycle);
  Peak highest_by_sorting(Tick cycle);
  Peak best_of_some(Tick level, Peak best);

  std::vector<Stair> m_stairs, m_some;
  std::vector<Step> m_steps;
  std::vector<Tick> m_lowest;    // by bucket: the lowest level that ends there; then of all that end there or later
  std::vector<Tick> m_earliest;  // by bucket: its earliest end
};

}  // namespace entrain::bands
