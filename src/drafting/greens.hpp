// Conflict-free greens of every signal for one cycle length of one period.
#pragma once

#include "base/result.hpp"
#include "drafting/candidate.hpp"

namespace entrain::drafting {

// Errors name each signal at which no plan fits and why; all signals at once.
[[nodiscard]] Result<Candidate> greens_at(const Inputs& inputs, const LocalTiming& local, std::size_t period, int cycle_s);

// What binds the cycle from below: per signal, cycle-independent.
struct CycleNeed {
  std::string signal;
  timing::CriticalCycle critical;
};
[[nodiscard]] Result<std::vector<CycleNeed>> cycle_needs(const Inputs& inputs, const LocalTiming& local, std::size_t period);

}  // namespace entrain::drafting
