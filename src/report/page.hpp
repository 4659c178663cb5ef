// The page of a run: one self-contained HTML file a period, and an index of the periods.
#pragma once

#include <string>
#include <utility>
#include <vector>

#include "report/document.hpp"
#include "report/figures.hpp"
#include "report/sheets.hpp"

namespace entrain::report {

struct PageOptions {
  Units units = Units::metric;
  PageSize page = PageSize::a4;
  std::vector<std::pair<std::string, std::string>> files;  // beside the page: path and what it is
};

// Verdict of the review first; then figures, diagrams, bands, claims with their proof, signals, changes, lane groups, links, assumptions, cautions.
Document period_page(const PlanWithFigures& period, const PageOptions& options);
Document index_page(const std::vector<PlanWithFigures>& periods, const PageOptions& options);

// Tables of the page, also for terminals.
Table bands_table(const plan::Plan& plan);
Table claims_table(const PlanWithFigures& period);
Table signals_table(const PlanWithFigures& period);
// Old beside new where the running timing is known.
Table changes_table(const plan::Plan& plan);

// Everything for a folder: index.html, PERIOD/page.html, PERIOD/CORRIDOR.svg, PERIOD/changes.csv (where the running timing is known),
// sheets/SIGNAL.html and .csv.
std::vector<OutputFile> all_reports(const std::vector<PlanWithFigures>& periods, const SheetOptions& options);

// Names of the periods' folders, in order: the period's own name where that is plain.
std::vector<std::string> period_folders(const std::vector<PlanWithFigures>& periods);

}  // namespace entrain::report
