// The checked problem in ticks: frames (one a direction), stations and their visits, windows merged and shortened by
// queue clearance.
#pragma once

#include <vector>

#include "base/result.hpp"
#include "coordination/bands/model.hpp"
#include "coordination/bands/ticks.hpp"

namespace entrain::bands {

// 0 <= start < period, 0 < duration < period unless always open (then duration == cycle).
struct Slot {
  Tick start = 0, duration = 0;
  int window = 0;  // index of the given window it starts with
  bool open = false;
};

// One meeting of a direction with a station.
struct Visit {
  int frame = 0, stop = 0;
  Tick shift = 0;                        // travel from the direction's first stop, modulo the cycle
  std::vector<std::vector<Slot>> slots;  // by option of the station
};

struct CompiledStation {
  Tick period = 0;
  bool is_fixed = false;
  Tick fixed = 0;
  int option_count = 0;
  std::vector<int> options;   // allowed, ascending
  std::vector<Visit> visits;  // by frame, then stop
};

struct StopKey {
  int station = 0, visit = 0;
};

struct Frame {
  int corridor = 0, direction = 0;
  double weight = 0;
  std::vector<StopKey> stops;
};

struct Compiled {
  Tick cycle = 0;
  std::vector<CompiledStation> stations;
  std::vector<Frame> frames;
  std::vector<std::vector<int>> corridors;  // frames of each corridor
};

// Everything that is wrong with the problem, at once.
Diagnostics check(const Problem& problem);
// Travel times that do not match the number of stations.
Diagnostics check_lengths(const TwoWayInput& input);
[[nodiscard]] Result<Compiled> compile(const Problem& problem);

// The longest window of the visit among the options, 0 if none.
Tick longest_slot(const Visit& visit, const std::vector<int>& options);

}  // namespace entrain::bands
