// Checks across tables: each with the sentence a user sees.
#include "project/validate.hpp"

#include <catch2/catch.hpp>

#include "texts.hpp"

using namespace entrain;
using namespace entrain::project;
using namespace entrain::project::sample;

namespace {

template <class Row, class Read>
std::vector<Row> rows(Read read, const std::string& text, const std::string& source) {
  const auto result = read(grid(text, source), std::map<std::string, std::string>{});
  REQUIRE(problems_of(result) == "none");
  return result->value;
}

struct Town {
  Project project;
  Tables tables;
  Town() {
    project.file = "p.toml";
    project.periods = {{"am", "", "", "", {}}, {"pm", "", "", "", {}}};
    tables.signals_source = "signals.csv", tables.movements_source = "movements.csv", tables.crossings_source = "crossings.csv";
    tables.travel_times_source = "times.csv", tables.timing_source = "timing.csv", tables.conflicts_source = "conflicts.csv";
    tables.signals = rows<SignalRow>(read_signal_rows, "signal\nT1\nT2\nT3\n", "signals.csv");
  }
  void timing(const std::string& text) {
    tables.timing = rows<TimingRow>(read_timing_rows, "period,signal,cycle_s,offset_s,offset_reference,reference_group,group,yellow_s,red_clearance_s,split_s,walk_s\n" + text, "timing.csv");
  }
  void movements(const std::string& text) { tables.movements = rows<MovementRow>(read_movement_rows, "period,signal,approach,turn,volume_vph,lane_group,lanes\n" + text, "movements.csv"); }
  std::string found() const { return text_of(validate(project, tables)); }
};

}  // namespace

TEST_CASE("a sound town has no findings") {
  Town town;
  town.movements("am,T1,EB,T,900,EB-TR,2\nam,T1,EB,R,100,EB-TR,2\npm,T1,EB,T,700,EB-TR,2\n");
  town.timing("am,T1,90,12,begin_of_green,2,2,4,1.5,50,7\nam,T1,90,12,begin_of_green,2,4,4,2,40,7\npm,T1,100,,,,2,4,1.5,60,7\n");
  CHECK(town.found() == "");
}

TEST_CASE("unknown signals and periods, said once each") {
  Town town;
  town.movements("am,T1,EB,T,900,,\nam,T4,EB,T,900,,\nam,T4,EB,R,900,,\nnoon,T2,EB,T,900,,\n");
  town.tables.travel_times = rows<TravelTimeRow>(read_travel_time_rows, "from_signal,to_signal,mean_s\nT1,t2,30\n", "times.csv");
  town.tables.crossings = rows<CrossingRow>(read_crossing_rows, "signal,leg,length_m\nX9,N,12\n", "crossings.csv");
  town.tables.conflicts = rows<ConflictRow>(read_conflict_rows, "signal,group_a,group_b,intergreen_ab_s,intergreen_ba_s\nQQQ,2,4,5,5\n", "conflicts.csv");
  Corridor corridor;
  corridor.id = "main", corridor.signals = {"T1", "T5"}, corridor.weights_by_period["amm"] = {{"forward", 1}};
  town.project.corridors = {corridor};
  town.project.exceptions = {{"T33", "", "", "", "yellow_s", 4, "r", "a"}};
  CHECK(town.found() ==
        "error: conflicts.csv row 2: unknown signal QQQ; expected a signal of signals.csv. Correct the id or add the signal to the signals table\n"
        "error: crossings.csv row 2: unknown signal X9; expected a signal of signals.csv. Correct the id or add the signal to the signals table\n"
        "error: movements.csv row 3: unknown signal T4 (2 places); expected a signal of signals.csv. Did you mean T1?\n"
        "error: p.toml [[corridor]] main: unknown signal T5; expected a signal of signals.csv. Did you mean T1?\n"
        "error: p.toml [[standards.exception]] 1: unknown signal T33; expected a signal of signals.csv. Did you mean T3?\n"
        "error: times.csv row 2: unknown signal t2; expected a signal of signals.csv. Did you mean T2?\n"
        "error: movements.csv row 5: unknown period noon; expected one of am, pm. Correct the id or add a [[period]]\n"
        "error: p.toml [[corridor]] main [[corridor.period]]: unknown period amm; expected one of am, pm. Did you mean am?\n");
}

