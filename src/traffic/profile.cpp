#include "traffic/profile.hpp"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <numeric>

#include "base/circle.hpp"

namespace entrain::traffic {
namespace {

std::size_t steps_in(double cycle_s, double step_s) { return static_cast<std::size_t>(std::max(1L, std::lround(cycle_s / step_s))); }

// Adds to `lit` how much of every step lies in [start, start + duration), in seconds.
void light(std::vector<double>& lit, double start_s, double duration_s, double cycle_s, double step_s) {
  const auto n = lit.size();
  double from = wrap(start_s, cycle_s);
  while (duration_s > 1e-9) {
    const auto k = std::min(n - 1, static_cast<std::size_t>(from / step_s + 1e-9));
    const double part = std::min(duration_s, static_cast<double>(k + 1) * step_s - from);
    const double used = std::max(part, 1e-9);
    lit[k] += std::max(0.0, part);
    duration_s -= used;
    from += used;
    if (from >= cycle_s - 1e-9) from = 0;
  }
}

}  // namespace

double Profile::total() const { return std::accumulate(vehicles.begin(), vehicles.end(), 0.0); }

Profile uniform_profile(double flow_vps, double cycle_s, double step_s) {
  return {step_s, std::vector<double>(steps_in(cycle_s, step_s), flow_vps * step_s)};
}

Profile capacity_profile(const std::vector<GreenTime>& greens, double cycle_s, double start_up_lost_s, double end_gain_s,
                         double saturation_flow_vps, double step_s) {
  std::vector<double> lit(steps_in(cycle_s, step_s), 0.0);
  for (const GreenTime& green : greens) {
    const bool always = green.duration_s >= cycle_s - 1e-9;
    const double start = always ? 0.0 : green.start_s + start_up_lost_s;
    const double duration = always ? cycle_s : green.duration_s - start_up_lost_s + end_gain_s;
    light(lit, start, std::clamp(duration, 0.0, cycle_s), cycle_s, step_s);
  }
  Profile capacity{step_s, std::move(lit)};
  for (double& vehicles : capacity.vehicles) vehicles = std::min(vehicles, step_s) * saturation_flow_vps;
  return capacity;
}

Profile departures(const Profile& arrivals, const Profile& capacity) {
  assert(arrivals.vehicles.size() == capacity.vehicles.size());
  Profile out{arrivals.step_s, std::vector<double>(arrivals.vehicles.size(), 0.0)};
  double queue = 0;
  for (int pass = 0; pass < 2; ++pass)  // the first finds the periodic queue (Lindley's recurrence), the second the departures
    for (std::size_t k = 0; k < out.vehicles.size(); ++k) {
      const double present = queue + arrivals.vehicles[k];
      out.vehicles[k] = std::min(present, capacity.vehicles[k]);
      queue = present - out.vehicles[k];
    }
  return out;
}

Profile shifted(const Profile& flow, double shift_s) {
  const auto n = static_cast<std::int64_t>(flow.vehicles.size());
  const double steps = shift_s / flow.step_s;
  const double whole = std::floor(steps + 1e-9);
  const double part = std::max(0.0, steps - whole);
  const std::int64_t first = wrap(static_cast<std::int64_t>(whole), n);
  Profile out{flow.step_s, std::vector<double>(flow.vehicles.size(), 0.0)};
  for (std::int64_t k = 0; k < n; ++k) {
    const double vehicles = flow.vehicles[static_cast<std::size_t>(k)];
    out.vehicles[static_cast<std::size_t>((k + first) % n)] += (1 - part) * vehicles;
    out.vehicles[static_cast<std::size_t>((k + first + 1) % n)] += part * vehicles;
  }
  return out;
}

Profile disperse(const Profile& flow, double travel_time_s, double alpha, double beta) {
  const double smoothing = 1.0 / (1.0 + alpha * beta * travel_time_s / flow.step_s);
  Profile out = shifted(flow, beta * travel_time_s);
  if (smoothing >= 1.0) return out;
  // Periodic solution of y[k] = F x[k] + (1 - F) y[k-1]: y before the first step is the wrapped geometric sum.
  double before = 0, weight = smoothing;
  for (std::size_t back = out.vehicles.size(); back-- > 0; weight *= 1 - smoothing) before += weight * out.vehicles[back];
  before /= 1 - std::pow(1 - smoothing, static_cast<double>(out.vehicles.size()));
  for (double& vehicles : out.vehicles) before = vehicles = smoothing * vehicles + (1 - smoothing) * before;
  return out;
}

Profile disperse_normal(const Profile& flow, double mean_s, double sd_s) {
  if (sd_s <= 1e-9) return shifted(flow, mean_s);
  const double least = mean_s / 2, most = mean_s + 4 * sd_s;
  const auto distribution = [&](double t) { return 0.5 * std::erfc(-(t - mean_s) / (sd_s * std::sqrt(2.0))); };
  const double mass = distribution(most) - distribution(least);
  Profile out{flow.step_s, std::vector<double>(flow.vehicles.size(), 0.0)};
  for (double from = least; from < most; from += flow.step_s) {
    const double to = std::min(most, from + flow.step_s);
    add_to(out, scaled(shifted(flow, (from + to) / 2), (distribution(to) - distribution(from)) / mass));
  }
  return out;
}

Profile scaled(Profile flow, double factor) {
  for (double& vehicles : flow.vehicles) vehicles *= factor;
  return flow;
}

void add_to(Profile& sum, const Profile& flow) {
  assert(sum.vehicles.size() == flow.vehicles.size());
  for (std::size_t k = 0; k < sum.vehicles.size(); ++k) sum.vehicles[k] += flow.vehicles[k];
}

}  // namespace entrain::traffic
