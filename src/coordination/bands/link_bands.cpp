#include "coordination/bands/link_bands.hpp"

#include <algorithm>
#include <cmath>

#include "coordination/bands/compiled.hpp"
#include "coordination/bands/link_chain.hpp"

namespace entrain::bands {
namespace {

constexpr int grid_phis = 96, grid_halves = 24, refined_peaks = 24, golden_steps = 60;
constexpr double never = -1e300;

struct LinkPair {
  double c = 0, g = 0, h = 0;  // phi + c: the backward window's start seen from the forward window's
  double first_end = 0;        // offset for a forward line at 0 that runs at the window's very start
  int option = 0;
  bool first_open = false, second_open = false;
};

struct LinkStation {
  double period = 0;
  std::vector<LinkPair> pairs;
};

class LinkSolver {
 public:
  LinkSolver(const LinkBandInput& input, const Compiled& compiled) : m_cycle(to_seconds(compiled.cycle)) {
    for (const CompiledStation& station : compiled.stations) m_stations.push_back(station_of(station));
    for (std::size_t i = 0; i < input.forward_weights.size(); ++i)
      m_weights.push_back({input.forward_weights[i], input.backward_weights[i]});
  }

  // Options and offsets of the best lines found; false if no two lines meet only open windows.
  bool run(std::vector<int>& options, std::vector<double>& offsets) {
    scan_phis();
    double best = never, best_phi = 0;
    std::vector<int> best_choice;
    for (const std::size_t k : peaks()) {
      double phi = static_cast<double>(k) * m_cycle / grid_phis;
      std::vector<int> choice = m_choices[k];
      double value = climb(phi, choice);
      while (regrid(phi, choice, value) || swap_one(phi, choice, value)) value = climb(phi, choice);
      if (value > best) best = value, best_phi = phi, best_choice = choice;
    }
    if (best_choice.empty()) return false;
    place(best_phi, best_choice, options, offsets);
    return true;
  }

 private:
  LinkStation station_of(const CompiledStation& station) const {
    LinkStation out{to_seconds(station.period), {}};
    const Visit& first = station.visits[0];
    const Visit& second = station.visits[1];
    for (const int o : station.options)
      for (const Slot& a : first.slots[static_cast<std::size_t>(o)])
        for (const Slot& b : second.slots[static_cast<std::size_t>(o)])
          out.pairs.push_back({to_seconds(wrap(first.shift - a.start - second.shift + b.start, station.period)),
                               to_seconds(a.duration), to_seconds(b.duration), to_seconds(first.shift - a.start), o,
                               a.open, b.open});
    return out;
  }

  // From the middle of the forward window to the middle of the backward one, the short way round.
  static double apart(const LinkStation& station, const LinkPair& pair, double phi) {
    if (pair.first_open || pair.second_open) return 0;
    const double gap = entrain::wrap(phi + pair.c + (pair.h - pair.g) / 2, station.period);
    return gap > station.period / 2 ? gap - station.period : gap;
  }

  // False where the pair lets no two lines through.
  static bool offer(const LinkStation& station, const LinkPair& pair, double phi, LinkOffer& out) {
    const double total = (pair.g + pair.h) / 2 - std::abs(apart(station, pair, phi));
    out = {std::max(0.0, total - pair.h / 2), std::min(pair.g / 2, total), total};
    return total >= 0;
  }

  struct GridState {
    LinkOffer offer;
    double a = 0, value = 0;
    int pair = 0, from = 0;
  };

  static bool is_worse(const LinkOffer& a, const LinkOffer& b) {
    return a.high <= b.high && a.total - a.low <= b.total - b.low && a.total <= b.total;
  }

