// Tables as people keep them: titles above, columns in any order, cells of every kind.
#include <catch2/catch.hpp>

#include "base/number_text.hpp"
#include "texts.hpp"

using namespace entrain;
using namespace entrain::project;
using namespace entrain::project::sample;

TEST_CASE("rows of each table are read") {
  const auto signals = read_signal_rows(grid("signal,name,lon,lat,min_cycle_s,max_cycle_s,half_cycle,clock,operation,offset_s,offset_fixed,sequence_fixed,splits_fixed\n"
                                             "T1,First,-30.5,45.25,60,120,allowed,gps,pretimed,12,yes,no,1\n"));
  REQUIRE(problems_of(signals) == "none");
  const SignalRow& s = signals->value.at(0);
  CHECK((s.signal == "T1" && s.name == "First" && *s.lon == -30.5 && *s.lat == 45.25 && s.row == 2 && s.half_cycle == "allowed" && s.offset_fixed && !s.sequence_fixed && s.splits_fixed));
  const auto times = read_travel_time_rows(grid("from_signal,to_signal,mean_s,length_ft\nT1,T2,31.4,1000\n"));
  REQUIRE(problems_of(times) == "none");
  CHECK(*times->value.at(0).length_m == Approx(304.8));
  const auto crossings = read_crossing_rows(grid("signal,leg,length_ft,walking_speed_ft_per_s,service\nT1,north,50,3.5,on_call\n"));
  REQUIRE(problems_of(crossings) == "none");
  CHECK(*crossings->value.at(0).length_m == Approx(15.24));
  CHECK(*crossings->value.at(0).walking_speed_mps == Approx(1.0668));
  CHECK(crossings->value.at(0).leg == "N");
  const auto timing = read_timing_rows(grid("signal,cycle_s,group,yellow_s,red_clearance_s,green_start_s,green_s,offset_s\nT1,90,2,4,1.5,0,40.5,0\n"));
  REQUIRE(problems_of(timing) == "none");
  CHECK(*timing->value.at(0).green_s == 40.5);
  const auto conflicts = read_conflict_rows(grid("signal,group_a,group_b,intergreen_ab_s,intergreen_ba_s\nT1,2,4,5.5,5\n"));
  REQUIRE(problems_of(conflicts) == "none");
  CHECK(conflicts->value.at(0).intergreen_ab_s == 5.5);
}

TEST_CASE("titles above, blank rows, trailing commas, other case, text quoting, stars") {
  const auto read = read_movement_rows(grid("Turning counts of the invented town,,,,,\n,,,,,\n\"\",,,,,\n Signal , Approach,Turn,Volume VPH,,\n=\"0015\",eb,t,950,,\n,,,,,\n'7,WB,L,*,,\nT3,NB,R,-,,\n"));
  REQUIRE(problems_of(read) == "none");
  REQUIRE(read->value.size() == 3);
  CHECK(read->value[0].signal == "0015");
  CHECK(read->value[0].approach == "EB");
  CHECK(read->value[0].turn == "T");
  CHECK(*read->value[0].volume_vph == 950);
  CHECK(read->value[0].row == 5);
  CHECK(read->value[1].signal == "7");
  CHECK_FALSE(read->value[1].volume_vph.has_value());
  CHECK_FALSE(read->value[2].volume_vph.has_value());
}

TEST_CASE("columns of other names are mapped, and a wrong map is an error") {
  const TextGrid counts = grid("Node,Dir,Mvt,Vol\nT1,EB,T,950\n");
  const auto read = read_movement_rows(counts, {{"signal", "Node"}, {"approach", "dir"}, {"turn", "Mvt"}, {"volume_vph", "Vol"}});
  REQUIRE(problems_of(read) == "none");
  CHECK(read->value.at(0).signal == "T1");
  CHECK(problems_of(read_movement_rows(counts, {{"signal", "Node"}, {"approach", "Dir"}, {"turn", "Movt"}, {"volume_vph", "Vol"}})) ==
        "error: t.csv row 1: no column Movt; expected the column that [columns] names for turn. Did you mean mvt?\n");
  const auto odd = read_movement_rows(counts, {{"signal", "Node"}, {"approach", "dir"}, {"turn", "Mvt"}, {"volume_vph", "Vol"}, {"lanse", "Ln"}});
  REQUIRE(problems_of(odd) == "none");
  CHECK(text_of(odd->notes) == "warning: t.csv [columns]: a column this table does not have: lanse. Did you mean lanes? It was not used\n");
}

