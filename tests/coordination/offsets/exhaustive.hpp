// The slow and obvious judge: every assignment of a small problem.
#pragma once

#include <cstdint>
#include <optional>

#include "coordination/offsets/problem.hpp"

namespace entrain::offsets {

// The least cost over all assignments that obey fixed labels and forbidden entries; nothing if there is none.
std::optional<std::int64_t> exhaustive_optimum(const Problem& problem);

}  // namespace entrain::offsets
