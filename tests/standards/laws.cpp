// Laws of the clearance arithmetic: rounding never shortens, more need never gives less.
#include <rapidcheck.h>

#include <cmath>

#include "standards.hpp"

using namespace entrain;
using namespace entrain::standards;
using namespace entrain::standards::sample;

namespace {

double seconds_between(double least, double most) { return least + (most - least) * *rc::gen::inRange(0, 100001) / 100000.0; }

const DesignStandard& any_standard() {
  static const std::vector<DesignStandard> all = {standard("kinematic-us"), standard("clearing-metric")};
  return all[static_cast<std::size_t>(*rc::gen::inRange(0, 2))];
}

constexpr Rounding upward[] = {Rounding::up_to_second, Rounding::up_to_tenth, Rounding::up_to_half_second};

}  // namespace

TEST_CASE("rounding up never shortens, lengthens by less than a step, and stays on its grid") {
  CHECK(rc::check([] {
    const double seconds = seconds_between(-5, 300);
    const double steps[] = {1.0, 0.1, 0.5};
    for (int k = 0; k < 3; ++k) {
      const Tenths once = round_by(upward[k], seconds);
      RC_ASSERT(once.seconds() >= seconds - 2e-9);
      RC_ASSERT(once.seconds() < seconds + steps[k]);
      RC_ASSERT(round_by(upward[k], once.seconds()) == once);
    }
    const Tenths near = round_by(Rounding::nearest_tenth, seconds);
    RC_ASSERT(std::fabs(near.seconds() - seconds) <= 0.05 + 1e-9);
    RC_ASSERT(round_by(Rounding::nearest_tenth, near.seconds()) == near);
  }));
  for (int tenths = -50; tenths <= 3000; ++tenths)  // every value of the grid stays, whatever its binary form
    for (const Rounding rule : {Rounding::up_to_tenth, Rounding::nearest_tenth}) CHECK(round_by(rule, tenths / 10.0) == Tenths{tenths});
  for (int s = 0; s <= 300; ++s) CHECK(round_by(Rounding::up_to_second, 0.1 * s * 10) == Tenths::from_seconds(s));
}

TEST_CASE("rounding takes any double") {
  for (const Rounding rule : {Rounding::up_to_second, Rounding::up_to_tenth, Rounding::up_to_half_second, Rounding::nearest_tenth}) {
    CHECK(round_by(rule, std::nan("")) == Tenths{0});
    CHECK(round_by(rule, INFINITY) == Tenths{0});
    CHECK(round_by(rule, 1e300) == Tenths::from_seconds(1000000));
    CHECK(round_by(rule, -1e300) == Tenths::from_seconds(-1000000));
  }
}

TEST_CASE("yellow grows with speed and downgrade and keeps its limits") {
  CHECK(rc::check([] {
    const DesignStandard& s = any_standard();
    const double speed = seconds_between(1, 40), grade = seconds_between(-0.12, 0.12);
    const Tenths yellow = yellow_change(s, speed, grade);
    RC_ASSERT(yellow.seconds() >= s.value("yellow_min_s"));
    RC_ASSERT(yellow.seconds() <= s.value("yellow_max_s"));
    RC_ASSERT(yellow_change(s, speed + seconds_between(0, 5), grade) >= yellow);
    RC_ASSERT(yellow_change(s, speed, grade - seconds_between(0, 0.05)) >= yellow);
  }));
}

TEST_CASE("red clearance grows with width and slowness and is never cut") {
  CHECK(rc::check([] {
    const DesignStandard& s = any_standard();
    const double width = seconds_between(0, 120), speed = seconds_between(2, 35);
    const Tenths red = red_clearance(s, width, speed);
    RC_ASSERT(red.seconds() >= s.value("red_clearance_min_s"));
    RC_ASSERT(red.seconds() >= (width + s.value("vehicle_length_m")) / speed - 1e-9);
    RC_ASSERT(red_clearance(s, width + seconds_between(0, 20), speed) >= red);
    RC_ASSERT(red_clearance(s, width, speed * seconds_between(0.5, 1)) >= red);
  }));
}

TEST_CASE("yellow and red together are never shorter than the equations ask") {
  CHECK(rc::check([] {
    const DesignStandard& s = any_standard();
    const double speed = seconds_between(5, 45), grade = seconds_between(-0.15, 0.15), width = seconds_between(5, 80);
    const ChangeInterval interval = change_interval(s, speed, speed, grade, width);
    const double asked = kinematic_yellow_s(s, speed, grade) + (width + s.value("vehicle_length_m")) / speed;
    RC_ASSERT((interval.yellow + interval.red_clearance).seconds() >= asked - 0.05 - 1e-9);  // yellow goes to the nearest tenth
    RC_ASSERT(interval.yellow == yellow_change(s, speed, grade));
    RC_ASSERT(interval.red_clearance >= red_clearance(s, width, speed));
    RC_ASSERT(interval.yellow_cut == (kinematic_yellow_s(s, speed, grade) > s.value("yellow_max_s") + 1e-9));
    RC_ASSERT(interval.red_above_maximum == (interval.red_clearance.seconds() > s.value("red_clearance_max_s") + 1e-9));
  }));
}

