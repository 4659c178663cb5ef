// The opposed-turn trap: a turn that yields on a circular green must not see its green end while traffic it yields to stays green.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "base/circle.hpp"
#include "timing/signal_design.hpp"

namespace entrain::timing {

struct Trap {
  std::string turn, opposing;          // movements
  int turn_group = 0, opposing_group = 0;
};

// The first trap in `greens` (one list of arcs a group, in the order of the design's groups), if there is one.
// No trap: the turn is green under another group at that instant (its arrow follows without a gap), or its permissive display is a
// flashing yellow arrow.
// `candidates` are possible_traps(design).
std::optional<Trap> find_trap(const SignalDesign& design, const std::vector<Trap>& candidates, Tenths cycle,
                              const std::vector<std::vector<Arc>>& greens);

// Pairs of groups (turn's group, opposing group) that could trap: the first serves an opposed turn permissive on a circular green,
// the second serves a movement it yields to, and both may be green together.
std::vector<Trap> possible_traps(const SignalDesign& design);

}  // namespace entrain::timing
