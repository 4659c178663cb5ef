// The same problem as a mixed-integer program for an outside solver.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "coordination/bands/link_bands.hpp"
#include "coordination/bands/model.hpp"
#include "coordination/bands/pace_ranges.hpp"

namespace entrain::bands::milp {

// LP format. Maximises r with width >= r * weight * own_best of the corridor (own_best 1: r is the share). Windows must
// not overlap or touch.
std::string program(const Problem& problem, const std::vector<double>& own_best_s);

// The same with the pace of every link and direction free within its limits.
std::string program(const PaceInput& input);

// Link bands about two lines through all windows.
std::string program(const LinkBandInput& input);

bool is_available();
// Runs cbc on the program in `folder`; nothing where it finds no solution (infeasible), which for bands means 0.
std::optional<double> solve(const std::string& program, const std::string& folder);

}  // namespace entrain::bands::milp
