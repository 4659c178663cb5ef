#include <fmt/format.h>

#include "plan/json_object.hpp"
#include "plan/plan_text.hpp"

namespace entrain::plan {
namespace {

using Json = nlohmann::json;

void read_legs(JsonObject& object, JsonContext& context, Signal& signal) {
  object.list("legs", false, [&](const Json& value, const std::string& path) {
    Leg& leg = signal.legs.emplace_back();
    JsonObject o(context, value, path);
    o.required("id", leg.id);
    o.required("bearing_deg", leg.bearing_deg);
    o.optional("street", leg.street);
  });
}

void read_movements(JsonObject& object, JsonContext& context, Signal& signal) {
  object.list("movements", false, [&](const Json& value, const std::string& path) {
    Movement& movement = signal.movements.emplace_back();
    JsonObject o(context, value, path);
    o.required("id", movement.id);
    o.required("from_leg", movement.from_leg);
    o.required("to_leg", movement.to_leg);
    o.word("turn", movement.turn, {"L", "T", "R", "U"});
  });
}

void read_lane_groups(JsonObject& object, JsonContext& context, Signal& signal) {
  object.list("lane_groups", false, [&](const Json& value, const std::string& path) {
    LaneGroup& lane_group = signal.lane_groups.emplace_back();
    JsonObject o(context, value, path);
    o.required("id", lane_group.id);
    o.required("movements", lane_group.movements);
    o.optional("lanes", lane_group.lanes);
    o.optional("flow_vph", lane_group.flow_vph);
    o.optional("saturation_flow_vph", lane_group.saturation_flow_vph);
    o.optional("storage_m", lane_group.storage_m);
  });
}

void read_crossings(JsonObject& object, JsonContext& context, Signal& signal) {
  object.list("crossings", false, [&](const Json& value, const std::string& path) {
    Crossing& crossing = signal.crossings.emplace_back();
    JsonObject o(context, value, path);
    o.required("id", crossing.id);
    o.required("leg", crossing.leg);
    o.required("length_m", crossing.length_m);
  });
}

void read_basis(JsonContext& context, const Json& value, const std::string& path, ClearanceBasis& basis) {
  JsonObject o(context, value, path);
  o.required("speed_mps", basis.speed_mps);
  o.optional("grade", basis.grade);
  o.required("width_m", basis.width_m);
  o.optional("vehicle_length_m", basis.vehicle_length_m);
  o.optional("clearing_speed_mps", basis.clearing_speed_mps);
  o.child("override", [&](const Json& inner, const std::string& inner_path) {
    Override& by = basis.override_by.emplace();
    JsonObject i(context, inner, inner_path);
    i.required("what", by.what);
    i.required("reason", by.reason);
    i.required("author", by.author);
  });
}

void read_group_lists(JsonObject& o, JsonContext& context, Group& group) {
  o.list("serves", false, [&](const Json& value, const std::string& path) {
    Served& served = group.serves.emplace_back();
    JsonObject i(context, value, path);
    i.required("movement", served.movement);
    i.word("right_of_way", served.right_of_way, {"protected", "permissive"});
    i.optional("flashing_yellow_arrow", served.flashing_yellow_arrow);
  });
  o.optional("crossings", group.crossings);
  o.list("greens", true, [&](const Json& value, const std::string& path) {
    Green& green = group.greens.emplace_back();
    JsonObject i(context, value, path);
    i.required("start_s", green.start_s);
    i.required("duration_s", green.duration_s);
  });
}

void read_groups(JsonObject& object, JsonContext& context, Signal& signal) {
  object.list("groups", true, [&](const Json& value, const std::string& path) {
    Group& group = signal.groups.emplace_back();
    JsonObject o(context, value, path);
    o.required("id", group.id);
    o.word("kind", group.kind, {"vehicle", "pedestrian", "bicycle"});
    o.optional("phase_number", group.phase_number);
    read_group_lists(o, context, group);
    o.optional("parent", group.parent);
    o.word("service", group.service, {"every_cycle", "on_call"});
    o.optional("yellow_s", group.yellow_s);
    o.optional("red_clearance_s", group.red_clearance_s);
    o.optional("split_s", group.split_s);
    o.optional("minimum_green_s", group.minimum_green_s);
    o.optional("clearance_s", group.clearance_s);
    o.optional("flow_vph", group.flow_vph);
    o.optional("saturation_flow_vph", group.saturation_flow_vph);
    o.optional("start_up_lost_s", group.start_up_lost_s);
    o.optional("end_gain_s", group.end_gain_s);
    o.optional("degree_of_saturation", group.degree_of_saturation);
    o.child("clearance_basis", [&](const Json& inner, const std::string& inner_path) {
      read_basis(context, inner, inner_path, group.clearance_basis.emplace());
    });
  });
}

void read_conflicts(JsonObject& object, JsonContext& context, Signal& signal) {
  object.list("conflicts", false, [&](const Json& value, const std::string& path) {
    Conflict& conflict = signal.conflicts.emplace_back();
    std::vector<std::string> groups;
    std::vector<double> intergreens;
    JsonObject o(context, value, path);
    o.required("groups", groups);
    o.required("intergreen_s", intergreens);
    if (groups.size() == 2) conflict.a = groups[0], conflict.b = groups[1];
    else context.problem(path + ".groups", fmt::format("{} names", groups.size()), "two group ids");
    if (intergreens.size() == 2) conflict.intergreen_ab_s = intergreens[0], conflict.intergreen_ba_s = intergreens[1];
    else context.problem(path + ".intergreen_s", fmt::format("{} numbers", intergreens.size()), "two numbers of seconds");
  });
}

void read_controller(JsonObject& object, JsonContext& context, Signal& signal) {
  object.child("controller", [&](const Json& value, const std::string& path) {
    JsonObject o(context, value, path);
    o.optional("kind", signal.controller.kind);
    RingBarrier rings;
    o.optional("rings", rings.rings);
    o.optional("barriers_after", rings.barriers_after);
    if (!rings.rings.empty()) signal.controller.ring_barrier = std::move(rings);
    o.optional("coordinated", signal.controller.coordinated);
  });
}

void read_known_timing(JsonObject& object, JsonContext& context, Signal& signal) {
  object.child("running", [&](const Json& value, const std::string& path) {
    Running& running = signal.running.emplace();
    JsonObject o(context, value, path);
    o.optional("cycle_s", running.cycle_s);
    o.optional("offset_s", running.offset_s);
    o.optional("splits_s", running.splits_s);
    o.optional("sequence", running.sequence);
  });
  object.child("evidence", [&](const Json& value, const std::string& path) {
    Evidence& evidence = signal.evidence.emplace();
    JsonObject o(context, value, path);
    o.optional("critical_groups", evidence.critical_groups);
    o.optional("critical_flow_ratio", evidence.critical_flow_ratio);
    o.optional("critical_lost_time_s", evidence.critical_lost_time_s);
    o.optional("minimum_cycle_s", evidence.minimum_cycle_s);
    o.optional("text", evidence.text);
  });
  object.list("oversaturated", false, [&](const Json& value, const std::string& path) {
    Oversaturation& over = signal.oversaturated.emplace_back();
    JsonObject o(context, value, path);
    o.required("lane_group", over.lane_group);
    o.required("degree_of_saturation", over.degree_of_saturation);
    o.optional("queue_growth_vph", over.queue_growth_vph);
  });
}

void read_signal(JsonContext& context, const Json& value, const std::string& path, Signal& signal) {
  JsonObject o(context, value, path);
  o.required("id", signal.id);
  o.optional("name", signal.name);
  o.optional("lon", signal.lon);
  o.optional("lat", signal.lat);
  o.word("traffic_side", signal.traffic_side, {"right", "left"});
  o.word("operation", signal.operation, {"pretimed", "coordinated_actuated", "free"});
  o.required("cycle_s", signal.cycle_s);
  o.required("offset_s", signal.offset_s);
  o.required("reference_group", signal.reference_group);
  read_controller(o, context, signal);
  read_legs(o, context, signal);
  read_movements(o, context, signal);
  read_lane_groups(o, context, signal);
  read_crossings(o, context, signal);
  read_groups(o, context, signal);
  read_conflicts(o, context, signal);
  o.optional("conflicts_given", signal.conflicts_given);
  read_known_timing(o, context, signal);
  o.optional("clock", signal.clock);
  o.optional("offset_fixed", signal.offset_fixed);
  o.optional("sequence_fixed", signal.sequence_fixed);
  o.optional("splits_fixed", signal.splits_fixed);
  o.optional("freedom_early_s", signal.freedom_early_s);
  o.optional("freedom_late_s", signal.freedom_late_s);
}

void read_link(JsonContext& context, const Json& value, const std::string& path, Link& link) {
  JsonObject o(context, value, path);
  o.required("id", link.id);
  o.required("from_signal", link.from_signal);
  o.required("to_signal", link.to_signal);
  o.required("to_group", link.to_group);
  o.optional("length_m", link.length_m);
  o.required("travel_time_s", link.travel_time_s);
  o.optional("travel_time_origin", link.travel_time_origin);
  o.optional("travel_time_sd_s", link.travel_time_sd_s);
  o.optional("storage_veh", link.storage_veh);
  o.optional("saturation_flow_vph", link.saturation_flow_vph);
  o.optional("uniform_flow_vph", link.uniform_flow_vph);
  o.list("feeds", false, [&](const Json& inner, const std::string& inner_path) {
    LinkFeed& feed = link.feeds.emplace_back();
    JsonObject i(context, inner, inner_path);
    i.required("from_group", feed.from_group);
    i.required("flow_vph", feed.flow_vph);
  });
}

void read_direction(JsonContext& context, const Json& value, const std::string& path, Direction& direction) {
  JsonObject o(context, value, path);
  o.required("name", direction.name);
  o.optional("label", direction.label);
  o.optional("weight", direction.weight);
  o.list("stops", true, [&](const Json& inner, const std::string& inner_path) {
    Stop& stop = direction.stops.emplace_back();
    JsonObject i(context, inner, inner_path);
    i.required("signal", stop.signal);
    i.required("group", stop.group);
    i.optional("movement", stop.movement);
    i.optional("distance_m", stop.distance_m);
    i.required("travel_time_s", stop.travel_time_s);
    i.optional("queue_clearance_s", stop.queue_clearance_s);
  });
  o.required("bandwidth_s", direction.bandwidth_s);
  o.optional("band_start_s", direction.band_start_s);
  o.optional("efficiency", direction.efficiency);
  o.optional("attainability", direction.attainability);
  o.optional("bandwidth_bound_s", direction.bandwidth_bound_s);
}

void read_corridor(JsonContext& context, const Json& value, const std::string& path, Corridor& corridor) {
  JsonObject o(context, value, path);
  o.required("id", corridor.id);
  o.optional("name", corridor.name);
  o.list("directions", true, [&](const Json& inner, const std::string& inner_path) {
    read_direction(context, inner, inner_path, corridor.directions.emplace_back());
  });
}

void read_frame(JsonObject& o, JsonContext& context, Plan& plan) {
  o.optional("program", plan.program);
  o.optional("project", plan.project);
  o.optional("period", plan.period);
  o.required("cycle_s", plan.cycle_s);
  o.optional("cycle_reason", plan.cycle_reason);
  o.optional("units", plan.units);
  o.child("schedule", [&](const Json& value, const std::string& path) {
    Schedule& schedule = plan.schedule.emplace();
    JsonObject i(context, value, path);
    i.optional("days", schedule.days);
    i.optional("from", schedule.from);
    i.optional("to", schedule.to);
  });
  o.child("clock", [&](const Json& value, const std::string& path) {
    JsonObject i(context, value, path);
    i.required("reference", plan.clock.reference);
    i.optional("time_zone", plan.clock.time_zone);
  });
  o.child("standard", [&](const Json& value, const std::string& path) {
    JsonObject i(context, value, path);
    i.required("id", plan.standard.id);
    i.optional("values", plan.standard.values);
  });
}

void read_claims(JsonObject& o, JsonContext& context, Plan& plan) {
  o.child("cost_model", [&](const Json& value, const std::string& path) {
    JsonObject i(context, value, path);
    i.optional("name", plan.cost_model.name);
    i.optional("stop_weight_s", plan.cost_model.stop_weight_s);
    i.optional("alpha", plan.cost_model.alpha);
    i.optional("beta", plan.cost_model.beta);
    i.optional("step_s", plan.cost_model.step_s);
    i.optional("scale", plan.cost_model.scale);
    i.optional("spillback_weight_s", plan.cost_model.spillback_weight_s);
  });
  o.child("quality", [&](const Json& value, const std::string& path) {
    Quality& quality = plan.quality.emplace();
    JsonObject i(context, value, path);
    i.optional("objective", quality.objective);
    i.optional("value", quality.value);
    i.optional("bound", quality.bound);
    i.optional("gap", quality.gap);
    i.optional("certificate", quality.certificate);
  });
  o.child("measures", [&](const Json& value, const std::string& path) {
    Measures& measures = plan.measures.emplace();
    JsonObject i(context, value, path);
    i.optional("delay_s_per_vehicle", measures.delay_s_per_vehicle);
    i.optional("delay_veh_h_per_h", measures.delay_veh_h_per_h);
    i.optional("stops_per_h", measures.stops_per_h);
    i.optional("worst_degree_of_saturation", measures.worst_degree_of_saturation);
    i.optional("worst_degree_at", measures.worst_degree_at);
    i.optional("longest_pedestrian_wait_s", measures.longest_pedestrian_wait_s);
    i.optional("longest_side_street_wait_s", measures.longest_side_street_wait_s);
  });
}

bool read_version(JsonObject& o, JsonContext& context) {
  const std::size_t before = context.problems.size();
  std::string format;
  int version = 0;
  o.required("format", format);
  o.required("format_version", version);
  if (context.problems.size() != before) return false;
  if (format != "entrain-plan") context.problem("format", printable(format), "\"entrain-plan\"");
  if (version != 1) context.problem("format_version", fmt::format("{}", version), "1");
  return context.problems.size() == before;
}

}  // namespace

Result<Plan> read_plan(std::string_view text, const std::string& source) {
  Json json;
  try {
    json = Json::parse(text);
  } catch (const Json::exception& problem) {
    return failure(error(source, printable(problem.what(), 300), "a JSON document of format entrain-plan",
                         "Write the plan again with entrain draft, or mend the text there"));
  }
  JsonContext context{source, {}, {}};
  Plan plan;
  {
    JsonObject o(context, json, "");
    if (!json.is_object() || !read_version(o, context)) return failure(context.problems);
    read_frame(o, context, plan);
    o.list("signals", true, [&](const Json& value, const std::string& path) { read_signal(context, value, path, plan.signals.emplace_back()); });
    o.list("links", false, [&](const Json& value, const std::string& path) { read_link(context, value, path, plan.links.emplace_back()); });
    o.list("corridors", false, [&](const Json& value, const std::string& path) { read_corridor(context, value, path, plan.corridors.emplace_back()); });
    read_claims(o, context, plan);
    o.optional("assumptions", plan.assumptions);
    o.optional("cautions", plan.cautions);
  }
  if (!context.problems.empty()) return failure(context.problems);
  plan.unknown_keys = std::move(context.unknown_keys);
  return plan;
}

}  // namespace entrain::plan
