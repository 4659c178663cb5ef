#include "cli/reports.hpp"

#include <fmt/format.h>

#include <ctime>
#include <cstdlib>
#include <thread>

#include "base/number_text.hpp"
#include "evaluation/evaluate.hpp"
#include "report/page.hpp"
#include "review/review.hpp"

namespace entrain::cli {
namespace {

report::ReviewSummary summary_of(const review::Review& review) {
  report::ReviewSummary summary;
  summary.verdict = review.safety == review::Safety::checked ? "checked" : review.safety == review::Safety::partly ? "partly" : "not checked";
  summary.why = review.why;
  for (const review::Finding& f : review.findings)
    if (f.severity != review::Severity::note) summary.findings.push_back({f.rule, f.signal, f.sentence + (f.mend.empty() ? "" : ". " + f.mend)});
  return summary;
}

// The day printed on sheets: SOURCE_DATE_EPOCH where it is set, so that the same input gives the same bytes; else a blank to fill in.
std::string date_text() {
  const char* epoch = std::getenv("SOURCE_DATE_EPOCH");
  const auto seconds = epoch == nullptr ? std::nullopt : parse_whole_number(epoch);
  if (!seconds || *seconds < 0 || *seconds > 253402300799) return {};
  const std::time_t time = static_cast<std::time_t>(*seconds);
  std::tm parts{};
  gmtime_r(&time, &parts);
  return fmt::format("{:04}-{:02}-{:02}", parts.tm_year + 1900, parts.tm_mon + 1, parts.tm_mday);
}

}  // namespace

ReportOptions report_options(const CommonOptions& common) { return {common.units, "a4"}; }

Diagnostics write_reports(const std::vector<plan::Plan>& plans, const std::string& folder, const ReportOptions& options) {
  std::vector<report::PlanWithFigures> periods;
  const auto reviews = review::review_plans(plans);
  for (std::size_t i = 0; i < plans.size(); ++i) periods.push_back({plans[i], evaluation::evaluate(plans[i]), summary_of(reviews[i])});
  report::SheetOptions sheet;
  sheet.units = report::units_of(!options.units.empty() ? options.units : plans.empty() ? "metric" : plans[0].units);
  sheet.page = options.page == "letter" ? report::PageSize::letter : report::PageSize::a4;
  sheet.date = date_text();
  Diagnostics problems;
  for (const report::OutputFile& file : report::all_reports(periods, sheet)) append(problems, write_whole_file(folder + "/" + file.path, file.bytes));
  return problems;
}

void add_notes(const Diagnostics& notes, plan::Plan& plan) {
  for (const Diagnostic& d : notes) plan.assumptions.push_back(d.where + ": " + d.found);
}

int thread_count(const CommonOptions& common) {
  if (common.threads > 0) return common.threads;
  const unsigned all = std::thread::hardware_concurrency();
  return all == 0 ? 1 : static_cast<int>(all);
}

}  // namespace entrain::cli
