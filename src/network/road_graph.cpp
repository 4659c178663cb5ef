#include "network/road_graph.hpp"

#include <algorithm>
#include <cmath>
#include <unordered_map>

#include "network/geometry.hpp"

namespace entrain::network {
namespace {

struct Values {
  double speed_mps;
  int forward_lanes, backward_lanes;
  double width_m;
  bool speed_is_default, lanes_are_default;
};

class GraphBuilder {
 public:
  GraphBuilder(const RoadSource& roads, const Defaults& defaults, Network& network) : m_roads(roads), m_defaults(defaults), m_network(network) {}

  BuiltGraph build() {
    choose_vertices();
    for (const RoadWay& way : m_roads.ways) add_way(way);
    for (const auto& [what, use] : m_uses) m_network.defaults.push_back({what, use.first, use.second});
    return std::move(m_out);
  }

 private:
  const RoadNode* node(std::int64_t id) const {
    const auto at = std::lower_bound(m_roads.nodes.begin(), m_roads.nodes.end(), id, [](const RoadNode& n, std::int64_t i) { return n.id < i; });
    return at != m_roads.nodes.end() && at->id == id ? &*at : nullptr;
  }
  int vertex(std::int64_t id) const {
    const auto at = std::lower_bound(m_out.vertex_ids.begin(), m_out.vertex_ids.end(), id);
    return at != m_out.vertex_ids.end() && *at == id ? static_cast<int>(at - m_out.vertex_ids.begin()) : -1;
  }

  void choose_vertices() {
    std::vector<std::int64_t> uses;
    for (const RoadWay& way : m_roads.ways) {
      for (const std::int64_t id : way.nodes) uses.push_back(id);
      if (!way.nodes.empty()) uses.push_back(way.nodes.front()), uses.push_back(way.nodes.back());  // ends count twice
    }
    std::sort(uses.begin(), uses.end());
    for (std::size_t i = 0; i < uses.size();) {
      std::size_t next = i;
      while (next < uses.size() && uses[next] == uses[i]) ++next;
      const RoadNode* n = node(uses[i]);
      if (n != nullptr && (next - i > 1 || n->signal != SignalTag::none)) m_out.vertex_ids.push_back(uses[i]);
      i = next;
    }
    m_out.graph = RoadGraph(m_out.vertex_ids.size());
    for (std::size_t v = 0; v < m_out.vertex_ids.size(); ++v) {
      const RoadNode& n = *node(m_out.vertex_ids[v]);
      m_out.graph[v] = {n.id, {n.lon, n.lat}, -1};
      m_out.tag.push_back(n.signal);
      m_out.tag_direction.push_back(n.signal_direction);
    }
  }

  Values values_of(const RoadWay& way) {
    const std::string word = class_word(way.road_class);
    Values v{way.speed_limit_mps, way.lanes_forward, way.lanes_backward, way.width_m, false, false};
    if (v.speed_mps <= 0) {
      v.speed_mps = m_defaults.speed_limit_mps.at(word);
      v.speed_is_default = true;
      count("speed limit of class " + word, std::to_string(static_cast<int>(std::lround(v.speed_mps * 3.6))) + " km/h");
    }
    const bool both = way.oneway == OneWay::no || way.oneway == OneWay::reversible;
    const int one = m_defaults.lanes_per_direction.at(word);
    if (way.lanes <= 0 && v.forward_lanes <= 0 && v.backward_lanes <= 0) {
      v.lanes_are_default = true;
      count("lanes of class " + word, std::to_string(one) + " a direction");
    }
    const int all = std::clamp(way.lanes > 0 ? way.lanes : (both ? 2 * one : one), 1, 16);
    if (v.forward_lanes <= 0) v.forward_lanes = both ? std::max(1, v.backward_lanes > 0 ? all - v.backward_lanes : (all + 1) / 2) : all;
    if (v.backward_lanes <= 0) v.backward_lanes = both ? std::max(1, all - v.forward_lanes) : all;
    v.forward_lanes = std::clamp(v.forward_lanes, 1, 12);
    v.backward_lanes = std::clamp(v.backward_lanes, 1, 12);
    if (v.width_m <= 0) v.width_m = m_defaults.lane_width_m * (both ? v.forward_lanes + v.backward_lanes : v.forward_lanes);
    return v;
  }
  void count(const std::string& what, const std::string& value) {
    auto& use = m_uses[what];
    use.first = value;
    ++use.second;
  }
  void left_out(const std::string& kind, const std::string& sentence, Point at) {
    ++m_network.left_out[kind];
    if (m_network.left_out[kind] <= 20) m_network.findings.push_back({kind, sentence, at.lon, at.lat, true});
  }

