#include "coordination/bands/band_network.hpp"

#include <algorithm>

namespace entrain::bands {
namespace {

enum class Role { none, private_to_corridor, point, fixed };

class Builder {
 public:
  Builder(const Compiled& problem, const std::vector<int>& corridors, const std::vector<BandDemand>& demands,
          const std::vector<std::vector<int>>& options)
      : m_problem(problem), m_corridors(corridors), m_demands(demands), m_options(options) {}

  // False where a window is too short whatever the offsets.
  bool build() {
    find_roles();
    number_points();
    for (const int corridor : m_corridors)
      if (!add_frame_arcs(corridor)) return false;
    for (std::size_t s = 0; s < m_roles.size(); ++s)
      if (m_roles[s] == Role::point || m_roles[s] == Role::fixed) add_station(s);
    return true;
  }

  bool is_empty() const { return m_spans.empty(); }
  ArcNetwork network() { return ArcNetwork(m_spans, m_choices); }
  int point_of_frame(std::size_t frame) const { return m_frame_points[frame]; }

 private:
  bool is_active(int frame) const { return m_demands[static_cast<std::size_t>(frame)].active; }

  Role role_of(const CompiledStation& station) const {
    int visits = 0;
    bool repeated = false, shared = false;
    const Visit* before = nullptr;
    for (const Visit& visit : station.visits) {
      if (!is_active(visit.frame)) continue;
      ++visits;
      if (before) {
        repeated = repeated || before->frame == visit.frame;
        shared = shared || m_problem.frames[static_cast<std::size_t>(before->frame)].corridor !=
                               m_problem.frames[static_cast<std::size_t>(visit.frame)].corridor;
      }
      before = &visit;
    }
    if (visits == 0) return Role::none;
    if (station.is_fixed) return Role::fixed;
    return repeated || shared ? Role::point : Role::private_to_corridor;
  }

  void find_roles() {
    for (const CompiledStation& station : m_problem.stations) m_roles.push_back(role_of(station));
  }

  void number_points() {
    const bool clock = std::find(m_roles.begin(), m_roles.end(), Role::fixed) != m_roles.end();
    if (clock) m_spans.push_back(m_problem.cycle);
    for (std::size_t f = 0; f < m_problem.frames.size(); ++f) {
      m_frame_points.push_back(static_cast<int>(m_spans.size()));
      if (m_demands[f].active) m_spans.push_back(m_problem.cycle);
    }
    for (std::size_t s = 0; s < m_roles.size(); ++s) {
      m_station_points.push_back(static_cast<int>(m_spans.size()));
      if (m_roles[s] == Role::point) m_spans.push_back(m_problem.stations[s].period);
    }
  }

  // What the free stations that only this corridor meets allow between its two leading edges.
  bool add_frame_arcs(int corridor) {
    const auto& frames = m_problem.corridors[static_cast<std::size_t>(corridor)];
    std::vector<bool> include;
    for (const Role role : m_roles) include.push_back(role == Role::private_to_corridor);
    Widths widths{is_active(frames[0]) ? m_demands[static_cast<std::size_t>(frames[0])].width : 0, 0};
    if (frames.size() < 2 || !is_active(frames[0]) || !is_active(frames[1])) return caps_fit(frames, include);
    widths.second = m_demands[static_cast<std::size_t>(frames[1])].width;
    const std::vector<CorridorBands::PhiArc> fits =
        CorridorBands(m_problem, corridor, m_options, &include).fitting(widths);
    if (fits.empty()) return false;
    if (fits.size() == 1 && fits[0].from == 0 && fits[0].to == m_problem.cycle - 1) return true;
    Relation relation{point(frames[1]), point(frames[0]), m_problem.cycle, {}};
    for (const auto& arc : fits) relation.arcs.push_back({arc.from + widths.second, arc.to - arc.from});
    if (fits.size() > 1 && fits.front().from == 0 && fits.back().to == m_problem.cycle - 1) {
      relation.arcs.back().length += 1 + relation.arcs.front().length;
      relation.arcs.erase(relation.arcs.begin());
    }
    m_choices.push_back({{{relation}}});
    return true;
  }

