#include "timing/grouping.hpp"

#include <algorithm>
#include <cmath>
#include <map>

#include "base/circle.hpp"
#include "base/natural_order.hpp"
#include "base/number_text.hpp"
#include "timing/group_times.hpp"
#include "timing/paths.hpp"

namespace entrain::timing {
namespace {

using demand::TurnTreatment;

std::optional<double> heading_of(const std::string& label) {
  static const std::map<std::string, double> headings = {{"NB", 0}, {"NEB", 45}, {"EB", 90}, {"SEB", 135}, {"SB", 180}, {"SWB", 225}, {"WB", 270}, {"NWB", 315}};
  const auto found = headings.find(label);
  if (found == headings.end()) return std::nullopt;
  return found->second;
}

// Number of the opposed turn's own group beside the through group: 5 beside 2, 1 beside 6, 7 beside 4, 3 beside 8.
int arrow_number(int through_number) { return through_number <= 4 ? through_number + 3 : through_number - 5; }

std::optional<int> phase_number_of(const std::string& id) {
  const auto number = parse_whole_number(id);
  if (!number || *number < 1 || *number > 16) return std::nullopt;
  return static_cast<int>(*number);
}

class Grouper {
 public:
  Grouper(const network::Signal& signal, const Streams& streams, const standards::DesignStandard& standard, const DesignRequest& request,
          std::vector<std::string>& assumptions)
      : m_signal(signal), m_streams(streams), m_standard(standard), m_request(request), m_assumptions(assumptions) {}

  Result<Grouping> group() {
    find_approaches();
    const std::optional<std::size_t> main = main_approach();
    if (main) m_out.is_paired = number_pairs(*main);
    for (const Approach& approach : m_out.approaches) serve(approach);
    std::sort(m_out.groups.begin(), m_out.groups.end(), [](const Group& a, const Group& b) { return natural_less(a.id, b.id); });
    attach_lanes();
    if (main) choose_reference(m_out.approaches[*main]);
    if (!m_errors.empty()) return failure(std::move(m_errors));
    return std::move(m_out);
  }

 private:
  const Stream& stream(std::size_t i) const { return m_streams.list[i]; }

  void find_approaches() {
    for (int leg = 0; leg < static_cast<int>(m_signal.legs.size()); ++leg) {
      Approach approach;
      approach.leg = leg;
      for (std::size_t i = 0; i < m_streams.list.size(); ++i)
        if (stream(i).movement->from_leg == leg) approach.streams.push_back(i);
      if (approach.streams.empty()) continue;
      approach.label = stream(approach.streams.front()).movement->approach;
      approach.split = std::any_of(approach.streams.begin(), approach.streams.end(), [&](std::size_t i) { return is_protected(stream(i)) && !stream(i).own_lane; });
      m_out.approaches.push_back(std::move(approach));
    }
  }

  static bool is_protected(const Stream& stream) { return !stream.yields_to.empty() && stream.treatment == TurnTreatment::with_protection; }
  static bool has_arrow(const Stream& stream) {
    return !stream.yields_to.empty() && stream.own_lane &&
           (stream.treatment == TurnTreatment::with_protection || stream.treatment == TurnTreatment::protected_permissive);
  }

  double flow_of(const Approach& approach) const {
    double flow = 0;
    for (const std::size_t i : approach.streams) flow += stream(i).flow_vph;
    return flow;
  }

  std::optional<std::size_t> main_approach() {
    auto& all = m_out.approaches;
    if (all.empty()) return std::nullopt;
    if (m_request.phase_2_label) {
      for (std::size_t i = 0; i < all.size(); ++i)
        if (all[i].label == *m_request.phase_2_label) return i;
      if (const auto nearest = nearest_to(*m_request.phase_2_label)) {
        m_assumptions.push_back("phase 2 on approach " + all[*nearest].label + ": no approach " + printable(*m_request.phase_2_label));
        return nearest;
      }
    }
    std::size_t busiest = 0;
    for (std::size_t i = 1; i < all.size(); ++i)
      if (flow_of(all[i]) > flow_of(all[busiest])) busiest = i;
    m_assumptions.push_back("phase 2 on approach " + all[busiest].label + ", the busiest");
    return busiest;
  }

  // By direction of travel on the leg.
  std::optional<std::size_t> nearest_to(const std::string& label) const {
    const auto heading = heading_of(label);
    if (!heading) return std::nullopt;
    const auto miss = [&](const Approach& approach) {
      const double own = m_signal.legs[static_cast<std::size_t>(approach.leg)].bearing_deg + 180;
      return std::abs(wrap(own - *heading + 180, 360.0) - 180);
    };
    const auto nearest = std::min_element(m_out.approaches.begin(), m_out.approaches.end(), [&](const Approach& a, const Approach& b) { return miss(a) < miss(b); });
    return static_cast<std::size_t>(nearest - m_out.approaches.begin());
  }

