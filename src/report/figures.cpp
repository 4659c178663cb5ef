#include "report/figures.hpp"

namespace entrain::report {
namespace {

const char* verdict_of(review::Safety safety) {
  switch (safety) {
    case review::Safety::checked: return "checked";
    case review::Safety::partly: return "partly";
    case review::Safety::not_checked: return "not checked";
  }
  return "not checked";
}

void add_findings(ReviewSummary& summary, const review::Review& review, review::Severity severity) {
  for (const review::Finding& finding : review.findings) {
    if (finding.severity != severity) continue;
    const std::string sentence = finding.mend.empty() ? finding.sentence : finding.sentence + " " + finding.mend;
    summary.findings.push_back({(severity == review::Severity::violation ? "VIOLATION, " : "warning, ") + finding.rule, finding.signal, sentence});
    summary.violations += severity == review::Severity::violation ? 1 : 0;
  }
}

}  // namespace

ReviewSummary summary_of(const review::Review& review) {
  ReviewSummary summary{verdict_of(review.safety), review.why, {}, 0};
  add_findings(summary, review, review::Severity::violation);
  add_findings(summary, review, review::Severity::warning);
  return summary;
}

}  // namespace entrain::report