  bool caps_fit(const std::vector<int>& frames, const std::vector<bool>& include) const {
    for (const int frame : frames)
      if (is_active(frame))
        for (const StopKey& stop : m_problem.frames[static_cast<std::size_t>(frame)].stops) {
          const auto station = static_cast<std::size_t>(stop.station);
          if (include[station] && longest_slot(m_problem.stations[station].visits[static_cast<std::size_t>(stop.visit)],
                                               m_options[station]) < m_demands[static_cast<std::size_t>(frame)].width)
            return false;
        }
    return true;
  }

  int point(int frame) const { return m_frame_points[static_cast<std::size_t>(frame)]; }

  void add_station(std::size_t index) {
    const CompiledStation& station = m_problem.stations[index];
    Choice choice;
    for (const int option : m_options[index]) {
      std::vector<Relation> relations;
      for (const Visit& visit : station.visits)
        if (is_active(visit.frame)) relations.push_back(relation_of(index, visit, option));
      choice.alternatives.push_back(std::move(relations));
    }
    m_choices.push_back(std::move(choice));
  }

  Relation relation_of(std::size_t index, const Visit& visit, int option) const {
    const CompiledStation& station = m_problem.stations[index];
    const bool fixed = m_roles[index] == Role::fixed;
    Relation relation{
        fixed ? 0 : point(visit.frame), fixed ? point(visit.frame) : m_station_points[index], station.period, {}};
    for (const Slot& slot : visit.slots[static_cast<std::size_t>(option)]) {
      const Tick spare = slot.duration - m_demands[static_cast<std::size_t>(visit.frame)].width;
      if (spare < 0) continue;
      if (slot.open)
        relation.arcs.push_back({0, station.period});
      else
        relation.arcs.push_back(
            {wrap(fixed ? station.fixed + slot.start - visit.shift : visit.shift - slot.start - spare, station.period),
             spare});
    }
    return relation;
  }

  const Compiled& m_problem;
  const std::vector<int>& m_corridors;
  const std::vector<BandDemand>& m_demands;
  const std::vector<std::vector<int>>& m_options;
  std::vector<Role> m_roles;
  std::vector<int> m_frame_points, m_station_points;
  std::vector<Tick> m_spans;
  std::vector<Choice> m_choices;
};

}  // namespace

Verdict decide(const Compiled& problem, const std::vector<int>& corridors, std::vector<BandDemand>& demands,
               const std::vector<std::vector<int>>& options, std::int64_t& nodes) {
  Builder builder(problem, corridors, demands, options);
  if (!builder.build()) return Verdict::fails;
  if (builder.is_empty()) return Verdict::fits;
  ArcNetwork network = builder.network();
  const Verdict verdict = network.search(nodes);
  if (verdict != Verdict::fits) return verdict;
  for (std::size_t f = 0; f < demands.size(); ++f)
    if (demands[f].active)
      demands[f].edge = wrap(network.positions()[static_cast<std::size_t>(builder.point_of_frame(f))], problem.cycle);
  return verdict;
}

std::vector<Placed> place_all(const Compiled& problem, const std::vector<BandDemand>& demands,
                              const std::vector<std::vector<int>>& options) {
  StationFit fit;
  std::vector<Placed> all;
  for (std::size_t s = 0; s < problem.stations.size(); ++s) {
    const CompiledStation& station = problem.stations[s];
    const bool met = std::any_of(station.visits.begin(), station.visits.end(),
                                 [&](const Visit& v) { return demands[static_cast<std::size_t>(v.frame)].active; });
    if (!met) continue;
    if (const auto placed =
            fit.fit(station, static_cast<int>(s), options[s], demands, {}, station.is_fixed, station.fixed))
      all.push_back(*placed);
  }
  return all;
}

}  // namespace entrain::bands
