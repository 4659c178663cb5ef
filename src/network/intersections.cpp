#include "network/intersections.hpp"

#include <algorithm>
#include <cmath>
#include <queue>
#include <set>

#include "base/circle.hpp"
#include "network/geometry.hpp"

namespace entrain::network {
namespace {

constexpr double look_m = 30;             // how far out an arm's direction is taken
constexpr double same_leg_deg = 40;       // carriageways of one leg differ at most so much
constexpr double straight_deg = 45;       // a through movement bends at most so much

using Vertex = RoadGraph::vertex_descriptor;

struct Arm {
  LegEdges edges;
  double bearing = 0;
  std::string name;
  RoadClass road_class = RoadClass::other;
};

bool inside(const Cluster& cluster, int v) { return std::binary_search(cluster.junctions.begin(), cluster.junctions.end(), v); }

// Follows vertices of degree two, so that a stop line does not end an arm's look.
std::vector<Point> arm_shape(const RoadGraph& graph, const Cluster& cluster, const BorderEdge& border, bool outwards) {
  std::vector<Point> shape = graph[border.edge].shape;
  if (!outwards) std::reverse(shape.begin(), shape.end());
  int at = border.outside, before = border.inside;
  double length = length_m(shape);
  while (length < look_m && arm_count(graph, at) == 2 && !inside(cluster, at)) {
    bool moved = false;
    const auto extend = [&](RoadGraph::edge_descriptor e, int next, bool along) {
      if (moved || next == before) return;
      std::vector<Point> more = graph[e].shape;
      if (!along) std::reverse(more.begin(), more.end());
      shape.insert(shape.end(), more.begin() + 1, more.end());
      length += graph[e].length_m;
      before = at;
      at = next;
      moved = true;
    };
    for (auto [e, end] = boost::out_edges(static_cast<Vertex>(at), graph); e != end && !moved; ++e) extend(*e, static_cast<int>(boost::target(*e, graph)), true);
    if (!moved)
      for (auto [e, end] = boost::in_edges(static_cast<Vertex>(at), graph); e != end && !moved; ++e) extend(*e, static_cast<int>(boost::source(*e, graph)), false);
    if (!moved) break;
  }
  return shape;
}

// True where a road of degree-two vertices leads straight back into the cluster.
bool leads_back(const RoadGraph& graph, const Cluster& cluster, int inside_vertex, int outside) {
  int at = outside, before = inside_vertex;
  for (int steps = 0; steps < 6; ++steps) {
    if (inside(cluster, at)) return true;
    if (arm_count(graph, at) != 2) return false;
    int next = -1;
    for (auto [e, end] = boost::out_edges(static_cast<Vertex>(at), graph); e != end; ++e)
      if (static_cast<int>(boost::target(*e, graph)) != before) next = static_cast<int>(boost::target(*e, graph));
    for (auto [e, end] = boost::in_edges(static_cast<Vertex>(at), graph); e != end; ++e)
      if (static_cast<int>(boost::source(*e, graph)) != before) next = static_cast<int>(boost::source(*e, graph));
    if (next < 0) return false;
    before = at;
    at = next;
  }
  return false;
}

std::vector<Arm> arms_of(const RoadGraph& graph, const Cluster& cluster) {
  std::map<std::pair<int, int>, Arm> by_ends;  // (inside, outside): both directions of one road
  const auto add = [&](const BorderEdge& border, bool outwards) {
    if (inside(cluster, border.outside) || leads_back(graph, cluster, border.inside, border.outside)) return;
    Arm& arm = by_ends[{border.inside, border.outside}];
    (outwards ? arm.edges.out : arm.edges.in).push_back(border);
    arm.name = graph[border.edge].name;
    arm.road_class = graph[border.edge].road_class;
    arm.bearing = bearing_deg(graph[static_cast<Vertex>(border.inside)].place, point_along(arm_shape(graph, cluster, border, outwards), look_m));
  };
  for (const int v : cluster.junctions) {
    for (auto [e, end] = boost::out_edges(static_cast<Vertex>(v), graph); e != end; ++e) add({*e, v, static_cast<int>(boost::target(*e, graph))}, true);
    for (auto [e, end] = boost::in_edges(static_cast<Vertex>(v), graph); e != end; ++e) add({*e, v, static_cast<int>(boost::source(*e, graph))}, false);
  }
  std::vector<Arm> arms;
  for (auto& [ends, arm] : by_ends) arms.push_back(std::move(arm));
  return arms;
}

// Service drives are no legs where enough streets meet without them.
void drop_service(std::vector<Arm>& arms) {
  const auto is_street = [](const Arm& arm) { return arm.road_class != RoadClass::service; };
  if (std::count_if(arms.begin(), arms.end(), is_street) < 3) return;
  arms.erase(std::remove_if(arms.begin(), arms.end(), [&](const Arm& arm) { return !is_street(arm); }), arms.end());
}

void join_carriageways(std::vector<Arm>& arms) {
  for (std::size_t i = 0; i < arms.size(); ++i)
    for (std::size_t j = i + 1; j < arms.size(); ++j) {
      Arm &a = arms[i], &b = arms[j];
      const bool complement = (a.edges.in.empty() && b.edges.out.empty()) || (a.edges.out.empty() && b.edges.in.empty());
      const bool same_name = a.name == b.name || a.name.empty() || b.name.empty();
      if (!complement || !same_name || std::fabs(turn_deg(a.bearing, b.bearing)) > same_leg_deg) continue;
      a.bearing = wrap(a.bearing + turn_deg(a.bearing, b.bearing) / 2, 360.0);
      a.edges.in.insert(a.edges.in.end(), b.edges.in.begin(), b.edges.in.end());
      a.edges.out.insert(a.edges.out.end(), b.edges.out.begin(), b.edges.out.end());
      arms.erase(arms.begin() + static_cast<std::ptrdiff_t>(j));
      --j;
    }
}

// The four points of the compass where they tell all legs apart, else eight, else numbers behind them.
std::vector<std::string> leg_names(const std::vector<Arm>& arms) {
  constexpr const char* points[] = {"N", "NE", "E", "SE", "S", "SW", "W", "NW"};
  const auto named = [&](int count) {
    std::vector<std::string> names;
    for (const Arm& arm : arms) {
      const int sector = static_cast<int>(std::floor(arm.bearing / (360.0 / count) + 0.5)) % count;
      names.emplace_back(points[sector * (8 / count)]);
    }
    return names;
  };
  const auto distinct = [](const std::vector<std::string>& names) { return std::set<std::string>(names.begin(), names.end()).size() == names.size(); };
  std::vector<std::string> names = named(4);
  if (distinct(names)) return names;
  names = named(8);
  std::map<std::string, int> used;
  for (std::string& name : names)
    if (const int n = ++used[name]; n > 1) name += std::to_string(n);
  return names;
}

std::string approach_of(const std::string& leg) {
  static const std::map<std::string, std::string> opposite = {{"N", "SB"}, {"NE", "SWB"}, {"E", "WB"}, {"SE", "NWB"}, {"S", "NB"}, {"SW", "NEB"}, {"W", "EB"}, {"NW", "SEB"}};
  const auto digit = leg.find_first_of("0123456789");
  return opposite.at(leg.substr(0, digit)) ;
}

int lanes_of(const RoadGraph& graph, const std::vector<BorderEdge>& edges) {
  int lanes = 0;
  for (const BorderEdge& e : edges) lanes += graph[e.edge].lanes;
  return lanes;
}

Leg leg_of(const RoadGraph& graph, const Cluster& cluster, const Arm& arm, const std::string& id) {
  Leg leg;
  leg.id = id;
  leg.bearing_deg = arm.bearing;
  leg.street = arm.name;
  leg.lanes_in = lanes_of(graph, arm.edges.in);
  leg.lanes_out = lanes_of(graph, arm.edges.out);
  leg.road_class = arm.road_class;
  std::set<std::int64_t> ways;
  for (const auto* list : {&arm.edges.in, &arm.edges.out})
    for (const BorderEdge& e : *list) {
      const Road& road = graph[e.edge];
      leg.speed_limit_mps = std::max(leg.speed_limit_mps, road.speed_limit_mps);
      leg.speed_is_default = leg.speed_is_default || road.speed_is_default;
      if (ways.insert(road.way_id).second) leg.width_m += road.width_m;
    }
  for (const BorderEdge& e : arm.edges.in) {
    if (leg.turn_lanes_in.empty()) leg.turn_lanes_in = graph[e.edge].turn_lanes;
    leg.distance_to_stop_line_m = std::max(leg.distance_to_stop_line_m, distance_m(cluster.centre, graph[static_cast<Vertex>(e.inside)].place));
  }
  return leg;
}

// Inner vertices of the cluster that can be reached from an incoming edge, with the way by which each was reached.
bool connected(const RoadGraph& graph, const Cluster& cluster, const Restrictions& restrictions, const BorderEdge& in, const BorderEdge& out) {
  struct State {
    int vertex;
    std::int64_t way;
  };
  std::set<std::pair<int, std::int64_t>> seen;
  std::queue<State> open;
  open.push({in.inside, graph[in.edge].way_id});
  while (!open.empty()) {
    const State at = open.front();
    open.pop();
    const std::int64_t node = graph[static_cast<Vertex>(at.vertex)].node_id;
    if (at.vertex == out.inside && restrictions.allows(at.way, node, graph[out.edge].way_id)) return true;
    for (auto [e, end] = boost::out_edges(static_cast<Vertex>(at.vertex), graph); e != end; ++e) {
      const int next = static_cast<int>(boost::target(*e, graph));
      const bool inner = inside(cluster, next) || leads_back(graph, cluster, at.vertex, next);
      if (!inner || !restrictions.allows(at.way, node, graph[*e].way_id)) continue;
      if (seen.insert({next, graph[*e].way_id}).second && seen.size() < 200) open.push({next, graph[*e].way_id});
    }
  }
  return false;
}

bool legs_connected(const RoadGraph& graph, const Cluster& cluster, const Restrictions& restrictions, const LegEdges& from, const LegEdges& to) {
  for (const BorderEdge& in : from.in)
    for (const BorderEdge& out : to.out)
      if (connected(graph, cluster, restrictions, in, out)) return true;
  return false;
}

TurnKind kind_of(double angle, bool is_straightest) {
  if (is_straightest && std::fabs(angle) <= straight_deg) return TurnKind::through;
  return angle < 0 ? TurnKind::left : TurnKind::right;
}

void add_movements(const RoadGraph& graph, const Cluster& cluster, const Restrictions& restrictions, Intersection& x) {
  Signal& signal = x.signal;
  for (std::size_t from = 0; from < signal.legs.size(); ++from) {
    if (x.edges[from].in.empty()) continue;
    std::vector<Movement> list;
    for (std::size_t to = 0; to < signal.legs.size(); ++to) {
      if (to == from || x.edges[to].out.empty()) continue;
      if (!legs_connected(graph, cluster, restrictions, x.edges[from], x.edges[to])) continue;
      Movement m;
      m.from_leg = static_cast<int>(from);
      m.to_leg = static_cast<int>(to);
      m.approach = approach_of(signal.legs[from].id);
      m.turn_angle_deg = turn_deg(wrap(signal.legs[from].bearing_deg + 180, 360.0), signal.legs[to].bearing_deg);
      list.push_back(m);
    }
    std::size_t straightest = 0;
    for (std::size_t i = 1; i < list.size(); ++i)
      if (std::fabs(list[i].turn_angle_deg) < std::fabs(list[straightest].turn_angle_deg)) straightest = i;
    for (std::size_t i = 0; i < list.size(); ++i) list[i].turn = kind_of(list[i].turn_angle_deg, i == straightest);
    std::sort(list.begin(), list.end(), [](const Movement& a, const Movement& b) { return a.turn_angle_deg < b.turn_angle_deg; });
    signal.movements.insert(signal.movements.end(), list.begin(), list.end());
  }
  std::map<std::string, int> used;
  constexpr const char* letters[] = {"L", "T", "R", "U"};
  for (Movement& m : signal.movements) {
    const std::string& leg = signal.legs[static_cast<std::size_t>(m.from_leg)].id;
    const auto digit = leg.find_first_of("0123456789");
    m.id = m.approach + (digit == std::string::npos ? "" : leg.substr(digit)) + "-" + letters[static_cast<int>(m.turn)];
    if (const int n = ++used[m.id]; n > 1) m.id += "." + signal.legs[static_cast<std::size_t>(m.to_leg)].id;
  }
}

}  // namespace

Restrictions::Restrictions(const std::vector<TurnRestriction>& list) {
  for (const TurnRestriction& r : list)
    if (r.via_ways.empty()) m_rules.push_back({r.from_way, r.via_node, r.to_way, r.kind});
  std::sort(m_rules.begin(), m_rules.end());
}

bool Restrictions::allows(std::int64_t from_way, std::int64_t via_node, std::int64_t to_way) const {
  auto rule = std::lower_bound(m_rules.begin(), m_rules.end(), Rule{from_way, via_node, INT64_MIN, RestrictionKind::no});
  bool only_another = false, only_this = false;
  for (; rule != m_rules.end() && rule->from == from_way && rule->via == via_node; ++rule) {
    if (rule->kind == RestrictionKind::no && rule->to == to_way) return false;
    if (rule->kind == RestrictionKind::only) (rule->to == to_way ? only_this : only_another) = true;
  }
  return only_this || !only_another;
}

Intersection make_intersection(const RoadGraph& graph, const Cluster& cluster, const Restrictions& restrictions, TrafficSide side) {
  Intersection x;
  std::vector<Arm> arms = arms_of(graph, cluster);
  drop_service(arms);
  join_carriageways(arms);
  std::sort(arms.begin(), arms.end(), [](const Arm& a, const Arm& b) { return a.bearing < b.bearing; });
  const auto names = leg_names(arms);
  Signal& signal = x.signal;
  signal.place = cluster.centre;
  signal.has_place = true;
  signal.traffic_side = side;
  signal.nodes = cluster.signal_nodes;
  signal.junctions = cluster.junctions;
  for (std::size_t i = 0; i < arms.size(); ++i) {
    signal.legs.push_back(leg_of(graph, cluster, arms[i], names[i]));
    x.edges.push_back(arms[i].edges);
    signal.crossings.push_back({"X-" + names[i], static_cast<int>(i), std::max(3.0, signal.legs.back().width_m), true});
  }
  add_movements(graph, cluster, restrictions, x);
  return x;
}

int side_votes(const RoadGraph& graph, const std::vector<Cluster>& clusters) {
  int votes = 0;
  for (const Cluster& cluster : clusters) {
    const std::vector<Arm> arms = arms_of(graph, cluster);
    for (const Arm& a : arms)
      for (const Arm& b : arms) {
        if (!a.edges.in.empty() || !b.edges.out.empty() || a.name.empty() || a.name != b.name) continue;  // a goes out, b comes in
        const double angle = turn_deg(a.bearing, b.bearing);
        if (std::fabs(angle) > same_leg_deg) continue;
        const Point out = graph[static_cast<Vertex>(a.edges.out[0].inside)].place, in = graph[static_cast<Vertex>(b.edges.in[0].inside)].place;
        if (distance_m(out, in) < 3) continue;
        votes += turn_deg(a.bearing, bearing_deg(out, in)) < 0 ? 1 : -1;  // traffic that comes in lies to the left of the way out: keeps right
      }
  }
  return votes;
}

}  // namespace entrain::network