  void add_states(const LinkStation& station, double phi, std::vector<GridState>& states) {
    m_offers.clear();
    for (std::size_t p = 0; p < station.pairs.size(); ++p) {
      LinkOffer own;
      if (!offer(station, station.pairs[p], phi, own)) continue;
      const bool worse =
          std::any_of(m_offers.begin(), m_offers.end(), [&](const auto& other) { return is_worse(own, other.first); });
      if (!worse) m_offers.push_back({own, static_cast<int>(p)});
    }
    const double step = m_cycle / 2 / grid_halves;
    for (const auto& [own, p] : m_offers) {
      for (double a = own.low; a < own.high; a += step) states.push_back({own, a, 0, p, 0});
      states.push_back({own, own.high, 0, p, 0});
    }
  }

  // Best options on a grid of half widths; `never` if a station lets no two lines through.
  double grid_value(double phi, std::vector<int>& choice) {
    std::vector<std::vector<GridState>>& layers = m_layers;
    layers.resize(m_stations.size());
    for (std::size_t i = 0; i < m_stations.size(); ++i) {
      layers[i].clear();
      add_states(m_stations[i], phi, layers[i]);
      if (layers[i].empty()) return never;
      if (i == 0) continue;
      for (GridState& state : layers[i]) {
        state.value = never;
        const double b = state.offer.total - state.a, w = 2 * m_weights[i - 1].forward,
                     v = 2 * m_weights[i - 1].backward;
        for (std::size_t k = 0; k < layers[i - 1].size(); ++k) {
          const GridState& before = layers[i - 1][k];
          const double value =
              before.value + w * std::min(before.a, state.a) + v * std::min(before.offer.total - before.a, b);
          if (value > state.value) state.value = value, state.from = static_cast<int>(k);
        }
      }
    }
    auto best = std::max_element(layers.back().begin(), layers.back().end(),
                                 [](const GridState& a, const GridState& b) { return a.value < b.value; });
    const double value = best->value;
    choice.assign(m_stations.size(), 0);
    int at = static_cast<int>(best - layers.back().begin());
    for (std::size_t i = m_stations.size(); i-- > 0; at = layers[i][static_cast<std::size_t>(at)].from)
      choice[i] = layers[i][static_cast<std::size_t>(at)].pair;
    return value;
  }

  void scan_phis() {
    m_values.assign(grid_phis, never);
    m_choices.assign(grid_phis, {});
    for (std::size_t k = 0; k < grid_phis; ++k) {
      const double phi = static_cast<double>(k) * m_cycle / grid_phis;
      if (grid_value(phi, m_choices[k]) > never) m_values[k] = value_at(phi, m_choices[k]);
    }
  }

  std::vector<std::size_t> peaks() const {
    std::vector<std::size_t> list;
    for (std::size_t k = 0; k < grid_phis; ++k)
      if (m_values[k] > never && m_values[k] >= m_values[(k + 1) % grid_phis] &&
          m_values[k] > m_values[(k + grid_phis - 1) % grid_phis])
        list.push_back(k);
    if (list.empty() && m_values[0] > never) list.push_back(0);
    std::sort(list.begin(), list.end(), [&](std::size_t a, std::size_t b) {
      return m_values[a] != m_values[b] ? m_values[a] > m_values[b] : a < b;
    });
    if (list.size() > refined_peaks) list.resize(refined_peaks);
    return list;
  }

  double value_at(double phi, const std::vector<int>& choice, std::vector<double>* best_a = nullptr) {
    m_chain.clear();
    for (std::size_t i = 0; i < m_stations.size(); ++i) {
      LinkOffer own;
      if (!offer(m_stations[i], m_stations[i].pairs[static_cast<std::size_t>(choice[i])], phi, own)) return never;
      m_chain.push_back(own);
    }
    return best_half_widths(m_chain, m_weights, best_a);
  }

  // Between phis at which some station's middles are farthest apart the value is concave in phi: golden section.
  double climb(double& phi, const std::vector<int>& choice) {
    const double golden = (std::sqrt(5.0) - 1) / 2, step = m_cycle / grid_phis;
    double low = phi - step, high = phi + step;
    double a = high - golden * (high - low), b = low + golden * (high - low);
    double at_a = value_at(a, choice), at_b = value_at(b, choice);
    for (int i = 0; i < golden_steps; ++i) {
      if (at_a < at_b)
        low = a, a = b, at_a = at_b, b = low + golden * (high - low), at_b = value_at(b, choice);
      else
        high = b, b = a, at_b = at_a, a = high - golden * (high - low), at_a = value_at(a, choice);
    }
    const double here = value_at(phi, choice);
    if (here >= std::max(at_a, at_b)) return here;
    phi = at_a >= at_b ? a : b;
    return std::max(at_a, at_b);
  }

