#include "review/bands.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"

namespace entrain::review {
namespace {

constexpr std::size_t most_stops = 5000, most_looked_into = 20;

struct Place {
  const plan::Signal* signal = nullptr;
  const plan::Group* group = nullptr;
};

using Places = std::map<std::string, const plan::Signal*>;

Place place_of(const Places& signals, const plan::Stop& stop) {
  const auto found = signals.find(stop.signal);
  if (found == signals.end()) return {};
  for (const plan::Group& g : found->second->groups)
    if (g.id == stop.group) return {found->second, &g};
  return {found->second, nullptr};
}

// One stop of a direction as the band sees it.
struct StopGreens {
  const plan::Stop* stop = nullptr;
  Place place;
  Micros travelled = 0;
  OpenSet open;        // instants at the first stop from which a vehicle meets this stop's cleared green
  Micros longest = 0;  // green
  bool is_always = false;
};

bool can_be_followed(const plan::Stop& stop, const Place& place) {
  if (place.group == nullptr || place.group->greens.size() > most_greens) return false;
  const plan::Signal& s = *place.signal;
  if (!(s.cycle_s >= 1) || !(s.cycle_s <= longest_cycle_s) || !(std::fabs(s.offset_s) <= longest_cycle_s)) return false;
  if (!(stop.queue_clearance_s >= 0) || !(stop.queue_clearance_s <= longest_cycle_s)) return false;
  return std::all_of(place.group->greens.begin(), place.group->greens.end(), [](const plan::Green& g) { return std::fabs(g.start_s) <= longest_cycle_s && std::fabs(g.duration_s) <= longest_cycle_s; });
}

// The stop's cleared greens over the plan's cycle with the green starting `lead` earlier and ending `trail` later.
OpenSet open_set(const StopGreens& at, Micros cycle, Micros lead, Micros trail) {
  const Micros own = to_micros(at.place.signal->cycle_s), offset = to_micros(at.place.signal->offset_s), clearing = to_micros(at.stop->queue_clearance_s);
  std::vector<Open> intervals;
  for (Micros shift = 0; shift < cycle; shift += own)
    for (const plan::Green& g : at.place.group->greens) {
      if (to_micros(g.duration_s) >= own) return whole_circle(cycle);
      const Micros from = offset + to_micros(g.start_s) + shift - at.travelled;
      if (to_micros(g.duration_s) > clearing) intervals.push_back({from + clearing - lead, from + to_micros(g.duration_s) + trail});
    }
  return on_circle(intervals, cycle);
}

bool lay_out(const Places& signals, const plan::Direction& direction, Micros cycle, std::vector<StopGreens>& stops) {
  double travelled_s = 0;
  for (std::size_t i = 0; i < direction.stops.size(); ++i) {
    StopGreens at;
    at.stop = &direction.stops[i];
    at.place = place_of(signals, *at.stop);
    if (i > 0) travelled_s += at.stop->travel_time_s;
    if (!can_be_followed(*at.stop, at.place) || !(std::fabs(travelled_s) <= 1e8)) return false;
    at.travelled = to_micros(travelled_s);
    at.open = open_set(at, cycle, 0, 0);
    at.is_always = at.open.size() == 1 && at.open[0].from == 0 && at.open[0].to == cycle;
    at.longest = longest(at.open, cycle).to - longest(at.open, cycle).from;
    stops.push_back(std::move(at));
  }
  return !stops.empty();
}

// What is open at all stops, with another set in place of that of stop `replaced`.
OpenSet open_at_all(const std::vector<StopGreens>& stops, Micros cycle, std::size_t replaced, const OpenSet& by) {
  OpenSet open = whole_circle(cycle);
  for (std::size_t i = 0; i < stops.size(); ++i) open = common(open, i == replaced ? by : stops[i].open);
  return open;
}

double width_s(const OpenSet& set, Micros cycle) {
  const Open band = longest(set, cycle);
  return to_seconds(band.to - band.from);
}

// What the stop's own green, a second longer or without end, would make of the band.
void look_into(const std::vector<StopGreens>& stops, std::size_t i, Micros cycle, double found_s, StopSlack& slack) {
  slack.width_without_s = width_s(open_at_all(stops, cycle, i, whole_circle(cycle)), cycle);
  if (slack.pinches_lead) slack.gain_lead_s = std::max(0.0, width_s(open_at_all(stops, cycle, i, open_set(stops[i], cycle, second, 0)), cycle) - found_s);
  if (slack.pinches_trail) slack.gain_trail_s = std::max(0.0, width_s(open_at_all(stops, cycle, i, open_set(stops[i], cycle, 0, second)), cycle) - found_s);
}

// How the band lies in each stop's green, and what each pinching stop costs.
std::vector<Open> measure_slack(const std::vector<StopGreens>& stops, Micros cycle, const Open& band, BandCheck& check) {
  std::vector<Open> windows;
  std::size_t looked_into = 0;
  for (std::size_t i = 0; i < stops.size(); ++i) {
    StopSlack slack;
    slack.signal = stops[i].stop->signal, slack.group = stops[i].stop->group;
    slack.width_without_s = check.found_s;
    windows.push_back(stretch_at(stops[i].open, band.from, cycle));
    const Open& window = windows.back();
    slack.lead_s = stops[i].is_always ? INFINITY : to_seconds(band.from - window.from);
    slack.trail_s = stops[i].is_always ? INFINITY : to_seconds(window.to - band.to);
    slack.pinches_lead = slack.lead_s < tolerance_s && band.to > band.from;
    slack.pinches_trail = slack.trail_s < tolerance_s && band.to > band.from;
    if ((slack.pinches_lead || slack.pinches_trail) && looked_into++ < most_looked_into) look_into(stops, i, cycle, check.found_s, slack);
    check.stops.push_back(std::move(slack));
  }
  return windows;
}

struct Edges {
  std::string signal;
  Micros from, to;  // own window round the band
  bool is_always;
};

// Moving a signal alone keeps the width as long as its window and what the others leave still share that much.
void limit_freedom(const std::vector<StopGreens>& stops, const std::vector<Open>& windows, const Open& band, std::map<std::string, Freedom>& freedom) {
  std::map<std::string, Open> own;  // by signal: what its stops share round the band
  for (std::size_t i = 0; i < stops.size(); ++i) {
    const double cycle_s = stops[i].place.signal->cycle_s;
    freedom.emplace(stops[i].stop->signal, Freedom{cycle_s, cycle_s});
    if (stops[i].is_always) continue;
    const auto [at, is_new] = own.emplace(stops[i].stop->signal, windows[i]);
    if (!is_new) at->second = {std::max(at->second.from, windows[i].from), std::min(at->second.to, windows[i].to)};
  }
  std::vector<std::pair<Micros, std::string>> starts, ends;
  for (const auto& [signal, window] : own) starts.emplace_back(-window.from, signal), ends.emplace_back(window.to, signal);
  std::sort(starts.begin(), starts.end());
  std::sort(ends.begin(), ends.end());
  for (const auto& [signal, window] : own) {
    Freedom& f = freedom.at(signal);
    if (own.size() < 2) continue;
    const Micros latest = -(starts[0].second == signal ? starts[1] : starts[0]).first, earliest = (ends[0].second == signal ? ends[1] : ends[0]).first;
    f.early_s = std::min(f.early_s, to_seconds(std::max<Micros>(0, window.to - latest - (band.to - band.from))));
    f.late_s = std::min(f.late_s, to_seconds(std::max<Micros>(0, earliest - window.from - (band.to - band.from))));
  }
}

void check_stop(const plan::Stop& stop, const Place& place, const std::string& where, Findings& findings) {
  if (place.group == nullptr) return findings.violation("unknown-reference", fmt::format("{}: stop at {} group {}, which is not there", where, printable(stop.signal), printable(stop.group)), "Correct the id");
  if (!(stop.travel_time_s >= 0) || !(stop.travel_time_s <= 3600) || !(stop.queue_clearance_s >= 0) || !(stop.queue_clearance_s <= 3600) || !(stop.distance_m >= 0))
    findings.violation("number-out-of-range", fmt::format("{}: {} m and {} s to {}, queue clearance {} s", where, number_text(stop.distance_m), number_text(stop.travel_time_s), stop.signal, number_text(stop.queue_clearance_s)), "Give seconds from 0 to 3600");
  else if (stop.travel_time_s > 0 && stop.distance_m / stop.travel_time_s > 50)
    findings.add("speed-unusual", Severity::warning, fmt::format("{}: {} m in {} s to {}", where, number_text(stop.distance_m, 0), number_text(stop.travel_time_s, 1), stop.signal), "Check distance and travel time");
  if (place.signal->operation == plan::Operation::free)
    findings.violation("corridor-through-free-signal", fmt::format("{}: {} runs free, no band passes it reliably", where, stop.signal), "Leave it out of the corridor's stops");
  if (walks(*place.group)) findings.violation("corridor-group", fmt::format("{}: group {} of {} serves no vehicles", where, stop.group, stop.signal), "Name the group that serves the movement", {stop.group});
  if (stop.movement.empty()) return;
  const bool serves = std::any_of(place.group->serves.begin(), place.group->serves.end(), [&](const plan::Served& s) { return s.movement == stop.movement; });
  if (!serves && !place.group->serves.empty())
    findings.violation("corridor-group", fmt::format("{}: group {} of {} does not serve {}", where, stop.group, stop.signal, printable(stop.movement)), "Name the group that serves the movement", {stop.group});
}

class DirectionReview {
 public:
  DirectionReview(const plan::Plan& plan, const Places& signals, Bands& bands, Findings& findings) : m_plan(plan), m_signals(signals), m_bands(bands), m_findings(findings), m_cycle(to_micros(plan.cycle_s)) {}

