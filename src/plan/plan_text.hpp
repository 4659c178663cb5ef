// `plan.json`, format 1, to a Plan and back.
#pragma once

#include <string>
#include <string_view>

#include "base/result.hpp"
#include "plan/plan.hpp"

namespace entrain::plan {

// Reads a plan. `source` names the file in messages. Errors: not JSON, another format or version, a missing or mistyped key,
// a number that is not finite; all of them, each with its JSON path. Values are not judged here: that is the review's work.
[[nodiscard]] Result<Plan> read_plan(std::string_view text, const std::string& source);

// Deterministic text: keys in the order of the format, numbers with at most three decimals (six for degrees), a newline at the end.
// Property: read_plan(write_plan(p)) equals p up to those decimals.
std::string write_plan(const Plan& plan);

// The words of the format.
std::string_view word(RightOfWay value);
std::string_view word(GroupKind value);
std::string_view word(Service value);
std::string_view word(Operation value);
std::string_view word(Turn value);
std::string_view word(ReferenceInstant value);
std::string_view word(TrafficSide value);

}  // namespace entrain::plan
