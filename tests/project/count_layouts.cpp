// Count sheets in the layouts people send, against sums by hand.
#include "project/count_layouts.hpp"

#include <rapidcheck.h>

#include <catch2/catch.hpp>

#include "base/number_text.hpp"
#include "texts.hpp"

using namespace entrain;
using namespace entrain::project;
using namespace entrain::project::sample;

namespace {

const MovementRow* find(const std::vector<MovementRow>& rows, const std::string& approach, const std::string& turn, const std::string& period = "") {
  for (const MovementRow& row : rows)
    if (row.approach == approach && row.turn == turn && row.period == period) return &row;
  return nullptr;
}

// Quarter hours from 07:00 with these through counts northbound; eastbound is always 10.
std::string quarters(const std::vector<int>& counts, int first_minute = 7 * 60) {
  std::string text = "signal,time,NBT,NBL,EBT\n";
  for (std::size_t i = 0; i < counts.size(); ++i) {
    const int minute = first_minute + 15 * static_cast<int>(i);
    text += "T1," + std::to_string(minute / 60) + ":" + (minute - minute / 60 * 60 < 10 ? "0" : "") + std::to_string(minute - minute / 60 * 60) + "," + std::to_string(counts[i]) + ",0,10\n";
  }
  return text;
}

}  // namespace

TEST_CASE("one row a signal, one column a movement") {
  const auto read = read_movement_rows(grid("Counts of the invented town\nsignal,period,NBL,NBT,NBR,EB Left,eb-thru,Southbound Right,remarks\nT1,am,10,200,30,*,400,50,dry\nT2,am,1,2,3,4,5,6,\n"));
  REQUIRE(problems_of(read) == "none");
  REQUIRE(read->value.size() == 12);
  CHECK(*find(read->value, "NB", "T", "am")->volume_vph == 200);
  CHECK(find(read->value, "NB", "T", "am")->signal == "T1");
  CHECK(find(read->value, "NB", "T", "am")->row == 3);
  CHECK_FALSE(find(read->value, "EB", "L", "am")->volume_vph.has_value());
  CHECK(*find(read->value, "EB", "T", "am")->volume_vph == 400);
  CHECK(*find(read->value, "SB", "R", "am")->volume_vph == 50);
  CHECK(text_of(read->notes) == "note: t.csv row 2: columns not used: remarks\n");
}

TEST_CASE("direction above, turns below, merged over three columns") {
  const auto read = read_movement_rows(grid(",Northbound,,,Eastbound,,\nsignal,Left,Thru,Right,Left,Thru,Right\nT1,1,2,3,4,5,6\n"));
  REQUIRE(problems_of(read) == "none");
  REQUIRE(read->value.size() == 6);
  CHECK(*find(read->value, "NB", "R")->volume_vph == 3);
  CHECK(*find(read->value, "EB", "L")->volume_vph == 4);
}

TEST_CASE("the peak hour is the busiest four quarters in a row, its factor that of the intersection") {
  const auto read = read_count_layouts(grid(quarters({50, 90, 130, 120, 80, 40})), {});
  REQUIRE(problems_of(read) == "none");
  const MovementRow* through = find(read->value, "NB", "T");
  CHECK(*through->volume_vph == 420);                                    // 90 + 130 + 120 + 80
  CHECK(*through->peak_hour_factor == Approx(460 / (4 * 140.0)));       // with the 10 eastbound of every quarter
  CHECK(*find(read->value, "EB", "T")->volume_vph == 40);
  CHECK(text_of(read->notes) ==
        "warning: t.csv: ASSUMED: the busiest hour of the table stands for every period\nnote: t.csv: T1: 07:15 to 08:15, 460 vehicles, peak-hour factor 0.821\n");
}

