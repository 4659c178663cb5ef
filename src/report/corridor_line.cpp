#include "report/corridor_line.hpp"

#include <algorithm>
#include <cmath>

#include "base/circle.hpp"
#include "report/plan_view.hpp"

namespace entrain::report {
namespace {

constexpr double most = 1e7;  // metres or seconds: what can be drawn

double drawable(double value) { return std::fabs(value) <= most ? value : 0; }

std::vector<double> running_distances(const plan::Direction& direction) {
  std::vector<double> at;
  for (std::size_t i = 0; i < direction.stops.size(); ++i) at.push_back(i == 0 ? 0 : at.back() + std::max(0.0, drawable(direction.stops[i].distance_m)));
  return at;
}

// A stop of the second direction in the sense of the first.
struct Reversed {
  std::size_t stop = 0;
  std::string signal;
  double at_m = 0;
  std::optional<std::size_t> row;
};

std::vector<Reversed> reversed_stops(const plan::Direction& direction) {
  const std::vector<double> at = running_distances(direction);
  std::vector<Reversed> stops;
  for (std::size_t i = direction.stops.size(); i-- > 0;) stops.push_back({i, direction.stops[i].signal, at.back() - at[i], {}});
  return stops;
}

void match(std::vector<CorridorRow>& rows, std::vector<Reversed>& stops) {
  std::size_t next = 0;
  for (Reversed& stop : stops)
    for (std::size_t r = next; r < rows.size(); ++r) {
      if (rows[r].signal != stop.signal) continue;
      stop.row = r;
      rows[r].second = stop.stop;
      next = r + 1;
      break;
    }
}

double between(double x, double x0, double x1, double y0, double y1) { return x1 > x0 ? y0 + (x - x0) / (x1 - x0) * (y1 - y0) : (y0 + y1) / 2; }

double position_of(const std::vector<CorridorRow>& rows, const std::vector<Reversed>& stops, std::size_t k) {
  std::optional<std::size_t> before, after;
  for (std::size_t i = 0; i < stops.size(); ++i) {
    if (!stops[i].row) continue;
    if (i < k) before = i;
    if (i > k && !after) after = i;
  }
  const auto on_line = [&](std::size_t i) { return rows[*stops[i].row].position_m; };
  if (before && after) return between(stops[k].at_m, stops[*before].at_m, stops[*after].at_m, on_line(*before), on_line(*after));
  if (before) return on_line(*before) + stops[k].at_m - stops[*before].at_m;
  if (after) return on_line(*after) + stops[k].at_m - stops[*after].at_m;
  return stops[k].at_m;
}

void add_unmatched(std::vector<CorridorRow>& rows, const std::vector<Reversed>& stops) {
  std::vector<CorridorRow> more;
  for (std::size_t k = 0; k < stops.size(); ++k)
    if (!stops[k].row) more.push_back({stops[k].signal, position_of(rows, stops, k), {}, stops[k].stop});
  rows.insert(rows.end(), more.begin(), more.end());
  std::stable_sort(rows.begin(), rows.end(), [](const CorridorRow& a, const CorridorRow& b) { return a.position_m < b.position_m; });
  const double least = rows.empty() ? 0 : rows.front().position_m;
  for (CorridorRow& row : rows) row.position_m -= least;
}

struct Span {
  double from = 0, to = 0;
};

// Greens from just before 0 to `until`, joined where they touch.
std::vector<Span> greens_until(const plan::Signal& signal, const plan::Group& group, double until) {
  std::vector<Span> greens;
  for (const plan::Green& green : group.greens) {
    if (drawable(green.start_s) != green.start_s || drawable(green.duration_s) != green.duration_s || green.duration_s <= 0) continue;
    const double duration = std::min(green.duration_s, signal.cycle_s);
    const double first = wrap(drawable(signal.offset_s) + green.start_s, signal.cycle_s) - signal.cycle_s;
    for (double start = first; start < until; start += signal.cycle_s) greens.push_back({start, start + duration});
  }
  std::sort(greens.begin(), greens.end(), [](const Span& a, const Span& b) { return a.from < b.from; });
  std::vector<Span> joined;
  for (const Span& green : greens) {
    if (!joined.empty() && green.from <= joined.back().to + 1e-6) joined.back().to = std::max(joined.back().to, green.to);
    else joined.push_back(green);
  }
  return joined;
}

void add_span(std::vector<LampSpan>& spans, Lamp lamp, double from, double to, double until) {
  from = std::max(0.0, from), to = std::min(until, to);
  if (to - from > 1e-6) spans.push_back({lamp, from, to});
}

}  // namespace

std::vector<CorridorRow> corridor_rows(const plan::Corridor& corridor) {
  std::vector<CorridorRow> rows;
  if (corridor.directions.empty()) return rows;
  const plan::Direction& first = corridor.directions.front();
  const std::vector<double> at = running_distances(first);
  for (std::size_t i = 0; i < first.stops.size(); ++i) rows.push_back({first.stops[i].signal, at[i], i, {}});
  if (corridor.directions.size() < 2 || corridor.directions[1].stops.empty()) return rows;
  std::vector<Reversed> stops = reversed_stops(corridor.directions[1]);
  match(rows, stops);
  add_unmatched(rows, stops);
  return rows;
}

std::vector<LampSpan> lamp_spans(const plan::Signal& signal, const plan::Group& group, double until_s) {
  std::vector<LampSpan> spans;
  if (!is_drawable_cycle(signal.cycle_s) || group.greens.empty()) return spans;
  const std::vector<Span> greens = greens_until(signal, group, until_s);
  const double yellow = std::clamp(drawable(group.yellow_s), 0.0, signal.cycle_s);
  double dark_from = 0;
  for (std::size_t i = 0; i < greens.size(); ++i) {
    add_span(spans, Lamp::red, dark_from, greens[i].from, until_s);
    add_span(spans, Lamp::green, greens[i].from, greens[i].to, until_s);
    const double next = i + 1 < greens.size() ? greens[i + 1].from : until_s;
    dark_from = std::min(greens[i].to + yellow, std::max(greens[i].to, next));
    add_span(spans, Lamp::yellow, greens[i].to, dark_from, until_s);
  }
  add_span(spans, Lamp::red, dark_from, until_s, until_s);
  return spans;
}

std::vector<double> running_times(const plan::Direction& direction) {
  std::vector<double> at;
  for (std::size_t i = 0; i < direction.stops.size(); ++i) at.push_back(i == 0 ? 0 : at.back() + std::max(0.0, drawable(direction.stops[i].travel_time_s)));
  return at;
}

}  // namespace entrain::report