  // 2 and its opposite 6; of the crossing street the approach next in the direction of the side gets 4, its opposite 8.
  bool number_pairs(std::size_t main) {
    auto& all = m_out.approaches;
    if (!m_request.ring_barrier_wanted || all.size() > 4) return false;
    if (std::any_of(all.begin(), all.end(), [](const Approach& a) { return a.split; })) return false;
    std::vector<std::size_t> across, opposite;
    for (std::size_t i = 0; i < all.size(); ++i)
      if (i != main) (are_opposite_legs(m_signal, all[main].leg, all[i].leg) ? opposite : across).push_back(i);
    if (opposite.size() > 1 || across.size() > 2) return false;
    if (across.size() == 2 && !are_opposite_legs(m_signal, all[across[0]].leg, all[across[1]].leg)) return false;
    const auto steps = [&](std::size_t i) { return steps_between(m_signal, all[main].leg, all[i].leg); };
    std::sort(across.begin(), across.end(), [&](std::size_t a, std::size_t b) { return steps(a) < steps(b); });
    all[main].number = 2;
    if (!opposite.empty()) all[opposite[0]].number = 6;
    if (!across.empty()) all[across[0]].number = 4;
    if (across.size() == 2) all[across[1]].number = 8;
    return true;
  }

  std::string base_id(const Approach& approach) const {
    if (approach.number > 0) return std::to_string(approach.number);
    const bool shared = std::count_if(m_out.approaches.begin(), m_out.approaches.end(), [&](const Approach& a) { return a.label == approach.label; }) > 1;
    return shared ? approach.label + "." + m_signal.legs[static_cast<std::size_t>(approach.leg)].id : approach.label;
  }
  std::string arrow_id(const Approach& approach) const {
    if (approach.number > 0) return std::to_string(arrow_number(approach.number));
    return base_id(approach) + "-arrow";
  }

  void add(const std::string& id, const Stream& stream, RightOfWay right) {
    auto found = std::find_if(m_out.groups.begin(), m_out.groups.end(), [&](const Group& g) { return g.id == id; });
    if (found == m_out.groups.end()) {
      m_out.groups.emplace_back();
      found = m_out.groups.end() - 1;
      found->id = id;
      found->phase_number = phase_number_of(id);
    }
    found->serves.push_back({stream.movement->id, right, false});
  }

  bool meets_crossing_on_leaving(const network::Movement& movement) const {
    return std::any_of(m_signal.crossings.begin(), m_signal.crossings.end(), [&](const auto& crossing) { return crossing.leg == movement.to_leg; });
  }

  // Right of way in the approach's own group.
  RightOfWay base_right(const Stream& stream) const {
    if (!stream.yields_to.empty()) return is_protected(stream) ? RightOfWay::with_protection : RightOfWay::permissive;
    const bool turns = stream.movement->turn != network::TurnKind::through;
    const bool over_crossing = turns && stream.treatment != TurnTreatment::with_protection && meets_crossing_on_leaving(*stream.movement) &&
                               is_allowed(m_standard, "turn_over_crossing");
    return over_crossing ? RightOfWay::permissive : RightOfWay::with_protection;
  }

  void serve(const Approach& approach) {
    for (const std::size_t i : approach.streams) {
      const Stream& s = stream(i);
      if (has_arrow(s)) add(s.named_group.empty() ? arrow_id(approach) : s.named_group, s, RightOfWay::with_protection);
      const bool in_base = !has_arrow(s) || s.treatment == TurnTreatment::protected_permissive;
      if (in_base) add(s.named_group.empty() || has_arrow(s) ? base_id(approach) : s.named_group, s, base_right(s));
    }
  }

  // A lane group counts in the group that gives it its best right of way: the arrow's where it has one.
  int group_serving(const std::string& movement) const {
    int best = -1;
    for (std::size_t g = 0; g < m_out.groups.size(); ++g)
      for (const Served& served : m_out.groups[g].serves)
        if (served.movement == movement && (best < 0 || served.right_of_way == RightOfWay::with_protection)) best = static_cast<int>(g);
    return best;
  }

  void attach_lanes() {
    for (std::size_t l = 0; l < m_streams.lane_groups.size(); ++l) {
      int group = -1;
      std::string first;
      for (const std::string& movement : m_streams.lane_groups[l].movements) {
        const int own = group_serving(movement);
        if (own < 0 || own == group) continue;
        if (group >= 0)
          m_errors.push_back(error("signal " + m_signal.id + ", lane group " + m_streams.lane_groups[l].id,
                                   first + " in group " + m_out.groups[static_cast<std::size_t>(group)].id + " and " + movement + " in group " + m_out.groups[static_cast<std::size_t>(own)].id,
                                   "one group for movements that share lanes", "Correct movements.group, or give the turn its own lane group."));
        group = own;
        first = movement;
      }
      if (group >= 0) m_out.groups[static_cast<std::size_t>(group)].lane_groups.push_back(static_cast<int>(l));
    }
  }

  void choose_reference(const Approach& main) {
    for (const std::size_t i : main.streams) {
      const int group = group_serving(stream(i).movement->id);
      if (stream(i).movement->turn == network::TurnKind::through || i == main.streams.front()) m_out.reference_group = group;
      if (stream(i).movement->turn == network::TurnKind::through) return;
    }
  }

  const network::Signal& m_signal;
  const Streams& m_streams;
  const standards::DesignStandard& m_standard;
  const DesignRequest& m_request;
  std::vector<std::string>& m_assumptions;
  Grouping m_out;
  Diagnostics m_errors;
};

}  // namespace

Result<Grouping> group_streams(const network::Signal& signal, const Streams& streams, const standards::DesignStandard& standard,
                               const DesignRequest& request, std::vector<std::string>& assumptions) {
  return Grouper(signal, streams, standard, request, assumptions).group();
}

}  // namespace entrain::timing
