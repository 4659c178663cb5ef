#include "traffic/queue.hpp"

#include <algorithm>
#include <cassert>

namespace entrain::traffic {
namespace {

struct Step {
  double queue, area, stops;  // queue at the end; area in vehicle-steps
};

Step one_step(double queue, double in, double out) {
  const double after = queue + in - out;
  if (after > 0) return {after, queue + (in - out) / 2, queue > 0 ? in : in - out};
  if (queue <= 0) return {0, 0, 0};
  const double clearing = queue / (out - in);  // part of the step until the queue has gone; out > in here
  return {0, queue * clearing / 2, in * clearing};
}

}  // namespace

QueueFigures periodic_queue(const Profile& arrivals, const Profile& capacity, std::size_t shift) {
  const std::size_t n = arrivals.vehicles.size();
  assert(n == capacity.vehicles.size() && n > 0);
  const double demand = arrivals.total(), supply = capacity.total();
  QueueFigures figures;
  if (supply <= 0) return {demand * arrivals.cycle_s(), demand, demand, demand > 0};
  figures.oversaturated = demand > supply;
  const double scale = figures.oversaturated ? supply / demand : 1.0;
  const auto arrival = [&, at = shift % n](std::size_t k) { return scale * arrivals.vehicles[k + at < n ? k + at : k + at - n]; };
  double queue = 0;
  for (std::size_t k = 0; k < n; ++k) queue = std::max(0.0, queue + arrival(k) - capacity.vehicles[k]);
  for (std::size_t k = 0; k < n; ++k) {
    const Step step = one_step(queue, arrival(k), capacity.vehicles[k]);
    figures.delay_veh_s += step.area * arrivals.step_s;
    figures.stops_veh += step.stops;
    queue = step.queue;
    figures.longest_veh = std::max(figures.longest_veh, queue);
  }
  return figures;
}

QueueFigures periodic_queue(const Profile& arrivals, const Profile& capacity) { return periodic_queue(arrivals, capacity, 0); }

}  // namespace entrain::traffic
