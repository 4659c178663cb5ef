#include "coordination/links/link_cost.hpp"

#include <algorithm>
#include <cmath>

#include "traffic/queue.hpp"

namespace entrain::links {
namespace {

std::int64_t whole_cost(const traffic::QueueFigures& figures, const LinkInput& link, int cycle_s, const CostModel& model) {
  const double excess = link.storage_veh ? std::max(0.0, figures.longest_veh - *link.storage_veh) : 0.0;
  const double cost = figures.delay_veh_s + model.stop_weight_s * figures.stops_veh + model.spillback_weight_s * excess;
  return std::llround(std::clamp(model.scale * cost / cycle_s, 0.0, 1e12));
}

}  // namespace

std::vector<std::int64_t> cost_table(const LinkInput& link, int cycle_s, const CostModel& model) {
  const traffic::Profile arrivals = traffic::link_arrivals(link.feeds, link.uniform_flow_vph, link.spread, cycle_s);
  const traffic::Profile capacity = traffic::capacity_of(link.downstream, cycle_s, link.spread.step_s);
  std::vector<std::int64_t> table;
  table.reserve(static_cast<std::size_t>(cycle_s));
  for (const traffic::QueueFigures& figures : traffic::periodic_queues(arrivals, capacity)) table.push_back(whole_cost(figures, link, cycle_s, model));
  return table;
}

bool is_oversaturated(const LinkInput& link, int cycle_s) {
  const double flow = traffic::link_arrivals(link.feeds, link.uniform_flow_vph, link.spread, cycle_s).total();
  return flow > traffic::capacity_of(link.downstream, cycle_s, link.spread.step_s).total();
}

}  // namespace entrain::links
