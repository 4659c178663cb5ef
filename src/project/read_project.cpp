#include <algorithm>
#include <cmath>
#include <set>

#include "base/number_text.hpp"
#include "project/project.hpp"
#include "project/toml_table.hpp"

namespace entrain::project {
namespace {

struct Unit {
  const char* suffix;
  double factor;
};
constexpr Unit speed_units[] = {{"_mps", 1.0}, {"_mph", mps_per_mph}, {"_km_h", mps_per_kph}};

// A speed under `stem`_mps, _mph or _km_h; two of them at once is an error.
void read_speed(TomlTable& table, const std::string& stem, std::optional<double>& out) {
  for (const Unit& unit : speed_units) {
    double value = 0;
    const std::string key = stem + unit.suffix;
    if (!table.number(key, value, std::ceil(10 / unit.factor) / 10, std::floor(60 / unit.factor))) continue;
    if (out) table.problem(*table.find(key), key, "a second unit for " + stem, "one of _mps, _mph, _km_h", "Keep one of them");
    out = value * unit.factor;
  }
}

bool is_plain(const std::string& text) {
  return std::none_of(text.begin(), text.end(), [](unsigned char c) { return c < 0x20 || c == 0x7F; });
}

// An id that stands in messages, files and folders.
void read_id(TomlTable& table, std::string& id, const std::string& what) {
  if (!table.text("id", id)) return table.missing("id", what);
  const bool sound = !trim(id).empty() && id.size() <= 100 && is_plain(id) && id.find_first_of("/\\") == std::string::npos && id != "." && id != "..";
  if (!sound) table.problem(*table.find("id"), "id", "\"" + printable(id) + "\"", "a short name that can be a folder's, without slashes", "Use letters, digits, - and _");
}

void read_clock(TomlTable& top, Clock& clock) {
  top.table("clock", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(top.context(), inner, path);
    table.word("reference", clock.reference, {"midnight", "time_of_day", "pattern_start"});
    if (table.text("time_zone", clock.time_zone) && (trim(clock.time_zone).empty() || !is_plain(clock.time_zone) || clock.time_zone.size() > 64))
      table.problem(*table.find("time_zone"), "time_zone", "\"" + printable(clock.time_zone) + "\"", "the name of a time zone", "Write it like \"UTC\"");
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
    else if (trim(roads.source).empty()) table.problem(*table.find("source"), "source", "an empty text", "the file with the roads", "Name it, or remove [roads]");
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
      if (!table.text(name, file)) continue;
      if (trim(file).empty()) table.problem(*table.find(name), name, "an empty text", "a file", "Name it, or remove the line");
      else project.tables[name] = file;
    }
  });
  top.table("columns", [&](const toml::table& inner, const std::string& path) {
    TomlTable table(top.context(), inner, path);
    for (const char* name : names) read_columns(table, name, project.table_columns[name]);
  });
}

struct ExceptionKey {
  const char* key;  // as the stages know it, SI
  double least, most;
};
constexpr ExceptionKey exception_keys[] = {{"yellow_s", 3, 10},      {"red_clearance_s", 0, 20},   {"minimum_green_s", 1, 300}, {"walk_s", 4, 300},
                                           {"pedestrian_clearance_s", 1, 300}, {"speed_mps", 1, 60}, {"walking_speed_mps", 0.3, 2}};

// The SI key and factor behind a key that may carry another unit.
std::optional<std::pair<const ExceptionKey*, double>> exception_key(const std::string& key) {
  constexpr Unit units[] = {{"", 1.0}, {"_mph", mps_per_mph}, {"_km_h", mps_per_kph}, {"_ft_per_s", metres_per_foot}, {"_m_per_s", 1.0}};
  for (const ExceptionKey& known : exception_keys) {
    const std::string name = known.key;
    for (const Unit& unit : units) {
      const bool speed = name.size() > 4 && name.substr(name.size() - 4) == "_mps";
      if (key == (*unit.suffix == 0 ? name : speed ? name.substr(0, name.size() - 4) + unit.suffix : "")) return std::pair{&known, unit.factor};
    }
  }
  return std::nullopt;
}

