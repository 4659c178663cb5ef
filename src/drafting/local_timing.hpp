// Local timing first: design flows of every period and the signal groups, clearances and minimums of every signal.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "demand/demand.hpp"
#include "drafting/inputs.hpp"
#include "timing/signal_design.hpp"

namespace entrain::drafting {

enum class Operation { pretimed, coordinated_actuated, free };

// One signal that is planned: its place in the network, its groups, and what the engineer fixed about it.
struct PlannedSignal {
  int network_signal = 0;
  timing::SignalDesign design;
  Operation operation = Operation::pretimed;
  std::string clock = "gps";
  std::string half_cycle = "never";  // never | allowed | required
  int minimum_cycle_s = 1, maximum_cycle_s = 3600;
  bool offset_fixed = false, sequence_fixed = false, splits_fixed = false;
  bool conflicts_given = false;      // the conflicts table, not geometry
  std::vector<std::string> coordinated;  // group ids that serve corridors, first the reference
};

struct LocalTiming {
  std::vector<demand::Demand> demands;   // by period, in project order
  std::vector<PlannedSignal> signals;    // network order; pedestrian-only signals are left out
  std::vector<int> planned_of_network;   // network signal -> index here, -1: not planned
};

// Errors: those of design_flows and design_signal, all signals at once.
[[nodiscard]] Result<Noted<LocalTiming>> local_timing(const Inputs& inputs);

// Groups of the corridors at that signal, in order; the first becomes the reference group. Without corridors the design's own stays.
void settle_coordinated(const Inputs& inputs, PlannedSignal& planned);
// What the signals table says about one signal.
void apply_signal_row(const Inputs& inputs, const std::string& signal, PlannedSignal& planned);

// The group that serves the movement, with protection where there is one; -1: none.
int serving_group(const timing::SignalDesign& design, const std::string& movement);

// The group a corridor direction uses at a stop: the project's word, else the movement's group; -1: none.
int corridor_group(const Inputs& inputs, const timing::SignalDesign& design, std::size_t corridor, const std::string& direction,
                   const network::CorridorStop& stop);

}  // namespace entrain::drafting
