// entrain review PLAN...: safety and claims, re-checked by other code than made them.
#include <fmt/format.h>

#include "cli/command.hpp"
#include "cli/offsets_command.hpp"
#include "cli/read_plans.hpp"
#include "plan/plan_text.hpp"
#include "review/review.hpp"
#include "review/review_text.hpp"

namespace entrain::cli {
namespace {

struct ReviewCommand {
  std::vector<std::string> plans;
  std::string output, certificate;
  bool recompute = false, require_safety = false;
};

int recompute(const ReviewCommand& command, std::vector<NamedPlan>& plans) {
  if (plans.size() != 1) return fail({error("--recompute", fmt::format("{} plans", plans.size()), "one plan", "Recompute them one by one")}, wrong_usage);
  plans[0].plan = review::recomputed_claims(plans[0].plan);
  const Diagnostics problems = write_whole_file(command.output, plan::write_plan(plans[0].plan));
  return problems.empty() ? done : fail(problems);
}

int run_review(const ReviewCommand& command, const CommonOptions& common) {
  if (!command.certificate.empty()) return review_certificate(command.plans[0], command.certificate, common);
  std::vector<NamedPlan> reviewed;
  const Diagnostics problems = read_plans(command.plans, reviewed);
  if (!problems.empty()) return fail(problems);
  if (command.recompute && command.output.empty()) return fail({error("--recompute", "no output file", "-o NEW", "Add -o with the new plan's name")}, wrong_usage);
  if (command.recompute)
    if (const int code = recompute(command, reviewed); code != done) return code;
  std::vector<plan::Plan> plans;
  for (const NamedPlan& one : reviewed) plans.push_back(one.plan);
  bool violated = false;
  const auto reviews = review::review_plans(plans, {command.require_safety});
  for (std::size_t i = 0; i < reviews.size(); ++i) {
    violated = violated || reviews[i].has_violation();
    fmt::print("{}", common.json ? review::to_json(reviews[i], reviewed[i].path) : review::to_text(reviews[i], reviewed[i].path));
  }
  return violated ? violation : done;
}

}  // namespace

std::function<int()> declare_review(CLI::App& app, const CommonOptions& common) {
  auto command = std::make_shared<ReviewCommand>();
  app.add_option("plan", command->plans, "plan.json, one or several periods of a project")->required();
  app.add_option("--certificate", command->certificate, "Check this proof (*.cert) of an offset problem (*.offsets) named instead of a plan");
  app.add_flag("--require-safety", command->require_safety, "Anything but a safety verdict of 'checked' is a violation");
  app.add_flag("--recompute", command->recompute, "Refresh the claims of an edited plan and write it to -o; safety findings stay findings");
  app.add_option("-o,--output", command->output, "Where --recompute writes the plan");
  return [command, &common] { return run_review(*command, common); };
}

}  // namespace entrain::cli
