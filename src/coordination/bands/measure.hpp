// Bands of given offsets, in ticks: the one place where widths that are claimed come from.
#pragma once

#include <vector>

#include "coordination/bands/compiled.hpp"
#include "coordination/bands/sweep.hpp"

namespace entrain::bands {

struct Setting {
  std::vector<int> options;   // by station
  std::vector<Tick> offsets;  // by station, in [0, period)
};

struct FrameBand {
  Tick width = 0, start = 0;  // start: leading edge at the first stop, in [0, cycle); meaningless where width == 0
};

// Keeps its memory between calls.
class Measure {
 public:
  FrameBand operator()(const Compiled& problem, int frame, const Setting& setting);

 private:
  std::vector<SweepStation> m_stations;
  std::vector<SweepTerm> m_terms;
  Sweep m_sweep;
};

FrameBand measure(const Compiled& problem, int frame, const Setting& setting);
std::vector<FrameBand> measure_all(const Compiled& problem, const Setting& setting);

// Widths, edges, slacks, pinching stops and freedom of the setting; bounds, shares and witnesses are left for the
// caller.
Answer describe(const Compiled& problem, const Setting& setting);

// min of width / weight in ticks over the corridor's directions with a weight.
double share_of(const Compiled& problem, int corridor, const std::vector<FrameBand>& bands);

}  // namespace entrain::bands
