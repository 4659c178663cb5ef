// `project.toml` as plain data. Speeds and lengths are converted to SI on reading; everything else is as written.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "base/quantity.hpp"
#include "base/result.hpp"

namespace entrain::project {

enum class Units { us, metric };  // display only

struct Clock {
  std::string reference = "midnight";  // midnight | time_of_day | pattern_start
  std::string time_zone = "UTC";
};

struct Roads {
  std::string source;                          // path, relative to the project's folder
  std::string elevation;                       // may be empty
  std::string layer;                           // may be empty: the only or first line layer
  std::map<std::string, std::string> columns;  // our word -> the layer's field
  double snap_tolerance_m = 0.5;
  bool split_at_crossings = false;
  std::string speed_unit;  // of the mapped speed column: mph | km/h; empty: mph in US units, km/h otherwise
};

struct Corridor {
  std::string id, name;                  // name may be empty
  std::vector<std::string> directions = {"forward", "backward"};
  std::vector<std::string> signals, signals_backward;
  std::string street, from, to;          // or found along a street
  std::map<std::string, std::string> groups;                                // direction -> group id
  std::map<std::string, std::map<std::string, std::string>> groups_at;      // signal -> direction -> group id
  std::map<std::string, double> weights;                                    // direction -> share; default 1
  std::map<std::string, std::map<std::string, double>> weights_by_period;   // period -> direction -> share
  std::optional<double> progression_speed_mps;
  std::map<std::string, double> progression_speed_by_period_mps;
};

struct CycleRange {
  int minimum_s = 60, maximum_s = 120, step_s = 5;
};

struct Period {
  std::string id, days, from, to;  // "06:30"
  CycleRange cycle;
};

// A standard's value that this project sets otherwise: number, word or truth value, as written.
using Value = std::variant<double, std::string, bool>;

// [[standards.exception]]: one signal's, group's or movement's value, with who takes it on.
struct Exception {
  std::string signal, group, movement, crossing;  // empty: any
  std::string key;                                 // e.g. "yellow_s", "walk_s", "speed_mps"
  double value = 0;                                // SI
  std::string reason, author;
};

struct Project {
  std::string folder;  // where the file lies; relative paths start here
  std::string file;    // for messages
  std::string name;
  Units units = Units::metric;
  std::optional<TrafficSide> traffic_side;
  std::optional<std::string> phase_2;  // direction label ("EB") that gets phase 2
  std::string control;                 // "ring_barrier" (default) | "signal_group"
  Clock clock;
  std::optional<Roads> roads;
  std::map<std::string, std::string> tables;                             // table name -> path
  std::map<std::string, std::map<std::string, std::string>> table_columns;  // [columns.NAME]: our column -> theirs
  std::string standard = "kinematic-us";
  std::map<std::string, Value> standard_overrides;  // keys of the standard; units are part of the key
  std::vector<Exception> exceptions;
  std::vector<Corridor> corridors;
  std::vector<Period> periods;
};

// Reads the text of a project file that lies in `folder`. Errors name line, key, value, what was expected: all of them.
// Unknown keys are warnings in the notes.
[[nodiscard]] Result<Noted<Project>> read_project(std::string_view text, const std::string& folder, const std::string& file);

}  // namespace entrain::project
