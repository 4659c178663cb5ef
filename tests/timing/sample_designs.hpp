// Invented designs for the tests: plain numbers in, a SignalDesign out.
#pragma once

#include <string>
#include <vector>

#include "timing/allocation.hpp"

namespace entrain::timing::sample {

inline Group vehicle(const std::string& id, double minimum_s, double yellow_s, double red_s, int lane_group) {
  Group group;
  group.id = id;
  if (id.size() == 1 && id[0] >= '1' && id[0] <= '8') group.phase_number = id[0] - '0';
  group.minimum_green = Tenths::nearest(minimum_s);
  group.yellow = Tenths::nearest(yellow_s);
  group.red_clearance = Tenths::nearest(red_s);
  group.lane_groups = {lane_group};
  return group;
}

// Lane group i belongs to group i; saturation flow 1800, so a flow of 1800 y has the flow ratio y.
inline SignalDesign bare(const std::vector<Group>& groups) {
  SignalDesign design;
  design.signal = "Test";
  design.groups = groups;
  for (const Group& group : groups) design.lane_groups.push_back({group.id, {}, 1, 1800, {}, false});
  return design;
}

// Conflict with the intergreens that yellow and red clearance give.
inline void conflict(SignalDesign& design, int a, int b) {
  const auto change = [&](int g) { return design.groups[static_cast<std::size_t>(g)].yellow + design.groups[static_cast<std::size_t>(g)].red_clearance; };
  design.conflicts.push_back({a, b, change(a), change(b)});
}

// Groups 1..8 (index = number - 1) with all conflicts of the dual-ring pattern; protected turns only.
inline SignalDesign dual_ring(double minimum_s = 6, double yellow_s = 3.6, double red_s = 1.4) {
  std::vector<Group> groups;
  for (int number = 1; number <= 8; ++number) groups.push_back(vehicle(std::to_string(number), minimum_s, yellow_s, red_s, number - 1));
  SignalDesign design = bare(groups);
  const auto side = [](int number) { return number == 1 || number == 2 || number == 5 || number == 6 ? 0 : 1; };
  for (int a = 1; a <= 8; ++a)
    for (int b = a + 1; b <= 8; ++b)
      if (side(a) != side(b) || (a <= 4) == (b <= 4)) conflict(design, a - 1, b - 1);
  design.ring_barrier = RingBarrier{{{{0, 1}, {2, 3}}, {{4, 5}, {6, 7}}}};
  design.reference_group = 1;
  return design;
}

inline std::vector<double> flows(const std::vector<double>& ratios) {
  std::vector<double> out;
  for (const double y : ratios) out.push_back(1800 * y);
  return out;
}

inline AllocationRequest request(int cycle_s, const std::vector<double>& ratios) {
  AllocationRequest out;
  out.cycle = Tenths::from_seconds(cycle_s);
  out.flows_vph = flows(ratios);
  return out;
}

inline std::string text_of(const Diagnostics& diagnostics) {
  std::string text;
  for (const auto& d : diagnostics) text += to_text(d) + "\n";
  return text;
}

}  // namespace entrain::timing::sample
