// entrain draft PROJECT -o DIR: a coordinated plan for every period, with sheets, diagrams and one page.
#include <fmt/format.h>
#include <unistd.h>

#include <nlohmann/json.hpp>

#include "base/number_text.hpp"
#include "cli/command.hpp"
#include "cli/load_project.hpp"
#include "cli/progress.hpp"
#include "cli/reports.hpp"
#include "drafting/draft.hpp"
#include "plan/plan_text.hpp"

namespace entrain::cli {
namespace {

struct DraftCommand {
  std::string project, output, hold, dump_problem;
  double keep_band = 1;
  int cycle_s = 0;
};

drafting::DraftOptions draft_options(const DraftCommand& command, const CommonOptions& common) {
  drafting::DraftOptions options;
  options.periods = common.periods;
  if (command.hold == "greens") options.hold = drafting::Hold::greens;
  if (command.hold == "all") options.hold = drafting::Hold::all;
  if (command.cycle_s > 0) options.cycle_s = command.cycle_s;
  options.coordinate.keep_band = command.keep_band;
  options.coordinate.seed = common.seed;
  options.coordinate.threads = thread_count(common);
  return options;
}

void print_bands(const plan::Plan& plan) {
  for (const auto& corridor : plan.corridors)
    for (const auto& direction : corridor.directions)
      fmt::print("  {} {} ({}): band {} s of {} s, efficiency {} %, attainability {} %, {} signals\n", corridor.id, direction.name, direction.label,
                 number_text(direction.bandwidth_s, 1), number_text(plan.cycle_s), fixed_text(100 * direction.efficiency, 1), fixed_text(100 * direction.attainability, 1),
                 direction.stops.size());
}

void print_plan(const plan::Plan& plan, const std::string& folder) {
  fmt::print("period {}: cycle {} s, {} signals\n", plan.period, number_text(plan.cycle_s), plan.signals.size());
  if (!plan.cycle_reason.empty()) fmt::print("  {}\n", plan.cycle_reason);
  print_bands(plan);
  if (plan.measures)
    fmt::print("  delay {} s a vehicle, {} stops an hour, worst degree of saturation {} at {}\n", fixed_text(plan.measures->delay_s_per_vehicle, 1),
               number_text(plan.measures->stops_per_h, 0), fixed_text(plan.measures->worst_degree_of_saturation, 2), plan.measures->worst_degree_at);
  for (const auto& signal : plan.signals)
    for (const auto& over : signal.oversaturated)
      fmt::print("  OVERSATURATED {} {}: degree of saturation {}, the queue grows by {} vehicles an hour\n", signal.id, over.lane_group,
                 fixed_text(over.degree_of_saturation, 2), number_text(over.queue_growth_vph, 0));
  fmt::print("  plan {}\n", folder + "/plan.json");
}

nlohmann::ordered_json summary_of(const drafting::Draft& draft, const std::string& output) {
  auto list = nlohmann::ordered_json::array();
  for (const auto& row : draft.plans) {
    auto corridors = nlohmann::ordered_json::array();
    for (const auto& corridor : row.plan.corridors)
      for (const auto& direction : corridor.directions)
        corridors.push_back({{"corridor", corridor.id}, {"direction", direction.name}, {"bandwidth_s", direction.bandwidth_s}, {"efficiency", direction.efficiency},
                             {"attainability", direction.attainability}});
    list.push_back({{"period", row.plan.period}, {"cycle_s", row.cycle_s}, {"reason", row.plan.cycle_reason}, {"bands", corridors},
                    {"delay_s_per_vehicle", row.evaluation.total.delay_s_per_vehicle}, {"stops_per_h", row.evaluation.total.stops_per_h},
                    {"worst_degree_of_saturation", row.evaluation.total.worst_degree_of_saturation}, {"assumptions", row.plan.assumptions},
                    {"plan", output + "/" + row.plan.period + "/plan.json"}});
  }
  return {{"plans", list}};
}

Diagnostics write_plans(const drafting::Draft& draft, const std::string& output) {
  Diagnostics problems;
  for (const auto& row : draft.plans) {
    const std::string folder = output + "/" + row.plan.period;
    append(problems, write_whole_file(folder + "/plan.json", plan::write_plan(row.plan)));
    if (!row.certificate.empty()) append(problems, write_whole_file(folder + "/plan.cert", row.certificate));
    if (!row.problem.empty()) append(problems, write_whole_file(folder + "/plan.offsets", row.problem));
  }
  return problems;
}

int run_draft(const DraftCommand& command, const CommonOptions& common) {
  auto loaded = load_project(command.project);
  if (!loaded) return fail(loaded.error());
  if (!common.units.empty()) loaded->value.project.units = common.units == "us" ? project::Units::us : project::Units::metric;
  Progress progress("planning", common.quiet);
  auto drafted = drafting::draft(loaded->value, draft_options(command, common), [&](int done_now, int all) { progress.show(done_now, all); });
  progress.end();
  if (!drafted) {
    print_diagnostics(loaded->notes, common.quiet);
    return fail(drafted.error().problems, drafted.error().no_plan_fits ? no_plan : unusable_input);
  }
  for (auto& row : drafted->value.plans) add_notes(loaded->notes, row.plan);
  Diagnostics problems = write_plans(drafted->value, command.output);
  if (!problems.empty()) return fail({problems.front()});
  std::vector<plan::Plan> plans;
  for (const auto& row : drafted->value.plans) plans.push_back(row.plan);
  problems = write_reports(plans, command.output, report_options(common));
  if (!problems.empty()) return fail({problems.front()});
  print_diagnostics(loaded->notes, common.quiet);
  if (common.json) {
    fmt::print("{}\n", summary_of(drafted->value, command.output).dump(1, ' ', false, nlohmann::ordered_json::error_handler_t::replace));
    return done;
  }
  for (const auto& row : drafted->value.plans) print_plan(row.plan, command.output + "/" + row.plan.period);
  fmt::print("open {}\n", command.output + "/index.html");
  return done;
}

}  // namespace

std::function<int()> declare_draft(CLI::App& app, const CommonOptions& common) {
  auto command = std::make_shared<DraftCommand>();
  app.add_option("project", command->project, "project.toml, or the folder that holds it")->required();
  app.add_option("-o,--output", command->output, "Folder for plans, sheets, diagrams and the page")->required();
  app.add_option("--hold", command->hold, "Keep from the timing table: greens (choose offsets only) or all (the running timing as a plan)")
      ->check(CLI::IsMember({"greens", "all"}));
  app.add_option("--keep-band", command->keep_band, "Every band may shrink to this part of its best in return for delay (0: delay alone)")->check(CLI::Range(0.0, 1.0));
  app.add_option("--cycle", command->cycle_s, "Only this cycle length, seconds")->check(CLI::Range(1, 3600));
  return [command, &common] { return run_draft(*command, common); };
}

}  // namespace entrain::cli
