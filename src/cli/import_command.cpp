// entrain import PROJECT: what was understood of the roads, which defaults were used, what was left out.
#include <fmt/format.h>

#include <cstdlib>
#include <nlohmann/json.hpp>

#include "base/number_text.hpp"
#include "cli/command.hpp"
#include "cli/load_project.hpp"
#include "geo/out/geopackage.hpp"

namespace entrain::cli {
namespace {

using Json = nlohmann::ordered_json;
using network::Network;

double rounded(double value, double scale) { return std::round(value * scale) / scale + 0.0; }

Json json_of(const network::Signal& signal) {
  Json json{{"id", signal.id}, {"name", signal.name}, {"pedestrian_only", signal.pedestrian_only}};
  if (signal.has_place) {
    json["lon"] = rounded(signal.place.lon, 1e7);
    json["lat"] = rounded(signal.place.lat, 1e7);
  }
  json["legs"] = Json::array();
  for (const auto& leg : signal.legs)
    json["legs"].push_back({{"id", leg.id}, {"street", leg.street}, {"bearing_deg", rounded(leg.bearing_deg, 10)}, {"lanes_in", leg.lanes_in},
                            {"lanes_out", leg.lanes_out}, {"speed_limit_mps", rounded(leg.speed_limit_mps, 1000)}, {"speed_is_default", leg.speed_is_default},
                            {"grade_in", rounded(leg.grade_in, 1e4)}, {"width_m", rounded(leg.width_m, 100)}, {"neighbour", leg.neighbour}});
  json["movements"] = Json::array();
  for (const auto& movement : signal.movements) json["movements"].push_back(movement.id);
  json["crossings"] = Json::array();
  for (const auto& crossing : signal.crossings) json["crossings"].push_back({{"id", crossing.id}, {"length_m", rounded(crossing.length_m, 100)}, {"is_default", crossing.length_is_default}});
  return json;
}

Json json_of(const Network& network, const network::SignalLink& link) {
  Json json{{"id", link.id},
            {"from_signal", network.signals[static_cast<std::size_t>(link.from_signal)].id},
            {"to_signal", network.signals[static_cast<std::size_t>(link.to_signal)].id},
            {"length_m", rounded(link.length_m, 1000)},
            {"grade", rounded(link.grade, 1e4)},
            {"lanes", link.lanes},
            {"travel_times", Json::array()}};
  for (const auto& [period, time] : link.travel_times) {
    Json item{{"period", period}, {"mean_s", rounded(time.mean_s, 1000)}, {"origin", time.origin}};
    if (time.sd_s) item["sd_s"] = *time.sd_s;
    if (time.runs) item["runs"] = *time.runs;
    json["travel_times"].push_back(std::move(item));
  }
  return json;
}

Json corridors_of(const Network& network) {
  Json list = Json::array();
  for (const auto& corridor : network.corridors) {
    Json item{{"id", corridor.id}, {"name", corridor.name}, {"directions", Json::array()}};
    for (const auto& direction : corridor.directions) {
      Json d{{"name", direction.name}, {"label", direction.label}, {"length_m", 0}, {"signals", Json::array()}};
      double length = 0;
      for (const auto& stop : direction.stops) {
        length += stop.distance_m;
        d["signals"].push_back(network.signals[static_cast<std::size_t>(stop.signal)].id);
      }
      d["length_m"] = rounded(length, 1000);
      item["directions"].push_back(std::move(d));
    }
    list.push_back(std::move(item));
  }
  return list;
}

Json json_of(const Network& network, const Diagnostics& notes) {
  Json json;
  for (auto* key : {"signals", "links"}) json[key] = Json::array();
  for (const auto& signal : network.signals) json["signals"].push_back(json_of(signal));
  for (const auto& link : network.links) json["links"].push_back(json_of(network, link));
  json["junctions"] = boost::num_vertices(network.graph);
  json["roads"] = boost::num_edges(network.graph);
  json["traffic_side"] = network.traffic_side == TrafficSide::right ? "right" : "left";
  json["corridors"] = corridors_of(network);
  json["defaults"] = Json::array();
  for (const auto& use : network.defaults) json["defaults"].push_back({{"what", use.what}, {"value", use.value}, {"times", use.times}});
  json["left_out"] = Json::object();
  for (const auto& [kind, times] : network.left_out) json["left_out"][kind] = times;
  json["findings"] = Json::array();
  for (const auto& finding : network.findings) {
    Json item{{"kind", finding.kind}, {"sentence", finding.sentence}};
    if (finding.has_place) item["lon"] = rounded(finding.lon, 1e7), item["lat"] = rounded(finding.lat, 1e7);
    json["findings"].push_back(std::move(item));
  }
  json["notes"] = Json::array();
  for (const Diagnostic& d : notes) json["notes"].push_back(to_text(d));
  return json;
}

std::map<std::string, int> origins_of(const Network& network) {
  std::map<std::string, int> origins;
  for (const auto& link : network.links)
    for (const auto& [period, time] : link.travel_times) ++origins[time.origin];
  return origins;
}

void print_corridors(const Network& network) {
  for (const auto& corridor : network.corridors)
    for (const auto& direction : corridor.directions) {
      double length = 0;
      std::string ids;
      for (const auto& stop : direction.stops) {
        length += stop.distance_m;
        ids += " " + network.signals[static_cast<std::size_t>(stop.signal)].id;
      }
      fmt::print("corridor {} {} ({}): {} signals, {} m:{}\n", corridor.id, direction.name, direction.label, direction.stops.size(), number_text(length, 0), ids);
    }
}

void print_summary(const Network& network) {
  std::size_t movements = 0, crossings = 0, pedestrian = 0;
  for (const auto& signal : network.signals) {
    movements += signal.movements.size();
    crossings += signal.crossings.size();
    pedestrian += signal.pedestrian_only;
  }
  fmt::print("signals    {} ({} for pedestrians only), {} movements, {} crossings\n", network.signals.size(), pedestrian, movements, crossings);
  fmt::print("junctions  {}\nroads      {} (one for each direction of travel)\n", boost::num_vertices(network.graph), boost::num_edges(network.graph));
  fmt::print("links      {} between signals; travel times:", network.links.size());
  for (const auto& [origin, times] : origins_of(network)) fmt::print(" {} {}", times, origin);
  fmt::print("\ntraffic    keeps {}{}\n", network.traffic_side == TrafficSide::right ? "right" : "left", network.traffic_side_assumed ? " (assumed)" : "");
  print_corridors(network);
  for (const auto& use : network.defaults) fmt::print("default    {} = {}, {} times\n", use.what, use.value, use.times);
  for (const auto& [kind, times] : network.left_out) fmt::print("left out   {}: {}\n", kind, times);
  for (const auto& finding : network.findings) fmt::print("finding    {}\n", printable(finding.sentence, 300));
}

struct ImportOptions {
  std::string project, output;
};

int run_import(const ImportOptions& options, const CommonOptions& common) {
  auto loaded = load_project(options.project);
  if (!loaded) return fail(loaded.error());
  const Network& network = loaded->value.network;
  if (!options.output.empty()) {
    const char* epoch = std::getenv("SOURCE_DATE_EPOCH");
    const auto written = geo::write_network_geopackage(network, options.output, epoch != nullptr ? parse_whole_number(epoch).value_or(0) : 0);
    if (!written) return fail(written.error());
  }
  if (common.json) {
    fmt::print("{}\n", json_of(network, loaded->notes).dump(1, ' ', false, Json::error_handler_t::replace));
  } else {
    print_diagnostics(loaded->notes, common.quiet);
    print_summary(network);
  }
  return done;
}

}  // namespace

std::function<int()> declare_import(CLI::App& app, const CommonOptions& common) {
  auto options = std::make_shared<ImportOptions>();
  app.add_option("project", options->project, "project.toml, or the folder that holds it")->required();
  app.add_option("-o,--output", options->output, "Write the network as GeoPackage layers to this file");
  return [options, &common] { return run_import(*options, common); };
}

}  // namespace entrain::cli
