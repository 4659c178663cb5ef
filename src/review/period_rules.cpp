#include <fmt/format.h>

#include <cmath>
#include <map>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

struct Known {
  const plan::Group* group;
  const std::string* period;
};

void compare(const std::string& signal, const Known& first, const Known& now, std::vector<Finding>& list) {
  const plan::Group &a = *first.group, &b = *now.group;
  Findings findings(list, signal);
  const auto differ = [&](const char* what, double before, double after) {
    if (!(std::fabs(before - after) <= 1e-6) && (std::isfinite(before) || std::isfinite(after)))
      findings.violation("differs-between-periods", fmt::format("group {}: {} is {} s in period {} and {} s in {}", printable(a.id), what, number_text(before), printable(*first.period), number_text(after), printable(*now.period)),
                         "The cabinet has one phase table for all periods: use the longer value in all", {a.id});
  };
  differ("yellow", a.yellow_s, b.yellow_s);
  differ("red clearance", a.red_clearance_s, b.red_clearance_s);
  differ(walks(a) ? "the least walk" : "minimum green", a.minimum_green_s, b.minimum_green_s);
  differ("pedestrian clearance", a.clearance_s, b.clearance_s);
  if (walks(a) && !a.greens.empty() && !b.greens.empty()) differ("walk", a.greens.front().duration_s, b.greens.front().duration_s);
  if (a.kind != b.kind) findings.violation("differs-between-periods", fmt::format("group {} is of another kind in period {} than in {}", printable(a.id), printable(*first.period), printable(*now.period)), "Give it one meaning", {a.id});
}

}  // namespace

void check_same_in_all_periods(const std::vector<plan::Plan>& plans, std::vector<Finding>& list) {
  std::map<std::pair<std::string, std::string>, Known> first;
  for (const plan::Plan& plan : plans) {
    if (plan.project != plans.front().project) {
      Findings(list, "").add("other-project", Severity::warning, fmt::format("period {} belongs to project {}, not to {}: the periods were not compared with it", printable(plan.period), printable(plan.project), printable(plans.front().project)));
      continue;
    }
    for (const plan::Signal& signal : plan.signals)
      for (const plan::Group& g : signal.groups) {
        const Known now{&g, &plan.period};
        const auto [at, is_new] = first.emplace(std::make_pair(signal.id, g.id), now);
        if (!is_new) compare(signal.id, at->second, now, list);
      }
  }
}

}  // namespace entrain::review
