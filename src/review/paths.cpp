#include "review/paths.hpp"

#include <algorithm>
#include <cmath>

namespace entrain::review {
namespace {

double clockwise_deg(double from, double to) {
  double d = std::fmod(to - from, 360.0);
  if (d < 0) d += 360;
  return d;
}

}  // namespace

std::vector<PathUse> uses_of(const SignalView&, const plan::Group& group) {
  std::vector<PathUse> uses;
  for (const plan::Served& s : group.serves) uses.push_back({s.movement, false, s.right_of_way == plan::RightOfWay::permissive});
  for (const std::string& c : group.crossings) uses.push_back({c, true, false});
  return uses;
}

PathTable::PathTable(const SignalView& view) : m_view(view) {
  std::vector<const plan::Leg*> legs;
  for (const plan::Leg& leg : view.signal.legs) legs.push_back(&leg);
  std::stable_sort(legs.begin(), legs.end(), [](const plan::Leg* a, const plan::Leg* b) { return clockwise_deg(0, a->bearing_deg) < clockwise_deg(0, b->bearing_deg); });
  for (const plan::Leg* leg : legs) m_order.push_back(leg->id);
}

const plan::Movement* PathTable::movement(const std::string& id) const {
  const auto found = m_view.movement.find(id);
  return found == m_view.movement.end() ? nullptr : &m_view.signal.movements[found->second];
}

const plan::Crossing* PathTable::crossing(const std::string& id) const {
  const auto found = m_view.crossing.find(id);
  return found == m_view.crossing.end() ? nullptr : &m_view.signal.crossings[found->second];
}

// Looking outwards along a leg, traffic that keeps right leaves on the right (clockwise) and comes in on the left.
int PathTable::entry(const std::string& leg) const {
  const auto at = static_cast<int>(std::find(m_order.begin(), m_order.end(), leg) - m_order.begin());
  return 2 * at + (m_view.signal.traffic_side == TrafficSide::right ? 0 : 1);
}

int PathTable::exit(const std::string& leg) const {
  const auto at = static_cast<int>(std::find(m_order.begin(), m_order.end(), leg) - m_order.begin());
  return 2 * at + (m_view.signal.traffic_side == TrafficSide::right ? 1 : 0);
}

double PathTable::bearing(const std::string& leg) const {
  const auto found = m_view.leg.find(leg);
  return found == m_view.leg.end() ? 0 : m_view.signal.legs[found->second].bearing_deg;
}

bool PathTable::chords_meet(const plan::Movement& a, const plan::Movement& b) const {
  if (a.from_leg == b.from_leg) return false;  // they part, they do not meet
  if (a.to_leg == b.to_leg) return true;
  const int points = 2 * static_cast<int>(m_order.size());
  const int from = entry(a.from_leg), to = exit(a.to_leg);
  const auto between = [&](int p) { return modulo(p - from, points) < modulo(to - from, points); };
  return between(entry(b.from_leg)) != between(exit(b.to_leg));
}

bool PathTable::meet(const PathUse& a, const PathUse& b) const {
  if (a.is_crossing && b.is_crossing) return false;
  if (a.is_crossing) return meet(b, a);
  const plan::Movement* m = movement(a.id);
  if (m == nullptr) return false;
  if (b.is_crossing) {
    const plan::Crossing* c = crossing(b.id);
    return c != nullptr && (c->leg == m->from_leg || c->leg == m->to_leg);
  }
  const plan::Movement* n = movement(b.id);
  return n != nullptr && a.id != b.id && chords_meet(*m, *n);
}

bool PathTable::is_opposed_turn(const PathUse& a, const PathUse& b) const {
  if (a.is_crossing || b.is_crossing) return false;
  const plan::Movement *m = movement(a.id), *n = movement(b.id);
  if (m == nullptr || n == nullptr || m->from_leg == n->from_leg || !chords_meet(*m, *n)) return false;
  const bool keeps_right = m_view.signal.traffic_side == TrafficSide::right;
  const plan::Turn across = keeps_right ? plan::Turn::left : plan::Turn::right, near_side = keeps_right ? plan::Turn::right : plan::Turn::left;
  if (m->turn != across && m->turn != plan::Turn::u_turn) return false;
  if (n->turn != plan::Turn::through && n->turn != near_side) return false;
  // From the opposite side: the other's leg lies across, within 60 degrees of straight on.
  const double apart = clockwise_deg(bearing(m->from_leg), bearing(n->from_leg));
  return std::fabs(apart - 180) <= 60;
}

bool PathTable::is_through(const std::string& id) const {
  const plan::Movement* m = movement(id);
  return m != nullptr && m->turn == plan::Turn::through;
}

Yield PathTable::yield_of(const PathUse& a, const PathUse& b) const {
  if (!a.permissive || a.is_crossing) return Yield::none;
  const auto by_standard = [&](const char* key) { return m_view.standard(key, 1) != 0 ? Yield::allowed : Yield::not_allowed; };
  const plan::Movement* m = movement(a.id);
  if (m == nullptr) return Yield::none;
  if (b.is_crossing) {
    const plan::Crossing* c = crossing(b.id);
    const bool turns_over = c != nullptr && c->leg == m->to_leg && c->leg != m->from_leg && m->turn != plan::Turn::through;
    return turns_over ? by_standard("allow_turn_over_crossing") : Yield::none;
  }
  return is_opposed_turn(a, b) ? by_standard("allow_opposed_turn") : Yield::none;
}

}  // namespace entrain::review
