// Four-leg signals of an invented town, and rows of counts.
#pragma once

#include <string>

#include "demand/demand.hpp"

namespace entrain::demand::sample {

// Legs N, E, S, W with lanes in; the movements of all four approaches, right-hand traffic.
inline network::Signal crossroads(const std::string& id = "T1") {
  network::Signal signal;
  signal.id = id;
  const char* legs[] = {"N", "E", "S", "W"};
  const char* approaches[] = {"SB", "WB", "NB", "EB"};
  for (int i = 0; i < 4; ++i) {
    network::Leg leg;
    leg.id = legs[i], leg.bearing_deg = 90 * i, leg.lanes_in = i % 2 == 0 ? 1 : 2, leg.lanes_out = 1;
    leg.street = i % 2 == 0 ? "Kiln Street" : "Tessaly Avenue";
    leg.road_class = i % 2 == 0 ? network::RoadClass::residential : network::RoadClass::primary;
    signal.legs.push_back(leg);
  }
  const auto add = [&](int from, int step, network::TurnKind turn, const char* letter) {
    network::Movement movement;
    movement.approach = approaches[from], movement.id = std::string(approaches[from]) + "-" + letter;
    movement.from_leg = from, movement.to_leg = (from + step) % 4, movement.turn = turn;
    signal.movements.push_back(movement);
  };
  for (int from = 0; from < 4; ++from) {
    add(from, 1, network::TurnKind::left, "L");
    add(from, 2, network::TurnKind::through, "T");
    add(from, 3, network::TurnKind::right, "R");
  }
  return signal;
}

inline network::Network town(std::vector<network::Signal> signals = {crossroads()}) {
  network::Network network;
  network.has_roads = true;
  network.signals = std::move(signals);
  return network;
}

inline project::MovementRow row(const std::string& approach, const std::string& turn, std::optional<double> volume, std::size_t line = 2) {
  project::MovementRow r;
  r.row = line, r.signal = "T1", r.approach = approach, r.turn = turn, r.volume_vph = volume;
  return r;
}

inline std::string text_of(const Diagnostics& diagnostics) {
  std::string text;
  for (const Diagnostic& d : diagnostics) text += to_text(d) + "\n";
  return text;
}

inline Result<Noted<Demand>> flows(const network::Network& network, const std::vector<project::MovementRow>& rows, const std::string& period = "am") {
  return design_flows(network, rows, "m.csv", {}, period);
}

inline std::string problems_of(const Result<Noted<Demand>>& result) { return result ? std::string("none") : text_of(result.error()); }

inline const MovementFlow* find(const SignalDemand& signal, const std::string& movement) {
  for (const MovementFlow& flow : signal.movements)
    if (flow.movement == movement) return &flow;
  return nullptr;
}

inline const LaneGroup* find_lanes(const SignalDemand& signal, const std::string& id) {
  for (const LaneGroup& group : signal.lane_groups)
    if (group.id == id) return &group;
  return nullptr;
}

}  // namespace entrain::demand::sample
