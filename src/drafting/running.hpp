// The timing that runs today: as a hold on greens or offsets, as fixed parts of single signals, and as old values beside new.
#pragma once

#include "base/result.hpp"
#include "drafting/candidate.hpp"
#include "plan/plan.hpp"

namespace entrain::drafting {

// Takes sequence and splits from the timing table where the signals table fixes them. Errors where they do not fit the cycle.
Diagnostics fix_from_timing(const Inputs& inputs, const PlannedSignal& planned, std::size_t period, int cycle_s, timing::AllocationRequest& request);

// The running offset of a signal, converted to the begin of the first listed green of `group` under `order`; nothing if not known.
std::optional<double> running_offset_s(const Inputs& inputs, const PlannedSignal& planned, std::size_t period, const SignalGreens& greens, int order);

// Writes the running timing beside the new one, for the table of changes.
void put_running(const Inputs& inputs, const LocalTiming& local, std::size_t period, plan::Plan& plan);

}  // namespace entrain::drafting
