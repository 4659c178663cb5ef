#include "coordination/bands/joint.hpp"

#include <algorithm>
#include <numeric>

#include "coordination/bands/band_network.hpp"

namespace entrain::bands {
namespace {

class Disjoint {
 public:
  explicit Disjoint(std::size_t count) : m_parent(count) {
    std::iota(m_parent.begin(), m_parent.end(), std::size_t{0});
  }
  std::size_t root(std::size_t i) {
    while (m_parent[i] != i) i = m_parent[i] = m_parent[m_parent[i]];
    return i;
  }
  // False if they were joined already.
  bool join(std::size_t a, std::size_t b) {
    a = root(a), b = root(b);
    m_parent[std::max(a, b)] = std::min(a, b);
    return a != b;
  }

 private:
  std::vector<std::size_t> m_parent;
};

std::vector<int> corridors_of(const Compiled& problem, const CompiledStation& station) {
  std::vector<int> met;
  for (const Visit& visit : station.visits)
    met.push_back(problem.frames[static_cast<std::size_t>(visit.frame)].corridor);
  std::sort(met.begin(), met.end());
  met.erase(std::unique(met.begin(), met.end()), met.end());
  return met;
}

class Solver {
 public:
  Solver(const Compiled& problem, std::int64_t most_nodes, bool whole_seconds)
      : m_problem(problem), m_most_nodes(most_nodes), m_whole_seconds(whole_seconds) {}

  JointSetting run() {
    const OptionLists options = allowed_options(m_problem);
    for (std::size_t i = 0; i < m_problem.stations.size(); ++i) {
      m_out.setting.options.push_back(options[i].front());
      m_out.setting.offsets.push_back(m_problem.stations[i].is_fixed ? m_problem.stations[i].fixed : 0);
    }
    for (std::size_t c = 0; c < m_problem.corridors.size(); ++c) {
      m_out.own.push_back(solve_alone(m_problem, static_cast<int>(c), options, m_most_nodes));
      m_out.bound.push_back(m_out.own.back().widths);
      m_out.all_directions.push_back(m_out.own.back().all_directions);
      m_out.witness.push_back(m_out.own.back().witness);
      m_out.proved = m_out.proved && m_out.own.back().proved;
    }
    for (const std::vector<int>& corridors : components_of(m_problem)) {
      if (corridors.size() == 1)
        settle_forest(corridors, m_out.own, options);
      else if (is_forest(m_problem, corridors))
        solve_forest(corridors);
      else
        solve_rings(corridors);
    }
    start_at_zero();
    return m_out;
  }

 private:
  void solve_forest(const std::vector<int>& corridors) {
    bool proved = true;
    OptionLists options = choose_shared_options(m_problem, corridors, m_out.own, m_most_nodes, false, proved);
    std::vector<Alone> joint = alone_with(corridors, options);
    double least = 1;
    for (const int c : corridors) {
      const auto index = static_cast<std::size_t>(c);
      m_out.bound[index] = joint[index].widths;
      m_out.witness[index] = joint[index].witness;
      least = std::min(least, ratio_of(joint[index].share, m_out.own[index]));
    }
    if (proved) m_out.least_ratio_bound = std::min(m_out.least_ratio_bound, least);
    if (m_whole_seconds && proved) {
      options = choose_shared_options(m_problem, corridors, m_out.own, m_most_nodes, true, proved);
      joint = alone_with(corridors, options);
    }
    m_out.proved = m_out.proved && proved;
    settle_forest(corridors, joint, options);
  }

  std::vector<Alone> alone_with(const std::vector<int>& corridors, const OptionLists& options) const {
    std::vector<Alone> joint = m_out.own;
    for (const int c : corridors) joint[static_cast<std::size_t>(c)] = solve_alone(m_problem, c, options, m_most_nodes);
    return joint;
  }

  // Corridors keep their shape; each is moved as a whole to where it agrees with those already placed.
  void settle_forest(const std::vector<int>& corridors, const std::vector<Alone>& alone, const OptionLists& options) {
    std::vector<Alone> shapes;
    for (const int c : corridors) {
      const auto index = static_cast<std::size_t>(c);
      shapes.push_back(m_whole_seconds ? solve_alone_whole_seconds(m_problem, c, options, alone[index]) : alone[index]);
      m_out.all_directions[index] = shapes.back().all_directions;
    }
    std::vector<bool> placed(m_problem.stations.size(), false), done(corridors.size(), false);
    const auto put = [&](std::size_t i) {
      done[i] = true;
      move_to_agree(shapes[i], placed);
      for (const Placed& p : shapes[i].placed) {
        placed[static_cast<std::size_t>(p.station)] = true;
        m_out.setting.options[static_cast<std::size_t>(p.station)] = p.option;
        m_out.setting.offsets[static_cast<std::size_t>(p.station)] = middle(p);
      }
    };
    for (std::size_t i = 0; i < shapes.size(); ++i)
      if (shapes[i].anchored) put(i);
    while (std::find(done.begin(), done.end(), false) != done.end()) put(next_shape(shapes, placed, done));
  }

  static std::size_t next_shape(const std::vector<Alone>& shapes, const std::vector<bool>& placed,
                                const std::vector<bool>& done) {
    std::size_t first = shapes.size();
    for (std::size_t i = 0; i < shapes.size(); ++i) {
      if (done[i]) continue;
      first = std::min(first, i);
      const auto& all = shapes[i].placed;
      if (std::any_of(all.begin(), all.end(),
                      [&](const Placed& p) { return placed[static_cast<std::size_t>(p.station)]; }))
        return i;
    }
    return first;
  }

