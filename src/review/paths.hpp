// Where the paths of movements and crossings meet, from the plan's legs alone. Private to the review.
//
// The legs lie round a circle in order of bearing. Each has an entry (where its traffic comes in) and an exit, on the sides that the traffic
// side says. A movement is the chord from an entry to an exit: two chords that interleave cross, two that share the exit leg merge. A
// crossing lies over both the entry and the exit of its leg.
#pragma once

#include <vector>

#include "review/signal_view.hpp"

namespace entrain::review {

struct PathUse {
  std::size_t index = 0;  // of the movement or the crossing
  bool is_crossing = false;
  bool permissive = false;
};

// What a group uses: its movements with their right of way, its crossings. Names that are not there are left out.
std::vector<PathUse> uses_of(const SignalView& view, const plan::Group& group);

enum class Yield { none, allowed, not_allowed };  // none: it has right of way, or no yield exists for such a pair

class PathTable {
 public:
  explicit PathTable(const SignalView& view);  // with geometry

  bool meet(const PathUse& a, const PathUse& b) const;
  // Whether `a`, where it is permissive, yields to `b` in a way the plan's standard knows.
  Yield yield_of(const PathUse& a, const PathUse& b) const;
  // Movement `turn` turns across the path of movement `other`, which comes from the opposite side.
  bool is_opposed_turn(std::size_t turn, std::size_t other) const;
  const std::string& name(const PathUse& use) const;

 private:
  struct Chord {
    std::size_t from_leg = 0, to_leg = 0;
    int entry = 0, exit = 0;  // places round the circle
    plan::Turn turn = plan::Turn::through;
    double from_bearing_deg = 0;
  };

  bool chords_meet(const Chord& a, const Chord& b) const;

  const SignalView& m_view;
  std::vector<Chord> m_chords;            // by movement
  std::vector<std::size_t> m_crossed_leg;  // by crossing
  int m_places = 0;
  bool m_keeps_right = true, m_allows_turn = true, m_allows_over_crossing = true;
};

}  // namespace entrain::review
