// Invented intersections for the tests: legs by bearing, all movements between them, crossings, and demand.
#pragma once

#include <cmath>
#include <string>
#include <vector>

#include "timing/signal_design.hpp"

namespace entrain::timing::sample {

struct LegSketch {
  std::string id;
  double bearing_deg = 0;
  bool in = true, out = true;
  bool crossing = true;
  double speed_mph = 30;
};

inline std::string travel_word(double bearing_deg) {
  static const char* words[] = {"NB", "NEB", "EB", "SEB", "SB", "SWB", "WB", "NWB"};
  return words[static_cast<int>(std::lround(std::fmod(bearing_deg + 720 + 180, 360) / 45)) % 8];
}

inline network::TurnKind turn_of(double angle_deg) {
  if (std::abs(angle_deg) > 170) return network::TurnKind::u_turn;
  if (std::abs(angle_deg) <= 45) return network::TurnKind::through;
  return angle_deg < 0 ? network::TurnKind::left : network::TurnKind::right;
}

// Every leg with every other (no U-turns); widths 14.4 m, primary roads on the first leg's axis.
inline network::Signal streets(const std::vector<LegSketch>& sketches, TrafficSide side = TrafficSide::right) {
  network::Signal signal;
  signal.id = "T1";
  signal.traffic_side = side;
  for (const LegSketch& sketch : sketches) {
    network::Leg leg;
    leg.id = sketch.id, leg.bearing_deg = sketch.bearing_deg, leg.width_m = 14.4;
    leg.lanes_in = sketch.in ? 2 : 0, leg.lanes_out = sketch.out ? 2 : 0;
    leg.speed_limit_mps = sketch.speed_mph * mps_per_mph;
    leg.road_class = network::RoadClass::primary;
    signal.legs.push_back(leg);
    if (sketch.crossing) signal.crossings.push_back({"X-" + sketch.id, static_cast<int>(signal.legs.size()) - 1, 14.4, false});
  }
  for (int from = 0; from < static_cast<int>(sketches.size()); ++from)
    for (int to = 0; to < static_cast<int>(sketches.size()); ++to) {
      if (from == to || !sketches[from].in || !sketches[to].out) continue;
      network::Movement movement;
      movement.from_leg = from, movement.to_leg = to;
      movement.approach = travel_word(sketches[from].bearing_deg);
      movement.turn_angle_deg = std::remainder(sketches[to].bearing_deg - sketches[from].bearing_deg - 180, 360.0);
      movement.turn = turn_of(movement.turn_angle_deg);
      const char letter = movement.turn == network::TurnKind::left ? 'L' : movement.turn == network::TurnKind::right ? 'R' : movement.turn == network::TurnKind::through ? 'T' : 'U';
      movement.id = movement.approach + "-" + letter;
      for (const auto& other : signal.movements)
        if (other.id == movement.id) movement.id += "." + sketches[to].id;
      signal.movements.push_back(movement);
    }
  return signal;
}

inline network::Signal four_legs(TrafficSide side = TrafficSide::right, double speed_mph = 30) {
  return streets({{"N", 0, true, true, true, speed_mph}, {"E", 90, true, true, true, speed_mph}, {"S", 180, true, true, true, speed_mph}, {"W", 270, true, true, true, speed_mph}}, side);
}

inline network::Signal three_legs(TrafficSide side = TrafficSide::right) { return streets({{"E", 90}, {"S", 180}, {"W", 270}}, side); }

// Legs reflected about the north-south axis: bearings, sides of turns, traffic side. Ids keep their meaning (the leg called E now lies west).
inline network::Signal mirrored(network::Signal signal) {
  signal.traffic_side = signal.traffic_side == TrafficSide::right ? TrafficSide::left : TrafficSide::right;
  for (auto& leg : signal.legs) leg.bearing_deg = std::fmod(360 - leg.bearing_deg, 360);
  for (auto& movement : signal.movements) {
    movement.turn_angle_deg = -movement.turn_angle_deg;
    if (movement.turn == network::TurnKind::left)
      movement.turn = network::TurnKind::right;
    else if (movement.turn == network::TurnKind::right)
      movement.turn = network::TurnKind::left;
  }
  return signal;
}

// Opposed turns in a lane of their own where `own_lanes`, everything else of an approach in one lane group of two lanes.
inline demand::SignalDemand demand_of(const network::Signal& signal, bool own_lanes, demand::TurnTreatment treatment = demand::TurnTreatment::not_stated) {
  demand::SignalDemand out;
  out.signal = signal.id;
  const auto opposed = signal.traffic_side == TrafficSide::right ? network::TurnKind::left : network::TurnKind::right;
  for (int leg = 0; leg < static_cast<int>(signal.legs.size()); ++leg) {
    demand::LaneGroup own{signal.legs[leg].id + "-turn", {}, 1, 0, 1700, 2, {}, demand::Origin::counted, demand::Origin::counted};
    demand::LaneGroup rest{signal.legs[leg].id + "-rest", {}, 2, 0, 3500, 2, {}, demand::Origin::counted, demand::Origin::counted};
    for (const auto& movement : signal.movements) {
      if (movement.from_leg != leg) continue;
      demand::MovementFlow flow;
      flow.movement = movement.id;
      flow.flow_vph = movement.turn == network::TurnKind::through ? 600 + 50 * leg : 90 + 10 * leg;
      if (movement.turn == opposed) flow.treatment = treatment;
      out.movements.push_back(flow);
      demand::LaneGroup& lanes = own_lanes && movement.turn == opposed ? own : rest;
      lanes.movements.push_back(movement.id);
      lanes.flow_vph += flow.flow_vph;
    }
    if (!own.movements.empty()) out.lane_groups.push_back(own);
    if (!rest.movements.empty()) out.lane_groups.push_back(rest);
  }
  return out;
}

}  // namespace entrain::timing::sample
