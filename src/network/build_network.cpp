#include "network/build_network.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>
#include <set>

#include "base/natural_order.hpp"
#include "base/number_text.hpp"
#include "network/clusters.hpp"
#include "network/corridors.hpp"
#include "network/geometry.hpp"
#include "network/intersections.hpp"
#include "network/road_graph.hpp"
#include "network/signal_links.hpp"

namespace entrain::network {
namespace {

constexpr double claim_m = 60;     // a site claims the cluster at most so far away
constexpr double junction_m = 25;  // or, where no signal is mapped, the junction

class NetworkBuilder {
 public:
  NetworkBuilder(const RoadSource& roads, const NetworkRequest& request) : m_roads(roads), m_request(request), m_restrictions(roads.restrictions) {}

  Result<Noted<Network>> build() {
    take_findings();
    m_built = build_road_graph(m_roads, m_request.defaults, m_network);
    if (boost::num_edges(m_built.graph) == 0)
      return failure(error(m_roads.file, "no roads", "at least one road for vehicles", "Check the file, the layer and the column names"));
    claim_sites();
    settle_side();
    make_signals();
    if (!m_problems.empty()) return failure(std::move(m_problems));
    add_links();
    add_corridors();
    if (!m_problems.empty()) return failure(std::move(m_problems));
    m_network.graph = std::move(m_built.graph);
    m_network.has_roads = true;
    return Noted<Network>{std::move(m_network), std::move(m_notes)};
  }

 private:
  void take_findings() {
    m_network.findings = m_roads.findings;
    for (const Finding& f : m_roads.findings) ++m_network.left_out[f.kind];
    for (const RoadNode& n : m_roads.nodes) {
      if (n.signal == SignalTag::pedestrian) ++m_network.left_out["signal for pedestrians only"];
      if (n.signal == SignalTag::unusual) ++m_network.left_out["unusual signal (" + n.unusual_value + ")"];
    }
  }

  int nearest_junction(Point place, double within_m) const {
    int best = -1;
    for (std::size_t v = 0; v < boost::num_vertices(m_built.graph); ++v) {
      const Point p = m_built.graph[v].place;
      if (std::fabs(p.lat - place.lat) > 0.01) continue;
      const double d = distance_m(place, p);
      if (d <= within_m && arm_count(m_built.graph, static_cast<int>(v)) >= 3) best = static_cast<int>(v), within_m = d;
    }
    return best;
  }
  double distance_to_roads(Point place) const {
    double best = 1e9;
    for (std::size_t v = 0; v < boost::num_vertices(m_built.graph); ++v) best = std::min(best, distance_m(place, m_built.graph[v].place));
    return best;
  }

  // Sites claim the nearest cluster; those without one become signals at the junction where they lie.
  void claim_sites() {
    std::vector<Cluster> found = find_clusters(m_built, {}, m_request.defaults.cluster_link_m);
    std::vector<int> extra;
    for (const SignalSite& site : m_request.signals) {
      if (!site.lon) continue;
      const Point place{*site.lon, *site.lat};
      if (nearest_cluster(found, place) >= 0) continue;
      const int junction = nearest_junction(place, junction_m);
      if (junction < 0) {
        m_problems.push_back(error(site.where, fmt::format("signal {} at {}, {}: the nearest road lies {} m away", printable(site.id), number_text(place.lon, 6), number_text(place.lat, 6),
                                                           number_text(distance_to_roads(place), 0)),
                                   fmt::format("a mapped signal within {} m or a junction within {} m", number_text(claim_m), number_text(junction_m)),
                                   "Correct lon and lat (degrees, east and north positive), or the roads"));
        continue;
      }
      if (m_roads.ways_share_node_ids) m_notes.push_back(note(site.where, fmt::format("signal {} is not mapped; it was put on the junction there", printable(site.id))));
      extra.push_back(junction);
    }
    m_clusters = extra.empty() ? std::move(found) : find_clusters(m_built, extra, m_request.defaults.cluster_link_m);
  }
  int nearest_cluster(const std::vector<Cluster>& clusters, Point place) const {
    int best = -1;
    double within = claim_m;
    for (std::size_t c = 0; c < clusters.size(); ++c)
      if (const double d = distance_m(place, clusters[c].centre); d <= within) best = static_cast<int>(c), within = d;
    return best;
  }

