// Offset problems made from a seed: graphs like towns, costs at random or shaped like platoons that meet a green.
#pragma once

#include <cstdint>

#include "coordination/offsets/problem.hpp"
#include "coordination/offsets/random.hpp"

namespace entrain::offsets {

enum class CostKind {
  noise,     // every entry at random
  platoons,  // a dispersed platoon meets a green after a travel time: delay of both directions of a street in one table
  steady,    // the same with much steady inflow and more dispersion: flatter tables
};

// Delay of a platoon with `travel` seconds to go that meets a red of `red` seconds, by difference of labels.
Costs platoon_costs(int cycle, Random& random, bool steady);

// rows x columns nodes, an edge between neighbours that adds both directions.
Problem grid_problem(int rows, int columns, int cycle, CostKind kind, std::uint64_t seed);

// A town: points at random, triangulated by short non-crossing streets, thinned out to about `degree` streets a node; some one-way, with
// the table of one direction only.
Problem town_problem(int nodes, int cycle, CostKind kind, double degree, std::uint64_t seed);

// Anything legal and small: parallel and reversed edges, several parts, forbidden entries with the given chance, orders up to `orders`.
Problem any_problem(int nodes, int edges, int cycle, int orders, double forbidding, std::int64_t largest, std::uint64_t seed);

}  // namespace entrain::offsets