TEST_CASE("walk and clearance cover both walking-speed rules") {
  CHECK(rc::check([] {
    const DesignStandard& s = any_standard();
    const double length = seconds_between(2, 60), button = seconds_between(0, 6);
    const PedestrianTimes times = pedestrian_times(s, length, button, std::nullopt);
    RC_ASSERT(times.walk.is_whole_second());
    RC_ASSERT(times.clearance.is_whole_second());
    RC_ASSERT(times.walk.seconds() >= s.value("walk_min_s"));
    RC_ASSERT(times.clearance.seconds() >= length / s.value("walking_speed_mps") - 1e-9);
    RC_ASSERT((times.walk + times.clearance).seconds() >= (length + button) / s.value("walking_speed_total_mps") - 1e-9);
    const PedestrianTimes slower = pedestrian_times(s, length, button, 0.7);
    RC_ASSERT(slower.clearance >= times.clearance);
    RC_ASSERT(slower.walk + slower.clearance >= times.walk + times.clearance);
  }));
}

TEST_CASE("bicycle green is the green of a played ride") {
  // The same ride in steps of a thousandth of a second.
  const DesignStandard s = standard();
  for (const double width : {1.0, 8.0, 20.0, 35.0, 60.0}) {
    double way = 0, speed = 0, time = s.value("bicycle_perception_s");
    while (way < width + s.value("bicycle_length_m")) {
      speed = std::min(s.value("bicycle_speed_mps"), speed + s.value("bicycle_acceleration_mps2") * 0.001);
      way += speed * 0.001, time += 0.001;
    }
    CHECK(bicycle_minimum_green(s, width).seconds() >= time - 0.01);
    CHECK(bicycle_minimum_green(s, width).seconds() < time + 1.01);
  }
}

TEST_CASE("intergreens by clearing and entering: by hand, monotone, and only where the practice has them") {
  const DesignStandard metric = standard("clearing-metric");
  CHECK(clearing_entering_intergreen(metric, "through", 20, "through", 0) == Tenths::from_seconds(6));     // 3 + 26/10 = 5.6
  CHECK(clearing_entering_intergreen(metric, "through", 20, "through", 22.2222) == Tenths::from_seconds(4));  // 5.6 - 2 = 3.6
  CHECK(clearing_entering_intergreen(metric, "pedestrian", 12, "through", 0) == Tenths::from_seconds(10));
  CHECK(clearing_entering_intergreen(metric, "bicycle", 0, "through", 100) == Tenths::from_seconds(0));
  CHECK_FALSE(clearing_entering_intergreen(metric, "tram", 10, "through", 0).has_value());
  CHECK_FALSE(clearing_entering_intergreen(standard(), "through", 10, "through", 0).has_value());
  CHECK(rc::check([&] {
    const double out = seconds_between(0, 50), in = seconds_between(0, 50);
    RC_ASSERT(*clearing_entering_intergreen(metric, "turn", out + 5, "through", in) >= *clearing_entering_intergreen(metric, "turn", out, "through", in));
    RC_ASSERT(*clearing_entering_intergreen(metric, "turn", out, "through", in + 5) <= *clearing_entering_intergreen(metric, "turn", out, "through", in));
  }));
}

TEST_CASE("saturation flow falls with heavy vehicles, upgrade, turning and opposing traffic") {
  CHECK(rc::check([] {
    const DesignStandard& s = any_standard();
    LaneGroupConditions c;
    c.lanes = *rc::gen::inRange(1, 5);
    c.heavy_vehicle_pct = seconds_between(0, 40), c.grade = seconds_between(-0.06, 0.06);
    c.left_share = seconds_between(0, 0.5), c.right_share = seconds_between(0, 0.5), c.with_protection = *rc::gen::inRange(0, 2) == 1;
    c.opposing_flow_vph = seconds_between(0, 1500);
    const double flow = saturation_flow_vph(s, c);
    RC_ASSERT(flow > 0);
    RC_ASSERT(flow <= 1.2 * 1.03 * s.value("base_saturation_flow_vph") * c.lanes + 1e-9);
    LaneGroupConditions worse = c;
    worse.heavy_vehicle_pct += 5;
    RC_ASSERT(saturation_flow_vph(s, worse) <= flow + 1e-9);
    worse = c, worse.grade += 0.01;
    RC_ASSERT(saturation_flow_vph(s, worse) <= flow + 1e-9);
    worse = c, worse.opposing_flow_vph += 200;
    RC_ASSERT(saturation_flow_vph(s, worse) <= flow + 1e-9);
    worse = c, worse.right_share += 0.1;
    RC_ASSERT(saturation_flow_vph(s, worse) <= flow + 1e-9);
  }));
}
