#include <algorithm>
#include <set>

#include "base/number_text.hpp"
#include "project/project.hpp"
#include "project/toml_table.hpp"

namespace entrain::project {
namespace {

// A speed under `stem`_mps, _mph or _km_h; two of them at once is an error.
void read_speed(TomlTable& table, const std::string& stem, std::optional<double>& out) {
  struct Unit { const char* suffix; double factor; };
  constexpr Unit units[] = {{"_mps", 1.0}, {"_mph", mps_per_mph}, {"_km_h", mps_per_kph}};
  for (const Unit& unit : units) {
    double value = 0;
    const std::string key = stem + unit.suffix;
    if (!table.number(key, value, 0.1, 400)) continue;
    if (out) table.problem(*table.find(key), key, "a second unit for " + stem, "one of _mps, _mph, _km_h", "Keep one of them");
    out = value * unit.factor;
  }
}

void read_clock(TomlTable& top, Clock& clock) {
  top.table("clock", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(top.context(), inner, path);
    table.word("reference", clock.reference, {"midnight", "time_of_day", "pattern_start"});
    table.text("time_zone", clock.time_zone);
  });
}

void read_columns(TomlTable& table, const std::string& key, std::map<std::string, std::string>& columns) {
  table.table(key, [&](const toml::table& inner, const std::string& path) {
    TomlTable names(table.context(), inner, path);
    for (const auto& [ours, node] : inner) names.text(std::string(ours.str()), columns[std::string(ours.str())]);
  });
}

void read_roads(TomlTable& top, Project& project) {
  top.table("roads", [&](const toml::table& inner, const std::string& path) {
    Roads& roads = project.roads.emplace();
    TomlTable table(top.context(), inner, path);
    if (!table.text("source", roads.source)) table.missing("source", "the file with the roads");
    table.text("elevation", roads.elevation);
    table.text("layer", roads.layer);
    table.word("speed_unit", roads.speed_unit, {"mph", "km/h"});
    table.number("snap_tolerance_m", roads.snap_tolerance_m, 0, 100);
    table.truth("split_at_crossings", roads.split_at_crossings);
    read_columns(table, "columns", roads.columns);
  });
}

void read_table_paths(TomlTable& top, Project& project) {
  constexpr const char* names[] = {"signals", "movements", "crossings", "travel_times", "timing", "conflicts"};
  top.table("tables", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(top.context(), inner, path);
    for (const char* name : names) {
      std::string file;
      if (table.text(name, file)) project.tables[name] = file;
    }
  });
  top.table("columns", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(top.context(), inner, path);
    for (const char* name : names) read_columns(table, name, project.table_columns[name]);
  });
}

void read_exception(TomlTable& table, Project& project) {
  Exception exception;
  table.text("signal", exception.signal);
  table.text("group", exception.group);
  table.text("movement", exception.movement);
  table.text("crossing", exception.crossing);
  if (!table.text("key", exception.key)) table.missing("key", "the value that is set, e.g. \"yellow_s\"");
  if (!table.number("value", exception.value, -1e6, 1e6)) table.missing("value", "a number in the key's unit");
  if (!table.text("reason", exception.reason) || exception.reason.empty()) table.missing("reason", "why this value differs from the standard");
  if (!table.text("author", exception.author) || exception.author.empty()) table.missing("author", "who takes it on");
  project.exceptions.push_back(std::move(exception));
}

void read_standards(TomlTable& top, Project& project) {
  top.table("standards", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(top.context(), inner, path);
    table.text("base", project.standard);
    table.tables("exception", [&](const toml::table& one, const std::string& place) {
      TomlTable exception(top.context(), one, place);
      read_exception(exception, project);
    });
    for (const auto& [name, node] : inner) {
      const std::string key(name.str());
      if (key == "base" || key == "exception") continue;
      table.find(key);
      if (node.is_number()) project.standard_overrides[key] = *node.value<double>();
      else if (const auto truth = node.value_exact<bool>()) project.standard_overrides[key] = *truth;
      else if (const auto text = node.value_exact<std::string>()) project.standard_overrides[key] = *text;
      else table.problem(node, key, TomlTable::shown(node), "a number, a word or true/false", "Correct the value");
    }
  });
}

void read_weights(TomlTable& owner, std::map<std::string, double>& weights) {
  owner.table("weights", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(owner.context(), inner, path);
    for (const char* direction : {"forward", "backward"}) {
      double weight = 0;
      if (table.number(direction, weight, 0, 1000)) weights[direction] = weight;
    }
  });
}

void read_groups(TomlTable& owner, const std::string& key, std::map<std::string, std::string>& groups) {
  owner.table(key, [&](const toml::table& inner, const std::string& path) {
    TomlTable table(owner.context(), inner, path);
    for (const char* direction : {"forward", "backward"}) {
      std::string group;
      if (table.text(direction, group)) groups[direction] = group;
    }
  });
}

void read_corridor_period(TomlTable& table, Corridor& corridor) {
  std::string id;
  if (!table.text("id", id)) table.missing("id", "the id of a [[period]]");
  if (std::map<std::string, double> weights; read_weights(table, weights), !weights.empty()) corridor.weights_by_period[id] = weights;
  std::optional<double> speed;
  read_speed(table, "progression_speed", speed);
  if (speed) corridor.progression_speed_by_period_mps[id] = *speed;
}

