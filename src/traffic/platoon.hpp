// Arrivals at a downstream stop line: departures of the upstream greens, spread over the travel time.
#pragma once

#include <optional>
#include <vector>

#include "traffic/profile.hpp"

namespace entrain::traffic {

// A stream of vehicles through one stop line.
struct Stream {
  std::vector<GreenTime> greens;  // local time of its signal
  double start_up_lost_s = 2, end_gain_s = 2;
  double flow_vph = 0;             // arrivals that shape the queue
  double saturation_flow_vph = 0;
};

struct Feed {
  Stream stream;
  double flow_vph = 0;            // the part of the stream that enters the link
  std::optional<Profile> inflow;  // shape of what arrives behind the stream's greens, local time; absent: even
};

struct Spread {
  double travel_time_s = 0;
  std::optional<double> sd_s;  // measured spread of travel times: truncated normal instead of Robertson
  double alpha = 0.35, beta = 0.8;
  double step_s = 1;
};

// Vehicles a step that arrive at the downstream stop line, in the upstream signal's local time, sum of all feeds and the even
// `uniform_flow_vph`. A feed departs as an inflow (even, or of its own shape) of its stream's flow behind its greens would; a stream without flow departs
// as its effective green alone; one without green departs evenly.
Profile link_arrivals(const std::vector<Feed>& feeds, double uniform_flow_vph, const Spread& spread, double cycle_s);

// What the stream's stop line can discharge, vehicles a step.
Profile capacity_of(const Stream& stream, double cycle_s, double step_s);

}  // namespace entrain::traffic
