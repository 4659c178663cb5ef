// Timing sheets: one an intersection, all periods on it. The front is what is keyed in; the back says why it is safe.
#pragma once

#include <string>
#include <vector>

#include "report/document.hpp"
#include "report/figures.hpp"
#include "report/units.hpp"

namespace entrain::report {

struct SheetOptions {
  Units units = Units::metric;
  PageSize page = PageSize::a4;
  std::string date;             // as it is to be printed; empty: a blank line
  std::string author, checker;  // empty: a blank line
  std::string version;          // empty: the program that made the plan
};

// The sheet of one intersection in all `periods` that know it, as a document.
Document timing_sheet(const std::vector<PlanWithFigures>& periods, const std::string& signal, const SheetOptions& options);

// NAME.html and NAME.csv for every intersection of the periods, in order of first appearance; NAME from the signal's id (file_names).
std::vector<OutputFile> timing_sheets(const std::vector<PlanWithFigures>& periods, const SheetOptions& options);

// Ids of all signals, in order of first appearance.
std::vector<std::string> signal_ids(const std::vector<PlanWithFigures>& periods);

// The verdict on safety over all periods, the worst first: what every page opens with.
Notice safety_notice(const std::vector<PlanWithFigures>& periods);

// What every sheet says whatever the plan says.
const std::vector<std::string>& standing_cautions();

}  // namespace entrain::report