void read_corridor(TomlTable& table, Corridor& corridor) {
  if (!table.text("id", corridor.id) || corridor.id.empty()) table.missing("id", "a short name of the corridor");
  table.text("name", corridor.name);
  table.texts("directions", corridor.directions);
  for (const std::string& direction : corridor.directions)
    if (direction != "forward" && direction != "backward")
      table.problem(*table.find("directions"), "directions", printable(direction), "forward, backward", "Use these words");
  table.texts("signals", corridor.signals);
  table.texts("signals_backward", corridor.signals_backward);
  table.text("street", corridor.street);
  table.text("from", corridor.from);
  table.text("to", corridor.to);
  if (corridor.signals.empty() && corridor.street.empty()) table.missing("signals or street", "the signals in order, or a street to follow");
  read_groups(table, "groups", corridor.groups);
  table.table("groups_at", [&](const toml::table& inner, const std::string& path) {
    TomlTable at(table.context(), inner, path);
    for (const auto& [signal, node] : inner) read_groups(at, std::string(signal.str()), corridor.groups_at[std::string(signal.str())]);
  });
  read_weights(table, corridor.weights);
  read_speed(table, "progression_speed", corridor.progression_speed_mps);
  table.tables("period", [&](const toml::table& inner, const std::string& path) {
    TomlTable period(table.context(), inner, path);
    read_corridor_period(period, corridor);
  });
}

bool is_clock_time(const std::string& text) {
  if (text.size() != 5 || text[2] != ':') return false;
  const auto hours = parse_whole_number(text.substr(0, 2)), minutes = parse_whole_number(text.substr(3));
  return hours && minutes && *hours >= 0 && *minutes >= 0 && *minutes < 60 && (*hours < 24 || (*hours == 24 && *minutes == 0));
}

void read_time(TomlTable& table, const std::string& key, std::string& out) {
  if (table.text(key, out) && !is_clock_time(out)) table.problem(*table.find(key), key, printable(out), "a time as HH:MM, 00:00 to 24:00", "Write it like \"06:30\"");
}

void read_cycle(TomlTable& table, CycleRange& cycle) {
  table.table("cycle_s", [&](const toml::table& inner, const std::string& path) {
    TomlTable range(table.context(), inner, path);
    range.whole("min", cycle.minimum_s, 20, 600);
    range.whole("max", cycle.maximum_s, 20, 600);
    range.whole("step", cycle.step_s, 1, 600);
    if (cycle.minimum_s > cycle.maximum_s)
      range.context().problems.push_back(error(fmt::format("{} {}", range.context().file, path), fmt::format("min {} above max {}", cycle.minimum_s, cycle.maximum_s),
                                               "min at most max", "Exchange them or correct one"));
  });
}

void read_period(TomlTable& table, Period& period) {
  if (!table.text("id", period.id) || period.id.empty()) table.missing("id", "a short name of the period, e.g. \"am\"");
  if (period.id.find_first_of("/\\") != std::string::npos || period.id == "." || period.id == "..")
    table.problem(*table.find("id"), "id", printable(period.id), "a name that can be a folder's", "Leave out slashes and dots");
  table.text("days", period.days);
  read_time(table, "from", period.from);
  read_time(table, "to", period.to);
  if (is_clock_time(period.from) && is_clock_time(period.to) && period.from >= period.to)
    table.problem(*table.find("to"), "to", period.to, "a time after from = " + period.from, "Exchange them, or split a period that runs over midnight");
  read_cycle(table, period.cycle);
}

template <class List>
void check_ids(TomlContext& context, const List& list, const char* what) {
  std::set<std::string> seen;
  for (const auto& item : list)
    if (!item.id.empty() && !seen.insert(item.id).second)
      context.problems.push_back(error(fmt::format("{} [[{}]]", context.file, what), "id " + printable(item.id) + " twice", "each id once", "Rename one of them"));
}

void read_top(TomlTable& top, Project& project) {
  if (!top.text("name", project.name)) top.missing("name", "a name for the sheets");
  std::string units = "metric", side;
  top.word("units", units, {"us", "metric"});
  project.units = units == "us" ? Units::us : Units::metric;
  top.word("traffic_side", side, {"right", "left"});
  if (!side.empty()) project.traffic_side = side == "left" ? TrafficSide::left : TrafficSide::right;
  std::string phase_2;
  if (top.text("phase_2", phase_2)) project.phase_2 = phase_2;
  top.word("control", project.control, {"ring_barrier", "signal_group"});
  read_clock(top, project.clock);
  read_roads(top, project);
  read_table_paths(top, project);
  read_standards(top, project);
  top.tables("corridor", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(top.context(), inner, path);
    read_corridor(table, project.corridors.emplace_back());
  });
  top.tables("period", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(top.context(), inner, path);
    read_period(table, project.periods.emplace_back());
  });
}

}  // namespace

Result<Noted<Project>> read_project(std::string_view text, const std::string& folder, const std::string& file) {
  if (text.size() >= 2 && (text.substr(0, 2) == "\xFF\xFE" || text.substr(0, 2) == "\xFE\xFF"))
    return failure(error(file, "text in UTF-16", "text in UTF-8", "Save the file as UTF-8"));
  toml::table parsed;
  try {
    parsed = toml::parse(text, std::string_view(file));
  } catch (const toml::parse_error& problem) {
    const auto at = problem.source().begin;
    return failure(error(fmt::format("{} line {}, column {}", file, at.line, at.column), printable(std::string(problem.description())), "a project file in TOML",
                         "Mend the text there"));
  }
  TomlContext context{file, {}, {}};
  Project project;
  project.folder = folder;
  project.file = file;
  {
    TomlTable top(context, parsed, "");
    read_top(top, project);
  }
  check_ids(context, project.corridors, "corridor");
  check_ids(context, project.periods, "period");
  if (!context.problems.empty()) return failure(std::move(context.problems));
  return Noted<Project>{std::move(project), std::move(context.notes)};
}

}  // namespace entrain::project
