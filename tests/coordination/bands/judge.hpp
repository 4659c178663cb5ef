// A slow and obvious judge: the cycle is cut into equal cells, a station's windows are bits, every offset and option is
// tried.
#pragma once

#include <cstdint>
#include <random>
#include <string>
#include <vector>

#include "coordination/bands/model.hpp"

namespace entrain::bands::judge {

struct Best {
  double share_s = 0, total_s = 0;
};

// All times of the input must be whole cells (`cells_per_s` a second); offsets tried are multiples of `offset_step_s`.
// At most 64 cells.
Best exhaustive(const TwoWayInput& input, int cells_per_s, double offset_step_s);

struct Kind {
  int stations = 3;
  int cells_per_s = 1;  // resolution of times in the input
  bool orders = false, second_windows = false, half_periods = false, clearances = false, fixed = false, open = false;
  double forward_weight = 1, backward_weight = 1;
};
// A small random corridor; the cycle is even, whole seconds.
TwoWayInput random_corridor(std::mt19937& random, const Kind& kind);

// The best vector of min(1, share / own best share) by corridor, sorted ascending, over all offsets that are multiples
// of the step. `own_best_s` by corridor.
std::vector<double> exhaustive_joint(const Problem& problem, const std::vector<double>& own_best_s, int cells_per_s,
                                     double offset_step_s);

enum class Shape { cross, two_shared, triangle, chain };
// Small random corridors that share stations.
Problem random_joint(std::mt19937& random, Shape shape, bool orders, int fixed);

// The input in one line, for the message of a failing check.
std::string text(const TwoWayInput& input);

}  // namespace entrain::bands::judge
