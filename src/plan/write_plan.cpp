#include <cmath>
#include <nlohmann/json.hpp>

#include "base/number_text.hpp"
#include "plan/plan_text.hpp"

namespace entrain::plan {
namespace {

using Json = nlohmann::ordered_json;

// A number with at most `decimals` decimals; whole numbers are written without a point.
Json number(double value, int decimals = 3) {
  if (!std::isfinite(value)) return nullptr;
  const double scale = std::pow(10.0, decimals);
  const double rounded = std::round(value * scale) / scale;
  if (rounded == std::floor(rounded) && std::fabs(rounded) < 1e15) return static_cast<std::int64_t>(rounded);
  return rounded;
}

void put(Json& json, const char* key, const std::optional<double>& value, int decimals = 3) {
  if (value) json[key] = number(*value, decimals);
}

Json values(const std::map<std::string, double>& map) {
  Json json = Json::object();
  for (const auto& [key, value] : map) json[key] = number(value, 6);
  return json;
}

Json json_of(const Controller& controller) {
  Json json{{"kind", controller.kind}};
  if (controller.ring_barrier) {
    json["rings"] = controller.ring_barrier->rings;
    json["barriers_after"] = controller.ring_barrier->barriers_after;
  }
  json["coordinated"] = controller.coordinated;
  return json;
}

Json json_of(const ClearanceBasis& basis) {
  Json json{{"speed_mps", number(basis.speed_mps, 4)}, {"grade", number(basis.grade, 4)}, {"width_m", number(basis.width_m)},
            {"vehicle_length_m", number(basis.vehicle_length_m)}};
  put(json, "clearing_speed_mps", basis.clearing_speed_mps, 4);
  if (const auto& by = basis.override_by) json["override"] = Json{{"what", by->what}, {"reason", by->reason}, {"author", by->author}};
  else json["override"] = nullptr;
  return json;
}

Json serves_of(const Group& group) {
  Json list = Json::array();
  for (const Served& served : group.serves) {
    Json json{{"movement", served.movement}, {"right_of_way", word(served.right_of_way)}};
    if (served.flashing_yellow_arrow) json["flashing_yellow_arrow"] = true;
    list.push_back(std::move(json));
  }
  return list;
}

void put_identity(Json& json, const Group& group) {
  json["id"] = group.id;
  json["kind"] = word(group.kind);
  if (group.phase_number) json["phase_number"] = *group.phase_number;
  if (group.kind != GroupKind::pedestrian) json["serves"] = serves_of(group);
  if (!group.crossings.empty()) json["crossings"] = group.crossings;
  if (group.parent) json["parent"] = *group.parent;
  if (group.kind == GroupKind::pedestrian) json["service"] = word(group.service);
}

Json json_of(const Group& group) {
  Json json;
  put_identity(json, group);
  json["greens"] = Json::array();
  for (const Green& green : group.greens) json["greens"].push_back({{"start_s", number(green.start_s)}, {"duration_s", number(green.duration_s)}});
  if (group.kind == GroupKind::pedestrian) {
    json["clearance_s"] = number(group.clearance_s);
  } else {
    json["yellow_s"] = number(group.yellow_s);
    json["red_clearance_s"] = number(group.red_clearance_s);
    put(json, "split_s", group.split_s);
  }
  json["minimum_green_s"] = number(group.minimum_green_s);
  put(json, "flow_vph", group.flow_vph);
  put(json, "saturation_flow_vph", group.saturation_flow_vph);
  put(json, "start_up_lost_s", group.start_up_lost_s);
  put(json, "end_gain_s", group.end_gain_s);
  put(json, "degree_of_saturation", group.degree_of_saturation, 4);
  if (group.clearance_basis) json["clearance_basis"] = json_of(*group.clearance_basis);
  return json;
}

void put_geometry(Json& json, const Signal& signal) {
  for (auto* list : {"legs", "movements", "lane_groups", "crossings"}) json[list] = Json::array();
  for (const Leg& leg : signal.legs) {
    Json item{{"id", leg.id}, {"bearing_deg", number(leg.bearing_deg, 1)}};
    if (!leg.street.empty()) item["street"] = leg.street;
    json["legs"].push_back(std::move(item));
  }
  for (const Movement& m : signal.movements)
    json["movements"].push_back({{"id", m.id}, {"from_leg", m.from_leg}, {"to_leg", m.to_leg}, {"turn", word(m.turn)}});
  for (const LaneGroup& g : signal.lane_groups)
    json["lane_groups"].push_back({{"id", g.id},
                                   {"movements", g.movements},
                                   {"lanes", g.lanes},
                                   {"flow_vph", number(g.flow_vph)},
                                   {"saturation_flow_vph", number(g.saturation_flow_vph)},
                                   {"storage_m", g.storage_m ? number(*g.storage_m) : Json(nullptr)}});
  for (const Crossing& c : signal.crossings) json["crossings"].push_back({{"id", c.id}, {"leg", c.leg}, {"length_m", number(c.length_m)}});
}

void put_known_timing(Json& json, const Signal& signal) {
  if (const auto& running = signal.running) {
    Json item = Json::object();
    put(item, "cycle_s", running->cycle_s);
    put(item, "offset_s", running->offset_s);
    item["splits_s"] = values(running->splits_s);
    if (!running->sequence.empty()) item["sequence"] = running->sequence;
    json["running"] = std::move(item);
  }
  if (const auto& evidence = signal.evidence)
    json["evidence"] = Json{{"critical_groups", evidence->critical_groups},
                            {"critical_flow_ratio", number(evidence->critical_flow_ratio, 4)},
                            {"critical_lost_time_s", number(evidence->critical_lost_time_s)},
                            {"minimum_cycle_s", number(evidence->minimum_cycle_s)},
                            {"text", evidence->text}};
  for (const Oversaturation& over : signal.oversaturated)
    json["oversaturated"].push_back({{"lane_group", over.lane_group},
                                     {"degree_of_saturation", number(over.degree_of_saturation, 4)},
                                     {"queue_growth_vph", number(over.queue_growth_vph)}});
}

Json json_of(const Signal& signal) {
  Json json{{"id", signal.id}, {"name", signal.name}};
  put(json, "lon", signal.lon, 7);
  put(json, "lat", signal.lat, 7);
  json["traffic_side"] = word(signal.traffic_side);
  json["operation"] = word(signal.operation);
  json["cycle_s"] = number(signal.cycle_s);
  json["offset_s"] = number(signal.offset_s);
  json["reference_group"] = signal.reference_group;
  json["controller"] = json_of(signal.controller);
  put_geometry(json, signal);
  json["groups"] = Json::array();
  for (const Group& group : signal.groups) json["groups"].push_back(json_of(group));
  json["conflicts"] = Json::array();
  for (const Conflict& c : signal.conflicts)
    json["conflicts"].push_back({{"groups", {c.a, c.b}}, {"intergreen_s", {number(c.intergreen_ab_s), number(c.intergreen_ba_s)}}});
  if (signal.conflicts_given) json["conflicts_given"] = true;
  put_known_timing(json, signal);
  json["clock"] = signal.clock;
  if (signal.offset_fixed) json["offset_fixed"] = true;
  if (signal.sequence_fixed) json["sequence_fixed"] = true;
  if (signal.splits_fixed) json["splits_fixed"] = true;
  put(json, "freedom_early_s", signal.freedom_early_s);
  put(json, "freedom_late_s", signal.freedom_late_s);
  return json;
}

Json json_of(const Link& link) {
  Json json{{"id", link.id},
            {"from_signal", link.from_signal},
            {"to_signal", link.to_signal},
            {"to_group", link.to_group},
            {"length_m", number(link.length_m)},
            {"travel_time_s", number(link.travel_time_s)},
            {"travel_time_origin", link.travel_time_origin}};
  put(json, "travel_time_sd_s", link.travel_time_sd_s);
  put(json, "storage_veh", link.storage_veh);
  put(json, "saturation_flow_vph", link.saturation_flow_vph);
  if (link.uniform_flow_vph != 0) json["uniform_flow_vph"] = number(link.uniform_flow_vph);
  json["feeds"] = Json::array();
  for (const LinkFeed& feed : link.feeds) json["feeds"].push_back({{"from_group", feed.from_group}, {"flow_vph", number(feed.flow_vph)}});
  return json;
}

Json json_of(const Direction& direction) {
  Json json{{"name", direction.name}, {"label", direction.label}, {"weight", number(direction.weight)}, {"stops", Json::array()}};
  for (const Stop& stop : direction.stops) {
    Json item{{"signal", stop.signal}, {"group", stop.group}};
    if (!stop.movement.empty()) item["movement"] = stop.movement;
    item["distance_m"] = number(stop.distance_m);
    item["travel_time_s"] = number(stop.travel_time_s);
    item["queue_clearance_s"] = number(stop.queue_clearance_s);
    json["stops"].push_back(std::move(item));
  }
  json["bandwidth_s"] = number(direction.bandwidth_s);
  json["band_start_s"] = number(direction.band_start_s);
  json["efficiency"] = number(direction.efficiency, 4);
  json["attainability"] = number(direction.attainability, 4);
  put(json, "bandwidth_bound_s", direction.bandwidth_bound_s);
  return json;
}

Json json_of(const Measures& m) {
  return {{"delay_s_per_vehicle", number(m.delay_s_per_vehicle)},
          {"delay_veh_h_per_h", number(m.delay_veh_h_per_h)},
          {"stops_per_h", number(m.stops_per_h)},
          {"worst_degree_of_saturation", number(m.worst_degree_of_saturation, 4)},
          {"worst_degree_at", m.worst_degree_at},
          {"longest_pedestrian_wait_s", number(m.longest_pedestrian_wait_s)},
          {"longest_side_street_wait_s", number(m.longest_side_street_wait_s)}};
}

void put_frame(Json& json, const Plan& plan) {
  json["format"] = "entrain-plan";
  json["format_version"] = 1;
  json["program"] = plan.program;
  json["project"] = plan.project;
  json["period"] = plan.period;
  json["cycle_s"] = number(plan.cycle_s);
  if (!plan.cycle_reason.empty()) json["cycle_reason"] = plan.cycle_reason;
  json["units"] = plan.units;
  if (const auto& s = plan.schedule) json["schedule"] = Json{{"days", s->days}, {"from", s->from}, {"to", s->to}};
  json["clock"] = Json{{"reference", plan.clock.reference}, {"time_zone", plan.clock.time_zone}};
  json["standard"] = Json{{"id", plan.standard.id}, {"values", values(plan.standard.values)}};
}

void put_claims(Json& json, const Plan& plan) {
  const CostModel& model = plan.cost_model;
  json["cost_model"] = Json{{"name", model.name},           {"stop_weight_s", number(model.stop_weight_s)},
                            {"alpha", number(model.alpha)}, {"beta", number(model.beta)},
                            {"step_s", number(model.step_s)}, {"scale", number(model.scale)}};
  put(json["cost_model"], "spillback_weight_s", model.spillback_weight_s);
  if (const auto& quality = plan.quality) {
    json["quality"] = Json{{"objective", quality->objective}, {"value", number(quality->value)}, {"bound", number(quality->bound)}, {"gap", number(quality->gap, 6)}};
    if (quality->certificate) json["quality"]["certificate"] = *quality->certificate;
  }
  if (plan.measures) json["measures"] = json_of(*plan.measures);
}

}  // namespace

std::string write_plan(const Plan& plan) {
  Json json;
  put_frame(json, plan);
  for (auto* list : {"signals", "links", "corridors"}) json[list] = Json::array();
  for (const Signal& signal : plan.signals) json["signals"].push_back(json_of(signal));
  for (const Link& link : plan.links) json["links"].push_back(json_of(link));
  for (const Corridor& corridor : plan.corridors) {
    Json item{{"id", corridor.id}, {"name", corridor.name}, {"directions", Json::array()}};
    for (const Direction& direction : corridor.directions) item["directions"].push_back(json_of(direction));
    json["corridors"].push_back(std::move(item));
  }
  put_claims(json, plan);
  json["assumptions"] = plan.assumptions;
  json["cautions"] = plan.cautions;
  return json.dump(1, ' ', false, Json::error_handler_t::replace) + "\n";
}

}  // namespace entrain::plan
