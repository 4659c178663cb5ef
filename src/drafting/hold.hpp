// `--hold greens` and `--hold all`: cycle, greens and clearances (and offsets) from the timing table.
#pragma once

#include "drafting/draft.hpp"

namespace entrain::drafting {

[[nodiscard]] tl::expected<Noted<Draft>, DraftProblem> draft_held(const Inputs& inputs, const DraftOptions& options);

}  // namespace entrain::drafting
