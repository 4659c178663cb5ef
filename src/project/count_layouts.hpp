// Count sheets as they come from counting firms and cities: one row an interval or an hour, one column a movement (NBL NBT NBR ...,
// "nb_cars_t", or "Northbound" above "Left Thru Right").
#pragma once

#include <map>
#include <string>
#include <vector>

#include "base/result.hpp"
#include "project/tables.hpp"

namespace entrain::project {

struct CountRequest {
  std::vector<Period> periods;  // the peak hour is searched within from..to; none: in the whole table, for every period
  std::string signal;           // where the table has no column that names it
  std::string bare_letters;     // what N, E, S, W without "B" mean: "leg" (the side people come from) | "travel"; empty: leg, and said
};

// Whether some row of the first fifty holds at least three movement columns.
bool is_count_layout(const TextGrid& grid);

// Rows of movements with hourly volumes, heavy vehicles where classes are counted, and the intersection's peak-hour factor where intervals of
// at most 15 minutes are. `columns` may name signal, period, time, end, date. Rows with a time: the 60 minutes in a row with the most vehicles
// within each period; several days: the busiest. Errors: no signal, times that can't be read or do not divide the hour, bad cells; all of them.
// Notes: the hour taken, everything assumed, columns not used.
[[nodiscard]] Result<Noted<std::vector<MovementRow>>> read_count_layouts(const TextGrid& grid, const CountRequest& request, const std::map<std::string, std::string>& columns = {});

// Minutes since midnight: "07:15", "7:15 PM", "0715", "2031-05-04T07:15:00", "0.3021" (part of a day), the first of "07:15-07:30"; -1 if none of these.
int minutes_of_day(const std::string& text);

}  // namespace entrain::project
