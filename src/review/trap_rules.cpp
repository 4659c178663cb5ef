// The opposed-turn trap, looked for on the lamps themselves.
#include <fmt/format.h>

#include <set>

#include "review/paths.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

// When a movement is green, by how.
struct MovementRows {
  Row circular;   // permissive on a circular green
  Row continues;  // its own arrow, or a flashing yellow arrow
  Row any;
};

std::vector<MovementRows> rows_by_movement(const SignalView& view) {
  std::vector<MovementRows> rows(view.signal.movements.size(), {Row(view.cycle), Row(view.cycle), Row(view.cycle)});
  for (std::size_t g = 0; g < view.signal.groups.size(); ++g)
    for (const plan::Served& s : view.signal.groups[g].serves) {
      const auto found = view.movement.find(s.movement);
      if (found == view.movement.end()) continue;
      MovementRows& m = rows[found->second];
      const bool circular = s.right_of_way == plan::RightOfWay::permissive && !s.flashing_yellow_arrow;
      (circular ? m.circular : m.continues).add(view.green_rows[g]);
      m.any.add(view.green_rows[g]);
    }
  return rows;
}

// Tenths at which the circular green is over, the one before it was still lit, and nothing of the turn's own follows.
std::vector<int> bare_ends(const MovementRows& turn, int cycle) {
  std::vector<int> ends;
  for (int t = 0; t < cycle; ++t)
    if (!turn.circular.at(t) && turn.circular.at(modulo(t - 1, cycle)) && !turn.continues.at(t)) ends.push_back(t);
  return ends;
}

}  // namespace

void check_trap(const SignalView& view, Findings& findings) {
  if (!view.is_usable || !view.has_geometry) return;
  const PathTable paths(view);
  const std::vector<MovementRows> rows = rows_by_movement(view);
  for (std::size_t turn = 0; turn < rows.size(); ++turn) {
    const std::vector<int> ends = bare_ends(rows[turn], view.cycle);
    for (std::size_t through = 0; !ends.empty() && through < rows.size(); ++through) {
      if (view.signal.movements[through].turn != plan::Turn::through || !paths.is_opposed_turn(turn, through)) continue;
      for (const int end : ends) {
        if (!rows[through].any.at(end)) continue;
        findings.violation("opposed-turn-trap", fmt::format("{} yields to {} on a circular green that ends at {} s, while {} stays green: who waits to turn believes that the oncoming traffic stops too", view.signal.movements[turn].id,
                                                            view.signal.movements[through].id, seconds_of(end), view.signal.movements[through].id),
                           "End both greens together, let the turn's own arrow follow without a gap, protect the turn, or display a flashing yellow arrow");
        break;
      }
    }
  }
}

}  // namespace entrain::review
