// Bands on a circle: stations with windows, directions that visit them in order, and the answer to where bands fit and
// how wide. The input is seconds as doubles; inside everything is whole ticks of 0.1 ns, so that answers repeat and
// comparisons are exact.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "base/diagnostic.hpp"

namespace entrain::bands {

// [start_s, start_s + duration_s) in the station's local time, modulo the cycle; duration_s == cycle: always open.
struct Window {
  double start_s = 0, duration_s = 0;
};

// ---- one corridor whose stations are the same both ways -------------------------------------------------------------

struct StationOption {
  std::vector<Window> forward, backward;  // over the full cycle; a station at half the cycle repeats
};

struct TwoWayStation {
  std::vector<StationOption> options;  // at least one; the first that serves is preferred
  std::optional<int> fixed_option;
  std::optional<double> fixed_offset_s;  // usually whole seconds; any finite value works
  bool half_period = false;  // everything here repeats after half the cycle, the offset lies in [0, cycle / 2)
  double forward_clearance_s = 0,
         backward_clearance_s = 0;  // shorten each window from its start; always open stays always open
};

struct TwoWayInput {
  double cycle_s = 0;
  std::vector<TwoWayStation> stations;
  std::vector<double> forward_travel_s;            // [i]: from station i to i + 1
  std::vector<double> backward_travel_s;           // [i]: from station i + 1 to i; empty where one_way
  double forward_weight = 1, backward_weight = 1;  // 0: does not count, gets what is left
  bool one_way = false;                            // forward only; backward windows and travel are not looked at
};

// ---- any number of corridors, any lists -----------------------------------------------------------------------------

struct Station {
  int option_count = 1;
  std::optional<int> fixed_option;
  std::optional<double> fixed_offset_s;
  bool half_period = false;
};

struct Stop {
  int station = 0;      // index into Problem::stations; a station may be met more than once, it has one offset
  double travel_s = 0;  // from the previous stop of this direction; 0 at the first
  double clearance_s = 0;
  std::vector<std::vector<Window>> windows;  // by option of the station
};

struct Direction {
  std::vector<Stop> stops;
  double weight = 1;
};

struct Corridor {
  std::vector<Direction> directions;  // one or two
};

struct Problem {
  double cycle_s = 0;
  std::vector<Station> stations;
  std::vector<Corridor> corridors;
};

Problem to_problem(const TwoWayInput& input);

// ---- answers --------------------------------------------------------------------------------------------------------

struct StationAnswer {
  int option = 0;
  double offset_s = 0;  // system time of local zero, 0 <= offset < period
  double early_s = 0,
         late_s = 0;  // this offset alone may move so far earlier or later while every band keeps its width
  double early_loss = 0, late_loss = 0;  // seconds of band, all directions together, lost per second beyond that range
};

struct StopAnswer {
  int window = -1;           // index into the stop's windows of the chosen option; -1: no band here
  double lead_s = 0;         // from the window's start (after clearance) to the band's leading edge
  double trail_s = 0;        // from the band's trailing edge to the window's end
  bool always_open = false;  // lead and trail then have no meaning
};

struct DirectionAnswer {
  double width_s = 0;
  double start_s = 0;  // system time modulo the cycle at which the leading edge passes the first stop
  double bound_s = 0;  // width in the best continuous answer of the whole problem (or alone, where that is not proved),
                       // at least width_s
  double least_window_s = 0;  // shortest of the longest windows of the chosen options: no band of theirs can be wider
  std::vector<StopAnswer> stops;
  std::vector<int> pinching;  // stops at which the leading or the trailing edge touches the window
};

struct CorridorAnswer {
  std::vector<DirectionAnswer> directions;
  double share_s = 0;           // least of width / weight over the directions with a weight
  double share_bound_s = 0;     // no offsets and options give more (in this problem)
  double own_best_share_s = 0;  // alone, without the other corridors
  bool all_directions = true;   // false: not every direction can have a band at once; the widest single one was taken
  std::vector<int> witness;     // stations that alone rule out a larger share, and with this share a larger sum; empty
                                // where fixed offsets decide
};

struct Answer {
  std::vector<StationAnswer> stations;
  std::vector<CorridorAnswer> corridors;
  double least_ratio = 1;        // least of share / own best share over the corridors
  double least_ratio_bound = 1;  // no offsets and options give a larger least ratio
  bool proved = true;            // the fairness vector is the best there is, not just the best found
  Diagnostics notes;
};

}  // namespace entrain::bands
