// Invented plans for the report tests.
#pragma once

#include <string>
#include <vector>

#include "report/figures.hpp"

namespace entrain::report::tests {

// A dual-ring signal of four legs with protected turns, crossings, running timing, evidence: everything a sheet can show.
plan::Signal full_signal(const std::string& id, const std::string& name, double cycle_s, double offset_s);

// A corridor of such signals `spacing_m` apart (repeated as needed), both directions at 12.5 m/s, with true bands where `with_bands`.
PlanWithFigures corridor_town(const std::string& period, std::size_t signals, const std::vector<double>& spacing_m);

// The band of a direction as claimed there, laid out by hand: largest common window over whole tenths, by trying every tenth.
void claim_widest_band(const plan::Plan& plan, plan::Direction& direction);

}  // namespace entrain::report::tests
