#include "timing/paths.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

#include "base/circle.hpp"
#include "timing/signal_design.hpp"

namespace entrain::timing {
namespace {

constexpr double straight_across_within_deg = 45;

bool lies_between(int from, int to, int point, int points) { return wrap(point - from, points) < wrap(to - from, points); }

}  // namespace

std::vector<int> leg_ranks(const network::Signal& signal) {
  std::vector<int> order(signal.legs.size());
  std::iota(order.begin(), order.end(), 0);
  const auto bearing = [&](int leg) { return wrap(signal.legs[static_cast<std::size_t>(leg)].bearing_deg, 360.0); };
  std::stable_sort(order.begin(), order.end(), [&](int a, int b) { return bearing(a) < bearing(b); });
  std::vector<int> ranks(order.size());
  for (std::size_t i = 0; i < order.size(); ++i) ranks[static_cast<std::size_t>(order[i])] = static_cast<int>(i);
  return ranks;
}

int steps_between(const network::Signal& signal, int from, int to) {
  const std::vector<int> ranks = leg_ranks(signal);
  const int clockwise = wrap(ranks[static_cast<std::size_t>(to)] - ranks[static_cast<std::size_t>(from)], static_cast<int>(ranks.size()));
  return signal.traffic_side == TrafficSide::right || clockwise == 0 ? clockwise : static_cast<int>(ranks.size()) - clockwise;
}

bool is_opposed_turn(const network::Signal& signal, const network::Movement& movement) {
  using network::TurnKind;
  return movement.turn == TurnKind::u_turn || movement.turn == (signal.traffic_side == TrafficSide::right ? TurnKind::left : TurnKind::right);
}

bool are_opposite_legs(const network::Signal& signal, int a, int b) {
  if (a == b) return false;
  const double turn = wrap(signal.legs[static_cast<std::size_t>(b)].bearing_deg - signal.legs[static_cast<std::size_t>(a)].bearing_deg, 360.0);
  return std::abs(turn - 180) <= straight_across_within_deg;
}

bool paths_conflict(const network::Signal& signal, const network::Movement& a, const network::Movement& b) {
  if (a.from_leg == b.from_leg) return false;  // they part from one stop line
  if (a.to_leg == b.to_leg) return true;       // they merge
  const std::vector<int> ranks = leg_ranks(signal);
  const int points = 2 * static_cast<int>(ranks.size());
  const int entry_side = signal.traffic_side == TrafficSide::right ? 0 : 1;
  const auto entry = [&](int leg) { return 2 * ranks[static_cast<std::size_t>(leg)] + entry_side; };
  const auto exit = [&](int leg) { return 2 * ranks[static_cast<std::size_t>(leg)] + 1 - entry_side; };
  return lies_between(entry(a.from_leg), exit(a.to_leg), entry(b.from_leg), points) !=
         lies_between(entry(a.from_leg), exit(a.to_leg), exit(b.to_leg), points);
}

bool path_meets_crossing(const network::Movement& movement, const network::Crossing& crossing) {
  return movement.from_leg == crossing.leg || movement.to_leg == crossing.leg;
}

bool yields_to(const network::Signal& signal, const network::Movement& turn, const network::Movement& other) {
  return is_opposed_turn(signal, turn) && !is_opposed_turn(signal, other) && are_opposite_legs(signal, turn.from_leg, other.from_leg) &&
         paths_conflict(signal, turn, other);
}

bool is_beside(const network::Signal& signal, const network::Movement& through, const network::Crossing& crossing) {
  if (through.turn != network::TurnKind::through || path_meets_crossing(through, crossing)) return false;
  return steps_between(signal, through.from_leg, crossing.leg) > steps_between(signal, through.from_leg, through.to_leg);
}

}  // namespace entrain::timing
