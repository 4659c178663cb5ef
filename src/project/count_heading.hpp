// What a column of a count sheet holds, by its heading. Private to this room.
#pragma once

#include <optional>
#include <string>
#include <vector>

namespace entrain::project {

enum class CountClass { total, light, heavy };

struct MovementColumn {
  std::string approach;  // NB, NEB, ...; for a bare letter the letter itself: N, E, S, W, NE ...
  bool bare = false;
  std::string turn;      // L T R U
  CountClass counted = CountClass::total;
};

// "NBL", "nb_cars_t", "Northbound Thru", "N Left"; nothing for other columns, people and bicycles among them.
std::optional<MovementColumn> movement_column(const std::string& heading);
// L T R U for a heading that is a turn and nothing else ("Thru"), else empty.
std::string turn_alone(const std::string& heading);
// Whether the heading is a direction and nothing else ("Southbound").
bool is_direction_alone(const std::string& heading);

}  // namespace entrain::project
