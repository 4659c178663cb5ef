#include "coordination/bands/model.hpp"

#include <utility>

namespace entrain::bands {
namespace {

std::vector<std::vector<Window>> windows_of(const TwoWayStation& station, bool forward) {
  std::vector<std::vector<Window>> windows;
  for (const StationOption& option : station.options) windows.push_back(forward ? option.forward : option.backward);
  return windows;
}

}  // namespace

Problem to_problem(const TwoWayInput& input) {
  Problem problem;
  problem.cycle_s = input.cycle_s;
  const std::size_t count = input.stations.size();
  Direction forward{{}, input.forward_weight}, backward{{}, input.backward_weight};
  for (std::size_t i = 0; i < count; ++i) {
    const TwoWayStation& station = input.stations[i];
    problem.stations.push_back(
        {static_cast<int>(station.options.size()), station.fixed_option, station.fixed_offset_s, station.half_period});
    const double travel = i == 0 || i - 1 >= input.forward_travel_s.size() ? 0 : input.forward_travel_s[i - 1];
    forward.stops.push_back({static_cast<int>(i), travel, station.forward_clearance_s, windows_of(station, true)});
    const std::size_t mirror = count - 1 - i;
    const double back = i == 0 || mirror >= input.backward_travel_s.size() ? 0 : input.backward_travel_s[mirror];
    backward.stops.push_back({static_cast<int>(mirror), back, input.stations[mirror].backward_clearance_s,
                              windows_of(input.stations[mirror], false)});
  }
  problem.corridors.push_back({{std::move(forward)}});
  if (!input.one_way) problem.corridors.back().directions.push_back(std::move(backward));
  return problem;
}

}  // namespace entrain::bands