TEST_CASE("missing and unknown columns, with the near one named") {
  CHECK(problems_of(read_movement_rows(grid("signal,aproach,turn,volume_vph\nT1,EB,T,1\n"))) == "error: t.csv row 1: no column approach; expected a column of that name. Did you mean aproach?\n");
  CHECK(problems_of(read_crossing_rows(grid("signal,leg\nT1,N\n"))) ==
        "error: t.csv row 1: no column length_m or length_ft; expected one of the two. Add it, or map yours under [columns] as length_m = \"...\"\n");
  CHECK(problems_of(read_signal_rows(grid("name,lon,lat\nA,1,2\n"))) ==
        "error: t.csv row 1: no column signal; expected a column of that name. Add it, or map yours under [columns] as signal = \"...\"\n");
  const auto read = read_signal_rows(grid("signal,longitude,naem\nT1,3,4\n"));
  REQUIRE(problems_of(read) == "none");
  CHECK(text_of(read->notes) == "warning: t.csv row 1: unknown column longitude. It was not used\nwarning: t.csv row 1: unknown column naem. Did you mean name? It was not used\n");
  CHECK(problems_of(read_signal_rows(grid("signal,signal\nT1,T2\n"))) == "error: t.csv row 1: column signal twice; expected each column once. Remove or rename one of them\n");
  CHECK(problems_of(read_signal_rows(grid("1,2,3\n4,5,6\n"))) == "error: t.csv: no row of column names; expected a first row with the columns signal. Add the row of column names, or map yours under [columns]\n");
  CHECK(problems_of(read_signal_rows({"t.csv", {}})) == "error: t.csv: an empty table; expected a first row with the columns signal. Fill the table or leave it out of [tables]\n");
  const auto no_rows = read_signal_rows(grid("signal,name\n,\n"));
  REQUIRE(problems_of(no_rows) == "none");
  CHECK(text_of(no_rows->notes) == "warning: t.csv: no rows below the column names. Fill the table or leave it out of [tables]\n");
}

TEST_CASE("every bad cell is named with row, column, value and what to do") {
  CHECK(problems_of(read_movement_rows(grid("signal,approach,turn,volume_vph,lanes,peak_hour_factor,control\n"
                                            "T1,EB,T,-5,1000000000,0,\n"
                                            ",XB,Q,many,2.5,,signl\n"
                                            "T1,,,1e999,,0.92,\n"))) ==
        "error: t.csv row 2, column volume_vph: -5; expected a number from 0 to 20000. Correct the cell\n"
        "error: t.csv row 2, column lanes: 1000000000; expected a whole number from 1 to 12. Correct the cell\n"
        "error: t.csv row 2, column peak_hour_factor: 0; expected a number from 0.25 to 1. Correct the cell\n"
        "error: t.csv row 3, column signal: nothing; expected a value. Fill the cell or remove the row; of merged cells only the first holds the value\n"
        "error: t.csv row 3, column approach: XB; expected one of nb, neb, eb, seb, sb, swb, wb, nwb. Did you mean nb?\n"
        "error: t.csv row 3, column turn: Q; expected one of l, t, r, u. Use one of these words\n"
        "error: t.csv row 3, column volume_vph: many; expected a number from 0 to 20000. Correct the cell\n"
        "error: t.csv row 3, column lanes: 2.5; expected a whole number from 1 to 12. Correct the cell\n"
        "error: t.csv row 3, column control: signl; expected one of signal, yield, free, prohibited. Did you mean signal?\n"
        "error: t.csv row 4, column approach: nothing; expected a value. Fill the cell or remove the row; of merged cells only the first holds the value\n"
        "error: t.csv row 4, column turn: nothing; expected a value. Fill the cell or remove the row; of merged cells only the first holds the value\n"
        "error: t.csv row 4, column volume_vph: 1e999; expected a number from 0 to 20000. Correct the cell\n");
}