  // The grid's options at exactly this phi, where they turn out better.
  bool regrid(double& phi, std::vector<int>& choice, double value) {
    std::vector<int> other;
    if (grid_value(phi, other) == never || other == choice) return false;
    double other_phi = phi;
    if (climb(other_phi, other) <= value + 1e-7) return false;
    choice = other;
    phi = other_phi;
    return true;
  }

  bool swap_one(double phi, std::vector<int>& choice, double value) {
    for (std::size_t i = 0; i < m_stations.size(); ++i) {
      const int before = choice[i];
      for (int p = 0; p < static_cast<int>(m_stations[i].pairs.size()); ++p) {
        choice[i] = p;
        if (p != before && value_at(phi, choice) > value + 1e-7) return true;
      }
      choice[i] = before;
    }
    return false;
  }

  void place(double phi, const std::vector<int>& choice, std::vector<int>& options, std::vector<double>& offsets) {
    std::vector<double> halves;
    value_at(phi, choice, &halves);
    options.clear();
    offsets.clear();
    for (std::size_t i = 0; i < m_stations.size(); ++i) {
      const LinkStation& station = m_stations[i];
      const LinkPair& pair = station.pairs[static_cast<std::size_t>(choice[i])];
      const double gap = apart(station, pair, phi);
      // The forward line runs y after the window's start.
      double y = pair.g / 2 + (gap < 0 ? -1 : 1) * (pair.g / 2 - halves[i]);
      if (pair.first_open) y = pair.second_open ? 0 : phi + pair.c + pair.h / 2;
      options.push_back(pair.option);
      offsets.push_back(pair.first_end - y);
    }
    const double shift = offsets.front();
    for (std::size_t i = 0; i < offsets.size(); ++i)
      offsets[i] = entrain::wrap(offsets[i] - shift, m_stations[i].period);
  }

  double m_cycle;
  std::vector<LinkStation> m_stations;
  std::vector<LinkWeights> m_weights;
  std::vector<std::vector<GridState>> m_layers;
  std::vector<std::pair<LinkOffer, int>> m_offers;
  std::vector<LinkOffer> m_chain;
  std::vector<double> m_values;
  std::vector<std::vector<int>> m_choices;
};

// The best line of one direction for given offsets.
class LineSearch {
 public:
  LineSearch(const Compiled& compiled, std::size_t direction, const std::vector<double>& weights)
      : m_compiled(compiled), m_direction(direction), m_weights(weights) {}

  // Sum of weight * width; widths by stop in the direction's own order. Negative if no line meets only open windows.
  double run(const std::vector<int>& options, const std::vector<double>& offsets, double& line,
             std::vector<double>& widths) {
    gather(options, offsets);
    double best = -1;
    for (const double at : m_candidates) {
      const double value = look(at);
      if (value > best + 1e-12) best = value, line = entrain::wrap(at, to_seconds(m_compiled.cycle)), widths = m_widths;
    }
    return best;
  }

 private:
  struct Hat {
    double left = 0, length = 0;
  };
  struct Stop {
    double period = 0;
    bool open = false;
    std::vector<Hat> hats;
  };

