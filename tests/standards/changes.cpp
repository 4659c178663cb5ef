// A project's changes of a standard: units, spelling, range, and who takes on a shorter interval.
#include "standards.hpp"

using namespace entrain::standards;
using namespace entrain::standards::sample;

TEST_CASE("a change may carry any unit of its key") {
  const auto changed = with_changes(standard(), {number("walking_speed_ft_per_s", 3.0), number("turn_clearing_speed_km_h", 30), number("least_approach_speed_mph", 30),
                                                 number("vehicle_length_ft", 25), number("deceleration_ft_per_s2", 9), number("target_saturation", 0.85)});
  REQUIRE(changed.has_value());
  CHECK(changed->value("walking_speed_mps") == Approx(0.9144));
  CHECK(changed->value("turn_clearing_speed_mps") == Approx(30 / 3.6));
  CHECK(changed->value("least_approach_speed_mps") == Approx(30 * 0.44704));
  CHECK(changed->value("vehicle_length_m") == Approx(7.62));
  CHECK(changed->value("deceleration_mps2") == Approx(9 * 0.3048));
  CHECK(changed->values.at("walking_speed_mps").overridden);
  CHECK(changed->values.at("walking_speed_mps").source == "set by the project instead of 1.0668 (MUTCD 11th edition, part 4: clearance at 3.5 ft/s)");
  CHECK_FALSE(changed->values.at("perception_s").overridden);
}

TEST_CASE("the standard's own value in another unit needs nobody's name") {
  CHECK(with_changes(standard(), {number("walking_speed_ft_per_s", 3.5), number("yellow_min_s", 3), number("vehicle_length_ft", 20), number("turn_speed_margin_mph", -5)}).has_value());
}

TEST_CASE("a value that shortens intervals needs an author and a reason") {
  const std::vector<Change> faster{number("walking_speed_ft_per_s", 4.0)};
  CHECK(problems_of(with_changes(standard(), faster)) ==
        "error: project.toml line 7: 4, which makes intervals shorter than the standard's 1.067 (in SI); expected author and reason under [standards]: who takes it on, and why. "
        "Add them, or keep the standard's value\n");
  std::vector<Change> signed_for = faster;
  signed_for.push_back(word("author", "A. Example"));
  CHECK_FALSE(with_changes(standard(), signed_for).has_value());  // a name without a reason is not enough
  signed_for.push_back(word("reason", "few older people, measured"));
  const auto changed = with_changes(standard(), signed_for);
  REQUIRE(changed.has_value());
  CHECK(shortened_values(*changed, standard()) ==
        std::vector<std::string>{"walking_speed_mps 1.219 instead of the standard's 1.067: intervals get shorter; few older people, measured (A. Example)"});
  CHECK(shortened_values(standard(), standard()).empty());
}

TEST_CASE("each cautious side is watched") {
  for (const auto& [key, value] : standard().values) {
    if (value.cautious.empty()) continue;
    INFO(key);
    const double shorter = value.cautious == "higher" ? *value.least : *value.most, longer = value.cautious == "higher" ? *value.most : *value.least;
    if (shorter != value.value) CHECK_FALSE(with_changes(standard(), {number(key, shorter)}).has_value());
    CHECK(with_changes(standard(), {number(key, longer)}).has_value() == (key != "red_clearance_min_s" || longer <= 6));
  }
}

TEST_CASE("spelling, range, kind and doubles: all at once") {
  CHECK(problems_of(with_changes(standard(), {number("walking_sped_mps", 1), number("yellow_min_s", 2), number("perception_s", 1e9), word("walk_min_s", "seven"), truth("walk_min_s", true),
                                              number("opposed_turn", 1), word("opposed_turn", "yes"), truth("opposed_trun", true), number("curb_setback_m", 2), number("curb_setback_ft", 9)})) ==
        "error: project.toml line 7: unknown key walking_sped_mps; expected a key of kinematic-us. Did you mean walking_speed_mps?\n"
        "error: project.toml line 7: 2; expected 3 to 6. Correct the value or its unit\n"
        "error: project.toml line 7: 1000000000; expected 0.5 to 3. Correct the value or its unit\n"
        "error: project.toml line 8: \"seven\"; expected a number. Write a number without quotes\n"
        "error: project.toml line 9: true; expected a number. Write a number without quotes\n"
        "error: project.toml line 7: 1; expected true or false. Correct the value\n"
        "error: project.toml line 8: \"yes\"; expected true or false. Write it without quotes\n"
        "error: project.toml line 9: unknown key opposed_trun; expected a key of kinematic-us. Did you mean opposed_turn?\n"
        "error: project.toml line 7: curb_setback_ft beside curb_setback_m; expected one value in one unit. Keep one of them\n");
}

TEST_CASE("yields may be forbidden, rounding may go up, never down") {
  CHECK_FALSE(with_changes(standard(), {truth("opposed_turn", false)})->allows("opposed_turn"));
  CHECK(with_changes(standard(), {word("rounding_yellow_s", "up_to_tenth")})->rounding.at("yellow_s") == Rounding::up_to_tenth);
  CHECK(problems_of(with_changes(standard(), {word("rounding_walk_s", "nearest_tenth")})) ==
        "error: project.toml line 8: nearest_tenth; expected a rule that never shortens: only yellow may go to the nearest tenth. Use a rule that goes up\n");
  CHECK_FALSE(with_changes(standard(), {word("rounding_minimum_green_s", "up_to_tenth")}).has_value());
  CHECK_FALSE(with_changes(standard(), {number("rounding_walk_s", 1)}).has_value());
}

TEST_CASE("limits may not cross") {
  CHECK(problems_of(with_changes(standard(), {number("red_clearance_max_s", 1), number("red_clearance_min_s", 2)})) ==
        "error: project.toml line 7: red_clearance_min_s 2 above red_clearance_max_s 1; expected the least not above the most. Correct one of them\n");
}
