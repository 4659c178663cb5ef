#include "geo/in/osm_tags.hpp"

#include <algorithm>
#include <cstring>
#include <map>

#include "base/number_text.hpp"
#include "base/quantity.hpp"
#include "geo/in/roads.hpp"

namespace entrain::geo {
namespace {

using network::OneWay;
using network::RoadClass;

std::optional<RoadClass> class_of(std::string_view highway) {
  static const std::map<std::string_view, RoadClass> classes = {
      {"motorway", RoadClass::motorway},       {"trunk", RoadClass::trunk},           {"primary", RoadClass::primary},         {"secondary", RoadClass::secondary},
      {"tertiary", RoadClass::tertiary},       {"residential", RoadClass::residential}, {"unclassified", RoadClass::residential}, {"living_street", RoadClass::residential},
      {"service", RoadClass::service},         {"motorway_link", RoadClass::ramp},    {"trunk_link", RoadClass::ramp},         {"primary_link", RoadClass::ramp},
      {"secondary_link", RoadClass::ramp},     {"tertiary_link", RoadClass::ramp},    {"road", RoadClass::other},              {"busway", RoadClass::other}};
  const auto found = classes.find(highway);
  return found == classes.end() ? std::nullopt : std::optional(found->second);
}

std::string_view get(const osmium::TagList& tags, const char* key) {
  const char* value = tags.get_value_by_key(key);
  return value == nullptr ? std::string_view() : std::string_view(value);
}

int lanes_of(std::string_view text) {
  const auto count = parse_number(text);
  return count && *count >= 1 && *count <= 16 ? static_cast<int>(*count) : 0;
}

double metres_of(std::string_view text) {
  const bool feet = text.find('\'') != std::string_view::npos || text.find("ft") != std::string_view::npos;
  const auto number = parse_number(text.substr(0, text.find_first_not_of("0123456789.")));
  return number && *number > 0 && *number < 200 ? *number * (feet ? metres_per_foot : 1.0) : 0;
}

OneWay oneway_of(const osmium::TagList& tags, bool implied) {
  const std::string_view value = get(tags, "oneway");
  if (value == "yes" || value == "true" || value == "1") return OneWay::forward;
  if (value == "-1" || value == "reverse") return OneWay::backward;
  if (value == "reversible" || value == "alternating") return OneWay::reversible;
  return value.empty() && implied ? OneWay::forward : OneWay::no;
}

bool is_barred(const osmium::TagList& tags) {
  for (const char* key : {"motor_vehicle", "vehicle", "access", "motorcar"}) {
    const std::string_view value = get(tags, key);
    if (value.empty()) continue;
    return value == "no" || (value == "private" && std::strcmp(key, "access") == 0);
  }
  return false;
}

std::string plain_text(std::string_view text) {
  std::string out(text.substr(0, 200));
  std::replace_if(out.begin(), out.end(), [](unsigned char c) { return c < 0x20 || c == 0x7F; }, ' ');
  return out;
}

}  // namespace

double parse_speed_mps(std::string_view text) {
  text = trim(text);
  const std::size_t digits = text.find_first_not_of("0123456789.");
  const auto number = parse_number(text.substr(0, digits));
  if (!number || *number <= 0 || *number > 200) return 0;
  const std::string_view unit = digits == std::string_view::npos ? std::string_view() : trim(text.substr(digits));
  if (unit.empty() || unit == "km/h" || unit == "kmh" || unit == "kph") return *number * mps_per_kph;
  return unit == "mph" ? *number * mps_per_mph : 0;
}

bool is_road(const osmium::TagList& tags) {
  const std::string_view highway = get(tags, "highway");
  if (highway.empty() || !class_of(highway) || get(tags, "area") == "yes" || is_barred(tags)) return false;
  if (highway == "busway") return false;
  const std::string_view service = get(tags, "service");
  return highway != "service" || (service != "parking_aisle" && service != "driveway");
}

network::RoadWay road_of(const osmium::TagList& tags) {
  network::RoadWay road;
  road.road_class = class_of(get(tags, "highway")).value_or(RoadClass::other);
  road.roundabout = get(tags, "junction") == "roundabout" || get(tags, "junction") == "circular";
  road.oneway = oneway_of(tags, road.roundabout || road.road_class == RoadClass::motorway);
  road.name = plain_text(get(tags, "name"));
  road.reference = plain_text(get(tags, "ref"));
  road.speed_limit_mps = parse_speed_mps(get(tags, "maxspeed"));
  road.lanes = lanes_of(get(tags, "lanes"));
  road.lanes_forward = lanes_of(get(tags, "lanes:forward"));
  road.lanes_backward = lanes_of(get(tags, "lanes:backward"));
  road.turn_lanes_forward = plain_text(get(tags, "turn:lanes:forward"));
  road.turn_lanes_backward = plain_text(get(tags, "turn:lanes:backward"));
  if (road.turn_lanes_forward.empty() && road.oneway == OneWay::forward) road.turn_lanes_forward = plain_text(get(tags, "turn:lanes"));
  if (road.turn_lanes_backward.empty() && road.oneway == OneWay::backward) road.turn_lanes_backward = plain_text(get(tags, "turn:lanes"));
  road.width_m = metres_of(get(tags, "width"));
  if (const auto layer = parse_whole_number(get(tags, "layer"))) road.layer = static_cast<int>(std::clamp<std::int64_t>(*layer, -20, 20));
  const std::string_view bridge = get(tags, "bridge"), tunnel = get(tags, "tunnel");
  road.bridge = !bridge.empty() && bridge != "no";
  road.tunnel = !tunnel.empty() && tunnel != "no";
  return road;
}

network::RoadNode road_node_of(const osmium::TagList& tags) {
  network::RoadNode node;
  node.crossing = get(tags, "highway") == "crossing" || !get(tags, "crossing").empty();
  node.mini_roundabout = get(tags, "highway") == "mini_roundabout";
  const std::string_view direction = get(tags, "traffic_signals:direction");
  if (direction == "forward") node.signal_direction = network::SignalDirection::forward;
  if (direction == "backward") node.signal_direction = network::SignalDirection::backward;
  if (direction == "both") node.signal_direction = network::SignalDirection::both;
  const std::string_view kind = get(tags, "traffic_signals");
  if (get(tags, "highway") == "traffic_signals") {
    const bool ordinary = kind.empty() || kind == "yes" || kind == "signal" || kind == "traffic_lights" || kind == "level_crossing;signal";
    if (kind == "pedestrian_crossing" || kind == "crossing") node.signal = network::SignalTag::pedestrian;
    else if (ordinary) node.signal = network::SignalTag::traffic_signals;
    else node.signal = network::SignalTag::unusual, node.unusual_value = plain_text(kind);
  } else if (get(tags, "crossing") == "traffic_signals" || get(tags, "crossing:signals") == "yes") {
    node.signal = network::SignalTag::pedestrian;
  }
  return node;
}

std::optional<network::TurnRestriction> restriction_of(const osmium::Relation& relation) {
  const osmium::TagList& tags = relation.tags();
  std::string_view kind = get(tags, "restriction");
  if (kind.empty()) kind = get(tags, "restriction:motorcar");
  if (get(tags, "except").find("motorcar") != std::string_view::npos) return std::nullopt;
  network::TurnRestriction restriction;
  restriction.id = relation.id();
  if (kind.rfind("no_", 0) == 0) restriction.kind = network::RestrictionKind::no;
  else if (kind.rfind("only_", 0) == 0) restriction.kind = network::RestrictionKind::only;
  else return std::nullopt;
  bool has_from = false, has_to = false, has_via = false;
  for (const auto& member : relation.members()) {
    const std::string_view role = member.role();
    const bool is_way = member.type() == osmium::item_type::way;
    if (role == "from" && is_way) restriction.from_way = member.ref(), has_from = true;
    if (role == "to" && is_way) restriction.to_way = member.ref(), has_to = true;
    if (role == "via" && member.type() == osmium::item_type::node) restriction.via_node = member.ref(), has_via = true;
    if (role == "via" && is_way) restriction.via_ways.push_back(member.ref()), has_via = true;
  }
  return has_from && has_to && has_via ? std::optional(restriction) : std::nullopt;
}

}  // namespace entrain::geo
