// Time-space diagrams: one a corridor, both directions in it, clear in black and white.
#pragma once

#include <string>
#include <vector>

#include "plan/plan.hpp"
#include "report/document.hpp"
#include "report/units.hpp"

namespace entrain::report {

struct TimeSpaceOptions {
  Units units = Units::metric;
  int cycles = 3;  // shown on the time axis, 1..6
};

// Distance runs down to scale, time to the right. Roles of the shapes, for tests and style sheets:
//   "red|green|yellow|queue first|second|both"  a lamp of the coordinated group of that direction at one signal (both: the same for both)
//   "band first|second"                         a band, its edges from stop line to stop line; cut at the ends of the time axis
//   labels of every kind                        no two of them overlap
Drawing time_space_diagram(const plan::Plan& plan, const plan::Corridor& corridor, const TimeSpaceOptions& options);

// NAME.svg for every corridor; NAME from its id.
std::vector<OutputFile> time_space_files(const plan::Plan& plan, const TimeSpaceOptions& options);

}  // namespace entrain::report