TEST_CASE("a decimal comma is named as such") {
  TextGrid table = grid("from_signal;to_signal;mean_s");
  table.rows = {{"from_signal", "to_signal", "mean_s"}, {"T1", "T2", "31,4"}};
  CHECK(problems_of(read_travel_time_rows(table)) ==
        "error: t.csv row 2, column mean_s: 31,4; expected a number from 0.5 to 3600. Write a decimal point, not a comma, and no thousands separator\n");
}

TEST_CASE("two units of one length must agree") {
  const std::string head = "signal,leg,length_m,length_ft\n";
  CHECK(problems_of(read_crossing_rows(grid(head + "T1,N,15.24,50\nT1,S,15.2,\nT1,E,,50\n"))) == "none");
  CHECK(problems_of(read_crossing_rows(grid(head + "T1,N,50,50\n"))) ==
        "error: t.csv row 2, column length_m and length_ft: 50 and 50; expected the same value in both units. Keep one of the two columns\n");
}

TEST_CASE("timing rows that no controller takes") {
  const std::string head = "signal,cycle_s,offset_s,group,yellow_s,red_clearance_s,split_s,green_start_s,green_s\n";
  CHECK(problems_of(read_timing_rows(grid(head + "T1,0,0,2,4,1,40,,\n"))) == "error: t.csv row 2, column cycle_s: 0; expected a number from 10 to 3600. Correct the cell\n");
  CHECK(problems_of(read_timing_rows(grid(head + "T1,90,95,2,4,1,100,,\n"))) ==
        "error: t.csv row 2, column offset_s: 95; expected 0 or more and below the signal's cycle_s. Correct the cell or cycle_s = 90\n"
        "error: t.csv row 2, column split_s: 100; expected 0 to the signal's cycle_s. Correct the cell or cycle_s = 90\n");
  CHECK(problems_of(read_timing_rows(grid(head + "T1,90,0,2,4,1,,10,\n"))) == "error: t.csv row 2, column split_s: nothing; expected split_s, or green_start_s and green_s. Fill the cells\n");
  CHECK(problems_of(read_signal_rows(grid("signal,min_cycle_s,max_cycle_s\nT1,120,60\n"))) ==
        "error: t.csv row 2, column min_cycle_s: 120; expected at most max_cycle_s = 60. Exchange them or correct one\n");
  CHECK(problems_of(read_signal_rows(grid("signal,lon,lat\nT1,200,45\nT2,30,\n"))) ==
        "error: t.csv row 2, column lon: 200; expected a number from -180 to 180. Correct the cell\n"
        "error: t.csv row 2, column lon: nothing; expected both lon and lat, or neither. Fill the cell\n"
        "error: t.csv row 3, column lat: nothing; expected both lon and lat, or neither. Fill the cell\n");
}

TEST_CASE("a hundred thousand rows, good and bad, stay quick and the messages short") {
  TextGrid table{"t.csv", {{"signal", "approach", "turn", "volume_vph", "lane_group", "lanes"}}};
  for (int i = 0; i < 100000; ++i) table.rows.push_back({"T" + std::to_string(i), "EB", "T", "950", "EB-T", "2"});
  const auto good = read_movement_rows(table);
  REQUIRE(problems_of(good) == "none");
  CHECK(good->value.size() == 100000);
  for (std::size_t i = 1; i < table.rows.size(); ++i) table.rows[i][3] = "no";
  const auto bad = read_movement_rows(table);
  REQUIRE_FALSE(bad.has_value());
  CHECK(bad.error().size() == 21);
  CHECK(to_text(bad.error().back()) == "error: t.csv column volume_vph: 99980 more rows like the 20 above; expected a number from 0 to 20000. Correct them in the same way");
}
