// Figures of merit of any plan, from the plan alone: delay, stops, queues, degree of saturation, level of service, waits, bands.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "plan/plan.hpp"

namespace entrain::evaluation {

struct LaneGroupFigures {
  std::string signal, lane_group;
  std::vector<std::string> groups;  // signal groups that serve it
  double flow_vph = 0, capacity_vph = 0;
  double degree_of_saturation = 0;
  double uniform_delay_s = 0;       // from the arrival profile against the green
  double overflow_delay_s = 0;      // HCM 2000 second term, T = 0.25 h, k = 0.5, I = 1
  double delay_s = 0;               // control delay a vehicle
  double stops_per_vehicle = 0;
  double back_of_queue_m = 0;       // mean largest back of queue in a lane
  std::optional<double> storage_m;
  std::string level_of_service;     // A..F by control delay (HCM 2000)
  bool platooned = false;           // arrivals come from an upstream signal of the plan
};

struct SignalFigures {
  std::string signal;
  double delay_s = 0;               // flow-weighted
  std::string level_of_service;
  double worst_degree_of_saturation = 0;
  double longest_pedestrian_wait_s = 0;   // from the end of walk to its next begin
  double longest_side_street_wait_s = 0;  // longest red of a vehicle group that is not coordinated
  double mean_pedestrian_delay_s = 0;     // r^2 / 2C
};

struct Evaluation {
  std::vector<LaneGroupFigures> lane_groups;  // plan order
  std::vector<SignalFigures> signals;         // plan order
  plan::Measures total;
  std::vector<std::string> remarks;           // queue beyond storage, oversaturated, cycle that does not divide the day, ...
};

// How platoons are shaped. `by_link`: each link's feeds arrive evenly at their own upstream greens (the cost model of the offset
// problem). `through_network`: arrivals shape departures shape arrivals, round after round, over all links (a periodic flow model;
// on loops the rounds are cut at a fixed number).
enum class Platoons { by_link, through_network };

// Never fails: what a plan does not state is left out and remarked.
Evaluation evaluate(const plan::Plan& plan, Platoons platoons = Platoons::by_link);

// HCM 2000 level of service by control delay, seconds a vehicle.
std::string level_of_service(double control_delay_s);

}  // namespace entrain::evaluation