void read_exception_value(TomlTable& table, Exception& exception) {
  double value = 0;
  const bool has_key = table.text("key", exception.key), has_value = table.number("value", value, -1e6, 1e6);
  if (!has_key && table.find("key") == nullptr) table.missing("key", "the value that is set, e.g. \"yellow_s\"");
  if (!has_value && table.find("value") == nullptr) table.missing("value", "a number in the key's unit");
  if (!has_key) return;
  const auto known = exception_key(exception.key);
  if (!known) {
    std::vector<std::string> names;
    std::string all;
    for (const ExceptionKey& one : exception_keys) names.emplace_back(one.key), all += (all.empty() ? "" : ", ") + names.back();
    return table.problem(*table.find("key"), "key", printable(exception.key), "one of " + all + " (speeds also in _mph, _km_h, _ft_per_s)", did_you_mean(exception.key, names, "Use one of these"));
  }
  const auto [rule, factor] = *known;
  exception.key = rule->key;
  exception.value = value * factor;
  if (has_value && !(exception.value >= rule->least - 1e-9 && exception.value <= rule->most + 1e-9))
    table.problem(*table.find("value"), "value", number_text(value), fmt::format("{} to {}", number_text(rule->least / factor, 2), number_text(rule->most / factor, 2)), "Correct the value or the key's unit");
}

