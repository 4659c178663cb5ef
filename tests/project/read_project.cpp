// project.toml: every key, every mistake with its line.
#include <catch2/catch.hpp>

#include "texts.hpp"

using namespace entrain;
using namespace entrain::project;
using namespace entrain::project::sample;

TEST_CASE("a full project is read, speeds in SI") {
  const auto read = project_of(R"(
name  = "Invented Avenue"
units = "us"
traffic_side = "left"
phase_2 = "EB"
control = "signal_group"
[clock]
reference = "time_of_day"
time_zone = "UTC"
[roads]
source = "roads.gpkg"
elevation = "terrain.tif"
layer = "streets"
columns = { speed_limit = "spd_mph" }
snap_tolerance_m = 1.5
[tables]
signals = "signals.csv"
movements = "counts.xlsx#AM"
[columns.movements]
signal = "Node"
[standards]
base = "kinematic-us"
walking_speed_ft_per_s = 3.5
opposed_turn = false
rounding_yellow_s = "up_to_tenth"
[[standards.exception]]
signal = "T1"
movement = "EB-T"
key = "speed_mph"
value = 40
reason = "measured"
author = "A. Example"
[[corridor]]
id = "main"
signals = ["T1", "T2", "T3"]
signals_backward = ["T3b", "T2", "T1b"]
groups  = { forward = "2", backward = "6" }
groups_at = { T2 = { forward = "3" } }
weights = { forward = 1.0, backward = 2 }
progression_speed_mph = 30
[[corridor.period]]
id = "am"
weights = { forward = 3.0, backward = 1.0 }
progression_speed_km_h = 50
[[period]]
id = "am"
days = "Mon-Fri"
from = "06:30"
to   = "09:30"
cycle_s = { min = 60, max = 120, step = 5 }
)");
  REQUIRE(problems_of(read) == "none");
  CHECK(text_of(read->notes) == "");
  const Project& p = read->value;
  CHECK(p.units == Units::us);
  CHECK(p.traffic_side == TrafficSide::left);
  CHECK(p.phase_2 == "EB");
  CHECK(p.clock.reference == "time_of_day");
  CHECK(p.roads->columns.at("speed_limit") == "spd_mph");
  CHECK(p.roads->snap_tolerance_m == 1.5);
  CHECK(p.tables.at("movements") == "counts.xlsx#AM");
  CHECK(p.table_columns.at("movements").at("signal") == "Node");
  CHECK(std::get<double>(p.standard_overrides.at("walking_speed_ft_per_s")) == 3.5);
  CHECK(std::get<bool>(p.standard_overrides.at("opposed_turn")) == false);
  CHECK(std::get<std::string>(p.standard_overrides.at("rounding_yellow_s")) == "up_to_tenth");
  REQUIRE(p.exceptions.size() == 1);
  CHECK(p.exceptions[0].key == "speed_mps");
  CHECK(p.exceptions[0].value == Approx(40 * 0.44704));
  REQUIRE(p.corridors.size() == 1);
  CHECK(p.corridors[0].signals_backward.size() == 3);
  CHECK(p.corridors[0].groups_at.at("T2").at("forward") == "3");
  CHECK(p.corridors[0].progression_speed_mps == Approx(30 * 0.44704));
  CHECK(p.corridors[0].progression_speed_by_period_mps.at("am") == Approx(50 / 3.6));
  CHECK(p.corridors[0].weights_by_period.at("am").at("forward") == 3);
  CHECK(p.periods[0].cycle.maximum_s == 120);
}

