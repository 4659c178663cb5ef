#include "traffic/platoon.hpp"

#include "base/quantity.hpp"

namespace entrain::traffic {
namespace {

Profile inflow_of(const Feed& feed, double cycle_s, double step_s) {
  const double vehicles = feed.stream.flow_vph / seconds_per_hour * cycle_s;
  if (feed.inflow && feed.inflow->total() > 0) return scaled(*feed.inflow, vehicles / feed.inflow->total());
  return uniform_profile(feed.stream.flow_vph / seconds_per_hour, cycle_s, step_s);
}

Profile departures_of(const Feed& feed, double cycle_s, double step_s) {
  const Stream& stream = feed.stream;
  const double flow_vps = feed.flow_vph / seconds_per_hour;
  const Profile capacity = capacity_of(stream, cycle_s, step_s);
  if (capacity.total() <= 0) return uniform_profile(flow_vps, cycle_s, step_s);
  const Profile shape = stream.flow_vph > 0 ? departures(inflow_of(feed, cycle_s, step_s), capacity) : capacity;
  return scaled(shape, flow_vps * cycle_s / shape.total());
}

}  // namespace

Profile capacity_of(const Stream& stream, double cycle_s, double step_s) {
  return capacity_profile(stream.greens, cycle_s, stream.start_up_lost_s, stream.end_gain_s, stream.saturation_flow_vph / seconds_per_hour, step_s);
}

Profile link_arrivals(const std::vector<Feed>& feeds, double uniform_flow_vph, const Spread& spread, double cycle_s) {
  Profile platoons = uniform_profile(0, cycle_s, spread.step_s);
  for (const Feed& feed : feeds)
    if (feed.flow_vph > 0) add_to(platoons, departures_of(feed, cycle_s, spread.step_s));
  Profile arrivals = spread.sd_s ? disperse_normal(platoons, spread.travel_time_s, *spread.sd_s)
                                 : disperse(platoons, spread.travel_time_s, spread.alpha, spread.beta);
  add_to(arrivals, uniform_profile(uniform_flow_vph / seconds_per_hour, cycle_s, spread.step_s));
  return arrivals;
}

}  // namespace entrain::traffic
