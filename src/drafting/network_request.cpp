#include "drafting/network_request.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace entrain::drafting {
namespace {

network::SignalSite site_of(const project::SignalRow& row, const std::string& source) {
  network::SignalSite site{row.signal, row.name, row.lon, row.lat, {}, fmt::format("{} row {}", source, row.row)};
  if (row.traffic_side == "left") site.traffic_side = TrafficSide::left;
  if (row.traffic_side == "right") site.traffic_side = TrafficSide::right;
  return site;
}

network::CorridorRequest corridor_of(const project::Corridor& corridor, const std::string& file) {
  network::CorridorRequest request;
  request.id = corridor.id;
  request.name = corridor.name.empty() ? (corridor.street.empty() ? corridor.id : corridor.street) : corridor.name;
  const auto has = [&](const char* direction) {
    return std::find(corridor.directions.begin(), corridor.directions.end(), direction) != corridor.directions.end();
  };
  request.forward = has("forward");
  request.backward = has("backward");
  request.signals = corridor.signals;
  request.signals_backward = corridor.signals_backward;
  request.street = corridor.street;
  request.from = corridor.from;
  request.to = corridor.to;
  request.progression_speed_mps = corridor.progression_speed_by_period_mps;
  if (corridor.progression_speed_mps) request.progression_speed_mps.emplace("", *corridor.progression_speed_mps);
  request.where = fmt::format("{} [[corridor]] {}", file, corridor.id);
  return request;
}

}  // namespace

network::NetworkRequest network_request(const project::Project& project, const project::Tables& tables) {
  network::NetworkRequest request;
  request.traffic_side = project.traffic_side;
  request.defaults = network::default_road_values(project.units == project::Units::us);
  for (const auto& row : tables.signals) request.signals.push_back(site_of(row, tables.signals_source));
  for (const auto& row : tables.travel_times)
    request.travel_times.push_back({row.from_signal, row.to_signal, row.period, row.mean_s, row.sd_s, row.length_m, row.runs,
                                    fmt::format("{} row {}", tables.travel_times_source, row.row)});
  for (const auto& row : tables.crossings)
    if (row.length_m) request.crossings.push_back({row.signal, row.leg, *row.length_m});
  for (const auto& corridor : project.corridors) request.corridors.push_back(corridor_of(corridor, project.file));
  for (const auto& period : project.periods) request.periods.push_back(period.id);
  return request;
}

}  // namespace entrain::drafting
