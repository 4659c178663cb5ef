// From a project to plans: the stages in order, one plan a period.
#pragma once

#include "drafting/sweep.hpp"

namespace entrain::drafting {

enum class Hold { nothing, greens, all };

struct DraftOptions {
  std::vector<std::string> periods;  // empty: all
  Hold hold = Hold::nothing;
  CoordinateOptions coordinate;
  std::optional<int> cycle_s;        // only this cycle
};

struct Draft {
  std::vector<CyclePlan> plans;      // by period; each fits
  std::vector<std::string> reasons;  // by period
};

struct DraftProblem {
  Diagnostics problems;
  bool no_plan_fits = false;  // exit code 4 instead of 3
};

// Plans every period. Clearances, walk and minimum green are those of all periods together.
[[nodiscard]] tl::expected<Noted<Draft>, DraftProblem> draft(const Inputs& inputs, const DraftOptions& options, const std::function<void(int, int)>& progress);

// The cycles of a range, ascending; both ends included where the step meets them.
std::vector<int> cycles_of(const project::CycleRange& range);

}  // namespace entrain::drafting