TEST_CASE("each period has its own peak hour, a period without counts is said") {
  CountRequest request;
  request.periods = {{"early", "", "07:00", "08:00", {}}, {"late", "", "07:30", "09:00", {}}, {"night", "", "20:00", "23:00", {}}};
  const auto read = read_count_layouts(grid(quarters({50, 90, 130, 120, 80, 40})), request);
  REQUIRE(problems_of(read) == "none");
  CHECK(*find(read->value, "NB", "T", "early")->volume_vph == 390);
  CHECK(*find(read->value, "NB", "T", "late")->volume_vph == 370);
  CHECK(find(read->value, "NB", "T", "night") == nullptr);
  CHECK(text_of(read->notes).find("warning: t.csv: no count of T1, period night between 20:00 and 23:00\n") != std::string::npos);
}

TEST_CASE("a gap breaks the hour; less than an hour is scaled and said") {
  std::string text = quarters({100, 100, 100, 100, 100});
  text.erase(text.find("T1,7:30"), std::string("T1,7:30,100,0,10\n").size());
  const auto read = read_count_layouts(grid(text), {});
  REQUIRE(problems_of(read) == "none");
  CHECK(*find(read->value, "NB", "T")->volume_vph == Approx(400));
  CHECK_FALSE(find(read->value, "NB", "T")->peak_hour_factor.has_value());
  CHECK(text_of(read->notes).find("ASSUMED: T1: only 30 minutes in a row were counted; they stand for an hour") != std::string::npos);
}

TEST_CASE("classes give the share of heavy vehicles; people and bicycles are not vehicles") {
  const auto read = read_count_layouts(grid("px,time_start,time_end,nb_cars_t,nb_truck_t,nb_bus_t,nb_cars_l,nb_truck_l,nx_peds,nx_bike\n7,2031-05-04T07:00:00,2031-05-04T08:00:00,80,15,5,20,0,99,9\n"), {},
                                       {{"signal", "px"}});
  REQUIRE(problems_of(read) == "none");
  CHECK(find(read->value, "NB", "T")->signal == "7");
  CHECK(*find(read->value, "NB", "T")->volume_vph == 100);
  CHECK(*find(read->value, "NB", "T")->heavy_vehicle_pct == Approx(20));
  CHECK(*find(read->value, "NB", "L")->volume_vph == 20);
  CHECK(*find(read->value, "NB", "L")->heavy_vehicle_pct == 0);  // counted, none seen: not the default
  CHECK(text_of(read->notes).rfind("note: t.csv row 1: columns not used: nx_peds, nx_bike\n", 0) == 0);
}

TEST_CASE("bare letters are legs unless said otherwise") {
  const std::string text = "signal,N Left,N Thru,N Right\nT1,1,2,3\n";
  const auto assumed = read_count_layouts(grid(text), {});
  REQUIRE(problems_of(assumed) == "none");
  CHECK(*find(assumed->value, "SB", "T")->volume_vph == 2);
  CHECK(text_of(assumed->notes) ==
        "warning: t.csv row 1: ASSUMED: N, E, S, W name the leg that traffic comes from (N is southbound); expected NB, EB, ... where directions of travel are meant. Rename the columns if that is wrong\n");
  CountRequest travel;
  travel.bare_letters = "travel";
  const auto declared = read_count_layouts(grid(text), travel);
  REQUIRE(problems_of(declared) == "none");
  CHECK(*find(declared->value, "NB", "T")->volume_vph == 2);
  CHECK(declared->notes.empty());
}

TEST_CASE("several days: the busiest; the same quarter twice: an error") {
  const std::string head = "signal,date,time,NBL,NBT,NBR\n";
  const auto two = read_count_layouts(grid(head + "T1,2031-05-04,0700-0800,1,100,1\nT1,2031-05-05,0700-0800,1,300,1\n"), {});
  REQUIRE(problems_of(two) == "none");
  CHECK(*find(two->value, "NB", "T")->volume_vph == 300);
  CHECK(text_of(two->notes).find("the busiest of 2 days (2031-05-05)") != std::string::npos);
  CHECK(problems_of(read_count_layouts(grid(head + "T1,2031-05-04,07:00,1,100,1\nT1,2031-05-04,07:00,1,300,1\n"), {})) ==
        "error: t.csv row 3, column time: 07:00 at T1 again; expected each interval of a day once (row 2 holds it). Remove one of the rows\n");
}

