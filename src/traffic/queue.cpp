#include "traffic/queue.hpp"

#include <algorithm>
#include <cassert>
#include <optional>

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

namespace {

// A capacity of one red and one green: `red` steps of nothing from `first`, then green whose inner steps all have the same capacity.
struct OneRed {
  std::size_t first = 0, red = 0;
};

std::optional<OneRed> one_red(const std::vector<double>& capacity, double most_arriving) {
  const std::size_t n = capacity.size();
  const double full = *std::max_element(capacity.begin(), capacity.end());
  std::optional<OneRed> found;
  std::size_t below = 0, zero = 0;
  for (std::size_t k = 0; k < n; ++k) {
    const bool is_zero = capacity[k] <= 0;
    zero += is_zero;
    below += capacity[k] < full;
    if (!is_zero || capacity[(k + n - 1) % n] <= 0) continue;
    if (found) return std::nullopt;
    found = OneRed{k, 0};
  }
  if (!found || most_arriving > full) return std::nullopt;
  found->red = zero;
  // Only the first and the last step of green may be partly lit.
  const std::size_t last = (found->first + n - 1) % n, start = (found->first + zero) % n;
  const std::size_t partly = static_cast<std::size_t>(capacity[last] < full) + (start != last && capacity[start] < full ? 1 : 0);
  return below == zero + partly ? found : std::nullopt;
}

class ShiftedQueues {
 public:
  ShiftedQueues(const Profile& arrivals, const Profile& capacity, OneRed red) : m_in(arrivals.vehicles), m_out(capacity.vehicles), m_step_s(arrivals.step_s), m_red(red) {
    const std::size_t n = m_in.size();
    m_sum.assign(2 * n + 1, 0.0);
    m_sum_of_sums.assign(2 * n + 2, 0.0);
    for (std::size_t k = 0; k < 2 * n; ++k) m_sum[k + 1] = m_sum[k] + m_in[k % n];
    for (std::size_t k = 0; k <= 2 * n; ++k) m_sum_of_sums[k + 1] = m_sum_of_sums[k] + m_sum[k];
  }

  // Nothing where the queue is not gone before the last step of green: that shift must be played whole.
  std::optional<QueueFigures> at(std::size_t shift) const {
    const std::size_t n = m_in.size();
    QueueFigures figures;
    double area = 0;
    // The last, perhaps partly lit, step of green: nobody waits before it.
    const std::size_t last = (m_red.first + n - 1) % n;
    const Step end = one_step(0, m_in[(last + shift) % n], m_out[last]);
    area += end.area;
    figures.stops_veh += end.stops;
    double queue = end.queue;
    const std::size_t p = (m_red.first + shift) % n, r = m_red.red;
    const double gathered = m_sum[p + r] - m_sum[p];
    area += static_cast<double>(r) * (queue - m_sum[p]) + m_sum_of_sums[p + r] - m_sum_of_sums[p] + gathered / 2;
    figures.stops_veh += gathered;
    queue += gathered;
    figures.longest_veh = queue;
    for (std::size_t k = m_red.first + r; k < m_red.first + n - 1 && (queue > 0 || k == m_red.first + r); ++k) {
      const Step step = one_step(queue, m_in[(k + shift) % n], m_out[k % n]);
      area += step.area;
      figures.stops_veh += step.stops;
      queue = step.queue;
      figures.longest_veh = std::max(figures.longest_veh, queue);
    }
    if (queue > 0) return std::nullopt;
    figures.delay_veh_s = area * m_step_s;
    return figures;
  }

 private:
  const std::vector<double>&m_in, &m_out;
  double m_step_s;
  OneRed m_red;
  std::vector<double> m_sum, m_sum_of_sums;
};

}  // namespace

std::vector<QueueFigures> periodic_queues(const Profile& arrivals, const Profile& capacity) {
  const std::size_t n = arrivals.vehicles.size();
  std::vector<QueueFigures> figures(n);
  const double most = *std::max_element(arrivals.vehicles.begin(), arrivals.vehicles.end());
  const auto red = arrivals.total() < capacity.total() ? one_red(capacity.vehicles, most) : std::nullopt;
  if (red) {
    const ShiftedQueues queues(arrivals, capacity, *red);
    for (std::size_t shift = 0; shift < n; ++shift) {
      const auto at_once = queues.at(shift);
      figures[shift] = at_once ? *at_once : periodic_queue(arrivals, capacity, shift);
    }
    return figures;
  }
  for (std::size_t shift = 0; shift < n; ++shift) figures[shift] = periodic_queue(arrivals, capacity, shift);
  return figures;
}

QueueFigures periodic_queue(const Profile& arrivals, const Profile& capacity) { return periodic_queue(arrivals, capacity, 0); }

}  // namespace entrain::traffic
