// What the reports need of one period: the plan, its evaluation, and what the review said.
#pragma once

#include <string>
#include <vector>

#include "evaluation/evaluate.hpp"
#include "plan/plan.hpp"
#include "review/review.hpp"

namespace entrain::report {

struct ReviewFinding {
  std::string rule;    // the rule's name
  std::string signal;  // empty: the whole plan
  std::string text;
};

struct ReviewSummary {
  std::string verdict = "not checked";  // checked | partly | not checked
  std::string why;
  std::vector<ReviewFinding> findings;
  int violations = 0;  // of the findings
};

// The review in the words of the reports: violations first, then warnings; notes are left to the review's own text.
ReviewSummary summary_of(const review::Review& review);

struct PlanWithFigures {
  plan::Plan plan;
  evaluation::Evaluation figures;
  ReviewSummary review;
};

}  // namespace entrain::report
