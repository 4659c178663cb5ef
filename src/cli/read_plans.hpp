// Plans from files, all problems of all files at once. Shared by review and sheet.
#pragma once

#include <string>
#include <vector>

#include "base/diagnostic.hpp"
#include "plan/plan.hpp"

namespace entrain::cli {

struct NamedPlan {
  std::string path;
  plan::Plan plan;
};

Diagnostics read_plans(const std::vector<std::string>& paths, std::vector<NamedPlan>& out);

}  // namespace entrain::cli
