// Between the offset engine's values and the plan room's text forms of the same things.
#pragma once

#include "coordination/offsets/solve.hpp"
#include "plan/certificate.hpp"
#include "plan/offset_problem.hpp"

namespace entrain::drafting {

plan::OffsetProblem written_problem(const offsets::Problem& problem);
offsets::Problem read_problem(const plan::OffsetProblem& problem);
// Bound (or infeasibility), answer if there is one, and the proof.
plan::Certificate written_certificate(const offsets::Answer& answer);

}  // namespace entrain::drafting