  void look_at(const plan::Corridor& corridor, const plan::Direction& direction) {
    const std::string where = fmt::format("corridor {} {}", printable(corridor.id), printable(direction.name));
    if (direction.stops.size() > most_stops) return m_findings.violation("too-large", fmt::format("{}: {} stops, at most {} are looked at", where, direction.stops.size(), most_stops), "Split the corridor");
    for (const plan::Stop& stop : direction.stops) check_stop(stop, place_of(m_signals, stop), where, m_findings);
    std::vector<StopGreens> stops;
    if (!lay_out(m_signals, direction, m_cycle, stops)) {
      if (direction.bandwidth_s != 0)
        m_findings.violation("bandwidth-claim", fmt::format("{}: claims a band of {} s, but its stops can't be followed", where, number_text(direction.bandwidth_s, 2)), "Correct the stops");
      return;
    }
    measure(corridor, direction, stops);
  }

 private:
  void measure(const plan::Corridor& corridor, const plan::Direction& direction, const std::vector<StopGreens>& stops) {
    const OpenSet open = open_at_all(stops, m_cycle, stops.size(), {});
    const Open band = longest(open, m_cycle);
    BandCheck check{corridor.id, direction.name, direction.label, direction.bandwidth_s, to_seconds(band.to - band.from), to_seconds(band.from), m_plan.cycle_s, {}, direction.band_start_s, 0, 0, 0};
    Micros shortest = m_cycle;
    for (const StopGreens& s : stops) shortest = std::min(shortest, s.longest);
    check.shortest_green_s = to_seconds(shortest);
    check.efficiency = check.found_s / m_plan.cycle_s;
    check.attainability = shortest > 0 ? check.found_s / check.shortest_green_s : 0;
    const auto windows = measure_slack(stops, m_cycle, band, check);
    if (band.to > band.from) limit_freedom(stops, windows, band, m_bands.freedom);
    check_band_claims(m_plan, direction, open, check, m_findings);
    m_bands.checks.push_back(std::move(check));
  }

  const plan::Plan& m_plan;
  const Places& m_signals;
  Bands& m_bands;
  Findings& m_findings;
  Micros m_cycle;
};

}  // namespace

Bands check_bands(const plan::Plan& plan, std::vector<Finding>& list) {
  Bands bands;
  if (!(plan.cycle_s >= 1) || !(plan.cycle_s <= longest_cycle_s)) return bands;
  Places signals;
  for (const plan::Signal& s : plan.signals) signals.emplace(s.id, &s);
  {
    Findings findings(list, "");
    DirectionReview review(plan, signals, bands, findings);
    for (const plan::Corridor& corridor : plan.corridors)
      for (const plan::Direction& direction : corridor.directions) review.look_at(corridor, direction);
  }
  check_freedom_claims(plan, bands, list);
  return bands;
}

}  // namespace entrain::review