void read_exception(TomlTable& table, Project& project) {
  Exception exception;
  table.text("signal", exception.signal);
  table.text("group", exception.group);
  table.text("movement", exception.movement);
  table.text("crossing", exception.crossing);
  read_exception_value(table, exception);
  if (!table.text("reason", exception.reason) || trim(exception.reason).empty()) table.missing("reason", "why this value differs from the standard");
  if (!table.text("author", exception.author) || trim(exception.author).empty()) table.missing("author", "who takes it on");
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

void check_weights(TomlTable& table, const std::map<std::string, double>& weights, const std::vector<std::string>& directions) {
  const auto weight = [&](const std::string& direction) {
    const auto found = weights.find(direction);
    return found == weights.end() ? 1.0 : found->second;
  };
  if (!directions.empty() && std::all_of(directions.begin(), directions.end(), [&](const std::string& d) { return weight(d) == 0; }))
    table.problem(*table.find("weights"), "weights", "0 for every direction", "a weight above 0 for one direction at least", "Raise one of them");
  for (const auto& [direction, value] : weights)
    if (std::find(directions.begin(), directions.end(), direction) == directions.end())
      table.problem(*table.find("weights"), "weights", "a weight for " + direction, "weights of the corridor's own directions", "Remove it, or add the direction");
}

void read_corridor_period(TomlTable& table, Corridor& corridor) {
  std::string id;
  if (!table.text("id", id)) table.missing("id", "the id of a [[period]]");
  if (corridor.weights_by_period.count(id) + corridor.progression_speed_by_period_mps.count(id) > 0) table.problem(*table.find("id"), "id", printable(id) + " twice", "each period once", "Join the two parts");
  if (std::map<std::string, double> weights; read_weights(table, weights), !weights.empty()) {
    check_weights(table, weights, corridor.directions);
    corridor.weights_by_period[id] = weights;
  }
  std::optional<double> speed;
  read_speed(table, "progression_speed", speed);
  if (speed) corridor.progression_speed_by_period_mps[id] = *speed;
}

void read_directions(TomlTable& table, Corridor& corridor) {
  table.texts("directions", corridor.directions);
  std::set<std::string> seen;
  for (const std::string& direction : corridor.directions) {
    if (direction != "forward" && direction != "backward")
      table.problem(*table.find("directions"), "directions", printable(direction), "forward, backward", did_you_mean(direction, std::vector<std::string>{"forward", "backward"}, "Use these words"));
    else if (!seen.insert(direction).second)
      table.problem(*table.find("directions"), "directions", direction + " twice", "each direction once", "Remove one of them");
  }
  if (corridor.directions.empty()) table.problem(*table.find("directions"), "directions", "an empty list", "forward, backward or both", "Name a direction, or remove the line");
}

void check_signal_list(TomlTable& table, const char* key, const std::vector<std::string>& signals) {
  if (signals.size() == 1) table.problem(*table.find(key), key, "one signal", "two signals at least", "Name the others, in order");
  for (std::size_t i = 0; i < signals.size(); ++i) {
    if (trim(signals[i]).empty()) table.problem(*table.find(key), key, "an empty id", "ids of signals", "Remove it or fill it");
    if (i > 0 && signals[i] == signals[i - 1]) table.problem(*table.find(key), key, printable(signals[i]) + " twice in a row", "neighbouring signals", "Remove one of them");
  }
}

void read_route(TomlTable& table, Corridor& corridor) {
  table.texts("signals", corridor.signals);
  table.texts("signals_backward", corridor.signals_backward);
  table.text("street", corridor.street);
  table.text("from", corridor.from);
  table.text("to", corridor.to);
  check_signal_list(table, "signals", corridor.signals);
  check_signal_list(table, "signals_backward", corridor.signals_backward);
  if (corridor.signals.empty() && corridor.street.empty()) table.missing("signals or street", "the signals in order, or a street to follow");
  if (!corridor.signals.empty() && !corridor.street.empty())
    table.problem(*table.find("street"), "street", printable(corridor.street) + " beside a list of signals", "one of the two", "Keep signals, or street with from and to (name = \"...\" is the corridor's name)");
  if (corridor.street.empty() || !corridor.signals.empty()) return;
  if (corridor.from.empty()) table.missing("from", "the first signal along the street");
  if (corridor.to.empty()) table.missing("to", "the last signal along the street");
  if (!corridor.from.empty() && corridor.from == corridor.to) table.problem(*table.find("to"), "to", printable(corridor.to), "another signal than from", "Correct one of them");
}

void read_groups_at(TomlTable& table, Corridor& corridor) {
  table.table("groups_at", [&](const toml::table& inner, const std::string& path) {
    TomlTable at(table.context(), inner, path);
    for (const auto& [name, node] : inner) {
      const std::string signal(name.str());
      read_groups(at, signal, corridor.groups_at[signal]);
      std::vector<std::string> all = corridor.signals;
      all.insert(all.end(), corridor.signals_backward.begin(), corridor.signals_backward.end());
      if (!corridor.signals.empty() && std::find(all.begin(), all.end(), signal) == all.end())
        at.problem(node, signal, "a signal that is not on the corridor", "one of its signals", did_you_mean(signal, all, "Correct the id"));
    }
  });
}

void read_corridor(TomlTable& table, Corridor& corridor) {
  read_id(table, corridor.id, "a short name of the corridor");
  table.text("name", corridor.name);
  read_directions(table, corridor);
  read_route(table, corridor);
  read_groups(table, "groups", corridor.groups);
  read_groups_at(table, corridor);
  read_weights(table, corridor.weights);
  check_weights(table, corridor.weights, corridor.directions);
  read_speed(table, "progression_speed", corridor.progression_speed_mps);
  table.tables("period", [&](const toml::table& inner, const std::string& path) {
    TomlTable period(table.context(), inner, path);
    read_corridor_period(period, corridor);
  });
}

bool is_clock_time(const std::string& text) {
  if (text.size() != 5 || text[2] != ':' || text.find_first_not_of("0123456789:") != std::string::npos) return false;
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
  read_id(table, period.id, "a short name of the period, e.g. \"am\"");
  table.text("days", period.days);
  read_time(table, "from", period.from);
  read_time(table, "to", period.to);
  if (period.from.empty() != period.to.empty()) table.missing(period.from.empty() ? "from" : "to", "both from and to, or neither");
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
  if (trim(text).empty()) return failure(error(file, "an empty file", "a project file in TOML", "Start with name = \"...\""));
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