  void add_way(const RoadWay& way) {
    const Values values = values_of(way);
    std::vector<Point> shape;
    int from = -1;
    for (const std::int64_t id : way.nodes) {
      const RoadNode* n = node(id);
      if (n == nullptr) {  // missing: the way is cut there
        shape.clear();
        from = -1;
        continue;
      }
      shape.push_back({n->lon, n->lat});
      const int to = vertex(id);
      if (to < 0) continue;
      if (from >= 0) add_segment(way, values, from, to, shape);
      from = to;
      shape.assign(1, {n->lon, n->lat});
    }
  }

  void add_segment(const RoadWay& way, const Values& values, int from, int to, const std::vector<Point>& shape) {
    const double length = length_m(shape);
    if (from == to) return left_out("self_loop", "way " + std::to_string(way.id) + " comes back to its own junction", shape.front());
    if (length <= 0) return left_out("zero_length", "way " + std::to_string(way.id) + " has a part without length", shape.front());
    Road road;
    road.way_id = way.id;
    road.length_m = length;
    road.speed_limit_mps = values.speed_mps;
    road.speed_is_default = values.speed_is_default;
    road.lanes_are_default = values.lanes_are_default;
    road.road_class = way.road_class;
    road.name = way.name.empty() ? way.reference : way.name;
    road.width_m = values.width_m;
    road.bridge_or_tunnel = way.bridge || way.tunnel;
    road.roundabout = way.roundabout;
    if (way.oneway != OneWay::backward) {
      road.lanes = values.forward_lanes;
      road.turn_lanes = way.turn_lanes_forward;
      road.shape = shape;
      boost::add_edge(static_cast<std::size_t>(from), static_cast<std::size_t>(to), road, m_out.graph);
    }
    if (way.oneway != OneWay::forward) {
      road.lanes = values.backward_lanes;
      road.turn_lanes = way.turn_lanes_backward;
      road.shape.assign(shape.rbegin(), shape.rend());
      boost::add_edge(static_cast<std::size_t>(to), static_cast<std::size_t>(from), road, m_out.graph);
    }
  }

  const RoadSource& m_roads;
  const Defaults& m_defaults;
  Network& m_network;
  BuiltGraph m_out;
  std::map<std::string, std::pair<std::string, int>> m_uses;
};

}  // namespace

BuiltGraph build_road_graph(const RoadSource& roads, const Defaults& defaults, Network& network) { return GraphBuilder(roads, defaults, network).build(); }

const char* class_word(RoadClass road_class) {
  constexpr const char* words[] = {"motorway", "trunk", "primary", "secondary", "tertiary", "residential", "service", "ramp", "other"};
  return words[static_cast<int>(road_class)];
}

RoadClass class_of_word(const std::string& word) {
  for (int c = 0; c <= static_cast<int>(RoadClass::other); ++c)
    if (word == class_word(static_cast<RoadClass>(c))) return static_cast<RoadClass>(c);
  return RoadClass::other;
}

Defaults default_road_values(bool us_units) {
  Defaults defaults;
  const double mph[] = {60, 50, 35, 35, 30, 25, 15, 35, 25};
  const double kmh[] = {100, 80, 50, 50, 50, 40, 20, 50, 40};
  constexpr int lanes[] = {2, 2, 2, 1, 1, 1, 1, 1, 1};
  for (int c = 0; c <= static_cast<int>(RoadClass::other); ++c) {
    const std::string word = class_word(static_cast<RoadClass>(c));
    defaults.speed_limit_mps[word] = us_units ? mph[c] * mps_per_mph : kmh[c] * mps_per_kph;
    defaults.lanes_per_direction[word] = lanes[c];
  }
  defaults.lane_width_m = us_units ? 12 * metres_per_foot : 3.5;
  return defaults;
}

}  // namespace entrain::network
