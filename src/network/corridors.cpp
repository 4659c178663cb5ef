#include "network/corridors.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <boost/graph/dijkstra_shortest_paths.hpp>
#include <cctype>
#include <cmath>
#include <set>

#include "network/geometry.hpp"

namespace entrain::network {
namespace {

struct LinkWeight {
  double time_s = 0;
  int link = -1;
};
using LinkGraph = boost::adjacency_list<boost::vecS, boost::vecS, boost::directedS, boost::no_property, LinkWeight>;

class CorridorFinder {
 public:
  CorridorFinder(const CorridorRequest& request, Network& network) : m_request(request), m_network(network), m_street(plain_street_name(request.street)) {}

  Diagnostics run() {
    const std::vector<int> forward = m_request.signals.empty() ? along_street() : listed(m_request.signals);
    if (!m_problems.empty()) return m_problems;
    std::vector<int> backward(forward.rbegin(), forward.rend());
    if (!m_request.signals_backward.empty()) backward = listed(m_request.signals_backward);
    Corridor corridor{m_request.id, m_request.name, {}};
    if (m_request.forward) add_direction("forward", forward, corridor);
    if (m_request.backward) add_direction("backward", backward, corridor);
    if (m_problems.empty()) m_network.corridors.push_back(std::move(corridor));
    return m_problems;
  }

 private:
  const Signal& signal(int s) const { return m_network.signals[static_cast<std::size_t>(s)]; }

  void problem(std::string found, std::string expected, std::string mend) { m_problems.push_back(error(m_request.where, std::move(found), std::move(expected), std::move(mend))); }

  std::vector<int> listed(const std::vector<std::string>& ids) {
    std::vector<int> list;
    for (const std::string& id : ids) {
      const int s = find_signal(m_network, id);
      if (s < 0) problem("unknown signal " + printable(id), "a signal of the network", "Correct the id; entrain import lists the signals");
      else list.push_back(s);
    }
    return list;
  }

  bool is_on_street(int s) const {
    const auto& legs = signal(s).legs;
    return std::any_of(legs.begin(), legs.end(), [&](const Leg& leg) { return plain_street_name(leg.street) == m_street; });
  }
  bool link_is_on_street(const SignalLink& link) const {
    if (m_street.empty() || link.from_leg < 0 || link.to_leg < 0) return true;
    return plain_street_name(signal(link.from_signal).legs[static_cast<std::size_t>(link.from_leg)].street) == m_street ||
           plain_street_name(signal(link.to_signal).legs[static_cast<std::size_t>(link.to_leg)].street) == m_street;
  }

  // An id, a name, or the name of the street that crosses there.
  int find_end(const std::string& word, const char* key) {
    const int by_id = find_signal(m_network, word);
    if (by_id >= 0) return by_id;
    const std::string plain = plain_street_name(word);
    std::vector<int> matches;
    for (int s = 0; s < static_cast<int>(m_network.signals.size()); ++s) {
      if (plain_street_name(signal(s).name) == plain) return s;
      if (!is_on_street(s)) continue;
      const auto& legs = signal(s).legs;
      if (std::any_of(legs.begin(), legs.end(), [&](const Leg& leg) { return !leg.street.empty() && (plain_street_name(leg.street) == plain || names_both(word, leg.street)); })) matches.push_back(s);
    }
    if (matches.size() == 1) return matches[0];
    std::string ids;
    for (const int s : matches) ids += (ids.empty() ? "" : ", ") + signal(s).id;
    problem(fmt::format("{} = {}", key, printable(word)), matches.empty() ? "a signal's id or name, or a street that crosses " + m_request.street : "one signal, but it fits " + ids,
            "entrain import lists ids and names");
    return -1;
  }
  // "Main Street / First Avenue" names the crossing of both.
  bool names_both(const std::string& word, const std::string& cross) const {
    const auto slash = word.find('/');
    if (slash == std::string::npos) return false;
    const std::string a = plain_street_name(word.substr(0, slash)), b = plain_street_name(word.substr(slash + 1)), c = plain_street_name(cross);
    return (a == m_street && b == c) || (b == m_street && a == c);
  }

