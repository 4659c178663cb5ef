#include "evaluation/streams.hpp"

#include <algorithm>
#include <cmath>

#include "base/quantity.hpp"

namespace entrain::evaluation {
namespace {

const plan::Group* find_group(const plan::Signal& signal, const std::string& id) {
  for (const plan::Group& group : signal.groups)
    if (group.id == id) return &group;
  return nullptr;
}

// The greens of `group` over `cycle_s`, repeated where the signal runs at half of it.
void add_greens(const plan::Group& group, double own_cycle_s, double cycle_s, std::vector<traffic::GreenTime>& greens) {
  for (double shift = 0; shift < cycle_s - 1e-9; shift += own_cycle_s)
    for (const plan::Green& green : group.greens) {
      const bool always = green.duration_s >= own_cycle_s - 1e-9;
      if (green.duration_s > 0 && std::isfinite(green.start_s)) greens.push_back({green.start_s + shift, always ? cycle_s : std::min(green.duration_s, cycle_s)});
    }
}

bool serves_any(const plan::Group& group, const plan::LaneGroup& lane_group) {
  return std::any_of(group.serves.begin(), group.serves.end(), [&](const plan::Served& served) {
    return std::find(lane_group.movements.begin(), lane_group.movements.end(), served.movement) != lane_group.movements.end();
  });
}

bool serves_with_protection(const plan::Group& group, const plan::LaneGroup& lane_group) {
  return std::any_of(group.serves.begin(), group.serves.end(), [&](const plan::Served& served) {
    return served.right_of_way == plan::RightOfWay::with_protection &&
           std::find(lane_group.movements.begin(), lane_group.movements.end(), served.movement) != lane_group.movements.end();
  });
}

// Protected greens where there are any: the permissive ones of the same turn are left out, which is the cautious side.
std::vector<const plan::Group*> serving_groups(const plan::Signal& signal, const plan::LaneGroup& lane_group) {
  std::vector<const plan::Group*> with_protection, all;
  for (const plan::Group& group : signal.groups) {
    if (serves_with_protection(group, lane_group)) with_protection.push_back(&group);
    if (serves_any(group, lane_group)) all.push_back(&group);
  }
  return with_protection.empty() ? all : with_protection;
}

}  // namespace

bool is_usable_cycle(double cycle_s) { return cycle_s >= 1 && cycle_s <= 3600 && cycle_s == std::floor(cycle_s); }

StreamTable::StreamTable(const plan::Plan& plan) : m_plan(plan) {
  for (const plan::Signal& signal : plan.signals) m_signals.emplace(signal.id, &signal);
  for (const plan::Link& link : plan.links) {
    const plan::Signal *from = find(link.from_signal), *to = find(link.to_signal);
    if (from == nullptr || to == nullptr || from->operation == plan::Operation::free || to->operation == plan::Operation::free) continue;
    if (!is_usable_cycle(from->cycle_s) || !is_usable_cycle(to->cycle_s) || cycle_s(*from) != cycle_s(*to)) continue;
    m_links[{link.to_signal, link.to_group}].push_back({&link, arrivals_of(link, *from, *to)});
  }
}

const plan::Signal* StreamTable::find(const std::string& id) const {
  const auto found = m_signals.find(id);
  return found == m_signals.end() ? nullptr : found->second;
}

double StreamTable::cycle_s(const plan::Signal& signal) const {
  const bool half = 2 * signal.cycle_s == m_plan.cycle_s;
  return half && is_usable_cycle(m_plan.cycle_s) ? m_plan.cycle_s : signal.cycle_s;
}

traffic::Stream StreamTable::stream_of(const plan::Signal& signal, const plan::Group& group) const {
  traffic::Stream stream;
  add_greens(group, signal.cycle_s, cycle_s(signal), stream.greens);
  stream.start_up_lost_s = group.start_up_lost_s.value_or(2);
  stream.end_gain_s = group.end_gain_s.value_or(2);
  stream.flow_vph = group.flow_vph.value_or(0);
  stream.saturation_flow_vph = group.saturation_flow_vph.value_or(0);
  return stream;
}

traffic::Profile StreamTable::arrivals_of(const plan::Link& link, const plan::Signal& from, const plan::Signal& to) const {
  std::vector<traffic::Feed> feeds;
  for (const plan::LinkFeed& feed : link.feeds)
    if (const plan::Group* group = find_group(from, feed.from_group)) feeds.push_back({stream_of(from, *group), feed.flow_vph, m_coupled ? inflow_of(from.id, group->id) : std::nullopt});
  const plan::CostModel& model = m_plan.cost_model;
  const traffic::Spread spread{link.travel_time_s, link.travel_time_sd_s, model.alpha, model.beta, 1};
  const traffic::Profile upstream = traffic::link_arrivals(feeds, link.uniform_flow_vph, spread, cycle_s(from));
  return traffic::shifted(upstream, from.offset_s - to.offset_s);
}

std::optional<traffic::Profile> StreamTable::inflow_of(const std::string& signal, const std::string& group) const {
  const auto found = m_links.find({signal, group});
  if (found == m_links.end()) return std::nullopt;
  traffic::Profile sum = found->second.front().arrivals;
  for (std::size_t i = 1; i < found->second.size(); ++i) traffic::add_to(sum, found->second[i].arrivals);
  return sum;
}

void StreamTable::couple() {
  m_coupled = true;
  constexpr int most_rounds = 40;
  for (int round = 0; round < most_rounds; ++round) {
    auto next = m_links;
    double change = 0;
    for (auto& [end, arriving] : next)
      for (LinkArrivals& one : arriving) {
        const traffic::Profile before = one.arrivals;
        one.arrivals = arrivals_of(*one.link, *find(one.link->from_signal), *find(one.link->to_signal));
        for (std::size_t k = 0; k < before.vehicles.size(); ++k) change = std::max(change, std::fabs(before.vehicles[k] - one.arrivals.vehicles[k]));
      }
    m_links = std::move(next);
    if (change < 1e-9) return;
  }
}

LaneGroupStream StreamTable::of(const plan::Signal& signal, const plan::LaneGroup& lane_group) const {
  LaneGroupStream out;
  const double cycle = cycle_s(signal);
  const double flow_vps = lane_group.flow_vph / seconds_per_hour;
  traffic::Profile platoons = traffic::uniform_profile(0, cycle, 1);
  out.stream.flow_vph = lane_group.flow_vph;
  out.stream.saturation_flow_vph = lane_group.saturation_flow_vph;
  for (const plan::Group* group : serving_groups(signal, lane_group)) {
    out.groups.push_back(group->id);
    add_greens(*group, signal.cycle_s, cycle, out.stream.greens);
    out.stream.start_up_lost_s = group->start_up_lost_s.value_or(2);
    out.stream.end_gain_s = group->end_gain_s.value_or(2);
    const auto found = m_links.find({signal.id, group->id});
    if (found == m_links.end()) continue;
    for (const LinkArrivals& arriving : found->second) traffic::add_to(platoons, arriving.arrivals);
  }
  out.platooned = platoons.total() > 0;
  // The lane group gets its flow in the shape of what arrives at its groups.
  out.arrivals = out.platooned ? traffic::scaled(platoons, flow_vps * cycle / platoons.total()) : traffic::uniform_profile(flow_vps, cycle, 1);
  return out;
}

}  // namespace entrain::evaluation
