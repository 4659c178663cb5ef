// The highest point of the lower envelope: max over phi of min over stations of max over terms of reserve - ((phi + c) mod period).
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
  Tick period = 0;  // the cycle or half of it
  int begin = 0, end = 0;  // its terms
};

struct Peak {
  Tick value = 0;  // `unlimited` where no station limits; -unlimited where a station has no term
  Tick phi = 0;    // the least phi in [0, cycle) that reaches it
};

// Every term falls with slope -1 and jumps up where it is reset, so level = value + phi is a rising staircase for each station. The
// station with the lowest level rules until its own next step: the sweep leaps there. A heap keeps the stations by level and brings
// one up to date only when it comes to the top. O(terms * log(stations)) at worst; far fewer steps are looked at in practice.
class Sweep {
 public:
  // `cycle` is a multiple of every period.
  Peak highest(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick cycle);

  // Stations that together leave no phi with a value above `value`, ascending; empty if some phi has one.
  std::vector<int> blockers(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick cycle, Tick value);

 private:
  struct Entry {
    Tick level = 0;  // value + phi, valid for phi before `next`
    Tick next = 0;   // the next phi at which the station can lift the level above the best so far
    int station = 0;
  };
  static Entry look(const SweepStation& station, int index, const std::vector<SweepTerm>& terms, Tick phi, Tick best);
  void build(const std::vector<SweepStation>& stations, const std::vector<SweepTerm>& terms, Tick best);
  void sink(std::size_t at);

  std::vector<Entry> m_heap;  // lowest level on top
};

}  // namespace entrain::bands
