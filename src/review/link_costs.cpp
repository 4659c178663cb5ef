#include "review/link_costs.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <numeric>

#include "review/signal_view.hpp"

namespace entrain::review {
namespace {

using Seconds = std::vector<double>;  // one number a second of the cycle

struct Stream {
  const plan::Signal* signal = nullptr;
  const plan::Group* group = nullptr;
};

bool is_flow(double vph) { return vph >= 0 && vph <= 1e6; }
double total(const Seconds& s) { return std::accumulate(s.begin(), s.end(), 0.0); }
std::size_t round_the_cycle(std::int64_t second, std::size_t cycle) {
  const auto c = static_cast<std::int64_t>(cycle);
  return static_cast<std::size_t>((second % c + c) % c);
}

bool runs_with(const plan::Plan& plan, const plan::Signal& s) { return s.operation != plan::Operation::free && (s.cycle_s == plan.cycle_s || 2 * s.cycle_s == plan.cycle_s); }

bool is_sound(const plan::Group& g) {
  const auto small = [](const std::optional<double>& v) { return !v || (*v >= 0 && *v <= 60); };
  const auto flow = [](const std::optional<double>& v) { return !v || is_flow(*v); };
  return small(g.start_up_lost_s) && small(g.end_gain_s) && flow(g.flow_vph) && flow(g.saturation_flow_vph) && g.greens.size() <= most_greens &&
         std::all_of(g.greens.begin(), g.greens.end(), [](const plan::Green& green) { return std::fabs(green.start_s) <= longest_cycle_s && green.duration_s >= 0 && green.duration_s <= longest_cycle_s; });
}

std::optional<Stream> stream_at(const plan::Plan& plan, const std::string& signal, const std::string& group) {
  for (const plan::Signal& s : plan.signals) {
    if (s.id != signal) continue;
    for (const plan::Group& g : s.groups)
      if (g.id == group) return runs_with(plan, s) && is_sound(g) ? std::optional(Stream{&s, &g}) : std::nullopt;
    return std::nullopt;
  }
  return std::nullopt;
}

// How much of each second lies in effective green, over the plan's cycle.
Seconds effective_green(const Stream& stream, std::size_t cycle) {
  Seconds lit(cycle, 0.0);
  const double own = stream.signal->cycle_s, whole = static_cast<double>(cycle);
  for (double shift = 0; shift < whole; shift += own)
    for (const plan::Green& green : stream.group->greens) {
      const bool always = green.duration_s >= own - 1e-9;
      const double from = always ? shift : green.start_s + shift + stream.group->start_up_lost_s.value_or(0);
      const double to = always ? shift + own : std::min(from + whole, green.start_s + shift + green.duration_s + stream.group->end_gain_s.value_or(0));
      for (std::size_t k = 0; k < cycle; ++k)
        for (double round = -3 * whole; round <= 3 * whole; round += whole) {
          const double second = static_cast<double>(k);
          lit[k] += std::max(0.0, std::min(to + round, second + 1) - std::max(from + round, second));
        }
    }
  for (double& part : lit) part = std::min(part, 1.0);
  return lit;
}

Seconds times(Seconds seconds, double factor) {
  for (double& s : seconds) s *= factor;
  return seconds;
}

// What leaves a queue fed evenly, once it repeats from cycle to cycle.
Seconds departures(double inflow, const Seconds& capacity) {
  Seconds out(capacity.size());
  double queue = 0;
  for (int round = 0; round < 3; ++round)
    for (std::size_t k = 0; k < capacity.size(); ++k) {
      out[k] = std::min(queue + inflow, capacity[k]);
      queue += inflow - out[k];
    }
  return out;
}

Seconds feed_departures(const Stream& stream, double feed_vph, std::size_t cycle) {
  const double vehicles = feed_vph / 3600 * static_cast<double>(cycle);
  const Seconds capacity = times(effective_green(stream, cycle), stream.group->saturation_flow_vph.value_or(0) / 3600);
  if (total(capacity) <= 0) return Seconds(cycle, feed_vph / 3600);
  const double flow = stream.group->flow_vph.value_or(0) / 3600;
  const Seconds shape = flow > 0 ? departures(flow, capacity) : capacity;
  return times(shape, vehicles / total(shape));
}

// Later by any number of seconds; what falls between two is split in proportion.
void add_later(const Seconds& flow, double by_s, double weight, Seconds& sum) {
  const double whole = std::floor(by_s + 1e-9), part = std::max(0.0, by_s - whole);
  for (std::size_t k = 0; k < flow.size(); ++k) {
    const auto at = static_cast<std::int64_t>(k) + static_cast<std::int64_t>(whole);
    sum[round_the_cycle(at, flow.size())] += weight * (1 - part) * flow[k];
    sum[round_the_cycle(at + 1, flow.size())] += weight * part * flow[k];
  }
}

// The recurrence itself, round and round until it repeats.
Seconds robertson(const Seconds& flow, double travel_s, double alpha, double beta) {
  const double f = 1 / (1 + alpha * beta * travel_s);
  Seconds lagged(flow.size(), 0.0), out(flow.size(), total(flow) / static_cast<double>(flow.size()));
  add_later(flow, beta * travel_s, 1, lagged);
  double before = out.back();
  for (int round = 0; round < 20000; ++round) {
    const double at_start = before;
    for (std::size_t k = 0; k < out.size(); ++k) before = out[k] = f * lagged[k] + (1 - f) * before;
    if (std::fabs(before - at_start) < 1e-14) break;
  }
  return out;
}

// By one-second classes of travel time, each at its middle.
Seconds normal_spread(const Seconds& flow, double mean_s, double sd_s) {
  Seconds out(flow.size(), 0.0);
  if (sd_s <= 1e-9) {
    add_later(flow, mean_s, 1, out);
    return out;
  }
  const double least = mean_s / 2, most = mean_s + 4 * sd_s;
  const auto below = [&](double t) { return std::erfc((mean_s - t) / (sd_s * std::sqrt(2.0))) / 2; };
  for (double from = least; from < most; from += 1) {
    const double to = std::min(most, from + 1);
    add_later(flow, (from + to) / 2, (below(to) - below(from)) / (below(most) - below(least)), out);
  }
  return out;
}

struct QueueSum {
  double delay_veh_s = 0, stops_veh = 0, longest_veh = 0;
};

// One second: a queue, what comes evenly during it, what may leave evenly during it.
void one_second(double& queue, double in, double out, QueueSum& sum) {
  const double left = queue + in - out;
  if (left > 0) {
    sum.delay_veh_s += queue + (in - out) / 2;
    sum.stops_veh += queue > 0 ? in : in - out;
    queue = left;
  } else {
    if (queue > 0) {
      const double gone_after = queue / (out - in);
      sum.delay_veh_s += queue * gone_after / 2;
      sum.stops_veh += in * gone_after;
    }
    queue = 0;
  }
  sum.longest_veh = std::max(sum.longest_veh, queue);
}

QueueSum play_queue(const Seconds& arrivals, const Seconds& capacity, int difference) {
  const double demand = total(arrivals), supply = total(capacity);
  if (supply <= 0) return {demand * static_cast<double>(arrivals.size()), demand, demand};
  const double share = demand > supply ? supply / demand : 1;
  QueueSum sum;
  double queue = 0;
  for (int round = 0; round < 2; ++round) {  // the first round finds the queue that repeats
    sum = {};
    for (std::size_t k = 0; k < capacity.size(); ++k) one_second(queue, share * arrivals[round_the_cycle(static_cast<std::int64_t>(k) + difference, arrivals.size())], capacity[k], sum);
  }
  return sum;
}

bool is_sound(const plan::Plan& plan, const plan::Link& link) {
  const plan::CostModel& m = plan.cost_model;
  const bool model = m.alpha >= 0 && m.alpha <= 10 && m.beta > 0 && m.beta <= 1 && m.scale > 0 && m.scale <= 1e6 && m.stop_weight_s >= 0 && m.stop_weight_s <= 1e4 && m.step_s == 1;
  const bool way = link.travel_time_s >= 0 && link.travel_time_s <= 3600 && (!link.travel_time_sd_s || (*link.travel_time_sd_s >= 0 && *link.travel_time_sd_s <= 3600));
  return model && way && is_flow(link.uniform_flow_vph) && link.feeds.size() <= most_greens && std::all_of(link.feeds.begin(), link.feeds.end(), [](const plan::LinkFeed& f) { return is_flow(f.flow_vph); });
}

Seconds arrivals_of(const plan::Plan& plan, const plan::Link& link, std::size_t cycle) {
  Seconds leaving(cycle, 0.0);
  for (const plan::LinkFeed& feed : link.feeds)
    if (const auto stream = stream_at(plan, link.from_signal, feed.from_group); stream && feed.flow_vph > 0) {
      const Seconds one = feed_departures(*stream, feed.flow_vph, cycle);
      for (std::size_t k = 0; k < cycle; ++k) leaving[k] += one[k];
    }
  Seconds arriving = link.travel_time_sd_s ? normal_spread(leaving, link.travel_time_s, *link.travel_time_sd_s) : robertson(leaving, link.travel_time_s, plan.cost_model.alpha, plan.cost_model.beta);
  for (double& vehicles : arriving) vehicles += link.uniform_flow_vph / 3600;
  return arriving;
}

const plan::Signal* signal_of(const plan::Plan& plan, const std::string& id) {
  const auto found = std::find_if(plan.signals.begin(), plan.signals.end(), [&](const plan::Signal& s) { return s.id == id; });
  return found == plan.signals.end() ? nullptr : &*found;
}

}  // namespace

std::int64_t LinkCosts::at(int difference) const {
  const QueueSum sum = play_queue(arrivals, capacity, difference);
  const double beyond = storage_veh ? std::max(0.0, sum.longest_veh - *storage_veh) : 0;
  const double cost = scale * (sum.delay_veh_s + stop_weight_s * sum.stops_veh + spillback_weight_s * beyond) / static_cast<double>(capacity.size());
  return std::llround(std::min(1e12, std::max(0.0, cost)));
}

std::vector<std::int64_t> LinkCosts::table() const {
  std::vector<std::int64_t> costs;
  for (int d = 0; d < static_cast<int>(capacity.size()); ++d) costs.push_back(at(d));
  return costs;
}

std::optional<LinkCosts> link_costs(const plan::Plan& plan, std::size_t index) {
  if (index >= plan.links.size() || !(plan.cycle_s >= 1) || plan.cycle_s > longest_cycle_s || plan.cycle_s != std::floor(plan.cycle_s)) return std::nullopt;
  const plan::Link& link = plan.links[index];
  const plan::Signal* from = signal_of(plan, link.from_signal);
  const auto to = stream_at(plan, link.to_signal, link.to_group);
  if (!to || from == nullptr || from == to->signal || !runs_with(plan, *from) || !is_sound(plan, link)) return std::nullopt;
  const double saturation = link.saturation_flow_vph.value_or(to->group->saturation_flow_vph.value_or(0));
  if (!is_flow(saturation)) return std::nullopt;
  const auto cycle = static_cast<std::size_t>(plan.cycle_s);
  LinkCosts costs;
  costs.link = index;
  costs.arrivals = arrivals_of(plan, link, cycle);
  costs.capacity = times(effective_green(*to, cycle), saturation / 3600);
  costs.stop_weight_s = plan.cost_model.stop_weight_s, costs.scale = plan.cost_model.scale;
  costs.spillback_weight_s = std::min(1e6, std::max(0.0, plan.cost_model.spillback_weight_s.value_or(0)));
  costs.storage_veh = link.storage_veh;
  return costs;
}

PlanCost cost_of_links(const plan::Plan& plan) {
  PlanCost cost;
  for (std::size_t l = 0; l < plan.links.size(); ++l) {
    const auto costs = link_costs(plan, l);
    if (!costs) continue;
    const double from = signal_of(plan, plan.links[l].from_signal)->offset_s, to = signal_of(plan, plan.links[l].to_signal)->offset_s;
    if (!(std::fabs(from) <= longest_cycle_s) || !(std::fabs(to) <= longest_cycle_s)) continue;
    cost.value += costs->at(static_cast<int>(std::lround(to - from)));
    ++cost.links;
  }
  return cost;
}

}  // namespace entrain::review
