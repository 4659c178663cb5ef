#include "towns.hpp"

#include <cmath>
#include <stdexcept>

namespace entrain::report::tests {
namespace {

plan::Group vehicle(const std::string& id, int number, double start_s, double green_s, std::vector<plan::Served> serves) {
  plan::Group group;
  group.id = id, group.phase_number = number, group.serves = std::move(serves), group.greens = {{start_s, green_s}};
  group.yellow_s = 4, group.red_clearance_s = 1.5, group.split_s = green_s + 5.5, group.minimum_green_s = number % 2 == 0 ? 10 : 5;
  group.flow_vph = 400, group.saturation_flow_vph = 3400, group.start_up_lost_s = 2, group.end_gain_s = 2, group.degree_of_saturation = 0.5 + 0.01 * number;
  group.clearance_basis = plan::ClearanceBasis{17.9, -0.01, 24, 6.096, {}, {}};
  return group;
}

plan::Group walker(const std::string& id, const std::string& parent, double start_s, const std::string& crossing) {
  plan::Group group;
  group.id = id, group.kind = plan::GroupKind::pedestrian, group.parent = parent, group.crossings = {crossing};
  group.greens = {{start_s, 7}}, group.clearance_s = 14, group.minimum_green_s = 7;
  return group;
}

plan::Served free_way(const std::string& movement) { return {movement, plan::RightOfWay::with_protection, false}; }
plan::Served yields(const std::string& movement) { return {movement, plan::RightOfWay::permissive, false}; }

void add_movements(plan::Signal& signal) {
  const char* approaches[][4] = {{"EB", "W", "E", "S"}, {"WB", "E", "W", "N"}, {"NB", "S", "N", "E"}, {"SB", "N", "S", "W"}};
  const char* left_exits[] = {"N", "S", "W", "E"};
  for (int i = 0; i < 4; ++i) {
    const std::string a = approaches[i][0], from = approaches[i][1];
    signal.movements.push_back({a + "-L", from, left_exits[i], plan::Turn::left});
    signal.movements.push_back({a + "-T", from, approaches[i][2], plan::Turn::through});
    signal.movements.push_back({a + "-R", from, approaches[i][3], plan::Turn::right});
    signal.lane_groups.push_back({a + "-L", {a + "-L"}, 1, 120, 1700, 70.0});
    signal.lane_groups.push_back({a + "-TR", {a + "-T", a + "-R"}, 2, 700, 3500, {}});
  }
  signal.legs = {{"N", 0, "Sorrel Street"}, {"E", 90, "Harrow Lane"}, {"S", 180, "Sorrel Street"}, {"W", 270, "Harrow Lane"}};
  for (const char* leg : {"N", "E", "S", "W"}) signal.crossings.push_back({std::string("X-") + leg, leg, 15});
}

// 1 2 | 3 4 / 5 6 | 7 8 with the through of the main street first in local time.
void add_groups(plan::Signal& signal, double cycle_s) {
  const double turn = 9.5, cross = 20.5, main = cycle_s - 2 * (turn + 5.5) - (cross + 5.5) - 5.5;
  const double three = main + 5.5, four = three + turn + 5.5, one = four + cross + 5.5;
  signal.groups = {vehicle("1", 1, one, turn, {free_way("WB-L")}), vehicle("2", 2, 0, main, {free_way("EB-T"), yields("EB-R")}), vehicle("3", 3, three, turn, {free_way("NB-L")}),
                   vehicle("4", 4, four, cross, {free_way("SB-T"), yields("SB-R")}), vehicle("5", 5, one, turn, {free_way("EB-L")}), vehicle("6", 6, 0, main, {free_way("WB-T"), yields("WB-R")}),
                   vehicle("7", 7, three, turn, {free_way("SB-L")}), vehicle("8", 8, four, cross, {free_way("NB-T"), yields("NB-R")}),
                   walker("P2", "2", 0, "X-S"), walker("P4", "4", four, "X-W"), walker("P6", "6", 0, "X-N"), walker("P8", "8", four, "X-E")};
  for (const char* main_phase : {"2", "6"})
    for (const char* cross_phase : {"4", "8"}) signal.conflicts.push_back({main_phase, cross_phase, 5.5, 5.5});
  signal.conflicts.push_back({"P2", "4", 3, 5.5});
}

plan::Corridor harrow_lane(const std::vector<double>& distances) {
  plan::Corridor corridor{"harrow", "Harrow Lane", {}};
  plan::Direction east, west;
  east.name = "forward", east.label = "EB", west.name = "backward", west.label = "WB";
  const std::size_t n = distances.size();
  for (std::size_t i = 0; i < n; ++i) {
    const std::size_t j = n - 1 - i;
    east.stops.push_back({"H" + std::to_string(i + 1), "2", "EB-T", distances[i], distances[i] / 12.5, 0});
    const double back = i == 0 ? 0 : distances[j + 1];
    west.stops.push_back({"H" + std::to_string(j + 1), "6", "WB-T", back, back / 12.5, 0});
  }
  corridor.directions = {east, west};
  return corridor;
}

const plan::Signal& signal_of(const plan::Plan& plan, const std::string& id) {
  for (const plan::Signal& signal : plan.signals)
    if (signal.id == id) return signal;
  throw std::logic_error("no such signal");
}

// Tenths of the cycle in which a platoon that enters then meets green at every stop.
std::vector<bool> open_tenths(const plan::Plan& plan, const plan::Direction& direction) {
  const int cycle = static_cast<int>(std::lround(plan.cycle_s * 10));
  std::vector<bool> open(static_cast<std::size_t>(cycle), true);
  double travel = 0;
  for (const plan::Stop& stop : direction.stops) {
    travel += stop.travel_time_s;
    const plan::Signal& signal = signal_of(plan, stop.signal);
    for (const plan::Group& group : signal.groups) {
      if (group.id != stop.group) continue;
      for (int t = 0; t < cycle; ++t) {
        int local = (t + static_cast<int>(std::lround((travel - signal.offset_s) * 10))) % cycle;
        if (local < 0) local += cycle;
        if (local >= std::lround(group.greens[0].duration_s * 10)) open[static_cast<std::size_t>(t)] = false;
      }
    }
  }
  return open;
}

}  // namespace

void claim_widest_band(const plan::Plan& plan, plan::Direction& direction) {
  const std::vector<bool> open = open_tenths(plan, direction);
  const std::size_t n = open.size();
  std::size_t best = 0, best_start = 0;
  for (std::size_t start = 0; start < n; ++start) {
    std::size_t length = 0;
    while (length < n && open[(start + length) % n]) ++length;
    if (length > best) best = length, best_start = start;
  }
  direction.bandwidth_s = static_cast<double>(best) / 10, direction.band_start_s = static_cast<double>(best_start) / 10;
  direction.efficiency = direction.bandwidth_s / plan.cycle_s, direction.attainability = 0.5;
}

plan::Signal full_signal(const std::string& id, const std::string& name, double cycle_s, double offset_s) {
  plan::Signal signal;
  signal.id = id, signal.name = name, signal.cycle_s = cycle_s, signal.offset_s = offset_s, signal.reference_group = "2";
  signal.lon = -30.0, signal.lat = 45.0;
  add_movements(signal);
  add_groups(signal, cycle_s);
  signal.controller = {"ring_barrier", plan::RingBarrier{{{"1", "2", "3", "4"}, {"5", "6", "7", "8"}}, {{"2", "6"}, {"4", "8"}}}, {"2", "6"}};
  signal.running = plan::Running{cycle_s + 10, 12.0, {{"2", 40.0}, {"4", 30.0}}, "1 2 | 3 4 / 5 6 | 7 8"};
  signal.evidence = plan::Evidence{{"1", "2", "3", "4"}, 0.61, 22, 82, "groups 1, 2, 3 and 4 need 82 s"};
  signal.freedom_early_s = 1, signal.freedom_late_s = 2.5;
  return signal;
}

PlanWithFigures corridor_town(const std::string& period, std::size_t signals, const std::vector<double>& spacing_m) {
  PlanWithFigures town;
  plan::Plan& plan = town.plan;
  plan.project = "Quillhaven", plan.period = period, plan.cycle_s = 90, plan.cycle_reason = "least delay";
  plan.schedule = plan::Schedule{"Mon-Fri", "06:30", "09:30"};
  plan.standard.id = "kinematic-us";
  std::vector<double> distances;
  for (std::size_t i = 0; i < signals; ++i) {
    distances.push_back(i == 0 ? 0 : spacing_m[i % spacing_m.size()]);
    plan.signals.push_back(full_signal("H" + std::to_string(i + 1), "Harrow Lane at Sorrel Street " + std::to_string(i + 1), 90, i % 2 == 0 ? 0 : 5));
  }
  plan.corridors = {harrow_lane(distances)};
  for (plan::Direction& direction : plan.corridors[0].directions) claim_widest_band(plan, direction);
  plan.assumptions = {"H1: speed limit of class residential = 40 km/h", "H2: one lane assumed", "no counts: defaults"};
  plan.cautions = {"H1: the queue may reach the next signal"};
  town.figures = evaluation::evaluate(plan);
  town.review = {"checked", "every conflict looked at", {}, 0};
  return town;
}

}  // namespace entrain::report::tests
