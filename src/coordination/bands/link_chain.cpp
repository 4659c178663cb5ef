#include "coordination/bands/link_chain.hpp"

#include <algorithm>

namespace entrain::bands {
namespace {

struct Segment {
  double slope = 0, length = 0;
};

// Concave on [start, start + sum of lengths]; slopes fall from left to right.
struct Concave {
  double start = 0, value = 0;  // value at start
  std::vector<Segment> segments;

  double at(double x) const {
    double y = value, from = start;
    for (const Segment& s : segments) {
      if (x <= from + s.length) return y + s.slope * (x - from);
      y += s.slope * s.length;
      from += s.length;
    }
    return y;
  }
};

double link_gain(const LinkOffer& before, double a, const LinkOffer& here, double b, const LinkWeights& w) {
  return 2 * w.forward * std::min(a, b) + 2 * w.backward * std::min(before.total - a, here.total - b);
}

// The function on [low, high], continued with slope `left` before its start and `right` after its end.
Concave on_interval(const Concave& f, double left, double right, double low, double high) {
  Concave out;
  out.start = low;
  double from = f.start;
  out.value = low < from ? f.value - left * (from - low) : 0;
  if (low < from) out.segments.push_back({left, std::min(from, high) - low});
  double y = f.value;
  for (const Segment& s : f.segments) {
    const double to = from + s.length;
    if (low >= from && low < to) out.value = y + s.slope * (low - from);
    const double a = std::max(from, low), b = std::min(to, high);
    if (b > a) out.segments.push_back({s.slope, b - a});
    y += s.slope * s.length;
    from = to;
  }
  if (low >= from) out.value = y + right * (low - from);
  if (high > std::max(from, low)) out.segments.push_back({right, high - std::max(from, low)});
  return out;
}

// Best value up to the next station, as a function of its forward half width.
Concave advance(const Concave& f, const LinkOffer& before, const LinkOffer& here, const LinkWeights& w) {
  const double steepest = 2 * w.backward, flattest = -2 * w.forward;
  const double change = before.total - here.total;
  Concave sum;
  sum.start = f.start;
  sum.value = f.value;
  std::size_t i = 0;
  for (; i < f.segments.size() && f.segments[i].slope > steepest; ++i) {
    sum.start += f.segments[i].length;
    sum.value += f.segments[i].slope * f.segments[i].length;
  }
  sum.start += std::min(0.0, -change);
  sum.value += change < 0 ? 2 * w.backward * change : 0;
  Segment middle{change >= 0 ? 0.0 : 2 * w.backward - 2 * w.forward, std::abs(change)};
  bool inserted = middle.length == 0;
  for (; i < f.segments.size() && f.segments[i].slope >= flattest; ++i) {
    if (!inserted && f.segments[i].slope < middle.slope) sum.segments.push_back(middle), inserted = true;
    sum.segments.push_back(f.segments[i]);
  }
  if (!inserted) sum.segments.push_back(middle);
  Concave out = on_interval(sum, steepest, flattest, here.low, here.high);
  out.value += 2 * w.forward * here.low + 2 * w.backward * (here.total - here.low);
  for (Segment& s : out.segments) s.slope += 2 * w.forward - 2 * w.backward;
  return out;
}

double top_of(const Concave& f, double& where) {
  double x = f.start, y = f.value;
  for (const Segment& s : f.segments) {
    if (s.slope <= 0) break;
    x += s.length;
    y += s.slope * s.length;
  }
  where = x;
  return y;
}

// The half width of the station before that gives the value at b.
double step_back(const Concave& f, const LinkOffer& before, const LinkOffer& here, double b, const LinkWeights& w) {
  double best = -1e300, where = f.start;
  const auto look = [&](double a) {
    const double value = f.at(a) + link_gain(before, a, here, b, w);
    if (value > best + 1e-12) best = value, where = a;
  };
  double x = f.start;
  look(x);
  for (const Segment& s : f.segments) look(x += s.length);
  for (const double a : {b, b + before.total - here.total}) look(std::clamp(a, before.low, before.high));
  return where;
}

}  // namespace

double best_half_widths(const std::vector<LinkOffer>& offers, const std::vector<LinkWeights>& weights,
                        std::vector<double>* best_a) {
  std::vector<Concave> functions;
  functions.push_back({offers[0].low, 0, {{0, offers[0].high - offers[0].low}}});
  for (std::size_t i = 1; i < offers.size(); ++i)
    functions.push_back(advance(functions[i - 1], offers[i - 1], offers[i], weights[i - 1]));
  double where = 0;
  const double value = top_of(functions.back(), where);
  if (best_a) {
    best_a->assign(offers.size(), 0.0);
    best_a->back() = where;
    for (std::size_t i = offers.size() - 1; i-- > 0;)
      (*best_a)[i] = step_back(functions[i], offers[i], offers[i + 1], (*best_a)[i + 1], weights[i]);
  }
  return value;
}

}  // namespace entrain::bands
