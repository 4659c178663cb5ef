// entrain compare PROJECT --cycles MIN:MAX:STEP: a complete plan for each cycle length, side by side.
#include <fmt/format.h>

#include <cmath>
#include <nlohmann/json.hpp>

#include "base/number_text.hpp"
#include "cli/command.hpp"
#include "cli/load_project.hpp"
#include "cli/progress.hpp"
#include "cli/reports.hpp"
#include "drafting/draft.hpp"
#include "drafting/local_timing.hpp"
#include "report/compare_page.hpp"

namespace entrain::cli {
namespace {

struct CompareCommand {
  std::string project, cycles, output;
  double keep_band = 1;
};

// "60:120:5" or "90"; nothing if it is neither.
std::optional<std::vector<int>> cycles_of(const std::string& text) {
  std::vector<std::int64_t> parts;
  std::size_t from = 0;
  while (from <= text.size()) {
    const std::size_t colon = std::min(text.find(':', from), text.size());
    const auto number = parse_whole_number(std::string_view(text).substr(from, colon - from));
    if (!number || *number < 1 || *number > 3600) return std::nullopt;
    parts.push_back(*number);
    from = colon + 1;
  }
  if (parts.size() == 1) return std::vector<int>{static_cast<int>(parts[0])};
  if (parts.size() > 3 || parts[0] > parts[1]) return std::nullopt;
  std::vector<int> cycles;
  for (std::int64_t c = parts[0]; c <= parts[1]; c += parts.size() == 3 ? parts[2] : 5) cycles.push_back(static_cast<int>(c));
  return cycles;
}

report::CompareRow row_of(const drafting::CyclePlan& from) {
  report::CompareRow row;
  row.cycle_s = from.cycle_s;
  row.fits = from.fits;
  for (const Diagnostic& d : from.why_not) row.why_not += (row.why_not.empty() ? "" : "; ") + d.where + ": " + d.found;
  if (!from.fits) return row;
  for (const auto& corridor : from.plan.corridors)
    for (const auto& direction : corridor.directions) row.bands.push_back({corridor.name.empty() ? corridor.id : corridor.name, direction.label, direction.bandwidth_s, direction.efficiency, direction.attainability});
  const auto& total = from.evaluation.total;
  row.delay_s = total.delay_s_per_vehicle;
  row.stops_per_h = total.stops_per_h;
  row.worst_degree = total.worst_degree_of_saturation;
  row.worst_degree_at = total.worst_degree_at;
  row.longest_pedestrian_wait_s = total.longest_pedestrian_wait_s;
  row.longest_side_street_wait_s = total.longest_side_street_wait_s;
  return row;
}

// The running timing as a row, where the project has it; says nothing where it can't be held.
void add_existing(const drafting::Inputs& inputs, const std::string& period, std::vector<report::CompareRow>& rows) {
  if (inputs.tables.timing.empty()) return;
  drafting::DraftOptions options;
  options.hold = drafting::Hold::all;
  options.periods = {period};
  const auto held = drafting::draft(inputs, options, {});
  if (!held || held->value.plans.empty()) return;
  report::CompareRow row = row_of(held->value.plans[0]);
  row.existing = true;
  rows.insert(rows.begin(), std::move(row));
}

report::Comparison compare_period(const drafting::Inputs& inputs, const drafting::LocalTiming& local, std::size_t period, const std::vector<int>& cycles, const drafting::CoordinateOptions& options, Progress& progress) {
  report::Comparison comparison;
  comparison.project = inputs.project.name;
  comparison.period = inputs.project.periods[period].id;
  const auto sweep = drafting::sweep_cycles(inputs, local, period, cycles, options, [&](int done_now, int all) { progress.show(done_now, all); });
  for (std::size_t i = 0; i < sweep.rows.size(); ++i) {
    comparison.rows.push_back(row_of(sweep.rows[i]));
    comparison.rows.back().recommended = static_cast<int>(i) == sweep.recommended;
    comparison.rows.back().runner_up = static_cast<int>(i) == sweep.runner_up;
  }
  comparison.reason = sweep.reason;
  add_existing(inputs, comparison.period, comparison.rows);
  return comparison;
}

int run_compare(const CompareCommand& command, const CommonOptions& common) {
  auto loaded = load_project(command.project);
  if (!loaded) return fail(loaded.error());
  const drafting::Inputs& inputs = loaded->value;
  const auto asked = command.cycles.empty() ? std::nullopt : cycles_of(command.cycles);
  if (!command.cycles.empty() && !asked) return fail({error("--cycles", printable(command.cycles), "MIN:MAX:STEP in whole seconds, e.g. 60:120:5", "Correct the option")}, wrong_usage);
  if (inputs.project.periods.empty()) return fail({error(inputs.project.file, "no [[period]]", "at least one period", "Add a [[period]] table")});
  const auto local = drafting::local_timing(inputs);
  if (!local) return fail(local.error());
  drafting::CoordinateOptions options;
  options.keep_band = command.keep_band;
  options.seed = common.seed;
  options.threads = thread_count(common);
  Progress progress("comparing", common.quiet);
  std::vector<report::Comparison> comparisons;
  for (std::size_t p = 0; p < inputs.project.periods.size(); ++p) {
    const auto& period = inputs.project.periods[p];
    if (!common.periods.empty() && std::find(common.periods.begin(), common.periods.end(), period.id) == common.periods.end()) continue;
    comparisons.push_back(compare_period(inputs, local->value, p, asked ? *asked : drafting::cycles_of(period.cycle), options, progress));
  }
  progress.end();
  if (comparisons.empty()) return fail({error("--period", "no such period", "a period of the project", "Correct the option")});
  if (!command.output.empty()) {
    Diagnostics problems;
    for (const report::OutputFile& file : report::compare_files(comparisons)) append(problems, write_whole_file(command.output + "/" + file.path, file.bytes));
    if (!problems.empty()) return fail(problems);
  }
  if (!common.json) print_diagnostics(loaded->notes, common.quiet);
  fmt::print("{}", common.json ? report::compare_json(comparisons) : report::compare_text(comparisons));
  const bool any = std::any_of(comparisons.begin(), comparisons.end(), [](const auto& c) { return std::any_of(c.rows.begin(), c.rows.end(), [](const auto& r) { return r.fits && !r.existing; }); });
  return any ? done : no_plan;
}

}  // namespace

std::function<int()> declare_compare(CLI::App& app, const CommonOptions& common) {
  auto command = std::make_shared<CompareCommand>();
  app.add_option("project", command->project, "project.toml, or the folder that holds it")->required();
  app.add_option("--cycles", command->cycles, "MIN:MAX:STEP in seconds; without it each period's own range");
  app.add_option("--keep-band", command->keep_band, "Every band may shrink to this part of its best in return for delay")->check(CLI::Range(0.0, 1.0));
  app.add_option("-o,--output", command->output, "Folder for the table (CSV) and the page with its plot");
  return [command, &common] { return run_compare(*command, common); };
}

}  // namespace entrain::cli
