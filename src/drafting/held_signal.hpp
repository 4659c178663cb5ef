// One signal's running timing as groups and greens: from the timing table, with geometry where there are roads.
#pragma once

#include "base/result.hpp"
#include "drafting/candidate.hpp"

namespace entrain::drafting {

struct HeldSignal {
  PlannedSignal planned;
  SignalGreens greens;              // one order
  std::optional<double> offset_s;   // of local zero; nothing where the table has none
};

// `designed`: the signal's own design where roads give one (right of way, conflicts, lane groups), else null.
// Errors: no rows, greens that can't be told, sequences that name unknown groups; all at once.
[[nodiscard]] Result<Noted<HeldSignal>> held_signal(const Inputs& inputs, std::size_t network_signal, std::size_t period, const PlannedSignal* designed, const demand::SignalDemand& demand);

}  // namespace entrain::drafting