TEST_CASE("every wrong value of one file is reported at once, with its line") {
  CHECK(problems_of(project_of(R"(name = 3
units = "imperial"
traffic_side = "rigth"
[clock]
reference = "noon"
[[corridor]]
id = "a/b"
signals = ["T1"]
directions = ["forward", "back"]
weights = { forward = -1 }
[[period]]
id = "am"
from = "9:30"
to = "25:00"
cycle_s = { min = 0, max = 90 }
[[period]]
id = "am"
from = "10:00"
to = "09:00"
cycle_s = { min = 120, max = 60 }
)")) ==
        "error: p.toml line 1, name: 3; expected a text in quotes. Put it in quotes\n"
        "error: p.toml line 2, units: imperial; expected one of us, metric. Use one of these words\n"
        "error: p.toml line 3, traffic_side: rigth; expected one of right, left. Did you mean right?\n"
        "error: p.toml line 5, clock.reference: noon; expected one of midnight, time_of_day, pattern_start. Use one of these words\n"
        "error: p.toml line 7, [[corridor]] 1 id: \"a/b\"; expected a short name that can be a folder's, without slashes. Use letters, digits, - and _\n"
        "error: p.toml line 9, [[corridor]] 1 directions: back; expected forward, backward. Use these words\n"
        "error: p.toml line 8, [[corridor]] 1 signals: one signal; expected two signals at least. Name the others, in order\n"
        "error: p.toml line 10, [[corridor]] 1 weights.forward: -1; expected a number from 0 to 1000. Correct the value\n"
        "error: p.toml line 13, [[period]] 1 from: 9:30; expected a time as HH:MM, 00:00 to 24:00. Write it like \"06:30\"\n"
        "error: p.toml line 14, [[period]] 1 to: 25:00; expected a time as HH:MM, 00:00 to 24:00. Write it like \"06:30\"\n"
        "error: p.toml line 15, [[period]] 1 cycle_s.min: 0; expected a whole number from 20 to 600. Correct the value\n"
        "error: p.toml line 19, [[period]] 2 to: 09:00; expected a time after from = 10:00. Exchange them, or split a period that runs over midnight\n"
        "error: p.toml [[period]] 2 cycle_s: min 120 above max 60; expected min at most max. Exchange them or correct one\n"
        "error: p.toml [[period]]: id am twice; expected each id once. Rename one of them\n");
}

TEST_CASE("unknown keys are warnings with the key that may have been meant") {
  const auto read = project_of("name = \"x\"\nunist = \"us\"\n[roads]\nsource = \"r.osm\"\nelevaton = \"t.tif\"\nzzzzzzzzz = 1\n[[period]]\nid = \"am\"\nfrm = \"06:30\"\n");
  REQUIRE(problems_of(read) == "none");
  CHECK(text_of(read->notes) ==
        "warning: p.toml line 5, roads.elevaton: a key this version does not know. Did you mean elevation? it was not used\n"
        "warning: p.toml line 6, roads.zzzzzzzzz: a key this version does not know. Check its spelling: it was not used\n"
        "warning: p.toml line 9, [[period]] 1 frm: a key this version does not know. Did you mean from? it was not used\n"
        "warning: p.toml line 2, unist: a key this version does not know. Did you mean units? it was not used\n");
}

TEST_CASE("corridors that contradict themselves") {
  const auto corridor = [](const std::string& lines) { return problems_of(project_of("name = \"x\"\n[[corridor]]\nid = \"c\"\n" + lines)); };
  CHECK(corridor("") == "error: p.toml [[corridor]] 1: no key signals or street; expected the signals in order, or a street to follow. Add signals or street = ...\n");
  CHECK(corridor("street = \"Kiln\"\nfrom = \"A\"\nto = \"A\"\n") == "error: p.toml line 6, [[corridor]] 1 to: A; expected another signal than from. Correct one of them\n");
  CHECK(corridor("street = \"Kiln\"\nfrom = \"A\"\n") == "error: p.toml [[corridor]] 1: no key to; expected the last signal along the street. Add to = ...\n");
  CHECK(corridor("signals = [\"A\", \"A\", \"B\"]\n") == "error: p.toml line 4, [[corridor]] 1 signals: A twice in a row; expected neighbouring signals. Remove one of them\n");
  CHECK(corridor("signals = [\"A\", \"B\"]\nstreet = \"K\"\n") ==
        "error: p.toml line 5, [[corridor]] 1 street: K beside a list of signals; expected one of the two. Keep signals, or street with from and to (name = \"...\" is the corridor's name)\n");
  CHECK(corridor("signals = [\"A\", \"B\"]\nweights = { forward = 0, backward = 0 }\n") ==
        "error: p.toml line 5, [[corridor]] 1 weights: 0 for every direction; expected a weight above 0 for one direction at least. Raise one of them\n");
  CHECK(corridor("signals = [\"A\", \"B\"]\ndirections = [\"forward\"]\nweights = { forward = 1, backward = 1 }\n") ==
        "error: p.toml line 6, [[corridor]] 1 weights: a weight for backward; expected weights of the corridor's own directions. Remove it, or add the direction\n");
  CHECK(corridor("signals = [\"A\", \"B\"]\nprogression_speed_mph = 30\nprogression_speed_km_h = 50\n") ==
        "error: p.toml line 6, [[corridor]] 1 progression_speed_km_h: a second unit for progression_speed; expected one of _mps, _mph, _km_h. Keep one of them\n");
  CHECK(corridor("signals = [\"Alpha\", \"Beta\"]\ngroups_at = { Btea = { forward = \"2\" } }\n") ==
        "error: p.toml line 5, [[corridor]] 1 groups_at.Btea: a signal that is not on the corridor; expected one of its signals. Did you mean Beta?\n");
  CHECK(corridor("signals = [1, 2]\n").find("line 4, [[corridor]] 1 signals: 1; expected a text in quotes") != std::string::npos);
}

TEST_CASE("exceptions say what, in a known unit, why and who") {
  const auto exception = [](const std::string& lines) { return problems_of(project_of("name = \"x\"\n[[standards.exception]]\nsignal = \"T1\"\n" + lines)); };
  CHECK(exception("key = \"yellow_s\"\nvalue = 3.5\nreason = \"r\"\nauthor = \"a\"\n") == "none");
  CHECK(exception("key = \"yelow_s\"\nvalue = 4\nreason = \"r\"\nauthor = \"a\"\n") ==
        "error: p.toml line 4, standards [[exception]] 1 key: yelow_s; expected one of yellow_s, red_clearance_s, minimum_green_s, walk_s, pedestrian_clearance_s, speed_mps, walking_speed_mps "
        "(speeds also in _mph, _km_h, _ft_per_s). Did you mean yellow_s?\n");
  CHECK(exception("key = \"yellow_s\"\nvalue = 2\n") ==
        "error: p.toml line 5, standards [[exception]] 1 value: 2; expected 3 to 10. Correct the value or the key's unit\n"
        "error: p.toml standards [[exception]] 1: no key reason; expected why this value differs from the standard. Add reason = ...\n"
        "error: p.toml standards [[exception]] 1: no key author; expected who takes it on. Add author = ...\n");
  CHECK(exception("key = \"speed_mph\"\nvalue = 300\nreason = \" \"\nauthor = \"a\"\n").find("value: 300; expected 2.24 to 134.22.") != std::string::npos);
  CHECK(exception("value = \"4\"\nreason = \"r\"\nauthor = \"a\"\n") ==
        "error: p.toml line 4, standards [[exception]] 1 value: 4; expected a number from -1000000 to 1000000. Correct the value\n"
        "error: p.toml standards [[exception]] 1: no key key; expected the value that is set, e.g. \"yellow_s\". Add key = ...\n");
}

TEST_CASE("a file that is no project says why") {
  CHECK(problems_of(project_of("")) == "error: p.toml: an empty file; expected a project file in TOML. Start with name = \"...\"\n");
  CHECK(problems_of(project_of("\xFF\xFEn\0a")) == "error: p.toml: text in UTF-16; expected text in UTF-8. Save the file as UTF-8\n");
  CHECK(problems_of(project_of("x = 1")) == "error: p.toml: no key name; expected a name for the sheets. Add name = ...\n");
  CHECK(problems_of(project_of("name = \"x\"\nname = \"y\"\n")).rfind("error: p.toml line 2, column ", 0) == 0);
  CHECK(problems_of(project_of("name = \"x\"\r\n[tables]\r\nsignals = 3\r\n")) == "error: p.toml line 3, tables.signals: 3; expected a text in quotes. Put it in quotes\n");
  CHECK(problems_of(project_of("\xEF\xBB\xBFname = \"x\"\n")) == "none");
}
