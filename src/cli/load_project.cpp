#include "cli/load_project.hpp"

#include <fmt/format.h>

#include <filesystem>

#include "cli/command.hpp"
#include "drafting/network_request.hpp"
#include "geo/in/elevation.hpp"
#include "geo/in/roads.hpp"
#include "geo/in/table.hpp"
#include "network/build_network.hpp"
#include "project/validate.hpp"
#include "standards/embedded.hpp"

namespace entrain::cli {
namespace {

namespace fs = std::filesystem;

// Collects values and problems while reading goes on as far as it can.
struct Load {
  Diagnostics problems, notes;

  template <class T>
  bool take(Result<Noted<T>> result, T& out) {
    if (!result) return append(problems, std::move(result.error())), false;
    append(notes, std::move(result->notes));
    out = std::move(result->value);
    return true;
  }
  template <class T>
  bool take(Result<T> result, T& out) {
    if (!result) return append(problems, std::move(result.error())), false;
    out = std::move(*result);
    return true;
  }
};

std::string resolve(const project::Project& project, const std::string& path) {
  const fs::path p(path);
  return p.is_absolute() ? path : (fs::path(project.folder) / p).lexically_normal().string();
}

template <class Row, class Read>
void load_table(Load& load, const project::Project& project, const char* name, Read read, std::vector<Row>& rows, std::string& source) {
  const auto found = project.tables.find(name);
  if (found == project.tables.end()) return;
  source = found->second;
  project::TextGrid grid;
  if (!load.take(geo::read_table(resolve(project, found->second)), grid)) return;
  grid.source = found->second;
  const auto columns = project.table_columns.find(name);
  load.take(read(grid, columns == project.table_columns.end() ? std::map<std::string, std::string>{} : columns->second), rows);
}

void load_tables(Load& load, const project::Project& project, project::Tables& tables) {
  load_table(load, project, "signals", project::read_signal_rows, tables.signals, tables.signals_source);
  load_table(load, project, "movements", project::read_movement_rows, tables.movements, tables.movements_source);
  load_table(load, project, "crossings", project::read_crossing_rows, tables.crossings, tables.crossings_source);
  load_table(load, project, "travel_times", project::read_travel_time_rows, tables.travel_times, tables.travel_times_source);
  load_table(load, project, "timing", project::read_timing_rows, tables.timing, tables.timing_source);
  load_table(load, project, "conflicts", project::read_conflict_rows, tables.conflicts, tables.conflicts_source);
}

standards::Change change_of(const std::string& file, const std::string& key, const project::Value& value) {
  standards::Change change{key, fmt::format("{} [standards] {}", file, key), {}, {}, {}};
  if (const auto* number = std::get_if<double>(&value)) change.number = *number;
  if (const auto* word = std::get_if<std::string>(&value)) change.word = *word;
  if (const auto* truth = std::get_if<bool>(&value)) change.truth = *truth;
  return change;
}

void load_standard(Load& load, const project::Project& project, standards::DesignStandard& standard) {
  const auto text = standards::embedded_standard(project.standard);
  if (!text) {
    std::string known;
    for (const auto& id : standards::embedded_standard_ids()) known += (known.empty() ? "" : ", ") + std::string(id);
    load.problems.push_back(error(project.file + " [standards] base", project.standard, "one of " + known, "Name a design standard that is there"));
    return;
  }
  if (!load.take(standards::read_standard(*text, project.standard + ".toml"), standard)) return;
  std::vector<standards::Change> changes;
  for (const auto& [key, value] : project.standard_overrides) changes.push_back(change_of(project.file, key, value));
  load.take(standards::with_changes(standard, changes), standard);
}

void load_roads(Load& load, drafting::Inputs& inputs) {
  const project::Project& project = inputs.project;
  network::RoadSource roads;
  if (!load.take(geo::read_roads(*project.roads, project.folder, project.units), roads)) return;
  if (!load.problems.empty()) return;  // a network on wrong tables would only repeat their problems
  if (!load.take(network::build_network(roads, drafting::network_request(project, inputs.tables)), inputs.network)) return;
  if (project.roads->elevation.empty()) return;
  network::Network graded;
  if (load.take(geo::with_grades(inputs.network, resolve(project, project.roads->elevation)), graded)) inputs.network = std::move(graded);
}

void load_network(Load& load, drafting::Inputs& inputs) {
  if (inputs.project.roads) return load_roads(load, inputs);
  if (!load.problems.empty()) return;
  load.take(network::network_from_travel_times(drafting::network_request(inputs.project, inputs.tables)), inputs.network);
}

}  // namespace

Result<Noted<drafting::Inputs>> load_project(const std::string& path) {
  std::error_code code;
  const fs::path file = fs::is_directory(path, code) ? fs::path(path) / "project.toml" : fs::path(path);
  const FileText text = read_whole_file(file.string(), 64u << 20);
  if (!text.problems.empty()) return failure(text.problems);
  Load load;
  drafting::Inputs inputs;
  const std::string folder = file.has_parent_path() ? file.parent_path().string() : ".";
  if (!load.take(project::read_project(text.bytes, folder, file.string()), inputs.project)) return failure(load.problems);
  load_tables(load, inputs.project, inputs.tables);
  load_standard(load, inputs.project, inputs.standard);
  if (load.problems.empty()) append(load.problems, project::validate(inputs.project, inputs.tables));
  load_network(load, inputs);
  Diagnostics errors;
  for (Diagnostic& d : load.problems) (d.severity == Severity::error ? errors : load.notes).push_back(std::move(d));
  if (!errors.empty()) return failure(std::move(errors));
  return Noted<drafting::Inputs>{std::move(inputs), std::move(load.notes)};
}

}  // namespace entrain::cli