  Tick middle(const Placed& p) const {
    const Tick period = m_problem.stations[static_cast<std::size_t>(p.station)].period;
    return wrap(p.from + std::min(p.length, period) / 2, period);
  }

  void move_to_agree(Alone& shape, const std::vector<bool>& placed) const {
    if (shape.anchored) return;
    for (const Placed& p : shape.placed) {
      const auto station = static_cast<std::size_t>(p.station);
      if (!placed[station]) continue;
      const Tick shift = m_out.setting.offsets[station] - middle(p);
      for (Placed& moving : shape.placed)
        moving.from = wrap(moving.from + shift, m_problem.stations[static_cast<std::size_t>(moving.station)].period);
      return;
    }
  }

  void solve_rings(const std::vector<int>& corridors) {
    // Whole seconds where the cycle allows them, else an even number of steps a cycle.
    const bool seconds = m_problem.cycle % (2 * ticks_per_second) == 0;
    const Setting known =
        search_ring(m_problem, corridors, m_out.own, m_out.setting, seconds ? ticks_per_second : m_problem.cycle / 120);
    const RingAnswer ring = solve_ring(m_problem, corridors, m_out.own, known, m_most_nodes);
    m_out.proved = m_out.proved && ring.proved;
    m_out.least_ratio_bound = std::min(m_out.least_ratio_bound, ring.least_ratio_bound);
    m_out.setting = known;
    for (const Placed& p : place_all(m_problem, ring.demands, allowed_options(m_problem))) {
      m_out.setting.options[static_cast<std::size_t>(p.station)] = p.option;
      m_out.setting.offsets[static_cast<std::size_t>(p.station)] = middle(p);
    }
    for (const int c : corridors) {  // unproved: what each has alone stays the bound
      if (!ring.proved) break;
      const auto& frames = m_problem.corridors[static_cast<std::size_t>(c)];
      m_out.bound[static_cast<std::size_t>(c)] = {
          ring.demands[static_cast<std::size_t>(frames[0])].width,
          frames.size() > 1 ? ring.demands[static_cast<std::size_t>(frames[1])].width : 0};
    }
    if (!m_whole_seconds) return;
    m_out.setting = round_ring(m_problem, corridors, m_out.own, m_out.setting);
    const Setting other = round_ring(m_problem, corridors, m_out.own, known);
    const auto worth = [&](const Setting& setting) {
      return worth_of(m_problem, corridors, m_out.own, measure_all(m_problem, setting));
    };
    if (worth(m_out.setting) < worth(other)) m_out.setting = other;
  }

  // Where nothing is fixed, the first station of the first corridor's first direction starts the clock.
  void start_at_zero() {
    for (const std::vector<int>& corridors : components_of(m_problem)) {
      bool fixed = false;
      for (const int c : corridors) fixed = fixed || fixed_count(m_problem, c) > 0;
      if (fixed) continue;
      const auto first_frame =
          static_cast<std::size_t>(m_problem.corridors[static_cast<std::size_t>(corridors.front())].front());
      const Tick shift =
          m_out.setting.offsets[static_cast<std::size_t>(m_problem.frames[first_frame].stops.front().station)];
      std::vector<int> met;
      for (const int c : corridors)
        for (const int station : stations_of(m_problem, c)) met.push_back(station);
      std::sort(met.begin(), met.end());
      met.erase(std::unique(met.begin(), met.end()), met.end());
      for (const int station : met) {
        Tick& offset = m_out.setting.offsets[static_cast<std::size_t>(station)];
        offset = wrap(offset - shift, m_problem.stations[static_cast<std::size_t>(station)].period);
      }
    }
  }

  const Compiled& m_problem;
  std::int64_t m_most_nodes;
  bool m_whole_seconds;
  JointSetting m_out;
};

}  // namespace

double ratio_of(double share, const Alone& own) { return own.share > 0 ? std::min(1.0, share / own.share) : 1.0; }

std::vector<std::vector<int>> components_of(const Compiled& problem) {
  Disjoint sets(problem.corridors.size());
  for (const CompiledStation& station : problem.stations) {
    const std::vector<int> met = corridors_of(problem, station);
    for (std::size_t i = 1; i < met.size(); ++i)
      sets.join(static_cast<std::size_t>(met[0]), static_cast<std::size_t>(met[i]));
  }
  std::vector<std::vector<int>> lists(problem.corridors.size());
  for (std::size_t c = 0; c < problem.corridors.size(); ++c) lists[sets.root(c)].push_back(static_cast<int>(c));
  std::erase_if(lists, [](const std::vector<int>& list) { return list.empty(); });
  return lists;
}

bool is_forest(const Compiled& problem, const std::vector<int>& corridors) {
  const std::size_t count = problem.corridors.size(), clock = count + problem.stations.size();
  Disjoint sets(clock + 1);
  for (const int c : corridors)
    if (fixed_count(problem, c) > 0 && !sets.join(static_cast<std::size_t>(c), clock)) return false;
  for (std::size_t s = 0; s < problem.stations.size(); ++s) {
    if (problem.stations[s].is_fixed) continue;
    const std::vector<int> met = corridors_of(problem, problem.stations[s]);
    if (met.size() < 2) continue;
    for (const int c : met)
      if (!sets.join(static_cast<std::size_t>(c), count + s)) return false;
  }
  return true;
}

JointSetting solve_all(const Compiled& problem, std::int64_t most_nodes, bool whole_seconds) {
  return Solver(problem, most_nodes, whole_seconds).run();
}

}  // namespace entrain::bands
