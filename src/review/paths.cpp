#include "review/paths.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>

namespace entrain::review {
namespace {

double clockwise_deg(double from, double to) {
  const double d = std::remainder(to - from, 360.0);
  return d < 0 ? d + 360 : d;
}

// Place of each leg round the circle, clockwise from north.
std::vector<int> places(const std::vector<plan::Leg>& legs) {
  std::vector<std::size_t> order(legs.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::stable_sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) { return clockwise_deg(0, legs[a].bearing_deg) < clockwise_deg(0, legs[b].bearing_deg); });
  std::vector<int> place(legs.size());
  for (std::size_t i = 0; i < order.size(); ++i) place[order[i]] = static_cast<int>(i);
  return place;
}

}  // namespace

std::vector<PathUse> uses_of(const SignalView& view, const plan::Group& group) {
  std::vector<PathUse> uses;
  for (const plan::Served& s : group.serves)
    if (const auto found = view.movement.find(s.movement); found != view.movement.end()) uses.push_back({found->second, false, s.right_of_way == plan::RightOfWay::permissive});
  for (const std::string& c : group.crossings)
    if (const auto found = view.crossing.find(c); found != view.crossing.end()) uses.push_back({found->second, true, false});
  return uses;
}

// Looking outwards along a leg, traffic that keeps right leaves on the right (clockwise) and comes in on the left.
PathTable::PathTable(const SignalView& view) : m_view(view), m_places(2 * static_cast<int>(view.signal.legs.size())) {
  m_keeps_right = view.signal.traffic_side == TrafficSide::right;
  m_allows_turn = view.standard("allow_opposed_turn", 1) != 0;
  m_allows_over_crossing = view.standard("allow_turn_over_crossing", 1) != 0;
  const std::vector<int> place = places(view.signal.legs);
  const int in = m_keeps_right ? 0 : 1;
  for (const plan::Movement& m : view.signal.movements) {
    const std::size_t from = view.leg.at(m.from_leg), to = view.leg.at(m.to_leg);
    m_chords.push_back({from, to, 2 * place[from] + in, 2 * place[to] + 1 - in, m.turn, view.signal.legs[from].bearing_deg});
  }
  for (const plan::Crossing& c : view.signal.crossings) m_crossed_leg.push_back(view.leg.at(c.leg));
}

bool PathTable::chords_meet(const Chord& a, const Chord& b) const {
  if (a.from_leg == b.from_leg) return false;  // they part, they do not meet
  if (a.to_leg == b.to_leg) return true;
  const auto between = [&](int p) { return modulo(p - a.entry, m_places) < modulo(a.exit - a.entry, m_places); };
  return between(b.entry) != between(b.exit);
}

bool PathTable::meet(const PathUse& a, const PathUse& b) const {
  if (a.is_crossing && b.is_crossing) return false;
  if (a.is_crossing) return meet(b, a);
  const Chord& chord = m_chords[a.index];
  if (!b.is_crossing) return a.index != b.index && chords_meet(chord, m_chords[b.index]);
  return m_crossed_leg[b.index] == chord.from_leg || m_crossed_leg[b.index] == chord.to_leg;
}

bool PathTable::is_opposed_turn(std::size_t turn, std::size_t other) const {
  const Chord &a = m_chords[turn], &b = m_chords[other];
  if (!chords_meet(a, b)) return false;
  const plan::Turn across = m_keeps_right ? plan::Turn::left : plan::Turn::right, near_side = m_keeps_right ? plan::Turn::right : plan::Turn::left;
  if (a.turn != across && a.turn != plan::Turn::u_turn) return false;
  if (b.turn != plan::Turn::through && b.turn != near_side) return false;
  // From the opposite side: the other's leg lies across, within 60 degrees of straight on.
  return std::fabs(clockwise_deg(a.from_bearing_deg, b.from_bearing_deg) - 180) <= 60;
}

Yield PathTable::yield_of(const PathUse& a, const PathUse& b) const {
  if (!a.permissive || a.is_crossing) return Yield::none;
  const Chord& chord = m_chords[a.index];
  if (!b.is_crossing) {
    if (!is_opposed_turn(a.index, b.index)) return Yield::none;
    return m_allows_turn ? Yield::allowed : Yield::not_allowed;
  }
  const std::size_t leg = m_crossed_leg[b.index];
  if (leg != chord.to_leg || leg == chord.from_leg || chord.turn == plan::Turn::through) return Yield::none;
  return m_allows_over_crossing ? Yield::allowed : Yield::not_allowed;
}

const std::string& PathTable::name(const PathUse& use) const { return use.is_crossing ? m_view.signal.crossings[use.index].id : m_view.signal.movements[use.index].id; }

}  // namespace entrain::review