  void settle_side() {
    const int votes = side_votes(m_built.graph, m_clusters);
    m_network.traffic_side = votes < 0 ? TrafficSide::left : TrafficSide::right;
    m_network.traffic_side_assumed = votes == 0 && !m_request.traffic_side;
    if (m_request.traffic_side) m_network.traffic_side = *m_request.traffic_side;
    if (m_network.traffic_side_assumed) m_notes.push_back(warning(m_roads.file, "ASSUMED: traffic keeps right; the roads do not tell", "", "State traffic_side in the project"));
  }

  void make_signals() {
    std::vector<int> site_of(m_clusters.size(), -1);
    for (std::size_t i = 0; i < m_request.signals.size(); ++i) {
      const SignalSite& site = m_request.signals[i];
      if (!site.lon) continue;
      const int c = nearest_cluster(m_clusters, {*site.lon, *site.lat});
      if (c < 0) continue;
      int& taken = site_of[static_cast<std::size_t>(c)];
      if (taken >= 0)
        m_problems.push_back(error(site.where, fmt::format("signal {} lies on the same intersection as {}", printable(site.id), printable(m_request.signals[static_cast<std::size_t>(taken)].id)),
                                   "one signal an intersection", "Move one of them or remove it"));
      else taken = static_cast<int>(i);
    }
    for (const SignalSite& site : m_request.signals)
      if (!site.lon) m_problems.push_back(error(site.where, "signal " + printable(site.id) + " without lon and lat", "its place, since roads are given", "Fill lon and lat"));
    for (std::size_t c = 0; c < m_clusters.size(); ++c) make_signal(m_clusters[c], site_of[c]);
    name_signals();
  }

  void make_signal(const Cluster& cluster, int site) {
    if (site < 0 && !m_request.signals.empty()) {
      ++m_network.left_out["signal not in the signals table"];
      return;
    }
    const SignalSite* named = site >= 0 ? &m_request.signals[static_cast<std::size_t>(site)] : nullptr;
    const TrafficSide side = named != nullptr && named->traffic_side ? *named->traffic_side : m_network.traffic_side;
    Intersection x = make_intersection(m_built.graph, cluster, m_restrictions, side);
    if (x.signal.movements.empty() || (named == nullptr && x.signal.legs.size() < 3)) {
      ++m_network.left_out["signal where no streets cross"];
      if (named != nullptr)
        m_problems.push_back(error(named->where, "signal " + printable(named->id) + ": no movement is possible there", "streets that meet", "Check the map there"));
      return;
    }
    if (named != nullptr) x.signal.id = named->id, x.signal.name = named->name;
    m_intersections.push_back(std::move(x));
  }

  // "Main Street at First Avenue": the more important street first, then the wider, then by name.
  static std::string streets_of(const Signal& signal) {
    std::map<std::string, std::pair<int, int>> rank;  // class, minus lanes
    for (const Leg& leg : signal.legs) {
      if (leg.street.empty()) continue;
      auto& [road_class, lanes] = rank.emplace(leg.street, std::pair{static_cast<int>(leg.road_class), 0}).first->second;
      road_class = std::min(road_class, static_cast<int>(leg.road_class));
      lanes -= leg.lanes_in + leg.lanes_out;
    }
    std::vector<std::pair<std::pair<int, int>, std::string>> order;
    for (const auto& [name, key] : rank) order.push_back({key, name});
    std::sort(order.begin(), order.end());
    if (order.empty()) return "unnamed streets";
    return order.size() == 1 ? order[0].second : order[0].second + " at " + order[1].second;
  }

