#include "cli/read_plans.hpp"

#include "cli/command.hpp"
#include "plan/plan_text.hpp"

namespace entrain::cli {

Diagnostics read_plans(const std::vector<std::string>& paths, std::vector<NamedPlan>& out) {
  Diagnostics problems;
  for (const std::string& path : paths) {
    const FileText text = read_whole_file(path, std::size_t{256} << 20);
    if (!text.problems.empty()) {
      append(problems, text.problems);
      continue;
    }
    auto plan = plan::read_plan(text.bytes, path);
    if (plan) out.push_back({path, std::move(*plan)});
    else append(problems, plan.error());
  }
  return problems;
}

}  // namespace entrain::cli
