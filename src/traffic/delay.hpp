// Published formulas for delay, capacity and cycle length at one stop line. Flows in vehicles per second unless named otherwise.
#pragma once

#include <string>

namespace entrain::traffic {

// Webster (1958), seconds a vehicle: c(1-l)^2 / (2(1-lx)) + x^2 / (2q(1-x)) - 0.65 (c/q^2)^(1/3) x^(2+5l), l = g/c, x = q/(l s).
// Valid for x < 1; returns infinity from there on.
double webster_delay_s(double cycle_s, double effective_green_s, double flow_vps, double saturation_flow_vps);

// Highway Capacity Manual (2000), chapter 16. Uniform arrivals: 0.5 C (1 - g/C)^2 / (1 - min(1, X) g/C).
double uniform_delay_s(double cycle_s, double effective_green_s, double degree_of_saturation);
// Random and overflow delay: 900 T [(X-1) + sqrt((X-1)^2 + 8 k I X / (c T))], capacity in vehicles per hour, T in hours.
double overflow_delay_s(double degree_of_saturation, double capacity_vph, double period_h = 0.25, double k = 0.5, double i = 1.0);
// Progression factor (1 - P) f_PA / (1 - g/C), P = R_p g/C, arrival types 1..6.
double progression_factor(int arrival_type, double green_ratio);

// Pedestrians who arrive evenly: (C - g)^2 / (2C).
double pedestrian_delay_s(double cycle_s, double walk_s);

// Webster (1958): (1.5 L + 5) / (1 - Y); infinity for Y >= 1.
double webster_cycle_s(double lost_time_s, double flow_ratio_sum);

}  // namespace entrain::traffic