  void name_signals() {
    std::vector<std::size_t> order(m_intersections.size());
    for (std::size_t i = 0; i < order.size(); ++i) order[i] = i;
    std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) {
      const Point p = m_intersections[a].signal.place, q = m_intersections[b].signal.place;
      return std::tie(p.lon, p.lat) < std::tie(q.lon, q.lat);
    });
    int number = 0;
    for (const std::size_t i : order) {
      Signal& signal = m_intersections[i].signal;
      if (signal.id.empty()) signal.id = fmt::format("S{}", ++number);
      if (signal.name.empty()) signal.name = streets_of(signal);
    }
    std::sort(m_intersections.begin(), m_intersections.end(), [](const Intersection& a, const Intersection& b) { return natural_less(a.signal.id, b.signal.id); });
    for (std::size_t s = 0; s < m_intersections.size(); ++s)
      for (const int v : m_intersections[s].signal.junctions) m_built.graph[static_cast<std::size_t>(v)].signal = static_cast<int>(s);
    apply_crossings();
  }

  void apply_crossings() {
    for (const CrossingSite& site : m_request.crossings) {
      const auto x = std::find_if(m_intersections.begin(), m_intersections.end(), [&](const Intersection& i) { return i.signal.id == site.signal; });
      if (x == m_intersections.end()) continue;
      Signal& signal = x->signal;
      const auto leg = std::find_if(signal.legs.begin(), signal.legs.end(), [&](const Leg& l) { return l.id == site.leg; });
      if (leg == signal.legs.end()) {
        std::string ids;
        for (const Leg& l : signal.legs) ids += (ids.empty() ? "" : ", ") + l.id;
        m_problems.push_back(error("crossings table, signal " + site.signal, "leg " + printable(site.leg), "one of " + ids, "Correct the leg: the side of the intersection whose roadway is crossed"));
        continue;
      }
      for (Crossing& crossing : signal.crossings)
        if (crossing.leg == static_cast<int>(leg - signal.legs.begin())) crossing.length_m = site.length_m, crossing.length_is_default = false;
      leg->width_m = site.length_m;
      leg->width_is_default = false;
    }
    int defaults = 0;
    for (const Intersection& x : m_intersections)
      for (const Crossing& crossing : x.signal.crossings) defaults += crossing.length_is_default;
    if (defaults > 0) m_network.defaults.push_back({"crossing length", "width of the roadway", defaults});
  }

  void add_links() {
    m_network.links = find_signal_links(m_built.graph, m_intersections, m_restrictions, m_request.defaults);
    for (Intersection& x : m_intersections) m_network.signals.push_back(std::move(x.signal));
    finish_links(m_request, m_network, m_problems);
    for (const SignalLink& link : m_network.links) {
      Leg& leg = m_network.signals[static_cast<std::size_t>(link.to_signal)].legs[static_cast<std::size_t>(link.to_leg)];
      leg.neighbour = m_network.signals[static_cast<std::size_t>(link.from_signal)].id;
    }
  }

 public:
  // Ids, order, and measured travel times; shared with networks without roads.
  static void finish_links(const NetworkRequest& request, Network& network, Diagnostics& problems) {
    for (SignalLink& link : network.links)
      link.id = network.signals[static_cast<std::size_t>(link.from_signal)].id + ">" + network.signals[static_cast<std::size_t>(link.to_signal)].id;
    std::stable_sort(network.links.begin(), network.links.end(), [](const SignalLink& a, const SignalLink& b) { return natural_less(a.id, b.id); });
    for (const MeasuredTravelTime& measured : request.travel_times) {
      const std::string id = measured.from_signal + ">" + measured.to_signal;
      bool used = false;
      for (SignalLink& link : network.links)
        if (link.id == id) link.travel_times[measured.period] = {measured.mean_s, "measured", measured.sd_s, measured.runs}, used = true;
      for (const std::string* end : {&measured.from_signal, &measured.to_signal})
        if (find_signal(network, *end) < 0) problems.push_back(error(measured.where, "unknown signal " + printable(*end), "a signal of the network", "Correct the id; entrain import lists the signals")), used = true;
      if (!used) problems.push_back(error(measured.where, "no link " + printable(id), "neighbouring signals joined by a road", "Give the travel time between neighbours, or check the map between them"));
    }
  }