  std::vector<int> along_street() {
    std::vector<int> on_street;
    for (int s = 0; s < static_cast<int>(m_network.signals.size()); ++s)
      if (!signal(s).pedestrian_only && is_on_street(s)) on_street.push_back(s);
    if (on_street.empty()) {
      problem("street " + printable(m_request.street), "a street with signals", "Check the name; entrain import lists the signals with their streets");
      return {};
    }
    if (!m_request.from.empty() || !m_request.to.empty()) {
      const int from = find_end(m_request.from, "from"), to = find_end(m_request.to, "to");
      return from < 0 || to < 0 ? std::vector<int>{} : signals_between(from, to);
    }
    return longest_chain(on_street);
  }

  // Shortest chain of links along the street, else along any.
  std::vector<int> signals_between(int from, int to) {
    for (const bool street_only : {true, false})
      for (const bool reverse : {false, true}) {
        const std::vector<int> links = reverse ? path(to, from, street_only) : path(from, to, street_only);
        if (links.empty() && from != to) continue;
        std::vector<int> list{reverse ? to : from};
        for (const int l : links) list.push_back(m_network.links[static_cast<std::size_t>(l)].to_signal);
        if (reverse) std::reverse(list.begin(), list.end());
        return list;
      }
    problem(fmt::format("no way from {} to {}", signal(from).id, signal(to).id), "links between signals along " + m_request.street, breaking_point(from));
    return {};
  }
  std::string breaking_point(int from) {
    const std::vector<int> reach = reachable(from);
    std::string ids;
    for (const int s : reach) ids += (ids.empty() ? "" : ", ") + signal(s).id;
    return reach.empty() ? fmt::format("The roads lead from {} to no other signal: check the map there for a gap or a one-way street", signal(from).id)
                         : fmt::format("The roads lead from {} as far as {}: check the map beyond for a gap, a one-way street or a missing signal, or list the signals", signal(from).id, ids);
  }
  std::vector<int> reachable(int from) {
    std::vector<int> list, open{from};
    std::set<int> seen{from};
    while (!open.empty()) {
      const int at = open.back();
      open.pop_back();
      for (const SignalLink& link : m_network.links)
        if (link.from_signal == at && link_is_on_street(link) && seen.insert(link.to_signal).second) open.push_back(link.to_signal), list.push_back(link.to_signal);
    }
    std::sort(list.begin(), list.end());
    return list;
  }

  std::vector<int> longest_chain(const std::vector<int>& on_street) {
    std::vector<int> best;
    double best_length = -1;
    for (const int from : on_street)
      for (const int to : on_street) {
        if (from == to || distance_m(signal(from).place, signal(to).place) < best_length) continue;
        const std::vector<int> links = path(from, to, true);
        if (links.empty()) continue;
        const double length = distance_m(signal(from).place, signal(to).place);
        if (length <= best_length) continue;
        best_length = length;
        best.assign(1, from);
        for (const int l : links) best.push_back(m_network.links[static_cast<std::size_t>(l)].to_signal);
      }
    if (best.empty()) problem("street " + printable(m_request.street), "two signals or more along it", "Check the name, or list the signals");
    return best;
  }

  // Links of the quickest way, by Dijkstra; empty if there is none.
  std::vector<int> path(int from, int to, bool street_only) const {
    LinkGraph graph(m_network.signals.size());
    for (std::size_t l = 0; l < m_network.links.size(); ++l) {
      const SignalLink& link = m_network.links[l];
      if (street_only && !m_street.empty() && !link_is_on_street(link)) continue;
      boost::add_edge(static_cast<std::size_t>(link.from_signal), static_cast<std::size_t>(link.to_signal), LinkWeight{std::max(0.0, travel_time(link, "").mean_s), static_cast<int>(l)}, graph);
    }
    std::vector<LinkGraph::vertex_descriptor> before(boost::num_vertices(graph));
    std::vector<double> time(boost::num_vertices(graph));
    boost::dijkstra_shortest_paths(graph, static_cast<std::size_t>(from),
                                   boost::predecessor_map(before.data()).distance_map(time.data()).weight_map(boost::get(&LinkWeight::time_s, graph)));
    std::vector<int> links;
    for (auto at = static_cast<LinkGraph::vertex_descriptor>(to); at != static_cast<std::size_t>(from); at = before[at]) {
      if (before[at] == at) return {};
      int best = -1;
      for (auto [e, end] = boost::out_edges(before[at], graph); e != end; ++e)
        if (boost::target(*e, graph) == at && (best < 0 || graph[*e].time_s < travel_time(m_network.links[static_cast<std::size_t>(best)], "").mean_s)) best = graph[*e].link;
      links.push_back(best);
    }
    std::reverse(links.begin(), links.end());
    return links;
  }

