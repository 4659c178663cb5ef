// The common cycle length: a complete plan for each cycle of a range, one table, one recommendation with its reason.
#pragma once

#include <functional>
#include <string>
#include <vector>

#include "base/result.hpp"
#include "drafting/candidate.hpp"
#include "evaluation/evaluate.hpp"
#include "plan/plan.hpp"

namespace entrain::drafting {

struct CoordinateOptions {
  double keep_band = 1.0;  // 0..1
  unsigned seed = 1;
  int threads = 1;
  double effort = 1.0;     // share of the usual search effort
  bool want_certificate = false;
};

struct CyclePlan {
  int cycle_s = 0;
  bool fits = false;                 // every minimum fits
  Diagnostics why_not;               // where it does not
  plan::Plan plan;                   // where it does
  evaluation::Evaluation evaluation;
  double score_s = 0;                // delay plus weighted stops, seconds a vehicle
  double band_efficiency = 0;        // mean over the corridors' directions
  bool two_way = true;               // every direction with a positive weight has a band
  std::string certificate, problem;  // texts; only where CoordinateOptions::want_certificate
};

struct Sweep {
  std::vector<CyclePlan> rows;       // by cycle, ascending
  int recommended = -1, runner_up = -1;  // indices into rows, -1: none fits
  std::string reason;                // why this cycle, and what is second best
};

// Plans every cycle of `cycles`. No row fits: recommended stays -1 and the rows say why.
// `progress` is called with (done, all) after each cycle; may be empty.
Sweep sweep_cycles(const Inputs& inputs, const LocalTiming& local, std::size_t period, const std::vector<int>& cycles, const CoordinateOptions& options,
                   const std::function<void(int, int)>& progress);

// Plans one cycle with full effort and its certificate, in place of the row of the sweep, and says the reason anew.
void finish_row(const Inputs& inputs, const LocalTiming& local, std::size_t period, const CoordinateOptions& options, int index, Sweep& sweep);

// One complete plan from greens: coordinate, assemble, evaluate.
CyclePlan complete_plan(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const CoordinateOptions& options);

// The same with orders and offsets as given: bands are claimed as they are, nothing is chosen.
CyclePlan complete_plan_as_it_runs(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, Coordination running);

}  // namespace entrain::drafting