  void gather(const std::vector<int>& options, const std::vector<double>& offsets) {
    m_stops.clear();
    m_candidates = {0};
    for (const StopKey& key : m_compiled.frames[m_direction].stops) {
      const auto s = static_cast<std::size_t>(key.station);
      const Visit& visit = m_compiled.stations[s].visits[static_cast<std::size_t>(key.visit)];
      Stop stop{to_seconds(m_compiled.stations[s].period), false, {}};
      for (const Slot& slot : visit.slots[static_cast<std::size_t>(options[s])]) {
        stop.open = stop.open || slot.open;
        stop.hats.push_back({offsets[s] + to_seconds(slot.start - visit.shift), to_seconds(slot.duration)});
      }
      m_stops.push_back(std::move(stop));
    }
    const double cycle = to_seconds(m_compiled.cycle);
    for (std::size_t i = 0; i < m_stops.size(); ++i)
      for (const Hat& hat : m_stops[i].hats)
        for (double turn = 0; turn < cycle && !m_stops[i].open; turn += m_stops[i].period) {
          for (const double share : {0.0, 0.5, 1.0}) m_candidates.push_back(hat.left + turn + share * hat.length);
          if (i + 1 < m_stops.size()) add_crossings(hat, m_stops[i + 1], turn);
        }
  }

  // Where one hat rises and the neighbour's falls through it.
  void add_crossings(const Hat& hat, const Stop& next, double turn) {
    for (const Hat& other : next.hats)
      for (const double half_turn : {0.0, next.period / 2}) {
        m_candidates.push_back((hat.left + turn + other.left + other.length) / 2 + half_turn);
        m_candidates.push_back((other.left + hat.left + turn + hat.length) / 2 + half_turn);
      }
  }

  double look(double line) {
    double value = 0, before = 0;
    m_widths.clear();
    for (std::size_t i = 0; i < m_stops.size(); ++i) {
      double half = m_stops[i].open ? to_seconds(m_compiled.cycle) / 2 : -1;
      for (const Hat& hat : m_stops[i].hats) {
        double z = entrain::wrap(line - hat.left, m_stops[i].period);
        if (z > m_stops[i].period - 1e-9) z = 0;
        if (!m_stops[i].open && z <= hat.length + 1e-9)
          half = std::max(half, std::max(0.0, std::min(z, hat.length - z)));
      }
      if (half < 0) return -1;
      if (i > 0) {
        m_widths.push_back(2 * std::min(before, half));
        value += m_weights[i - 1] * m_widths.back();
      }
      before = half;
    }
    return value;
  }

  const Compiled& m_compiled;
  std::size_t m_direction;
  const std::vector<double>& m_weights;
  std::vector<Stop> m_stops;
  std::vector<double> m_candidates, m_widths;
};

class LinkEvaluator {
 public:
  LinkEvaluator(const LinkBandInput& input, const Compiled& compiled)
      : m_links(input.forward_weights.size()),
        m_backward_weights(input.backward_weights.rbegin(), input.backward_weights.rend()),
        m_forward(compiled, 0, input.forward_weights),
        m_backward(compiled, 1, m_backward_weights) {}

  LinkBandAnswer run(const std::vector<int>& options, const std::vector<double>& offsets) {
    LinkBandAnswer answer;
    answer.options = options;
    answer.offsets_s = offsets;
    double line = 0;
    const double forward = m_forward.run(options, offsets, answer.forward_line_s, answer.forward_s);
    const double backward = m_backward.run(options, offsets, line, answer.backward_s);
    answer.backward_line_s = line;
    std::reverse(answer.backward_s.begin(), answer.backward_s.end());
    answer.has_lines = forward >= 0 && backward >= 0;
    answer.value_s = std::max(0.0, forward) + std::max(0.0, backward);
    answer.forward_s.resize(m_links, 0.0);
    answer.backward_s.resize(m_links, 0.0);
    return answer;
  }

