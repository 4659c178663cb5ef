// A vertical queue behind a stop line in the periodic state: delay, stops and the longest queue of one cycle.
#pragma once

#include "traffic/profile.hpp"

namespace entrain::traffic {

struct QueueFigures {
  double delay_veh_s = 0;     // vehicle-seconds in queue, a cycle
  double stops_veh = 0;       // vehicles that meet a queue or a red, a cycle
  double longest_veh = 0;     // largest queue at the end of a step
  bool oversaturated = false; // arrivals exceed the capacity: figures are for arrivals cut to the capacity
};

// Arrivals and capacity in vehicles a step, same length. Within a step both are taken as even: a queue q with a in and c out
// has the area q + (a - c)/2 if it lasts, q f/2 with f = q/(c - a) if it clears inside the step.
// Without capacity every arrival waits the whole cycle. Arrivals above the capacity are scaled down to it.
QueueFigures periodic_queue(const Profile& arrivals, const Profile& capacity);

// The same with the arrivals `shift` steps earlier: arrival of step k is arrivals[(k + shift) mod n].
QueueFigures periodic_queue(const Profile& arrivals, const Profile& capacity, std::size_t shift);

// All shifts 0 .. n-1 at once, the same figures. One red and no arrival above the full step's capacity: the red is summed from
// prefix sums and only the clearing of the queue is played, O(n + steps to clear) a shift; otherwise every shift is played whole.
std::vector<QueueFigures> periodic_queues(const Profile& arrivals, const Profile& capacity);

}  // namespace entrain::traffic
