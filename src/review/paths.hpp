// Where the paths of movements and crossings meet, from the plan's legs alone. Private to the review.
//
// The legs lie round a circle in order of bearing. Each has an entry (where its traffic comes in) and an exit, on the sides that the traffic
// side says. A movement is the chord from an entry to an exit: two chords that interleave cross, two that share the exit leg merge.
#pragma once

#include <string>
#include <vector>

#include "review/signal_view.hpp"

namespace entrain::review {

struct PathUse {
  std::string id;  // movement or crossing
  bool is_crossing = false;
  bool permissive = false;
};

// What a group uses: its movements with their right of way, its crossings.
std::vector<PathUse> uses_of(const SignalView& view, const plan::Group& group);

enum class Yield { none, allowed, not_allowed };  // none: it has right of way, or no yield exists for such a pair

class PathTable {
 public:
  explicit PathTable(const SignalView& view);

  bool meet(const PathUse& a, const PathUse& b) const;
  // Whether `a`, where it is permissive, yields to `b` in a way the plan's standard knows.
  Yield yield_of(const PathUse& a, const PathUse& b) const;
  // `a` turns across the path of `b`, which comes from the opposite side.
  bool is_opposed_turn(const PathUse& a, const PathUse& b) const;
  bool is_through(const std::string& movement) const;

 private:
  const plan::Movement* movement(const std::string& id) const;
  const plan::Crossing* crossing(const std::string& id) const;
  int entry(const std::string& leg) const;
  int exit(const std::string& leg) const;
  bool chords_meet(const plan::Movement& a, const plan::Movement& b) const;
  double bearing(const std::string& leg) const;

  const SignalView& m_view;
  std::vector<std::string> m_order;  // leg ids clockwise
};

}  // namespace entrain::review
