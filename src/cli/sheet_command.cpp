// entrain sheet PLAN... -o DIR: timing sheets, diagrams and a page from plans; several periods make one sheet.
#include <fmt/format.h>

#include "cli/command.hpp"
#include "cli/read_plans.hpp"
#include "cli/reports.hpp"

namespace entrain::cli {
namespace {

struct SheetCommand {
  std::vector<std::string> plans;
  std::string output, page = "a4";
};

int run_sheet(const SheetCommand& command, const CommonOptions& common) {
  std::vector<NamedPlan> named;
  Diagnostics problems = read_plans(command.plans, named);
  if (!problems.empty()) return fail(problems);
  std::vector<plan::Plan> plans;
  for (NamedPlan& one : named) plans.push_back(std::move(one.plan));
  ReportOptions options = report_options(common);
  options.page = command.page;
  problems = write_reports(plans, command.output, options);
  if (!problems.empty()) return fail({problems.front()});
  if (common.json) fmt::print("{{\"index\": \"{}/index.html\"}}\n", command.output);
  else fmt::print("open {}/index.html\n", command.output);
  return done;
}

}  // namespace

std::function<int()> declare_sheet(CLI::App& app, const CommonOptions& common) {
  auto command = std::make_shared<SheetCommand>();
  app.add_option("plan", command->plans, "plan.json, one or several periods of a project")->required();
  app.add_option("-o,--output", command->output, "Folder for sheets, diagrams and the page")->required();
  app.add_option("--page", command->page, "Paper: a4 or letter")->check(CLI::IsMember({"a4", "letter"}));
  return [command, &common] { return run_sheet(*command, common); };
}

}  // namespace entrain::cli
