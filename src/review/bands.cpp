#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/rules.hpp"

namespace entrain::review {
namespace {

struct Open {
  double from, to;  // system time at the first stop, 0 <= from < cycle, to may pass the cycle
};

struct StopGreens {
  std::string signal;
  std::vector<Open> greens;  // when a vehicle may pass the first stop so that it meets this stop's cleared green
  bool always = false;
};

double rest(double value, double cycle) {
  double r = std::fmod(value, cycle);
  if (r < 0) r += cycle;
  return r;
}

const plan::Signal* find_signal(const plan::Plan& plan, const std::string& id) {
  for (const plan::Signal& s : plan.signals)
    if (s.id == id) return &s;
  return nullptr;
}

const plan::Group* find_group(const plan::Signal& signal, const std::string& id) {
  for (const plan::Group& g : signal.groups)
    if (g.id == id) return &g;
  return nullptr;
}

// Greens of one stop in the frame of the first; false if they can't be told.
bool stop_greens(const plan::Plan& plan, const plan::Stop& stop, double travelled_s, StopGreens& out) {
  const plan::Signal* signal = find_signal(plan, stop.signal);
  const plan::Group* group = signal == nullptr ? nullptr : find_group(*signal, stop.group);
  if (group == nullptr || !(signal->cycle_s >= 1) || signal->cycle_s > longest_cycle_s || !std::isfinite(signal->offset_s) || !std::isfinite(travelled_s)) return false;
  out.signal = stop.signal;
  for (double shift = 0; shift < plan.cycle_s - 1e-9; shift += signal->cycle_s)
    for (const plan::Green& g : group->greens) {
      if (!std::isfinite(g.start_s) || !std::isfinite(g.duration_s)) return false;
      if (g.duration_s >= signal->cycle_s - 1e-9) out.always = true;
      const double length = g.duration_s - stop.queue_clearance_s;
      if (length <= 1e-9) continue;
      const double from = rest(signal->offset_s + g.start_s + shift + stop.queue_clearance_s - travelled_s, plan.cycle_s);
      out.greens.push_back({from, from + length});
    }
  return true;
}

// What is open for all stops (but one, if `without` is its index), as disjoint intervals; wraps are joined at the cycle.
std::vector<Open> common(const std::vector<StopGreens>& stops, double cycle, std::size_t without) {
  std::vector<Open> open{{0, cycle}};
  for (std::size_t i = 0; i < stops.size(); ++i) {
    if (i == without || stops[i].always) continue;
    std::vector<Open> next;
    for (const Open& o : open)
      for (const Open& g : stops[i].greens)
        for (const double shift : {-cycle, 0.0, cycle}) {
          const Open both{std::max(o.from, g.from + shift), std::min(o.to, g.to + shift)};
          if (both.to > both.from + 1e-9) next.push_back(both);
        }
    std::sort(next.begin(), next.end(), [](const Open& a, const Open& b) { return a.from < b.from; });
    open.clear();
    for (const Open& o : next) {
      if (!open.empty() && o.from <= open.back().to + 1e-9) open.back().to = std::max(open.back().to, o.to);
      else open.push_back(o);
    }
  }
  if (open.size() > 1 && open.front().from < 1e-9 && open.back().to > cycle - 1e-9) {  // one interval over the end of the cycle
    open.back().to = cycle + open.front().to;
    open.erase(open.begin());
  }
  return open;
}

Open widest(const std::vector<Open>& open) {
  Open best{0, 0};
  for (const Open& o : open)
    if (o.to - o.from > best.to - best.from + 1e-9) best = o;
  return best;
}

void measure_slack(const std::vector<StopGreens>& stops, double cycle, const Open& band, BandCheck& check) {
  for (std::size_t i = 0; i < stops.size(); ++i) {
    StopSlack slack;
    slack.signal = stops[i].signal;
    slack.lead_s = slack.trail_s = INFINITY;
    for (const Open& g : stops[i].greens)
      for (const double shift : {-cycle, 0.0, cycle})
        if (!stops[i].always && g.from + shift <= band.from + 1e-6 && g.to + shift >= band.to - 1e-6) {
          slack.lead_s = std::max(0.0, band.from - g.from - shift);
          slack.trail_s = std::max(0.0, g.to + shift - band.to);
        }
    slack.pinches_lead = slack.lead_s < tolerance_s;
    slack.pinches_trail = slack.trail_s < tolerance_s;
    const Open freed = slack.pinches_lead || slack.pinches_trail ? widest(common(stops, cycle, i)) : band;
    slack.width_without_s = freed.to - freed.from;
    check.stops.push_back(slack);
  }
}

void compare(const plan::Plan& plan, const plan::Direction& direction, const std::vector<StopGreens>& stops, const std::vector<Open>& open, const BandCheck& check, Findings& findings) {
  const std::string where = fmt::format("corridor {} {}", check.corridor, check.direction);
  const double claimed = direction.bandwidth_s;
  if (std::fabs(claimed - check.found_s) > tolerance_s)
    findings.violation("bandwidth-claim", fmt::format("{}: claims a band of {} s, the greens give {} s", where, number_text(claimed, 2), number_text(check.found_s, 2)), "Recompute the claim (review --recompute)");
  if (claimed > tolerance_s) {
    const bool fits = std::any_of(open.begin(), open.end(), [&](const Open& o) {
      const double from = rest(direction.band_start_s - o.from + tolerance_s, plan.cycle_s);
      return from + std::min(claimed, check.found_s) <= o.to - o.from + 2 * tolerance_s || o.to - o.from >= plan.cycle_s - 1e-6;
    });
    if (!fits) findings.violation("band-start-claim", fmt::format("{}: a band of {} s does not fit from {} s on; the widest starts at {} s", where, number_text(claimed, 2), number_text(direction.band_start_s, 2), number_text(check.start_s, 2)),
                                  "Recompute the claim (review --recompute)");
  }
  const double efficiency = check.found_s / plan.cycle_s;
  if (std::fabs(direction.efficiency - efficiency) > 0.002) findings.violation("efficiency-claim", fmt::format("{}: claims an efficiency of {}, it is {}", where, number_text(direction.efficiency), number_text(efficiency)), "Recompute the claim");
  double least = INFINITY;
  for (const StopGreens& s : stops) {
    double longest = s.always ? plan.cycle_s : 0;
    for (const Open& g : s.greens) longest = std::max(longest, g.to - g.from);
    least = std::min(least, longest);
  }
  const double attainability = least > 0 && std::isfinite(least) ? check.found_s / least : 0;
  if (std::fabs(direction.attainability - attainability) > 0.003) findings.violation("attainability-claim", fmt::format("{}: claims an attainability of {}, it is {}", where, number_text(direction.attainability), number_text(attainability)), "Recompute the claim");
  if (direction.bandwidth_bound_s && *direction.bandwidth_bound_s < check.found_s - tolerance_s)
    findings.violation("bound-below-band", fmt::format("{}: claims that no band is wider than {} s, but this plan's is {} s", where, number_text(*direction.bandwidth_bound_s, 2), number_text(check.found_s, 2)), "The bound is no bound");
}

void check_stop(const plan::Plan& plan, const plan::Direction& direction, const plan::Stop& stop, const std::string& where, Findings& findings) {
  const plan::Signal* signal = find_signal(plan, stop.signal);
  const plan::Group* group = signal == nullptr ? nullptr : find_group(*signal, stop.group);
  if (group == nullptr) return findings.violation("unknown-reference", fmt::format("{}: stop at {} group {}, which is not there", where, printable(stop.signal), printable(stop.group)));
  if (!(stop.travel_time_s >= 0) || stop.travel_time_s > 3600 || !(stop.queue_clearance_s >= 0)) findings.violation("number-out-of-range", fmt::format("{}: travel time {} s to {}", where, number_text(stop.travel_time_s), stop.signal));
  if (signal->operation == plan::Operation::free) findings.violation("corridor-through-free-signal", fmt::format("{}: {} runs free, no band passes it reliably", where, stop.signal), "Leave it out of the corridor's stops");
  if (stop.movement.empty()) return;
  const bool serves = std::any_of(group->serves.begin(), group->serves.end(), [&](const plan::Served& s) { return s.movement == stop.movement; });
  if (!serves) findings.violation("corridor-group", fmt::format("{}: group {} of {} does not serve {}", where, stop.group, stop.signal, stop.movement), "Name the group that serves the movement");
  (void)direction;
}

}  // namespace

std::vector<BandCheck> check_bands(const plan::Plan& plan, std::vector<Finding>& list) {
  std::vector<BandCheck> checks;
  Findings findings(list, "");
  if (!(plan.cycle_s >= 1) || plan.cycle_s > longest_cycle_s) return checks;
  for (const plan::Corridor& corridor : plan.corridors)
    for (const plan::Direction& direction : corridor.directions) {
      BandCheck check{corridor.id, direction.name, direction.label, direction.bandwidth_s, 0, 0, plan.cycle_s, {}};
      std::vector<StopGreens> stops;
      double travelled = 0;
      bool told = !direction.stops.empty();
      for (std::size_t i = 0; i < direction.stops.size(); ++i) {
        check_stop(plan, direction, direction.stops[i], fmt::format("corridor {} {}", corridor.id, direction.name), findings);
        if (i > 0) travelled += direction.stops[i].travel_time_s;
        told = stop_greens(plan, direction.stops[i], travelled, stops.emplace_back()) && told;
      }
      if (!told) {
        if (direction.bandwidth_s > 0) findings.violation("bandwidth-claim", fmt::format("corridor {} {}: claims a band of {} s, but its stops can't be followed", corridor.id, direction.name, number_text(direction.bandwidth_s, 2)));
        continue;
      }
      const auto open = common(stops, plan.cycle_s, stops.size());
      const Open band = widest(open);
      check.found_s = std::min(plan.cycle_s, band.to - band.from);
      check.start_s = rest(band.from, plan.cycle_s);
      measure_slack(stops, plan.cycle_s, band, check);
      compare(plan, direction, stops, open, check, findings);
      checks.push_back(std::move(check));
    }
  return checks;
}

}  // namespace entrain::review
