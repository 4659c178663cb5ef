// entrain review PLAN...: safety and claims, re-checked by other code than made them.
#include <fmt/format.h>

#include <filesystem>

#include "cli/command.hpp"
#include "plan/plan_text.hpp"
#include "review/review.hpp"
#include "review/review_text.hpp"

namespace entrain::cli {
namespace {

struct ReviewCommand {
  std::vector<std::string> plans;
  std::string certificate, recompute_to;
  bool recompute = false, require_safety = false;
};

struct Reviewed {
  std::string path;
  plan::Plan plan;
};

Diagnostics read_plans(const std::vector<std::string>& paths, std::vector<Reviewed>& out) {
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

}  // namespace
}  // namespace entrain::cli
