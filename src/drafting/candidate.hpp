// One cycle length of one period on its way to a plan: greens of every signal, then offsets and bands.
#pragma once

#include <string>
#include <vector>

#include "drafting/local_timing.hpp"
#include "timing/allocation.hpp"

namespace entrain::drafting {

// All phase orders of one signal at the candidate's cycle.
struct SignalGreens {
  int cycle_s = 0;                         // the plan's, half of it, or its own where it runs free
  std::vector<timing::Allocation> orders;  // at least one
  std::vector<double> flows_vph;           // by lane group
  timing::CriticalCycle critical;
};

struct Candidate {
  int cycle_s = 0;
  std::size_t period = 0;
  std::vector<SignalGreens> signals;  // by LocalTiming::signals
};

struct DirectionBand {
  double bandwidth_s = 0, start_s = 0, bound_s = 0;
  double least_green_s = 0;
};

// Offsets and orders chosen for a candidate, with what the bands are then.
struct Coordination {
  std::vector<int> order;                          // by signal: index into SignalGreens::orders
  std::vector<int> offset_s;                       // by signal: system time of local zero, 0 <= offset < its cycle
  std::vector<std::vector<DirectionBand>> bands;   // [corridor][direction]
  std::vector<std::optional<std::pair<double, double>>> freedom_s;  // by signal: (earlier, later) with the bands as they are
  double delay_cost = 0, delay_bound = 0;          // of the constrained delay problem, in the cost model's units
  bool has_delay_cost = false;
  std::string certificate, problem;                // texts of the proof and of what it is about; empty: none
  std::vector<std::string> remarks;
};

}  // namespace entrain::drafting