TEST_CASE("sheets that can't be used say why, every row of them") {
  CHECK(problems_of(read_count_layouts(grid("time,NBL,NBT,NBR\n07:00,1,2,3\n"), {})) ==
        "error: t.csv row 1: no column that names the signal; expected a column signal, or another one named under [columns.movements]. Add signal = \"...\" there with the name of your column\n");
  CHECK(problems_of(read_count_layouts(grid("signal,time,NBL,NBT,NBR\nT1,25:00,1,2,3\nT1,07:15,x,-2,3\n,07:30,1,2,3\nTotal,,1,2,3\n"), {})) ==
        "error: t.csv row 2, column time: 25:00; expected a time such as 07:15. Correct the cell\n"
        "error: t.csv row 3, column nb_l_total: x; expected a number from 0 to 20000. Correct the cell\n"
        "error: t.csv row 3, column nb_t_total: -2; expected a number from 0 to 20000. Correct the cell\n"
        "error: t.csv row 4, column signal: nothing; expected a value. Fill the cell or remove the row; of merged cells only the first holds the value\n");
  CHECK(problems_of(read_count_layouts(grid("signal,time,NBL,NBT,NBR\nT1,07:00,1,2,3\nT1,07:25,1,2,3\n"), {})) ==
        "error: t.csv row 2, column time: intervals of 25 minutes at T1; expected intervals that divide the hour. Correct the times, or add a column end\n");
  CHECK(problems_of(read_count_layouts({"t.csv", {}}, {})) ==
        "error: t.csv: no row with columns of movements; expected columns such as NBL, NBT, NBR. Add such a row, or use the columns signal, approach, turn, volume_vph\n");
  CHECK_FALSE(is_count_layout(grid("signal,approach,turn,volume_vph,lane_group\nT1,EB,T,1,EB-T\n")));
}

TEST_CASE("times in the forms people write") {
  CHECK(minutes_of_day("07:15") == 435);
  CHECK(minutes_of_day("7:15 PM") == 19 * 60 + 15);
  CHECK(minutes_of_day("12:00 AM") == 0);
  CHECK(minutes_of_day("0015") == 15);
  CHECK(minutes_of_day("715") == 435);
  CHECK(minutes_of_day("2031-05-04T07:15:00") == 435);
  CHECK(minutes_of_day("07:15-07:30") == 435);
  CHECK(minutes_of_day("0.25") == 360);
  CHECK(minutes_of_day("0") == 0);
  CHECK(minutes_of_day("24:00") == 1440);
  for (const char* wrong : {"", "7", "25:00", "07:61", "noon", "13:00 PM", "-5", "1.5", "99999", "24:01", "07:1"}) {
    INFO(wrong);
    CHECK(minutes_of_day(wrong) == -1);
  }
}

TEST_CASE("the hour found is the busiest of all hours, by trying each") {
  CHECK(rc::check([] {
    std::vector<int> counts;
    for (int i = *rc::gen::inRange(4, 20); i > 0; --i) counts.push_back(*rc::gen::inRange(0, 500));
    const auto read = read_count_layouts(grid(quarters(counts)), {});
    RC_ASSERT(read.has_value());
    int best = 0;
    for (std::size_t i = 0; i + 4 <= counts.size(); ++i) best = std::max(best, counts[i] + counts[i + 1] + counts[i + 2] + counts[i + 3]);
    RC_ASSERT(*find(read->value, "NB", "T")->volume_vph == best);
    const auto factor = find(read->value, "NB", "T")->peak_hour_factor;
    RC_ASSERT(factor.has_value());
    RC_ASSERT(*factor >= 0.25);
    RC_ASSERT(*factor <= 1);
  }));
}
