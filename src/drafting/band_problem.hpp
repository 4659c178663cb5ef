// The corridors of a candidate as a problem of the band engine.
#pragma once

#include <vector>

#include "coordination/bands/model.hpp"
#include "drafting/candidate.hpp"
#include "plan/plan.hpp"

namespace entrain::drafting {

struct BandProblem {
  bands::Problem problem;
  std::vector<int> station_of_signal;  // by LocalTiming::signals; -1: on no corridor
  std::vector<int> signal_of_station;
  // By corridor of the problem: its index among the plan's corridors, and by direction likewise. Directions without stops are left out.
  std::vector<std::size_t> corridor;
  std::vector<std::vector<std::size_t>> direction;
};

BandProblem band_problem(const Inputs& inputs, const LocalTiming& local, const Candidate& candidate, const std::vector<plan::Corridor>& corridors);

}  // namespace entrain::drafting
