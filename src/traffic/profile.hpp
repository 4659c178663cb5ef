// Periodic flow profiles: vehicles per step round the cycle, and what a green and a stretch of road do to them.
#pragma once

#include <vector>

namespace entrain::traffic {

// Vehicles that pass in each step of the cycle; steps are `step_s` long and the profile repeats.
// step_s * vehicles.size() is the cycle length.
struct Profile {
  double step_s = 1;
  std::vector<double> vehicles;

  double cycle_s() const { return step_s * static_cast<double>(vehicles.size()); }
  double total() const;  // vehicles a cycle
};

struct GreenTime {
  double start_s = 0, duration_s = 0;  // displayed green, local time; duration == cycle: always green
};

// The same flow in every step.
Profile uniform_profile(double flow_vps, double cycle_s, double step_s);

// What a stop line can discharge in each step: saturation flow times the part of the step that lies in effective green,
// [start + start_up_lost, end + end_gain) of every green. Parts of greens that overlap count once.
Profile capacity_profile(const std::vector<GreenTime>& greens, double cycle_s, double start_up_lost_s, double end_gain_s,
                         double saturation_flow_vps, double step_s);

// Departures of a queue fed by `arrivals` and served by `capacity`, in the periodic state. Totals agree unless the flow exceeds
// the capacity: then the capacity is what departs.
Profile departures(const Profile& arrivals, const Profile& capacity);

// Platoon dispersion of Robertson (1969): q'(t + lag) = F q(t) + (1 - F) q'(t + lag - step), F = 1 / (1 + alpha beta T),
// lag = beta T, T in steps. A lag that is no whole number of steps splits each step's vehicles in proportion. Totals are kept.
Profile disperse(const Profile& flow, double travel_time_s, double alpha, double beta);

// Shifts by a truncated normal travel time (never below half the mean): mean and standard deviation measured. Totals are kept.
Profile disperse_normal(const Profile& flow, double mean_s, double sd_s);

// Later by `shift_s` (may be negative); steps are split in proportion.
Profile shifted(const Profile& flow, double shift_s);

Profile scaled(Profile flow, double factor);
// Both must have the same step and length.
void add_to(Profile& sum, const Profile& flow);

}  // namespace entrain::traffic
