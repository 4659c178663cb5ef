// The review against slow judges that share no code with it, on random changes and random corridors; and against garbage.
#include <catch2/catch.hpp>
#include <algorithm>
#include <cmath>
#include <limits>
#include <random>

#include "plan/plan_text.hpp"
#include "review/review.hpp"
#include "review/review_text.hpp"
#include "sample_plans.hpp"

namespace entrain::review {
namespace {

using plan::Plan;
using Random = std::mt19937;

int below(Random& random, int most) { return static_cast<int>(random() % static_cast<unsigned>(most)); }
int tenths(double seconds) { return static_cast<int>(std::lround(seconds * 10)); }

// 'r' red, 'g' green or walk, 'c' what follows it, by tenth; the pedestrian buffer counts as 'c'.
std::string lamp_row(const plan::Signal& s, const plan::Group& g) {
  const int cycle = tenths(s.cycle_s);
  std::string row(static_cast<std::size_t>(cycle), 'r');
  const bool people = g.kind == plan::GroupKind::pedestrian;
  const int after = people ? tenths(g.clearance_s) + 30 : tenths(g.yellow_s) + tenths(g.red_clearance_s);
  for (const plan::Green& green : g.greens) {
    const int lit = tenths(green.duration_s) == 0 ? 0 : std::min(cycle, tenths(green.duration_s) + after);
    for (int k = 0; k < lit; ++k) {
      char& lamp = row[static_cast<std::size_t>((tenths(green.start_s) + k) % cycle)];
      if (k < tenths(green.duration_s)) lamp = 'g';
      else if (lamp == 'r') lamp = 'c';
    }
  }
  return row;
}

// Whether two groups of the (complete, hand-written) list of conflicts are lit together at some tenth.
bool lamps_clash(const plan::Signal& s) {
  const auto row = [&](const std::string& id) { return lamp_row(s, *std::find_if(s.groups.begin(), s.groups.end(), [&](const auto& g) { return g.id == id; })); };
  for (const plan::Conflict& c : s.conflicts) {
    const std::string a = row(c.a), b = row(c.b);
    for (std::size_t t = 0; t < a.size(); ++t)
      if (a[t] != 'r' && b[t] != 'r') return true;
  }
  return false;
}

bool has(const Review& review, const std::string& rule) {
  return std::any_of(review.findings.begin(), review.findings.end(), [&](const Finding& f) { return f.rule == rule; });
}

// Moves, lengthens or shortens one green, one clearance or one walk by some tenths.
void change_something(Plan& plan, Random& random) {
  plan::Signal& s = plan.signals[static_cast<std::size_t>(below(random, static_cast<int>(plan.signals.size())))];
  plan::Group& g = s.groups[static_cast<std::size_t>(below(random, static_cast<int>(s.groups.size())))];
  plan::Green& green = g.greens[static_cast<std::size_t>(below(random, static_cast<int>(g.greens.size())))];
  const double by = (below(random, 2) == 0 ? 1 : -1) * (1 + below(random, below(random, 3) == 0 ? 300 : 4)) / 10.0;
  switch (below(random, 4)) {
    case 0: green.start_s = std::fmod(green.start_s + by + s.cycle_s, s.cycle_s); break;
    case 1: green.duration_s = std::clamp(green.duration_s + by, 0.0, s.cycle_s); break;
    case 2: (g.kind == plan::GroupKind::pedestrian ? g.clearance_s : g.yellow_s) = std::max(0.0, (g.kind == plan::GroupKind::pedestrian ? g.clearance_s : g.yellow_s) + by); break;
    default: g.red_clearance_s = std::max(0.0, g.red_clearance_s + by);
  }
  green.start_s = std::round(green.start_s * 10) / 10, green.duration_s = std::round(green.duration_s * 10) / 10;
  if (green.start_s >= s.cycle_s) green.start_s = 0;
}

}  // namespace

TEST_CASE("whatever makes two conflicting groups lit together is caught, and nothing else is called so") {
  Random random(20261201);
  int clashes = 0;
  for (int round = 0; round < 1500; ++round) {
    Plan plan = round % 3 == 0 ? samples::two_corridors() : round % 3 == 1 ? samples::half_cycle() : samples::double_service();
    for (int k = 1 + below(random, 2); k > 0; --k) change_something(plan, random);
    const bool clash = std::any_of(plan.signals.begin(), plan.signals.end(), lamps_clash);
    clashes += clash;
    const Review review = review_plan(plan);
    if (has(review, "conflicting-lamps") == clash && (!clash || has(review, "intergreen-violated"))) continue;
    INFO("round " << round << "\n" << to_text(review, "plan"));
    CHECK(has(review, "conflicting-lamps") == clash);
    CHECK((!clash || has(review, "intergreen-violated")));
  }
  CHECK(clashes > 300);
  CHECK(clashes < 1200);
}

namespace {

// A corridor of signals with one vehicle group of one to three greens each; every time is a whole number of tenths.
Plan random_corridor(Random& random) {
  Plan plan = samples::two_corridors();
  const int cycle = 40 + 2 * below(random, 30);
  plan.cycle_s = cycle;
  plan.signals.clear(), plan.links.clear(), plan.corridors.clear();
  plan::Direction direction;
  direction.name = "forward";
  for (int i = 0, count = 1 + below(random, 5); i < count; ++i) {
    plan::Signal s;
    s.id = "S" + std::to_string(i);
    s.cycle_s = below(random, 4) == 0 ? cycle / 2 : cycle;
    s.offset_s = below(random, static_cast<int>(s.cycle_s));
    plan::Group g;
    g.id = "2";
    const int greens = 1 + below(random, 3), room = tenths(s.cycle_s) / greens;
    for (int k = 0; k < greens; ++k) {
      const int length = below(random, 8) == 0 && greens == 1 ? tenths(s.cycle_s) : room / 3 + below(random, room - room / 3);
      g.greens.push_back({(k * room) / 10.0, length / 10.0});
    }
    s.groups = {g};
    plan.signals.push_back(s);
    direction.stops.push_back({s.id, "2", "", 100, i == 0 ? 0 : below(random, 1000) / 10.0, below(random, 3) == 0 ? below(random, 30) / 10.0 : 0});
  }
  plan.corridors = {{"c", "C", {direction}}};
  return plan;
}

// Tenths of departure from the first stop line that find green everywhere; the longest run of them round the cycle.
int slow_band(const Plan& plan) {
  const int cycle = tenths(plan.cycle_s);
  std::vector<bool> open(static_cast<std::size_t>(cycle), true);
  int travelled = 0;
  for (const plan::Stop& stop : plan.corridors[0].directions[0].stops) {
    travelled += tenths(stop.travel_time_s);
    for (const plan::Signal& s : plan.signals) {
      if (s.id != stop.signal) continue;
      for (int t = 0; t < cycle; ++t) {
        const int own = tenths(s.cycle_s), local = (((t + travelled - tenths(s.offset_s)) % own) + own) % own;
        const bool green = std::any_of(s.groups[0].greens.begin(), s.groups[0].greens.end(), [&](const plan::Green& g) {
          const int into = ((local - tenths(g.start_s)) % own + own) % own, clearing = tenths(g.duration_s) >= own ? 0 : tenths(stop.queue_clearance_s);
          return into >= clearing && into < tenths(g.duration_s);
        });
        open[static_cast<std::size_t>(t)] = open[static_cast<std::size_t>(t)] && green;
      }
    }
  }
  int best = 0, run = 0;
  for (int t = 0; t < 2 * cycle; ++t) {
    run = open[static_cast<std::size_t>(t % cycle)] ? std::min(run + 1, cycle) : 0;
    best = std::max(best, run);
  }
  return best;
}

double band_of(const Plan& plan) { return review_plan(plan).bands.at(0).found_s; }

}  // namespace

TEST_CASE("bands equal a count of open tenths") {
  Random random(7);
  int wide = 0;
  for (int round = 0; round < 2000; ++round) {
    const Plan plan = random_corridor(random);
    const int expected = slow_band(plan);
    wide += expected > 0;
    if (std::fabs(band_of(plan) - expected / 10.0) < 1e-6) continue;
    INFO("round " << round << "\n" << plan::write_plan(plan));
    CHECK(band_of(plan) == Approx(expected / 10.0).margin(1e-6));
  }
  CHECK(wide > 500);
}

TEST_CASE("freedom is what an offset may move with the band as wide as it is, and claims made anew hold") {
  Random random(8);
  int looked_at = 0;
  for (int round = 0; round < 400; ++round) {
    const Plan plan = random_corridor(random);
    const Review review = review_plan(plan);
    const double width = review.bands.at(0).found_s;
    for (std::size_t i = 0; width > 0 && i < plan.signals.size(); ++i) {
      REQUIRE(review.per_signal[i].freedom_early_s);
      Plan earlier = plan, later = plan;
      earlier.signals[i].offset_s -= *review.per_signal[i].freedom_early_s;
      later.signals[i].offset_s += *review.per_signal[i].freedom_late_s;
      CHECK(band_of(earlier) > width - 1e-5);
      CHECK(band_of(later) > width - 1e-5);
      ++looked_at;
    }
    CHECK_FALSE(has(review_plan(recomputed_claims(plan)), "bandwidth-claim"));
    CHECK_FALSE(has(review_plan(recomputed_claims(plan)), "band-start-claim"));
    CHECK_FALSE(has(review_plan(recomputed_claims(plan)), "freedom-claim"));
  }
  CHECK(looked_at > 200);
}

TEST_CASE("widening a green never narrows a band; the band is at most the shortest green") {
  Random random(9);
  for (int round = 0; round < 500; ++round) {
    Plan plan = random_corridor(random);
    const Review review = review_plan(plan);
    const BandCheck& band = review.bands.at(0);
    CHECK(band.found_s <= band.shortest_green_s + 1e-9);
    plan::Green& green = plan.signals[static_cast<std::size_t>(below(random, static_cast<int>(plan.signals.size())))].groups[0].greens[0];
    green.duration_s = std::min(green.duration_s + 1, plan.cycle_s);
    CHECK(band_of(plan) >= band.found_s - 1e-9);
  }
}

namespace {

double absurd(Random& random) {
  static const double values[] = {std::numeric_limits<double>::quiet_NaN(), std::numeric_limits<double>::infinity(), -std::numeric_limits<double>::infinity(), 1e12, -1e12, 1e300, 0, -1, 1e9, 0.05, 1e-300, 3600, 45, 2.5e9};
  return values[below(random, static_cast<int>(std::size(values)))];
}

// Every number and name of a plan, one after the other.
template <class Number, class Text>
void visit(Plan& p, const Number& number, const Text& text) {
  number(p.cycle_s), text(p.clock.reference);
  for (auto& [key, value] : p.standard.values) number(value);
  for (plan::Signal& s : p.signals) {
    number(s.cycle_s), number(s.offset_s), text(s.id), text(s.reference_group), text(s.clock), text(s.controller.kind);
    for (plan::Leg& leg : s.legs) number(leg.bearing_deg), text(leg.id);
    for (plan::Movement& m : s.movements) text(m.id), text(m.from_leg), text(m.to_leg);
    for (plan::Crossing& c : s.crossings) number(c.length_m), text(c.leg);
    for (plan::LaneGroup& l : s.lane_groups) number(l.flow_vph), number(l.saturation_flow_vph);
    for (plan::Group& g : s.groups) {
      text(g.id), number(g.yellow_s), number(g.red_clearance_s), number(g.minimum_green_s), number(g.clearance_s);
      for (plan::Green& green : g.greens) number(green.start_s), number(green.duration_s);
      for (plan::Served& served : g.serves) text(served.movement);
      if (g.split_s) number(*g.split_s);
      if (g.flow_vph) number(*g.flow_vph);
      if (g.parent) text(*g.parent);
      if (g.clearance_basis) number(g.clearance_basis->speed_mps), number(g.clearance_basis->grade), number(g.clearance_basis->width_m);
    }
    for (plan::Conflict& c : s.conflicts) text(c.a), number(c.intergreen_ab_s);
    if (s.controller.ring_barrier)
      for (auto& ring : s.controller.ring_barrier->rings)
        for (std::string& id : ring) text(id);
    if (s.freedom_early_s) number(*s.freedom_early_s);
  }
  for (plan::Link& l : p.links) number(l.travel_time_s), number(l.length_m), text(l.to_group);
  for (plan::Corridor& c : p.corridors)
    for (plan::Direction& d : c.directions) {
      number(d.bandwidth_s), number(d.band_start_s), number(d.efficiency);
      for (plan::Stop& stop : d.stops) number(stop.travel_time_s), number(stop.queue_clearance_s), text(stop.group);
    }
}

void spoil(Plan& plan, Random& random, int share) {
  visit(plan, [&](double& v) { if (below(random, share) == 0) v = absurd(random); },
        [&](std::string& t) { if (below(random, 4 * share) == 0) t = below(random, 2) == 0 ? "" : std::string("\xff\x01", 2) + std::string(300, 'x'); });
  for (plan::Signal& s : plan.signals) {
    if (below(random, share) == 0) s.groups.clear();
    if (below(random, share) == 0) s.legs.clear();
    if (below(random, share) == 0) s.movements.resize(s.movements.size() / 2);
    if (below(random, share) == 0 && !s.groups.empty()) s.groups.insert(s.groups.end(), 200, s.groups.front());
    if (below(random, share) == 0 && !s.groups.empty()) s.groups.front().greens.assign(40, {1, 2});
  }
}

}  // namespace

TEST_CASE("garbage never crashes or hangs the review") {
  Random random(10);
  for (int round = 0; round < 250; ++round) {
    Plan plan = round % 2 == 0 ? samples::two_corridors() : samples::half_cycle();
    spoil(plan, random, 3 + below(random, 60));
    const Review review = review_plan(plan);
    CHECK(to_text(review, "plan").size() > 50);
    CHECK(to_json(review, "plan").size() > 50);
    const Plan recomputed = recomputed_claims(plan);
    review_plans({plan, recomputed});
  }
}

TEST_CASE("one absurd number anywhere is a violation, wherever it stands") {
  Plan counted = samples::half_cycle();
  int numbers = 0;
  visit(counted, [&](double&) { ++numbers; }, [](std::string&) {});
  REQUIRE(numbers > 250);
  for (int chosen = 0; chosen < numbers; ++chosen)
    for (const double value : {std::numeric_limits<double>::quiet_NaN(), 1e12}) {
      Plan plan = samples::half_cycle();
      int at = 0;
      double before = 0;
      visit(plan, [&](double& v) { if (at++ == chosen) before = v, v = value; }, [](std::string&) {});
      const Review review = review_plan(plan);
      INFO("number " << chosen << ", which was " << before << ", is " << value);
      CHECK(review.has_violation());
    }
}

TEST_CASE("absurd sizes are reported and not laid out") {
  Plan plan = samples::two_corridors();
  plan.cycle_s = 1e9;
  for (plan::Signal& s : plan.signals) s.cycle_s = 1e9;
  const Review huge = review_plan(plan);
  CHECK(has(huge, "number-out-of-range"));
  CHECK(huge.tenths_looked_at == 0);
  CHECK(huge.safety == Safety::not_checked);
  Plan crowded = samples::two_corridors();
  crowded.signals[0].groups.insert(crowded.signals[0].groups.end(), 100000, crowded.signals[0].groups[0]);
  const Review review = review_plan(crowded);
  CHECK(has(review, "too-large"));
  CHECK(review.safety == Safety::partly);
  CHECK(review.findings.size() < 500);
  Plan long_way = samples::two_corridors();
  long_way.corridors[0].directions[0].stops.assign(100000, long_way.corridors[0].directions[0].stops[0]);
  CHECK(has(review_plan(long_way), "too-large"));
}

}  // namespace entrain::review