 private:
  std::size_t m_links;
  std::vector<double> m_backward_weights;
  LineSearch m_forward, m_backward;
};

Result<Compiled> compile_links(const LinkBandInput& input) {
  Diagnostics found = check_lengths(input.corridor);
  const std::size_t links = input.corridor.stations.empty() ? 0 : input.corridor.stations.size() - 1;
  for (const auto* weights : {&input.forward_weights, &input.backward_weights}) {
    if (weights->size() != links)
      found.push_back(error("link weights", std::to_string(weights->size()),
                            std::to_string(links) + ", one between each two stations",
                            "Give every link a weight in each direction."));
    for (const double weight : *weights)
      if (!(weight >= 0) || !(weight <= 1e9))
        found.push_back(error("link weights", "negative or not a number", "0 or more", "Give flows or shares."));
  }
  if (input.corridor.one_way) found.push_back(error("directions", "one", "two", "Use two-way corridors only."));
  Problem problem = to_problem(input.corridor);
  for (Station& station : problem.stations) station.fixed_offset_s.reset();
  const Result<Compiled> compiled = compile(problem);
  if (!compiled) append(found, compiled.error());
  if (!found.empty()) return failure(std::move(found));
  return compiled;
}

// One station at a time, one or two seconds either way, while the value grows.
LinkBandAnswer improved(const LinkBandInput& input, const Compiled& compiled, LinkBandAnswer answer) {
  LinkEvaluator evaluate(input, compiled);
  for (bool better = true; better;) {
    better = false;
    for (std::size_t s = 0; s < answer.offsets_s.size(); ++s)
      for (const double step : {1.0, -1.0, 2.0, -2.0}) {
        std::vector<double> offsets = answer.offsets_s;
        offsets[s] = entrain::wrap(offsets[s] + step, to_seconds(compiled.stations[s].period));
        LinkBandAnswer tried = evaluate.run(answer.options, offsets);
        if (tried.value_s > answer.value_s + 1e-9) answer = std::move(tried), better = true;
      }
  }
  return answer;
}

Result<LinkBandAnswer> solve(const LinkBandInput& input, bool whole_seconds) {
  const Result<Compiled> compiled = compile_links(input);
  if (!compiled) return failure(compiled.error());
  std::vector<int> options;
  std::vector<double> offsets;
  if (!LinkSolver(input, *compiled).run(options, offsets)) {
    for (const CompiledStation& station : compiled->stations)
      options.push_back(station.options.front()), offsets.push_back(0);
    LinkBandAnswer none = LinkEvaluator(input, *compiled).run(options, offsets);
    none.value_s = 0;
    none.has_lines = false;
    for (auto* widths : {&none.forward_s, &none.backward_s}) std::fill(widths->begin(), widths->end(), 0.0);
    return none;
  }
  if (!whole_seconds) return LinkEvaluator(input, *compiled).run(options, offsets);
  for (std::size_t s = 0; s < offsets.size(); ++s)
    offsets[s] = entrain::wrap(std::floor(offsets[s] + 0.5), to_seconds(compiled->stations[s].period));
  return improved(input, *compiled, LinkEvaluator(input, *compiled).run(options, offsets));
}

}  // namespace

Result<LinkBandAnswer> solve_link_bands(const LinkBandInput& input) { return solve(input, false); }
Result<LinkBandAnswer> solve_link_bands_whole_seconds(const LinkBandInput& input) { return solve(input, true); }

Result<LinkBandAnswer> evaluate_link_bands(const LinkBandInput& input, const std::vector<int>& options,
                                           const std::vector<double>& offsets_s) {
  const Result<Compiled> compiled = compile_links(input);
  if (!compiled) return failure(compiled.error());
  Diagnostics found;
  if (options.size() != compiled->stations.size() || offsets_s.size() != compiled->stations.size())
    found.push_back(error("options and offsets",
                          std::to_string(options.size()) + " and " + std::to_string(offsets_s.size()),
                          std::to_string(compiled->stations.size()), "Give one of each a station."));
  for (std::size_t s = 0; s < options.size() && s < compiled->stations.size(); ++s)
    if (options[s] < 0 || options[s] >= compiled->stations[s].option_count)
      found.push_back(error("option of station " + std::to_string(s), std::to_string(options[s]), "an option it has",
                            "Choose an option that the station has."));
  for (const double offset : offsets_s)
    if (!(std::abs(offset) <= 1e6))
      found.push_back(error("offset", "not finite", "a finite number of seconds", "Give the offset in seconds."));
  if (!found.empty()) return failure(std::move(found));
  return LinkEvaluator(input, *compiled).run(options, offsets_s);
}

}  // namespace entrain::bands
