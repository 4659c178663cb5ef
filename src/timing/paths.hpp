// Paths of movements through an intersection, from leg bearings and traffic side alone: chords between entry and exit points that
// stand in order round a circle. Every leg has an entry and an exit; keeping right, traffic that enters passes the leg on the
// anticlockwise side seen from above the intersection, keeping left on the other: mirroring the legs and the side mirrors the paths.
#pragma once

#include "network/network.hpp"

namespace entrain::timing {

// The turn that crosses oncoming traffic: left where traffic keeps right, right where it keeps left. U-turns count as opposed turns.
bool is_opposed_turn(const network::Signal& signal, const network::Movement& movement);

// True if traffic from leg `b` is oncoming for traffic from leg `a`: the legs lie within 45 degrees of straight across.
bool are_opposite_legs(const network::Signal& signal, int a, int b);

// True if opposed turn `turn` yields to `other` where it is permissive: the other comes from the opposite leg, is no opposed turn itself and
// their paths cross or merge.
bool yields_to(const network::Signal& signal, const network::Movement& turn, const network::Movement& other);

// True if the crossing runs beside the through movement on the side that traffic keeps to (where its near-side turn crosses it).
bool is_beside(const network::Signal& signal, const network::Movement& through, const network::Crossing& crossing);

// Legs by bearing, clockwise from north; ties in given order. ranks[leg] is its place.
std::vector<int> leg_ranks(const network::Signal& signal);

// Steps from leg `from` to leg `to` in the direction of the side: clockwise where traffic keeps right, anticlockwise where it keeps left.
int steps_between(const network::Signal& signal, int from, int to);

}  // namespace entrain::timing