 private:
  void add_corridors() {
    for (const CorridorRequest& request : m_request.corridors) append(m_problems, add_corridor(request, m_network));
    if (m_problems.empty()) apply_progression_speeds(m_request, m_network);
  }

 public:
  // The corridor's speed where nothing was measured for the period.
  static void apply_progression_speeds(const NetworkRequest& request, Network& network) {
    for (std::size_t c = 0; c < network.corridors.size(); ++c)
      for (const auto& [period, speed] : request.corridors[c].progression_speed_mps)
        for (const CorridorDirection& direction : network.corridors[c].directions)
          for (const CorridorStop& stop : direction.stops)
            for (const int l : stop.links) {
              SignalLink& link = network.links[static_cast<std::size_t>(l)];
              const auto own = link.travel_times.find(period), any = link.travel_times.find("");
              if (own != link.travel_times.end() && own->second.origin == "measured") continue;
              if (own == link.travel_times.end() && any != link.travel_times.end() && any->second.origin == "measured") continue;
              if (link.length_m > 0) link.travel_times[period] = {link.length_m / speed, "progression_speed", {}, {}};
            }
  }

 private:
  const RoadSource& m_roads;
  const NetworkRequest& m_request;
  Restrictions m_restrictions;
  Network m_network;
  BuiltGraph m_built;
  std::vector<Cluster> m_clusters;
  std::vector<Intersection> m_intersections;
  Diagnostics m_problems, m_notes;
};

void add_named(const std::string& id, const NetworkRequest& request, std::set<std::string>& seen, Network& network) {
  if (id.empty() || !seen.insert(id).second) return;
  Signal signal;
  signal.id = id;
  signal.name = id;
  signal.traffic_side = request.traffic_side.value_or(TrafficSide::right);
  for (const SignalSite& site : request.signals) {
    if (site.id != id) continue;
    if (!site.name.empty()) signal.name = site.name;
    if (site.lon) signal.place = {*site.lon, *site.lat}, signal.has_place = true;
    if (site.traffic_side) signal.traffic_side = *site.traffic_side;
  }
  network.signals.push_back(std::move(signal));
}

}  // namespace

Result<Noted<Network>> build_network(const RoadSource& roads, const NetworkRequest& request) { return NetworkBuilder(roads, request).build(); }

Result<Noted<Network>> network_from_travel_times(const NetworkRequest& request) {
  Network network;
  Diagnostics problems, notes;
  network.traffic_side = request.traffic_side.value_or(TrafficSide::right);
  network.traffic_side_assumed = !request.traffic_side;
  std::set<std::string> seen;
  for (const SignalSite& site : request.signals) add_named(site.id, request, seen, network);
  for (const MeasuredTravelTime& m : request.travel_times)
    for (const std::string* id : {&m.from_signal, &m.to_signal}) add_named(*id, request, seen, network);
  std::sort(network.signals.begin(), network.signals.end(), [](const Signal& a, const Signal& b) { return natural_less(a.id, b.id); });
  std::set<std::string> linked;
  for (const MeasuredTravelTime& m : request.travel_times) {
    if (!linked.insert(m.from_signal + ">" + m.to_signal).second) continue;
    SignalLink link;
    link.from_signal = find_signal(network, m.from_signal);
    link.to_signal = find_signal(network, m.to_signal);
    link.length_m = m.length_m.value_or(0);
    network.links.push_back(std::move(link));
  }
  NetworkBuilder::finish_links(request, network, problems);
  const bool without_length = std::any_of(network.links.begin(), network.links.end(), [](const SignalLink& link) { return link.length_m <= 0; });
  if (without_length) notes.push_back(warning("travel_times table", "links without length_m: diagrams show travel time instead of distance"));
  for (const CorridorRequest& corridor : request.corridors) append(problems, add_corridor(corridor, network));
  if (network.signals.empty()) problems.push_back(error("project", "neither [roads] nor travel_times", "one of them", "Add [roads] source, or a travel_times table that covers every corridor"));
  if (!problems.empty()) return failure(std::move(problems));
  NetworkBuilder::apply_progression_speeds(request, network);
  return Noted<Network>{std::move(network), std::move(notes)};
}

}  // namespace entrain::network