TEST_CASE("an offset without its instant is an error") {
  Town town;
  town.timing("am,T1,90,12,,,2,4,1.5,50,\nam,T2,90,0,,,2,4,1.5,50,\nam,T3,90,12,begin_of_green,,2,4,1.5,50,\n");
  CHECK(town.found() ==
        "error: timing.csv row 2: offset 12 s without its instant; expected offset_reference (begin_of_green, begin_of_yellow, begin_of_red, begin_of_pedestrian_clearance) and reference_group. "
        "Fill the two columns: an offset means nothing without them\n"
        "error: timing.csv row 4: offset 12 s without its group; expected offset_reference (begin_of_green, begin_of_yellow, begin_of_red, begin_of_pedestrian_clearance) and reference_group. "
        "Fill the two columns: an offset means nothing without them\n");
}

TEST_CASE("one phase table serves all periods; one pattern has one cycle and offset") {
  Town town;
  town.timing("am,T1,90,12,begin_of_green,2,2,4,1.5,50,7\nam,T1,80,13,begin_of_yellow,9,4,4,2,40,7\npm,T1,100,,,,2,4.5,1,60,8\n");
  CHECK(town.found() ==
        "error: timing.csv row 3, column cycle_s: 80 for T1; expected 90 as in row 2: one signal has one in a period. Make the rows agree\n"
        "error: timing.csv row 3, column offset_s: 13 for T1; expected 12 as in row 2: one signal has one in a period. Make the rows agree\n"
        "error: timing.csv row 3, column offset_reference: begin_of_yellow for T1; expected begin_of_green as in row 2: one signal has one in a period. Make the rows agree\n"
        "error: timing.csv row 3, column reference_group: 9 for T1; expected 2 as in row 2: one signal has one in a period. Make the rows agree\n"
        "error: timing.csv row 3, column reference_group: 9; expected a group of T1. Name a group that has a row\n"
        "error: timing.csv row 4, column yellow_s: 4.5 for group 2 of T1; expected 4 as in row 2: one phase table serves all periods. Make the rows agree\n"
        "error: timing.csv row 4, column red_clearance_s: 1 for group 2 of T1; expected 1.5 as in row 2: one phase table serves all periods. Make the rows agree\n"
        "error: timing.csv row 4, column walk_s: 8 for group 2 of T1; expected 7 as in row 2: one phase table serves all periods. Make the rows agree\n");
}

TEST_CASE("doubles and contradictions") {
  Town town;
  town.tables.signals = rows<SignalRow>(read_signal_rows, "signal\nT1\nT2\nT1\n", "signals.csv");
  town.movements("am,T1,EB,T,900,EB-TR,2\nam,T1,EB,T,800,,\nam,T1,EB,R,100,EB-TR,3\nam,T1,WB,R,100,EB-TR,\n");
  town.tables.crossings = rows<CrossingRow>(read_crossing_rows, "signal,leg,length_m\nT1,N,12\nT1,n,13\n", "crossings.csv");
  town.tables.travel_times = rows<TravelTimeRow>(read_travel_time_rows, "from_signal,to_signal,mean_s\nT1,T2,30\nT2,T1,30\nT1,T2,31\n", "times.csv");
  town.tables.conflicts = rows<ConflictRow>(read_conflict_rows, "signal,group_a,group_b,intergreen_ab_s,intergreen_ba_s\nT1,2,4,5,6\nT1,4,2,6,5\nT1,4,2,5,6\n", "conflicts.csv");
  CHECK(town.found() ==
        "error: signals.csv row 4: signal T1 again; expected each signal once (it stands in row 2). Remove or correct one of the rows\n"
        "error: movements.csv row 3: T1 EB-T again; expected each movement of a period once (it stands in row 2). Remove or correct one of the rows\n"
        "error: crossings.csv row 3: crossing of leg N at T1 again; expected each crossing once (it stands in row 2). Remove or correct one of the rows\n"
        "error: times.csv row 4: T1 to T2 again; expected each pair of a period once (it stands in row 2). Remove or correct one of the rows\n"
        "error: movements.csv row 4, column lanes: 3 for lane group EB-TR; expected 2 as in row 2: it is counted for the whole lane group. Make the rows agree\n"
        "error: movements.csv row 5, column approach: WB for lane group EB-TR; expected EB as in row 2: it is counted for the whole lane group. Make the rows agree\n"
        "error: conflicts.csv row 4: 4 and 2 at T1 again with other intergreens; expected the values of row 2. Remove one of the rows\n");
}

TEST_CASE("a street needs roads; ids may come from the roads") {
  Town town;
  Corridor corridor;
  corridor.id = "kiln", corridor.street = "Kiln Street", corridor.from = "T1", corridor.to = "T3";
  town.project.corridors = {corridor};
  CHECK(town.found() == "error: p.toml [[corridor]] kiln: street Kiln Street without roads; expected a list of signals, or [roads]. Write signals = [...], or name the roads\n");
  town.project.roads.emplace();
  town.tables.signals.clear();
  town.project.corridors[0].from = "anything";
  CHECK(town.found() == "");
}
