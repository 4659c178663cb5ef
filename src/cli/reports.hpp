// Sheets, diagrams and pages of plans, written to a folder. Shared by draft and sheet.
#pragma once

#include <string>
#include <vector>

#include "base/diagnostic.hpp"
#include "cli/command.hpp"
#include "plan/plan.hpp"

namespace entrain::cli {

struct ReportOptions {
  std::string units;        // empty: each plan's own
  std::string page = "a4";  // a4 | letter
};

ReportOptions report_options(const CommonOptions& common);

// Evaluates and reviews the plans itself. Returns what could not be written.
Diagnostics write_reports(const std::vector<plan::Plan>& plans, const std::string& folder, const ReportOptions& options);

// Notes of the import, as assumptions of the plan.
void add_notes(const Diagnostics& notes, plan::Plan& plan);

int thread_count(const CommonOptions& common);

}  // namespace entrain::cli
