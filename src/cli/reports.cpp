#include "cli/reports.hpp"

#include <thread>

namespace entrain::cli {

ReportOptions report_options(const CommonOptions& common) { return {common.units, "a4"}; }

Diagnostics write_reports(const std::vector<plan::Plan>&, const std::string&, const ReportOptions&) { return {}; }

void add_notes(const Diagnostics& notes, plan::Plan& plan) {
  for (const Diagnostic& d : notes) plan.assumptions.push_back(d.where + ": " + d.found);
}

int thread_count(const CommonOptions& common) {
  if (common.threads > 0) return common.threads;
  const unsigned all = std::thread::hardware_concurrency();
  return all == 0 ? 1 : static_cast<int>(all);
}

}  // namespace entrain::cli