  void add_direction(const char* name, const std::vector<int>& list, Corridor& corridor) {
    CorridorDirection direction;
    direction.name = name;
    for (std::size_t i = 0; i < list.size(); ++i) {
      CorridorStop stop;
      stop.signal = list[i];
      if (i > 0) {
        stop.links = path(list[i - 1], list[i], true);
        if (stop.links.empty()) stop.links = path(list[i - 1], list[i], false);
        if (stop.links.empty())
          problem(fmt::format("{}: no way from {} to {}", name, signal(list[i - 1]).id, signal(list[i]).id), "roads (or a travel time) that lead there", breaking_point(list[i - 1]));
        for (const int l : stop.links) stop.distance_m += m_network.links[static_cast<std::size_t>(l)].length_m;
      }
      direction.stops.push_back(std::move(stop));
    }
    if (!m_problems.empty()) return;
    for (std::size_t i = 0; i < direction.stops.size(); ++i) set_legs(direction, i);
    direction.label = label_of(direction);
    corridor.directions.push_back(std::move(direction));
  }

  void set_legs(CorridorDirection& direction, std::size_t i) const {
    CorridorStop& stop = direction.stops[i];
    const Signal& here = signal(stop.signal);
    if (here.legs.empty()) return;
    if (!stop.links.empty()) stop.from_leg = m_network.links[static_cast<std::size_t>(stop.links.back())].to_leg;
    if (i + 1 < direction.stops.size()) stop.to_leg = m_network.links[static_cast<std::size_t>(direction.stops[i + 1].links.front())].from_leg;
    const Movement* best = nullptr;
    for (const Movement& m : here.movements) {
      if ((stop.from_leg >= 0 && m.from_leg != stop.from_leg) || (stop.to_leg >= 0 && m.to_leg != stop.to_leg)) continue;
      if (best == nullptr || std::fabs(m.turn_angle_deg) < std::fabs(best->turn_angle_deg)) best = &m;
    }
    if (best == nullptr) return;
    stop.from_leg = best->from_leg;
    stop.to_leg = best->to_leg;
    stop.movement = best->id;
  }

  // Direction of travel by the line from first to last stop, in the words of the approaches on the way where they agree.
  std::string label_of(const CorridorDirection& direction) const {
    std::map<std::string, int> labels;
    for (const CorridorStop& stop : direction.stops)
      for (const Movement& m : signal(stop.signal).movements)
        if (m.id == stop.movement) ++labels[m.approach];
    const auto most = std::max_element(labels.begin(), labels.end(), [](const auto& a, const auto& b) { return a.second < b.second; });
    return most == labels.end() ? direction.name : most->first;
  }

  const CorridorRequest& m_request;
  Network& m_network;
  std::string m_street;
  Diagnostics m_problems;
};

}  // namespace

std::string plain_street_name(const std::string& name) {
  static const std::map<std::string, std::string> short_words = {
      {"street", "st"}, {"avenue", "ave"}, {"av", "ave"}, {"road", "rd"}, {"boulevard", "blvd"}, {"drive", "dr"}, {"lane", "ln"}, {"court", "ct"}, {"place", "pl"},
      {"highway", "hwy"}, {"parkway", "pkwy"}, {"square", "sq"}, {"north", "n"}, {"south", "s"}, {"east", "e"}, {"west", "w"}, {"northeast", "ne"}, {"northwest", "nw"},
      {"southeast", "se"}, {"southwest", "sw"}, {"saint", "st"}};
  std::string out, word;
  const auto finish = [&] {
    if (word.empty()) return;
    const auto found = short_words.find(word);
    out += (out.empty() ? "" : " ") + (found == short_words.end() ? word : found->second);
    word.clear();
  };
  for (const char c : name) {
    if (std::isspace(static_cast<unsigned char>(c)) || c == '.' || c == ',') finish();
    else word += static_cast<char>(std::tolower(static_cast<unsigned char>(c)));
  }
  finish();
  return out;
}

Diagnostics add_corridor(const CorridorRequest& request, Network& network) { return CorridorFinder(request, network).run(); }

}  // namespace entrain::network
