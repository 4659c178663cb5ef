#include "made_town.hpp"

#include <fmt/format.h>

#include <cmath>

#include "standards/embedded.hpp"

namespace entrain::made_town {
namespace {

using network::Network;

constexpr double speed_mps = 13.4;  // 30 mph
constexpr const char* leg_ids[] = {"N", "E", "S", "W"};
constexpr const char* approach_of_leg[] = {"SB", "WB", "NB", "EB"};

network::Movement movement(int from, int to) {
  network::Movement m;
  m.from_leg = from;
  m.to_leg = to;
  m.approach = approach_of_leg[from];
  const int turn = (to - from + 4) % 4;  // legs run clockwise: the next leg clockwise lies to the left of the arriving driver
  m.turn = turn == 1 ? network::TurnKind::left : turn == 2 ? network::TurnKind::through : network::TurnKind::right;
  m.turn_angle_deg = turn == 1 ? -90 : turn == 2 ? 0 : 90;
  m.id = m.approach + (turn == 1 ? "-L" : turn == 2 ? "-T" : "-R");
  return m;
}

network::Signal four_legs(const std::string& id, int column, int row, double spacing_m, int main_lanes) {
  network::Signal signal;
  signal.id = id;
  signal.name = "Crossing " + id;
  signal.place = {-30.0 + column * spacing_m / 78800.0, 45.0 - row * spacing_m / 111100.0};
  signal.has_place = true;
  for (int leg = 0; leg < 4; ++leg) {
    network::Leg l;
    l.id = leg_ids[leg];
    l.bearing_deg = 90.0 * leg;
    l.street = leg % 2 == 1 ? "Main Street" : fmt::format("Side {}", column + 1);
    l.lanes_in = l.lanes_out = leg % 2 == 1 ? main_lanes : 1;
    l.speed_limit_mps = speed_mps;
    l.width_m = leg % 2 == 1 ? 7.0 * main_lanes : 8.0;
    l.width_is_default = false;
    l.road_class = leg % 2 == 1 ? network::RoadClass::primary : network::RoadClass::tertiary;
    signal.legs.push_back(l);
    signal.crossings.push_back({fmt::format("X-{}", l.id), leg, l.width_m, false});
  }
  for (int from = 0; from < 4; ++from)
    for (const int step : {1, 2, 3}) signal.movements.push_back(movement(from, (from + step) % 4));
  return signal;
}

network::SignalLink link(const Network& network, int from, int to, int from_leg, int to_leg, double length_m) {
  network::SignalLink l;
  l.id = network.signals[static_cast<std::size_t>(from)].id + ">" + network.signals[static_cast<std::size_t>(to)].id;
  l.from_signal = from;
  l.to_signal = to;
  l.from_leg = from_leg;
  l.to_leg = to_leg;
  l.length_m = length_m;
  l.travel_times[""] = {length_m / speed_mps, "speed_limit", {}, {}};
  return l;
}

int find_link(const Network& network, int from, int to) {
  for (std::size_t i = 0; i < network.links.size(); ++i)
    if (network.links[i].from_signal == from && network.links[i].to_signal == to) return static_cast<int>(i);
  return -1;
}

network::CorridorDirection direction(const Network& network, const std::string& name, const std::string& label, const std::vector<int>& signals, int from_leg) {
  network::CorridorDirection d;
  d.name = name;
  d.label = label;
  for (std::size_t i = 0; i < signals.size(); ++i) {
    network::CorridorStop stop;
    stop.signal = signals[i];
    stop.from_leg = from_leg;
    stop.to_leg = (from_leg + 2) % 4;
    stop.movement = std::string(approach_of_leg[from_leg]) + "-T";
    if (i > 0) {
      const int l = find_link(network, signals[i - 1], signals[i]);
      stop.links = {l};
      stop.distance_m = network.links[static_cast<std::size_t>(l)].length_m;
    }
    d.stops.push_back(stop);
  }
  return d;
}

void add_corridor(drafting::Inputs& inputs, const std::string& id, const std::string& name, const std::vector<int>& signals, int from_leg, const std::string& forward,
                  const std::string& backward) {
  const std::vector<int> reversed(signals.rbegin(), signals.rend());
  inputs.network.corridors.push_back(
      {id, name, {direction(inputs.network, "forward", forward, signals, from_leg), direction(inputs.network, "backward", backward, reversed, (from_leg + 2) % 4)}});
  project::Corridor corridor;
  corridor.id = id;
  corridor.name = name;
  for (const int s : signals) corridor.signals.push_back(inputs.network.signals[static_cast<std::size_t>(s)].id);
  inputs.project.corridors.push_back(corridor);
}

void add_counts(drafting::Inputs& inputs, const std::string& signal, const Street& street) {
  for (const char* approach : approach_of_leg) {
    const bool is_main = approach[0] == 'E' || approach[0] == 'W';
    const auto row = [&](const char* turn, double volume, const char* kind, int lanes) {
      project::MovementRow r;
      r.row = inputs.tables.movements.size() + 2;
      r.signal = signal;
      r.approach = approach;
      r.turn = turn;
      r.volume_vph = volume;
      r.peak_hour_factor = 1.0;
      r.lane_group = std::string(approach) + kind;
      r.lanes = lanes;
      if (std::string(turn) == "L") r.turn_treatment = is_main ? "protected" : "permissive";
      inputs.tables.movements.push_back(r);
    };
    row("L", street.left_vph, is_main ? "-L" : "-LTR", 1);
    row("T", is_main ? street.main_vph : street.side_vph, is_main ? "-TR" : "-LTR", is_main ? street.main_lanes : 1);
    row("R", street.left_vph, is_main ? "-TR" : "-LTR", is_main ? street.main_lanes : 1);
  }
}

drafting::Inputs empty_town() {
  drafting::Inputs inputs;
  inputs.project.name = "Made town";
  inputs.project.file = "project.toml";
  inputs.project.periods.push_back({"am", "Mon-Fri", "06:30", "09:30", {60, 120, 10}});
  inputs.tables.movements_source = "movements.csv";
  inputs.standard = plain_standard();
  inputs.network.has_roads = true;
  return inputs;
}

}  // namespace

standards::DesignStandard plain_standard() { return *standards::read_standard(*standards::embedded_standard("kinematic-us"), "kinematic-us.toml"); }

drafting::Inputs main_street(const Street& street) {
  drafting::Inputs inputs = empty_town();
  Network& network = inputs.network;
  std::vector<int> order;
  for (int i = 0; i < street.signals; ++i) {
    network.signals.push_back(four_legs(fmt::format("A{}", i + 1), i, 0, street.spacing_m, street.main_lanes));
    add_counts(inputs, network.signals.back().id, street);
    order.push_back(i);
  }
  for (int i = 0; i + 1 < street.signals; ++i) {
    network.links.push_back(link(network, i, i + 1, 1, 3, street.spacing_m));
    network.links.push_back(link(network, i + 1, i, 3, 1, street.spacing_m));
  }
  add_corridor(inputs, "main", "Main Street", order, 3, "EB", "WB");
  return inputs;
}

drafting::Inputs grid(int rows, int columns, double spacing_m) {
  drafting::Inputs inputs = empty_town();
  Network& network = inputs.network;
  const Street street{columns, spacing_m, 450, 250, 40, 2};
  for (int r = 0; r < rows; ++r)
    for (int c = 0; c < columns; ++c) {
      network.signals.push_back(four_legs(fmt::format("R{}C{}", r + 1, c + 1), c, r, spacing_m, 2));
      add_counts(inputs, network.signals.back().id, street);
    }
  const auto at = [&](int r, int c) { return r * columns + c; };
  for (int r = 0; r < rows; ++r)
    for (int c = 0; c < columns; ++c) {
      if (c + 1 < columns) network.links.push_back(link(network, at(r, c), at(r, c + 1), 1, 3, spacing_m + 20 * c));
      if (c + 1 < columns) network.links.push_back(link(network, at(r, c + 1), at(r, c), 3, 1, spacing_m + 20 * c));
      if (r + 1 < rows) network.links.push_back(link(network, at(r, c), at(r + 1, c), 2, 0, spacing_m + 35 * r));
      if (r + 1 < rows) network.links.push_back(link(network, at(r + 1, c), at(r, c), 0, 2, spacing_m + 35 * r));
    }
  std::vector<int> row, column;
  for (int c = 0; c < columns; ++c) row.push_back(at(0, c));
  for (int r = 0; r < rows; ++r) column.push_back(at(r, 0));
  add_corridor(inputs, "row", "First Row", row, 3, "EB", "WB");
  add_corridor(inputs, "column", "First Column", column, 0, "SB", "NB");
  return inputs;
}

}  // namespace entrain::made_town
